package sqlite_test

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"
	_ "time/tzdata" // a fresh machine may have no time zones

	"github.com/google/go-cmp/cmp"

	"swardbook/planner"
	"swardbook/storage"
	"swardbook/storage/sqlite"
)

// Every file of the corpus goes into one record or is refused, and one that is
// refused leaves every row of every table as it was.
func TestRefusedFilesChangeNothing(t *testing.T) {
	t.Parallel()
	ctx := t.Context()
	db, err := sqlite.Open(ctx, filepath.Join(t.TempDir(), "store.db"))
	if err != nil {
		t.Fatal(err)
	}
	defer db.Close()
	team, err := db.Team(ctx, "test", "team")
	if err != nil {
		t.Fatal(err)
	}
	stamp := planner.Stamp{At: time.Date(2024, 6, 4, 6, 0, 0, 0, time.UTC), By: "tester", Command: "/weather file"}
	keep := func(noun planner.Noun) planner.Noun {
		kept, err := team.Save(ctx, stamp, noun)
		if err != nil {
			t.Fatal(err)
		}
		return kept
	}
	rule := planner.DayRule{OffsetSeconds: -5 * 3600, Boundary: planner.StandardMidnight}
	site := keep(planner.Site{Name: "Fernhollow", Lat: 41, Lon: -74, Zone: "America/New_York", Units: planner.Celsius, Rules: planner.Always(rule)}).(planner.Site)
	station := keep(planner.Station{Site: site.ID, Name: "Shed", Rank: 1}).(planner.Station)
	importer := storage.NewImporter(team)

	paths, err := filepath.Glob("../../testdata/intake/*.*")
	if err != nil {
		t.Fatal(err)
	}
	taken, refused := 0, 0
	before := sqlite.Dump(t, db)
	for _, path := range paths {
		if ext := filepath.Ext(path); ext == ".golden" || ext == ".md" {
			continue
		}
		content, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		name := filepath.Base(path)
		_, err = importer.Import(ctx, planner.ImportRequest{Stamp: stamp, Station: station.ID, FileName: name, Content: bytes.NewReader(content)})
		after := sqlite.Dump(t, db)
		switch {
		case err == nil:
			taken++
			if before = after; strings.HasPrefix(name, "refused_") {
				t.Errorf("%s was taken", name)
			}
			continue
		case planner.KindOf(err) != planner.Refused:
			t.Errorf("%s: %v", name, err)
		}
		refused++
		if diff := cmp.Diff(before, after); diff != "" {
			t.Errorf("%s was refused and changed the store: %s", name, diff)
		}
	}
	if taken < 30 || refused < 30 {
		t.Errorf("%d files taken and %d refused: the corpus is not what it was", taken, refused)
	}
}
