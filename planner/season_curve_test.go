package planner_test

import (
	"slices"
	"testing"

	"swardbook/planner"
)

// Years of an invented record of steady days: 2024 at 13 °C, 2023 at 11, 2022 at
// 12, 2021 at 10. Over a base of 10, ten days from 24 February hold the 29th in
// 2024 only; the sums are plain counting.
func TestSeasonCurves(t *testing.T) {
	plan := planner.Plan{AsOf: planner.DayOf(2024, 3, 5), Site: planner.Site{ID: 1, Lat: 40}}
	year := map[int]float64{2021: 10, 2022: 12, 2023: 11, 2024: 13}
	for day := planner.DayOf(2021, 1, 1); day < plan.AsOf; day++ {
		c := year[day.Year()]
		plan.Record.Facts = append(plan.Record.Facts, planner.DayFacts{Day: day, HasExtremes: true, HighC: c, LowC: c, HasHourly: true, HourlyC: c})
	}
	total := planner.Total{ID: 1, Name: "gdd10", Settings: planner.Always(planner.TotalSettings{
		Counting: planner.Counting{Counts: planner.ByDegreeDays}, Start: planner.MonthDay{Month: 2, Day: 24}})}
	total.Settings[0].Value.Thresholds.LowerC = 10
	curvesAt := func(asOf planner.Day, years int) planner.SeasonCurves {
		t.Helper()
		plan := plan
		plan.AsOf = asOf
		plan.Record.Facts = plan.Record.Facts[planner.DayOf(2024-years, 1, 1)-planner.DayOf(2021, 1, 1):]
		season, err := planner.CompareSeason(plan, total)
		if err != nil {
			t.Fatal(err)
		}
		curves, err := season.Curves(plan)
		if err != nil {
			t.Fatal(err)
		}
		return curves
	}
	// A day each from 24 February to 4 March: ten in 2024, nine in the others.
	got := curvesAt(plan.AsOf, 3)
	for _, row := range []struct {
		what      string
		got, want []float64
	}{
		{"2024", got.This, []float64{3, 6, 9, 12, 15, 18, 21, 24, 27, 30}},
		{"2023", got.Newest, []float64{1, 2, 3, 4, 5, 6, 7, 8, 9, 9}}, // the last stands for the 29th
		{"lowest", got.Lowest, []float64{0, 0, 0, 0, 0, 0, 0, 0, 0, 0}},
		{"highest", got.Highest, []float64{2, 4, 6, 8, 10, 12, 14, 16, 18, 18}},
	} {
		if !slices.Equal(row.got, row.want) {
			t.Errorf("%s: %v, want %v", row.what, row.got, row.want)
		}
	}
	if got := curvesAt(plan.AsOf, 1); len(got.Newest) != 10 || got.Lowest != nil || got.Highest != nil {
		t.Errorf("one past year has a range: %v to %v", got.Lowest, got.Highest)
	}
	if got := curvesAt(plan.AsOf, 0); got.Newest != nil || len(got.This) != 10 {
		t.Errorf("no past year: %v beside %v", got.Newest, got.This)
	}
	if got := curvesAt(planner.DayOf(2024, 2, 24), 3); len(got.This) > 0 || got.Newest != nil {
		t.Errorf("before its first day is over the season has %v", got.This)
	}
	// A year with the 29th beside one without: cut a day earlier.
	plan.AsOf = planner.DayOf(2025, 3, 5)
	for day := planner.DayOf(2024, 3, 5); day < plan.AsOf; day++ {
		plan.Record.Facts = append(plan.Record.Facts, planner.DayFacts{Day: day, HasHourly: true, HourlyC: 15})
	}
	if got := curvesAt(plan.AsOf, 3); len(got.This) != 9 || !slices.Equal(got.Newest, []float64{3, 6, 9, 12, 15, 18, 21, 24, 27}) {
		t.Errorf("2025 has %v beside %v", got.This, got.Newest)
	}
	if _, err := (planner.Season{}).Curves(plan); err == nil {
		t.Error("a total that counts nothing has curves")
	}
}

// A running total is always named with its base, in the site's unit: 10 °C is
// 50 °F, 12.78 °C is 55.00 °F; what does not stand on degrees has none.
func TestCounted(t *testing.T) {
	over := func(baseC float64) planner.Counting {
		c := planner.Counting{Counts: planner.ByDegreeDays}
		c.Thresholds.LowerC = baseC
		return c
	}
	for _, row := range []struct {
		units    planner.Units
		unit     planner.Unit
		counting planner.Counting
		want     string
	}{
		{planner.Celsius, planner.DegreeDays, over(10), "°C-days base 10"},
		{planner.Fahrenheit, planner.DegreeDays, over(10), "°F-days base 50"},
		{planner.Fahrenheit, planner.DegreeDays, over(12.78), "°F-days base 55"},
		{planner.Celsius, planner.DegreeDays, over(-1.5), "°C-days base -1.5"},
		{planner.Celsius, planner.DegreeDays, over(0), "°C-days base 0"},
		{planner.Fahrenheit, planner.GrowthDays, planner.Counting{Counts: planner.ByGrowthDays}, "growth days"},
		{planner.Celsius, planner.NitrogenGM2, planner.Counting{Counts: planner.ByNitrogen}, "g N/m²"},
	} {
		if got := row.units.Counted(row.unit, row.counting); got != row.want {
			t.Errorf("%q, want %q", got, row.want)
		}
	}
}
