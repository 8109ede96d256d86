package sqlite_test

import (
	"errors"
	"path/filepath"
	"strings"
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

// Sheets and the days ahead they stand on are exported with their site, and
// erased with it, as with their team; another site's stay.
func TestSheetsAreExportedAndErased(t *testing.T) {
	ctx := t.Context()
	db := openFile(t, filepath.Join(t.TempDir(), "store.db"))
	home := team(t, db, "home")
	goes, stays := savedSite(t, home, "Secretvale"), savedSite(t, home, "Quillmere")
	ids := map[planner.SiteID]planner.SheetID{}
	for _, site := range []planner.Site{goes, stays} {
		kept, err := home.KeepSheet(ctx, planner.Sheet{Site: site.ID, Form: 1, AsOf: 19885, Issued: time.Unix(1718083800, 0), Inputs: []byte(`{"of":"` + site.Name + `"}`),
			Outlook: planner.IssuedOutlook{AsOf: 19885, Start: 19880, Issued: time.Unix(1718083800, 0), Sources: "9 past years of " + site.Name, Path: []byte("[]")}})
		if err != nil {
			t.Fatal(err)
		}
		ids[site.ID] = kept.ID
	}
	files, err := home.Export(ctx, goes.ID)
	if err != nil {
		t.Fatal(err)
	}
	exported := map[string]string{}
	for _, file := range files {
		exported[file.Name] = string(file.Content)
	}
	for name, want := range map[string]string{"sheet.csv": "Secretvale", "outlook.csv": "2024-06-11,2024-06-11T05:30:00Z,0,9 past years of Secretvale", "sheet_outlook.csv": "1,1"} {
		if !strings.Contains(exported[name], want) || strings.Contains(exported[name], "Quillmere") {
			t.Errorf("%s: no %q, or too much, in\n%s", name, want, exported[name])
		}
	}
	if err := home.EraseSite(ctx, goes.ID); err != nil {
		t.Fatal(err)
	}
	if _, err := home.Sheet(ctx, ids[goes.ID]); planner.KindOf(err) != planner.NotFound {
		t.Errorf("an erased site's sheet: %v", err)
	}
	if left, err := home.Sheet(ctx, ids[stays.ID]); err != nil || left.Outlook.Sources != "9 past years of Quillmere" {
		t.Errorf("another site's sheet: %+v, %v", left, err)
	}
	if err := home.EraseTeam(ctx); err != nil {
		t.Fatal(err)
	}
}
