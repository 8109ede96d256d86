package storage_test

import (
	"bytes"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"swardbook/planner"
)

// content is every byte of the store: the file and what is not yet moved into
// it.
func (g *ground) content(t testing.TB) []byte {
	t.Helper()
	var all []byte
	for _, path := range []string{g.path, g.path + "-wal"} {
		content, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		all = append(all, content...)
	}
	return all
}

// Every file of the corpus goes into one record or is refused, and one that is
// refused leaves the store byte for byte as it was.
func TestRefusedFilesChangeNothing(t *testing.T) {
	t.Parallel()
	g := newGround(t, "America/New_York", -5)
	paths, err := filepath.Glob("../testdata/intake/*.*")
	if err != nil {
		t.Fatal(err)
	}
	each, least := 1, 30
	if raceOn { // every fourth file shows what races
		each, least = 4, 7
	}
	taken, refused := 0, 0
	before := g.content(t)
	paths = slices.DeleteFunc(paths, func(path string) bool { return filepath.Ext(path) == ".golden" || filepath.Ext(path) == ".md" })
	for i, path := range paths {
		if i%each != 0 {
			continue
		}
		file, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		name := filepath.Base(path)
		_, err = g.importer.Import(t.Context(), g.request(name, bytes.NewReader(file)))
		after := g.content(t)
		switch {
		case err == nil:
			taken++
			if strings.HasPrefix(name, "refused_") {
				t.Errorf("%s was taken", name)
			}
			if bytes.Equal(before, after) {
				t.Errorf("%s was taken and nothing was written: the check checks nothing", name)
			}
			before = after
			continue
		case planner.KindOf(err) != planner.Refused:
			t.Errorf("%s: %v", name, err)
		}
		refused++
		if !bytes.Equal(before, after) {
			t.Errorf("%s was refused and changed the store", name)
		}
	}
	if taken < least || refused < least {
		t.Errorf("%d files taken and %d refused: the corpus is not what it was", taken, refused)
	}
}
