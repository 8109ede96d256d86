package sqlite_test

import (
	"errors"
	"path/filepath"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"

	"swardbook/planner"
	"swardbook/storage/sqlite"
)

// An issued sheet comes back as it was kept, to its own team only.
func TestSheetsAreKept(t *testing.T) {
	db, err := sqlite.Open(t.Context(), filepath.Join(t.TempDir(), "book.db"))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = db.Close() })
	team, err := db.Team(t.Context(), "terminal", "home")
	if err != nil {
		t.Fatal(err)
	}
	site, err := team.Save(t.Context(), planner.Stamp{}, planner.Site{Name: "Quillmere", Lat: 40, Zone: "UTC", Units: planner.Celsius,
		Rules: planner.Always(planner.DayRule{Boundary: planner.StandardMidnight})})
	if err != nil {
		t.Fatal(err)
	}
	sheet := planner.Sheet{Site: planner.SiteID(site.Key()), Form: 1, AsOf: 19885, Issued: time.Unix(1718083800, 0).UTC(), By: "Ann", Inputs: []byte(`{"days":[]}`), Engine: 1}
	kept, err := team.KeepSheet(t.Context(), sheet)
	if err != nil || kept.ID == 0 {
		t.Fatalf("%+v, %v", kept, err)
	}
	sheet.ID = kept.ID
	if got, err := team.Sheet(t.Context(), kept.ID); err != nil || !cmp.Equal(got, sheet) {
		t.Errorf("%v\n%s", err, cmp.Diff(sheet, got))
	}
	other, err := db.Team(t.Context(), "terminal", "other")
	if err != nil {
		t.Fatal(err)
	}
	var problem *planner.Problem
	if _, err := other.Sheet(t.Context(), kept.ID); !errors.As(err, &problem) || problem.Kind != planner.NotFound {
		t.Errorf("another team's sheet gives %v", err)
	}
	if _, err := other.KeepSheet(t.Context(), sheet); !errors.As(err, &problem) || problem.Kind != planner.NotFound {
		t.Errorf("a sheet of another team's site gives %v", err)
	}
}
