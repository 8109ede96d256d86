package planner_test

import (
	"math"
	"reflect"
	"testing"

	"pgregory.net/rapid"

	"swardbook/planner"
)

// differing is a run of days whose high/low mean lies by these above the 24-hour
// mean of 10; a missing one has the 24-hour mean alone.
func differing(first planner.Day, by ...float64) planner.Record {
	var record planner.Record
	for i, c := range by {
		facts := full(first+planner.Day(i), 10+c+4, 10+c-4, 10)
		if math.IsNaN(c) {
			facts = planner.DayFacts{Day: first + planner.Day(i), HasHourly: true, HourlyC: 10}
		}
		record.Facts = append(record.Facts, facts)
	}
	return record
}

// By hand: of 0.5, -1.5, 1 and 0 the mean is 0, the mean size 0.75, and the
// squares 0.25 + 2.25 + 1 sum to 3.5, so sd = sqrt(3.5/3).
func TestCompareMeans(t *testing.T) {
	first := date("2024-06-01")
	for _, row := range []struct {
		name     string
		record   planner.Record
		from, to planner.Day
		want     planner.Means
	}{
		{"by hand", differing(first, 0.5, -1.5, 1, 0), first, first + 3, planner.Means{
			Days: 4, DifferenceC: 0, AbsDifferenceC: 0.75, SpreadC: math.Sqrt(3.5 / 3), HasSpread: true, LargestC: -1.5, LargestDay: first + 1}},
		{"days with one mean left out", differing(first, 2, missing, 1), first, first + 2, planner.Means{
			Days: 2, DifferenceC: 1.5, AbsDifferenceC: 1.5, SpreadC: math.Sqrt(0.5), HasSpread: true, LargestC: 2, LargestDay: first}},
		{"of equal ones the earliest", differing(first, 1, -2, 2, -2), first, first + 3, planner.Means{
			Days: 4, DifferenceC: -0.25, AbsDifferenceC: 1.75, SpreadC: math.Sqrt((1.25*1.25 + 1.75*1.75*2 + 2.25*2.25) / 3), HasSpread: true, LargestC: -2, LargestDay: first + 1}},
		{"one day", differing(first, -0.5), first, first, planner.Means{Days: 1, DifferenceC: -0.5, AbsDifferenceC: 0.5, LargestC: -0.5, LargestDay: first}},
		{"one day of three", differing(first, 1, 2, 4), first + 1, first + 1, planner.Means{Days: 1, DifferenceC: 2, AbsDifferenceC: 2, LargestC: 2, LargestDay: first + 1}},
		{"no difference", differing(first, 0, 0), first, first + 1, planner.Means{Days: 2, HasSpread: true, LargestDay: first}},
		{"none has both", differing(first, missing, missing), first, first + 1, planner.Means{}},
		{"outside the record", differing(first, 1), first + 5, first + 9, planner.Means{}},
		{"to before from", differing(first, 1, 2), first + 1, first, planner.Means{}},
		{"no record", planner.Record{}, first, first + 9, planner.Means{}},
	} {
		got := planner.CompareMeans(row.record, row.from, row.to)
		row.want.From, row.want.To = row.from, row.to
		if !within(got.SpreadC, row.want.SpreadC, 1e-12) || !within(got.DifferenceC, row.want.DifferenceC, 1e-12) {
			t.Errorf("%s: difference %g, sd %g; want %g, %g", row.name, got.DifferenceC, got.SpreadC, row.want.DifferenceC, row.want.SpreadC)
		}
		got.SpreadC, got.DifferenceC = row.want.SpreadC, row.want.DifferenceC
		if got != row.want {
			t.Errorf("%s: %+v, want %+v", row.name, got, row.want)
		}
	}
}

func TestCompareMeansFigures(t *testing.T) {
	first := date("2024-06-01")
	keys := func(m planner.Means) (keys []string) {
		checkFigures(t, m.Figures())
		for _, f := range m.Figures() {
			keys = append(keys, f.Key)
		}
		return keys
	}
	count := []string{"means.from", "means.to", "means.days"}
	differences := append(count[:3:3], "means.mean_difference_c", "means.mean_abs_difference_c")
	for _, row := range []struct {
		by   []float64
		want []string
	}{
		{nil, count},
		{[]float64{1}, append(differences[:5:5], "means.largest_c", "means.largest_date")},
		{[]float64{1, 2}, append(differences[:5:5], "means.sd_c", "means.largest_c", "means.largest_date")},
	} {
		if got := keys(planner.CompareMeans(differing(first, row.by...), first, first+9)); !reflect.DeepEqual(got, row.want) {
			t.Errorf("%v: keys %v, want %v", row.by, got, row.want)
		}
	}
}

// A plain loop over the days, with the sum of squares in one pass.
func TestCompareMeansAgainstALoop(t *testing.T) {
	first := date("2024-06-01")
	rapid.Check(t, func(t *rapid.T) {
		record := differing(first, drawRow(t, rapid.IntRange(0, 30).Draw(t, "days"), 30, "by")...)
		from, to := first+planner.Day(rapid.IntRange(-3, 20).Draw(t, "from")), first+planner.Day(rapid.IntRange(0, 35).Draw(t, "to"))
		n, sum, size, squares, largest := 0.0, 0.0, 0.0, 0.0, 0.0
		for _, f := range record.Facts {
			if f.Day < from || f.Day > to || !f.HasExtremes || !f.HasHourly {
				continue
			}
			by := (f.HighC+f.LowC)/2 - f.HourlyC
			n, sum, size, squares, largest = n+1, sum+by, size+math.Abs(by), squares+by*by, max(largest, math.Abs(by))
		}
		got := planner.CompareMeans(record, from, to)
		if float64(got.Days) != n || got.HasSpread != (n > 1) {
			t.Fatalf("%d days, want %g", got.Days, n)
		}
		if n > 0 && (!within(got.DifferenceC, sum/n, 1e-9) || !within(got.AbsDifferenceC, size/n, 1e-9) || !within(math.Abs(got.LargestC), largest, 1e-9)) {
			t.Fatalf("%+v, want %g, %g, %g", got, sum/n, size/n, largest)
		}
		if n > 1 && !within(got.SpreadC, math.Sqrt(max(0, squares-sum*sum/n)/(n-1)), 1e-6) {
			t.Fatalf("sd %g, want %g", got.SpreadC, math.Sqrt((squares-sum*sum/n)/(n-1)))
		}
	})
}
