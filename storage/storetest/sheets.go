package storetest

import (
	"testing"
	"time"

	"swardbook/planner"
)

func testSheets(t *testing.T, newTeam func(string) Store) {
	one, two := newTeam("one"), newTeam("two")
	site := save(t, one, newSite("Quillmere"))
	issued := planner.IssuedOutlook{AsOf: lateJune, Issued: stamp("").At, Revision: 41, Sources: "Days ahead: 2 days typed by hand, then 9 past years.",
		Typed: 2, Years: 9, Seed: -7, Engine: 1, Start: lateJune - 3, Path: []byte(`[{"Day":19894,"HighC":21.5}]`)}
	sheet := planner.Sheet{Site: site.ID, Form: 1, AsOf: lateJune, Issued: stamp("").At, By: "Robin", Inputs: []byte(`{"Days":[]}`), Engine: 1, Outlook: issued}
	keep := func(sheet planner.Sheet) planner.Sheet {
		t.Helper()
		kept, err := one.KeepSheet(t.Context(), sheet)
		if err != nil {
			t.Fatalf("KeepSheet: %v", err)
		}
		got, err := one.Sheet(t.Context(), kept.ID)
		if err != nil {
			t.Fatalf("Sheet(%d): %v", kept.ID, err)
		}
		return got
	}
	first := keep(sheet)
	wanted := sheet
	wanted.ID, wanted.Outlook.ID = 1, 1
	wanted.Issued, wanted.Outlook.Issued = wanted.Issued.Truncate(time.Second), wanted.Outlook.Issued.Truncate(time.Second)
	want(t, "the first sheet", first, wanted)

	// The same path again, later and in other words: the outlook of the first.
	again := sheet
	again.Issued, again.Outlook.Issued, again.Outlook.Sources = again.Issued.Add(time.Hour), again.Issued.Add(time.Hour), "other words"
	if got := keep(again); got.ID == first.ID {
		t.Errorf("two sheets have the id %d", got.ID)
	} else {
		want(t, "the outlook of the second sheet", got.Outlook, first.Outlook)
	}
	seen := map[planner.OutlookID]bool{first.Outlook.ID: true}
	for what, change := range map[string]func(*planner.Sheet){
		"site":     func(s *planner.Sheet) { s.Site = save(t, one, newSite("Ashby")).ID },
		"day":      func(s *planner.Sheet) { s.Outlook.AsOf++ },
		"revision": func(s *planner.Sheet) { s.Outlook.Revision++ },
		"engine":   func(s *planner.Sheet) { s.Outlook.Engine++ },
		"start":    func(s *planner.Sheet) { s.Outlook.Start++ },
		"path":     func(s *planner.Sheet) { s.Outlook.Path = []byte(`[{"Day":19894,"HighC":21.6}]`) },
	} {
		other := sheet
		change(&other)
		if got := keep(other); seen[got.Outlook.ID] {
			t.Errorf("another %s has the outlook %d again", what, got.Outlook.ID)
		} else {
			seen[got.Outlook.ID] = true
		}
	}
	bare := sheet
	bare.Outlook = planner.IssuedOutlook{}
	want(t, "the outlook of a sheet without one", keep(bare).Outlook, planner.IssuedOutlook{})

	_, err := two.Sheet(t.Context(), first.ID)
	wantKind(t, err, planner.NotFound)
	_, err = two.KeepSheet(t.Context(), sheet)
	wantKind(t, err, planner.NotFound)
	_, err = one.Sheet(t.Context(), 99)
	wantKind(t, err, planner.NotFound)
}
