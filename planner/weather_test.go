package planner_test

import (
	"math"
	"reflect"
	"testing"

	"pgregory.net/rapid"

	"swardbook/planner"
)

func TestBasisWordsAndOther(t *testing.T) {
	for _, row := range []struct {
		basis, other planner.Basis
		words        string
	}{
		{planner.Hourly, planner.Midrange, "24-hour mean"},
		{planner.Midrange, planner.Hourly, "high/low mean"},
		{planner.Extremes, planner.Extremes, "high and low"},
		{planner.Readings, planner.Readings, "hourly readings"},
		{planner.NoBasis, planner.NoBasis, "days"},
	} {
		if row.basis.Words() != row.words || row.basis.Other() != row.other {
			t.Errorf("%s: %q, other %s; want %q, %s", row.basis, row.basis.Words(), row.basis.Other(), row.words, row.other)
		}
	}
}

func TestDailyReadingCheck(t *testing.T) {
	for _, good := range []planner.DailyReading{
		{HighC: 20, LowC: 10}, {HighC: 10, LowC: 10}, {HighC: planner.HighestC, LowC: planner.LowestC},
		{HighC: 20, LowC: 10, MeanC: 10, HasMean: true}, {HighC: 20, LowC: 10, MeanC: 20, HasMean: true},
		{HighC: 20, LowC: 10, MeanC: math.NaN()}, // no mean was given
	} {
		if err := good.Check(); err != nil {
			t.Errorf("%+v: %v", good, err)
		}
	}
	for _, bad := range []planner.DailyReading{
		{HighC: 10, LowC: 10.1}, {HighC: math.NaN(), LowC: 1}, {HighC: 1, LowC: math.NaN()}, {HighC: math.Inf(1), LowC: 1},
		{HighC: 1, LowC: math.Inf(-1)}, {HighC: planner.HighestC + 0.1, LowC: 1}, {HighC: 1, LowC: planner.LowestC - 0.1},
		{HighC: 20, LowC: 10, MeanC: 20.1, HasMean: true}, {HighC: 20, LowC: 10, MeanC: 9.9, HasMean: true},
		{HighC: 20, LowC: 10, MeanC: math.NaN(), HasMean: true},
	} {
		if err := bad.Check(); err == nil || err.Error() == "" {
			t.Errorf("%+v was taken", bad)
		}
	}
}

// The bounds hold every world record: -89.2 and 56.7 °C, the extremes tabled in
// the HadISD quality-control code (Dunn et al. 2012; second-hand).
func TestCheckTemperature(t *testing.T) {
	for c, good := range map[float64]bool{
		-89.2: true, 56.7: true, 0: true, -95: true, 62: true, -95.01: false, 62.01: false, 998: false, -999: false,
		math.Inf(1): false, math.Inf(-1): false,
	} {
		if err := planner.CheckTemperature(c); (err == nil) != good {
			t.Errorf("%g: %v", c, err)
		}
	}
	if planner.CheckTemperature(math.NaN()) == nil {
		t.Error("NaN was taken")
	}
}

func TestMeanNeverFallsBack(t *testing.T) {
	day := full(0, 20, 10, 14)
	if c, ok := day.Mean(planner.Hourly); !ok || c != 14 {
		t.Errorf("24-hour mean %g, %t", c, ok)
	}
	if c, ok := day.Mean(planner.Midrange); !ok || c != 15 {
		t.Errorf("high/low mean %g, %t", c, ok)
	}
	for _, basis := range []planner.Basis{planner.Extremes, planner.Readings, planner.NoBasis, ""} {
		if c, ok := day.Mean(basis); ok || c != 0 {
			t.Errorf("%q has a mean of %g", basis, c)
		}
	}
	day.HasHourly = false
	if c, ok := day.Mean(planner.Hourly); ok || c != 0 {
		t.Errorf("a 24-hour mean that is not known: %g", c)
	}
	day.HasExtremes = false
	if _, ok := day.Mean(planner.Midrange); ok || !day.Empty() {
		t.Error("a day of which nothing is known is not empty")
	}
}

func TestWarmer(t *testing.T) {
	day := full(5, 20, 10, 14)
	day.HoursC = []float64{13, 15}
	warmer := day.Warmer(1.5)
	if warmer.HighC != 21.5 || warmer.LowC != 11.5 || warmer.HourlyC != 15.5 || !reflect.DeepEqual(warmer.HoursC, []float64{14.5, 16.5}) {
		t.Errorf("%+v", warmer)
	}
	if !reflect.DeepEqual(day.HoursC, []float64{13, 15}) || day.HighC != 20 {
		t.Errorf("the day itself was changed: %+v", day)
	}
	if empty := (planner.DayFacts{Day: 5}).Warmer(3); !empty.Empty() || empty.HoursC != nil {
		t.Errorf("a day of which nothing is known became %+v", empty)
	}
}

func TestRecordEnds(t *testing.T) {
	var none planner.Record
	if _, ok := none.First(); ok {
		t.Error("an empty record has a first day")
	}
	if _, ok := none.Last(); ok || none.HasHourly() || !none.At(7).Empty() || none.At(7).Day != 7 {
		t.Error("an empty record knows something")
	}
	first := date("2024-03-01")
	record := planner.Record{Facts: flat(first, 1, missing, 3), Revision: 9}
	if day, ok := record.First(); !ok || day != first {
		t.Errorf("first day %s", day)
	}
	if day, ok := record.Last(); !ok || day != first+2 {
		t.Errorf("last day %s", day)
	}
	for day, want := range map[planner.Day]float64{first: 1, first + 2: 3} {
		if got := record.At(day); got.HourlyC != want || got.Day != day {
			t.Errorf("%s: %+v, want %g", day, got, want)
		}
	}
	for _, day := range []planner.Day{first - 1, first + 1, first + 3, planner.DayMin, planner.DayMax} {
		if got := record.At(day); !got.Empty() || got.Day != day {
			t.Errorf("%s: %+v, want nothing", day, got)
		}
	}
	if !record.HasHourly() {
		t.Error("a record with 24-hour means says it has none")
	}
}

func TestRecordBefore(t *testing.T) {
	first := date("2024-03-01")
	record := planner.Record{Facts: flat(first, 1, 2, 3), Revision: 9}
	for _, row := range []struct {
		day  planner.Day
		days int
	}{{first - 5, 0}, {first, 0}, {first + 1, 1}, {first + 2, 2}, {first + 3, 3}, {first + 99, 3}} {
		got := record.Before(row.day)
		if len(got.Facts) != row.days || got.Revision != 9 {
			t.Errorf("before %s: %d days at revision %d, want %d at 9", row.day, len(got.Facts), got.Revision, row.days)
		}
		if last, ok := got.Last(); ok && last >= row.day {
			t.Errorf("before %s the record ends on %s", row.day, last)
		}
		// Whoever appends to it must not write into the record.
		_ = append(got.Facts, known(0, 77))
		if !reflect.DeepEqual(record.Facts, flat(first, 1, 2, 3)) {
			t.Fatalf("the record became %+v", record.Facts)
		}
	}
	if got := (planner.Record{Revision: 3}).Before(first); got.Facts != nil || got.Revision != 3 {
		t.Errorf("an empty record became %+v", got)
	}
}

func TestFilled(t *testing.T) {
	first := date("2024-02-27")
	for _, row := range []struct {
		name string
		c    []float64
		day  int // from first
		want float64
		line bool
	}{
		{"a day that is known", []float64{1, 2, 3}, 1, 2, false},
		{"one missing", []float64{1, missing, 3}, 1, 2, true},
		{"two missing, first", []float64{1, missing, missing, 4}, 1, 2, true},
		{"two missing, second", []float64{1, missing, missing, 4}, 2, 3, true},
		{"three missing, first", []float64{0, missing, missing, missing, 8}, 1, 2, true},
		{"three missing, middle", []float64{0, missing, missing, missing, 8}, 2, 4, true},
		{"three missing, last", []float64{0, missing, missing, missing, 8}, 3, 6, true},
		{"four missing, first", []float64{0, missing, missing, missing, missing, 8}, 1, missing, false},
		{"four missing, second", []float64{0, missing, missing, missing, missing, 8}, 2, missing, false},
		{"four missing, third", []float64{0, missing, missing, missing, missing, 8}, 3, missing, false},
		{"four missing, last", []float64{0, missing, missing, missing, missing, 8}, 4, missing, false},
		{"a run beside another", []float64{0, missing, 4, missing, missing, missing, 8}, 3, 5, true},
		{"missing at the start", []float64{missing, 2}, 0, missing, false},
		{"missing at the end", []float64{1, 2, missing}, 2, missing, false},
		{"before the record", []float64{1, 2}, -1, missing, false},
		{"after the record", []float64{1, 2}, 2, missing, false},
		{"no record", nil, 0, missing, false},
	} {
		record := planner.Record{Facts: flat(first, row.c...)}
		day := first + planner.Day(row.day)
		got, line := record.Filled(day)
		if line != row.line || got.Day != day || got.Empty() != math.IsNaN(row.want) {
			t.Errorf("%s: %+v, line %t", row.name, got, line)
			continue
		}
		if !got.Empty() && (!within(got.HourlyC, row.want, 1e-12) || !within(got.HighC, row.want, 1e-12) || !within(got.LowC, row.want, 1e-12)) {
			t.Errorf("%s: %+v, want %g", row.name, got, row.want)
		}
		if line && (got.ExtremesFrom != planner.FromLine || got.HoursC != nil || got.SlotsReal != 0) {
			t.Errorf("%s: a line passes as measured: %+v", row.name, got)
		}
	}
}

// A line knows only what both its ends know.
func TestFilledBetweenUnlikeDays(t *testing.T) {
	first := date("2024-02-27")
	means := planner.DayFacts{HasHourly: true, HourlyC: 4}
	extremes := planner.DayFacts{HasExtremes: true, HighC: 9, LowC: 1}
	for _, row := range []struct {
		name                  string
		left, right           planner.DayFacts
		hasExtremes, hasHours bool
	}{
		{"both and both", full(0, 9, 1, 4), full(0, 9, 1, 4), true, true},
		{"both and means", full(0, 9, 1, 4), means, false, true},
		{"extremes and both", extremes, full(0, 9, 1, 4), true, false},
		{"extremes and means", extremes, means, false, false},
	} {
		row.left.Day, row.right.Day = first, first+2
		record := planner.Record{Facts: []planner.DayFacts{row.left, {Day: first + 1}, row.right}}
		got, line := record.Filled(first + 1)
		if got.HasExtremes != row.hasExtremes || got.HasHourly != row.hasHours || line != (row.hasExtremes || row.hasHours) {
			t.Errorf("%s: %+v, line %t", row.name, got, line)
		}
	}
}

// A second route: for each run of missing days the line is drawn whole.
func TestFilledAgainstRuns(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := drawRow(t, rapid.IntRange(1, 25).Draw(t, "days"), 45, "c")
		first := date("2023-12-20")
		record := planner.Record{Facts: flat(first, c...)}
		want := append([]float64(nil), c...)
		for i := 0; i < len(c); i++ {
			if !math.IsNaN(c[i]) {
				continue
			}
			end := i
			for end < len(c) && math.IsNaN(c[end]) {
				end++
			}
			if i > 0 && end < len(c) && end-i <= 3 {
				for j := i; j < end; j++ {
					want[j] = c[i-1] + (c[end]-c[i-1])*float64(j-i+1)/float64(end-i+1)
				}
			}
			i = end
		}
		for i := range c {
			got, line := record.Filled(first + planner.Day(i))
			if got.Empty() != math.IsNaN(want[i]) || line != (math.IsNaN(c[i]) && !math.IsNaN(want[i])) {
				t.Fatalf("day %d of %v: %+v, line %t; want %g", i, c, got, line, want[i])
			}
			if !got.Empty() && !within(got.HourlyC, want[i], 1e-9) {
				t.Fatalf("day %d of %v: %g, want %g", i, c, got.HourlyC, want[i])
			}
		}
	})
}
