package planner_test

import (
	"context"
	"io"
	"testing"

	"swardbook/planner"
)

// The shelf of other tests keeps no imports.
func (s *shelf) Imports(context.Context, planner.SiteID, int) ([]planner.Import, error) {
	return nil, nil
}

func (s *shelf) Withdraw(context.Context, planner.Stamp, planner.ImportID, bool) (planner.Withdrawal, error) {
	return planner.Withdrawal{}, nil
}

func (s *shelf) Export(context.Context, planner.StationID, io.Writer) error { return nil }

// listed is an importer with a list of imports.
type listed struct {
	*shelf
	imports []planner.Import
}

func (l listed) Imports(context.Context, planner.SiteID, int) ([]planner.Import, error) {
	return l.imports, nil
}

func (l listed) Withdraw(_ context.Context, _ planner.Stamp, id planner.ImportID, _ bool) (planner.Withdrawal, error) {
	return planner.Withdrawal{Import: planner.Import{ID: id}}, nil
}

func TestBookWithdrawsTheNewestThatStands(t *testing.T) {
	t.Parallel()
	imports := []planner.Import{{ID: 7, Withdrawn: true}, {ID: 5}, {ID: 3}}
	for _, row := range []struct {
		imports []planner.Import
		id      planner.ImportID
		want    planner.ImportID
		kind    planner.Kind
	}{
		{imports, 0, 5, ""},
		{imports, 3, 3, ""},
		{imports, 7, 0, planner.NotFound},
		{imports, 4, 0, planner.NotFound}, // of another site
		{nil, 0, 0, planner.NotFound},
	} {
		book := planner.NewBook(nil, nil, listed{&shelf{}, row.imports}, nil)
		done, err := book.Withdraw(t.Context(), planner.Stamp{}, 1, row.id, true)
		if row.kind == "" && err != nil || row.kind != "" && planner.KindOf(err) != row.kind || done.Import.ID != row.want {
			t.Errorf("import %d: %d, %v; want %d %s", row.id, done.Import.ID, err, row.want, row.kind)
		}
	}
}

func TestMoved(t *testing.T) {
	t.Parallel()
	day := planner.DayFacts{HasExtremes: true, HighC: 20, LowC: 10, HasHourly: true, HourlyC: 15}
	change := func(do func(*planner.DayFacts)) planner.DayFacts {
		other := day
		do(&other)
		return other
	}
	for _, row := range []struct {
		name  string
		other planner.DayFacts
		want  bool
	}{
		{"the same", day, false},
		{"another count of readings", change(func(f *planner.DayFacts) { f.SlotsReal = 20 }), false},
		{"the rounding of a sum", change(func(f *planner.DayFacts) { f.HourlyC += 1e-12 }), false},
		{"the high", change(func(f *planner.DayFacts) { f.HighC++ }), true},
		{"the low", change(func(f *planner.DayFacts) { f.LowC-- }), true},
		{"the mean", change(func(f *planner.DayFacts) { f.HourlyC += 0.1 }), true},
		{"no mean", change(func(f *planner.DayFacts) { f.HasHourly = false }), true},
		{"no extremes", change(func(f *planner.DayFacts) { f.HasExtremes = false }), true},
	} {
		if got := planner.Moved(day, row.other); got != row.want {
			t.Errorf("%s: moved %t, want %t", row.name, got, row.want)
		}
	}
}
