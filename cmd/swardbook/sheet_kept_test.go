package main

import (
	"encoding/json"
	"path/filepath"
	"strings"
	"testing"

	"swardbook/planner"
)

// A kept sheet holds what it was made from: the typed days, the revision of the
// record, and the days ahead in words and as numbers; two sheets of one morning
// stand on one outlook.
func TestSheetIsKeptWithItsOutlook(t *testing.T) {
	folder := t.TempDir()
	path := filepath.Join(folder, "course.db")
	lines := strings.Join([]string{
		"/setup site add name:Quillmere lat:40 lon:-74 zone:UTC",
		"/setup surface add name:greens grass:cool",
		"/setup work add surface:greens name:cut counts:days target:3",
		"/weather day date:2024-06-10 high:24 low:12",
		`/weather ahead highs:"29 30" lows:"18 19"`,
		"/done surfaces:greens works:cut when:2024-06-09",
		"/sheet get", "/sheet get greens weeks:2",
	}, "\n")
	if out, errOut, status := program(t, lines, "chat", "--db", path, "--as", "lead", "--now", "2024-06-11T05:30", "--out", folder); status != 0 {
		t.Fatalf("status %d: %s%s", status, out, errOut)
	}
	h, err := open(t.Context(), path, "home")
	if err != nil {
		t.Fatal(err)
	}
	defer h.close()
	var sheets []planner.Sheet
	for id := planner.SheetID(1); id <= 2; id++ {
		sheet, err := h.desk.Sheets.Sheet(t.Context(), id)
		if err != nil {
			t.Fatal(err)
		}
		sheets = append(sheets, sheet)
	}
	outlook := sheets[0].Outlook
	if outlook.ID == 0 || outlook.ID != sheets[1].Outlook.ID || outlook.Typed != 2 || outlook.Revision == 0 || !strings.Contains(outlook.Sources, "2 days typed by hand") {
		t.Errorf("outlooks %d and %d: %d typed, revision %d, %q", outlook.ID, sheets[1].Outlook.ID, outlook.Typed, outlook.Revision, outlook.Sources)
	}
	var days []planner.DayFacts
	if err := json.Unmarshal(outlook.Path, &days); err != nil || len(days) < 2 {
		t.Fatalf("%d days, %v", len(days), err)
	}
	if day := days[int(planner.DayOf(2024, 6, 11)-outlook.Start)]; day.HighC != 29 || day.LowC != 18 {
		t.Errorf("the typed day is %+v", day)
	}
	var inputs struct{ Plan planner.Plan }
	if err := json.Unmarshal(sheets[0].Inputs, &inputs); err != nil || len(inputs.Plan.Hand) != 2 || inputs.Plan.Outlook.Path != nil || len(inputs.Plan.Log) != 1 {
		t.Errorf("%v: %d typed days, %d days ahead a second time, %d entries", err, len(inputs.Plan.Hand), len(inputs.Plan.Outlook.Path), len(inputs.Plan.Log))
	}
}
