package workbook_test

import (
	"archive/zip"
	"bytes"
	"io"
	"regexp"
	"strings"
	"testing"
)

var cachedMean = regexp.MustCompile(`(<c r="E4"[^>]*>.*?<v>)([^<]*)(</v>)`)

// plant puts a fault into the sheet of days: another formula text, or, with
// nothing to replace, another cached high/low mean of the second day.
func plant(t *testing.T, content []byte, old, new string) []byte {
	t.Helper()
	archive, err := zip.NewReader(bytes.NewReader(content), int64(len(content)))
	if err != nil {
		t.Fatal(err)
	}
	var out bytes.Buffer
	writer := zip.NewWriter(&out)
	planted := false
	for _, part := range archive.File {
		from, err := part.Open()
		if err != nil {
			t.Fatal(err)
		}
		text, err := io.ReadAll(from)
		if err != nil {
			t.Fatal(err)
		}
		if part.Name == "xl/worksheets/sheet2.xml" {
			before := string(text)
			after := strings.ReplaceAll(before, old, new)
			if old == "" {
				after = cachedMean.ReplaceAllString(before, "${1}77.25${3}")
			}
			planted, text = before != after, []byte(after)
		}
		to, err := writer.Create(part.Name)
		if err != nil {
			t.Fatal(err)
		}
		if _, err := to.Write(text); err != nil {
			t.Fatal(err)
		}
	}
	if err := writer.Close(); err != nil || !planted {
		t.Fatalf("the fault was not planted: %v", err)
	}
	return out.Bytes()
}
