package intake_test

import (
	"archive/zip"
	"bytes"
	"compress/gzip"
	"fmt"
	"io"
	"runtime"
	"strings"
	"testing"

	"swardbook/planner"
	"swardbook/storage/intake"
)

// allocated is how many bytes do allocates, in all.
func allocated(do func()) uint64 {
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	do()
	runtime.ReadMemStats(&after)
	return after.TotalAlloc - before.TotalAlloc
}

const gibibyte = 1 << 30

// A line of 1 GB, plain or packed, is refused after a few MB, in JSON too.
func TestALineOfAGigabyte(t *testing.T) {
	if raceOn {
		t.Skip("one goroutine, and slow under the race detector")
	}
	long := func(before string) io.Reader {
		return io.MultiReader(strings.NewReader(before), io.LimitReader(&endless{text: "1234567890"}, gibibyte))
	}
	for name, row := range map[string]struct {
		content io.Reader
		problem string
	}{
		"row":    {long("time,temp_c\n2013-07-01T05:00Z,17.8,"), "line 2 is longer than 1 MiB"},
		"header": {long("time,temp_c,"), "line 1 is longer than 1 MiB"},
		"dly":    {long("XXW00099999202104TMAX  185  W"), "line 1 is longer than 1 MiB"},
		"JSON":   {long(`{"type":"FeatureCollection","features":[{"type":"`), "the file is too long"},
	} {
		bytes := allocated(func() { wantProblem(t, read(row.content, site, "").err, row.problem) })
		// A spool in memory, grown, and two buffers.
		if bytes > 32*mebibyte {
			t.Errorf("%s: %d MiB allocated", name, bytes/mebibyte)
		}
	}
}

// One observation of 8 MiB is not taken into memory.
func TestALongObservation(t *testing.T) {
	content := `{"type":"Feature","properties":{"timestamp":"` + strings.Repeat("x", 8*mebibyte) + `"}}`
	wantProblem(t, read(strings.NewReader(content), site, "").err, "longer than 1 MiB")
	many := `{"type":"FeatureCollection","features":[` + strings.Repeat(`{"type":"Feature","properties":{"timestamp":"2021-07-15T17:53:00Z"}},`, 100_000) +
		`{"type":"Feature","properties":{"timestamp":"2021-07-15T17:53:00Z"}}]}`
	if got := read(strings.NewReader(many), site, ""); got.err != nil || got.empty != 100_001 {
		t.Errorf("a long list: %d, %v", got.empty, got.err)
	}
}

// A bomb of 256 MiB in rows that could be a station's is refused when it unpacks
// to more than 200 times its size.
func TestBombs(t *testing.T) {
	if raceOn {
		t.Skip("one goroutine, and a minute under the race detector")
	}
	row := strings.Repeat("2013-07-01T05:00Z,17.8\n", 1<<10)
	rows := func(to io.Writer) error {
		if _, err := io.WriteString(to, "time,temp_c\n"); err != nil {
			return err
		}
		for range gibibyte / 4 / len(row) {
			if _, err := io.WriteString(to, row); err != nil {
				return err
			}
		}
		return nil
	}
	var gz, packed bytes.Buffer
	w := gzip.NewWriter(&gz)
	z := zip.NewWriter(&packed)
	part, err := z.Create("july.csv")
	if err != nil {
		t.Fatal(err)
	}
	for _, err := range []error{rows(w), w.Close(), rows(part), z.Close()} {
		if err != nil {
			t.Fatal(err)
		}
	}
	for kind, content := range map[string][]byte{"gzip": gz.Bytes(), "zip": packed.Bytes()} {
		used := allocated(func() {
			wantProblem(t, read(bytes.NewReader(content), site, "").err, fmt.Sprintf("the %s file unpacks to more than 200 times its size", kind))
		})
		if used > 48*mebibyte {
			t.Errorf("%s of %d KiB: %d MiB allocated", kind, len(content)>>10, used/mebibyte)
		}
	}
}

// A zip that lists a million files is refused before its list is read.
func TestAZipWithALongList(t *testing.T) {
	files := map[string][]byte{}
	for i := range 5000 {
		files[fmt.Sprintf("%d.csv", i)] = nil
	}
	wantProblem(t, read(bytes.NewReader(zipped(t, files)), site, "").err, "list of files")
	wantProblem(t, read(strings.NewReader("PK\x03\x04 and nothing more"), site, "").err, "the zip file is broken")
	wantProblem(t, read(bytes.NewReader(zipped(t, nil)), site, "").err, "not a text file")
}

// The temporary file of a long file is gone once it is closed.
func TestTheTemporaryFileGoes(t *testing.T) {
	dir := t.TempDir()
	t.Setenv("TMPDIR", dir)
	content := "time,temp_c\n" + strings.Repeat("2013-07-01T05:00Z,17.8\n", 400_000)
	for _, one := range []string{content, content + strings.Repeat("x", 2*mebibyte)} {
		file, err := intake.Open(strings.NewReader(one), site, intake.How{})
		if err != nil && planner.KindOf(err) != planner.Refused {
			t.Fatal(err)
		}
		if err == nil {
			for range 2 {
				if err := file.Close(); err != nil {
					t.Fatal(err)
				}
			}
		}
		if left := filesIn(t, dir); left != 0 {
			t.Errorf("%d temporary files are left", left)
		}
	}
}
