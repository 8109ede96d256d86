package storage_test

import (
	"context"
	"errors"
	"io"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"swardbook/planner"
	"swardbook/storage"
)

const oneDay = "date,high_c,low_c\n2024-06-01,21,10\n"

// The first file of a site brings its station, in the same step: a file that is
// refused, stopped or cut off leaves no station, no change and no number used.
func TestFirstFileBringsItsStation(t *testing.T) {
	stopped, stop := context.WithCancel(t.Context())
	for _, row := range []struct {
		name    string
		ctx     context.Context
		content io.Reader
	}{
		{"refused", t.Context(), strings.NewReader("these are notes\nof the greens\n")},
		{"stopped before its end", stopped, io.MultiReader(strings.NewReader(oneDay), readerFunc(func([]byte) (int, error) {
			stop()
			return 0, io.EOF
		}))},
		{"cut off", t.Context(), io.MultiReader(strings.NewReader(oneDay), readerFunc(func([]byte) (int, error) {
			return 0, errors.New("connection lost")
		}))},
	} {
		t.Run(row.name, func(t *testing.T) {
			g := newGround(t, "UTC", 0)
			bare := save(t, g.team, planner.Site{Name: "Marlpit", Zone: "UTC", Units: planner.Celsius, Rules: g.site.Rules})
			book := planner.NewBook(g.team, g.team, g.importer, nil)
			changes := allChanges(t, g)
			request := planner.ImportRequest{Stamp: stamp, FileName: "roof.csv", Content: row.content}
			if got, err := book.Import(row.ctx, bare, "", request); err == nil {
				t.Fatalf("it was taken: %+v", got)
			}
			if diff := cmp.Diff(changes, allChanges(t, g)); diff != "" {
				t.Errorf("left in the change log:\n%s", diff)
			}
			if setup, err := g.team.Setup(t.Context()); err != nil || len(setup.StationsOf(bare.ID)) > 0 {
				t.Errorf("left: %+v, %v", setup.StationsOf(bare.ID), err)
			}
			request.Content = strings.NewReader(oneDay)
			got, err := book.Import(t.Context(), bare, "", request)
			if err != nil || got.Station != (planner.Station{ID: g.station + 1, Site: bare.ID, Name: "roof", Rank: 1}) || got.Report.New != 1 {
				t.Fatalf("then a good one: %+v, %v", got, err)
			}
			setup, err := g.team.Setup(t.Context())
			if diff := cmp.Diff([]planner.Station{got.Station}, setup.StationsOf(bare.ID)); err != nil || diff != "" {
				t.Errorf("%v\n%s", err, diff)
			}
			if record, err := g.team.Record(t.Context(), bare.ID); err != nil || len(record.Facts) != 1 {
				t.Errorf("record %+v, %v", record, err)
			}
			var kinds []string
			for _, change := range allChanges(t, g)[len(changes):] {
				kinds = append(kinds, change.Kind)
			}
			if diff := cmp.Diff([]string{"station", "import"}, kinds); diff != "" {
				t.Errorf("the change log:\n%s", diff)
			}
		})
	}
}

// Two first files at a time: the one that comes second finds the name taken, or
// the site with its station, and keeps nothing.
func TestFirstFileOfATakenName(t *testing.T) {
	g := newGround(t, "UTC", 0)
	importer := storage.NewImporter(g.team)
	fresh := planner.Station{Site: g.site.ID, Name: "SHED", Rank: 1}
	for name, row := range map[string]struct {
		station planner.Station
		kind    planner.Kind
	}{
		"taken":      {fresh, planner.Taken},
		"no site":    {planner.Station{Site: 99, Name: "roof", Rank: 1}, planner.NotFound},
		"not a name": {planner.Station{Site: g.site.ID, Name: "a/b", Rank: 1}, planner.Invalid},
	} {
		before := allChanges(t, g)
		_, err := importer.Import(t.Context(), planner.ImportRequest{Stamp: stamp, New: row.station, FileName: "x.csv", Content: strings.NewReader(oneDay)})
		if planner.KindOf(err) != row.kind {
			t.Errorf("%s: %v, want %s", name, err, row.kind)
		}
		if diff := cmp.Diff(before, allChanges(t, g)); diff != "" {
			t.Errorf("%s left:\n%s", name, diff)
		}
	}
}

// allChanges is the change log, oldest first.
func allChanges(t *testing.T, g *ground) []planner.Change {
	t.Helper()
	changes, err := g.team.Changes(t.Context(), "", 1000)
	if err != nil {
		t.Fatal(err)
	}
	for i, j := 0, len(changes)-1; i < j; i, j = i+1, j-1 {
		changes[i], changes[j] = changes[j], changes[i]
	}
	return changes
}
