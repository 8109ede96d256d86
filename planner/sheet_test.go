package planner_test

import (
	"math/rand/v2"
	"testing"

	"swardbook/planner"
)

// The issued curves: the first day on which a curve reaches a target is the
// early, middle or late date, whatever the target. The dates come from
// counting every member, a second route.
func TestSheetCurvesGiveTheDates(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	asOf := date("2024-06-11")
	var members [][]float64
	for range 7 {
		var row []float64
		for range 60 {
			row = append(row, 25*r.Float64())
		}
		members = append(members, row)
	}
	plan := planOf(asOf, times(20, 12), members...)
	plan.Log = []planner.Entry{done(asOf-5, 1, 0)}
	for target := 60.0; target < 500; target += 17 {
		plan.Works = []planner.Work{regulator(target)}
		evaluation, err := planner.Evaluate(plan)
		if err != nil {
			t.Fatal(err)
		}
		data, err := planner.SheetOf(plan, evaluation, 7)
		if err != nil {
			t.Fatal(err)
		}
		count := data.Works[0].Counts[0]
		for i, want := range []planner.Passage{count.Due.Early, count.Due.Middle, count.Due.Late} {
			got := planner.Passage{}
			for d, total := range count.Curves[i] {
				if total >= target {
					got = planner.Passage{Day: asOf + planner.Day(d), Known: true}
					break
				}
			}
			if got != want {
				t.Errorf("target %g, curve %d: %v, want %v", target, i, got, want)
			}
		}
		if want := 4 * 12.0; !within(count.Through, want, 1e-9) || !within(count.Due.Total.Total, want, 1e-9) {
			t.Errorf("through yesterday %g, want %g", count.Through, want)
		}
	}
}
