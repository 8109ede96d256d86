package intake_test

import (
	"archive/zip"
	"bytes"
	"compress/gzip"
	"errors"
	"io"
	"os"
	"path/filepath"
	"testing"

	"swardbook/storage/intake"
)

// fuzzFormat fuzzes what stands below the first line of the files, by which
// their format is known, and the whole file as well.
func fuzzFormat(f *testing.F, pattern string) {
	paths, err := filepath.Glob(filepath.Join(folder, pattern))
	if err != nil || len(paths) == 0 {
		f.Fatalf("no seeds like %s: %v", pattern, err)
	}
	var first []byte
	for _, path := range paths {
		content, err := os.ReadFile(path)
		if err != nil {
			f.Fatal(err)
		}
		line, rest, _ := bytes.Cut(content, []byte("\n"))
		if first == nil {
			first = line
		}
		f.Add(rest, -5, true, "")
		f.Add(content, 0, false, "2021-07")
	}
	f.Fuzz(func(t *testing.T, content []byte, hours int, below bool, dates string) {
		if below {
			content = bytes.Join([][]byte{first, content}, []byte("\n"))
		}
		site := intake.Site{OffsetSeconds: hours % 15 * 3600, Zone: site.Zone}
		readAll(t, content, site, intake.How{Dates: dates})
	})
}

// readAll reads a file to its end and holds what FuzzFile does.
func readAll(t *testing.T, content []byte, site intake.Site, how intake.How) {
	t.Helper()
	file, err := intake.Open(bytes.NewReader(content), site, how)
	if err != nil {
		checkProblem(t, err)
		return
	}
	defer file.Close()
	// No format gives more rows than the file has bytes.
	for range len(content) + 1 {
		row, err := file.Next()
		if errors.Is(err, io.EOF) {
			return
		}
		if refused, ok := intake.IsRowError(err); ok {
			if refused.Reason == "" || len([]rune(refused.Value)) > 60 || refused.Line < 1 {
				t.Fatalf("refused with %+v", refused)
			}
			continue
		}
		if err != nil {
			checkProblem(t, err)
			return
		}
		checkRow(t, row, site)
	}
	t.Fatalf("more rows than the %d bytes of the file", len(content))
}

func FuzzGHCNDly(f *testing.F)       { fuzzFormat(f, "*.dly") }
func FuzzGHCNByStation(f *testing.F) { fuzzFormat(f, "*ghcn_daily_by_station.csv") }
func FuzzISDLite(f *testing.F)       { fuzzFormat(f, "*isd_lite.txt") }
func FuzzMETAR(f *testing.F)         { fuzzFormat(f, "*metar*.txt") }
func FuzzObservations(f *testing.F)  { fuzzFormat(f, "*observations*.json") }
func FuzzExport(f *testing.F)        { fuzzFormat(f, "own_export.csv") }

// FuzzPacked fuzzes packed files: as they are, and their content packed.
func FuzzPacked(f *testing.F) {
	for _, pattern := range []string{"*.gz", "*.zip"} {
		paths, err := filepath.Glob(filepath.Join(folder, pattern))
		if err != nil || len(paths) == 0 {
			f.Fatalf("no seeds like %s: %v", pattern, err)
		}
		for _, path := range paths {
			content, err := os.ReadFile(path)
			if err != nil {
				f.Fatal(err)
			}
			f.Add(content, 0)
		}
	}
	f.Add([]byte("time,temp_c\n2013-07-01T05:00Z,17.8\n"), 1)
	f.Add([]byte("time,temp_c\n2013-07-01T05:00Z,17.8\n"), 2)
	f.Fuzz(func(t *testing.T, content []byte, how int) {
		switch how {
		case 1:
			content = gzipped(t, content)
		case 2:
			content = zipped(t, map[string][]byte{"a.csv": content})
		}
		file, err := intake.Open(bytes.NewReader(content), site, intake.How{})
		if err != nil {
			checkProblem(t, err)
			return
		}
		if err := file.Close(); err != nil {
			t.Fatal(err)
		}
	})
}

func gzipped(t testing.TB, content []byte) []byte {
	t.Helper()
	var b bytes.Buffer
	w := gzip.NewWriter(&b)
	if _, err := w.Write(content); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func zipped(t testing.TB, files map[string][]byte) []byte {
	t.Helper()
	var b bytes.Buffer
	w := zip.NewWriter(&b)
	for name, content := range files {
		part, err := w.Create(name)
		if err != nil {
			t.Fatal(err)
		}
		if _, err := part.Write(content); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}
