package planner_test

import (
	"fmt"
	"math"
	"testing"

	"pgregory.net/rapid"

	"swardbook/calc"
	"swardbook/calc/knownday"
	"swardbook/planner"
)

func measure(t testing.TB, c planner.Counting, turf func(planner.Day) planner.Turf) planner.Measure {
	t.Helper()
	m, err := planner.NewMeasure(c, turf)
	if err != nil {
		t.Fatalf("%+v: %v", c, err)
	}
	return m
}

func countingBy(method calc.Method, thresholds calc.Thresholds) planner.Counting {
	return planner.Counting{Counts: planner.ByDegreeDays, Method: method, Thresholds: thresholds}
}

func cool(ceilingGM2 float64) func(planner.Day) planner.Turf {
	return planner.Always(planner.Turf{Grass: "cool", Curve: calc.CoolSeason(), CeilingGM2: ceilingGM2}).On
}

func TestNewMeasureRefuses(t *testing.T) {
	horizontal := calc.Thresholds{LowerC: 10, UpperC: 30, Cutoff: calc.CutoffHorizontal}
	for _, row := range []planner.Counting{
		{},
		{Counts: "weeks"},
		{Counts: "Degree-days"},
		countingBy("guess", calc.Thresholds{}),
		countingBy(calc.MethodFourCase, horizontal), // takes no cutoff
		countingBy(calc.MethodMean, calc.Thresholds{LowerC: 10, UpperC: 30, Cutoff: calc.CutoffVertical}),
		countingBy(calc.MethodSingleSine, calc.Thresholds{LowerC: 10, UpperC: 10, Cutoff: calc.CutoffHorizontal}),
		countingBy(calc.MethodSingleSine, calc.Thresholds{LowerC: 10, UpperC: 30, Cutoff: "sloping"}),
		countingBy(calc.MethodMean, calc.Thresholds{LowerC: math.NaN()}),
		countingBy(calc.MethodMean, calc.Thresholds{LowerC: math.Inf(-1)}),
		countingBy(calc.MethodMean, calc.Thresholds{LowerC: -1e308}), // two days of it would overflow
		countingBy(calc.MethodMean, calc.Thresholds{LowerC: 10, UpperC: 1e300, Cutoff: calc.CutoffHorizontal}),
	} {
		if _, err := planner.NewMeasure(row, nil); err == nil || err.Error() == "" {
			t.Errorf("%+v was taken", row)
		}
	}
	for _, method := range calc.Methods() {
		for _, cutoff := range method.Cutoffs() {
			if _, err := planner.NewMeasure(countingBy(method, calc.Thresholds{LowerC: 10, UpperC: 30, Cutoff: cutoff}), nil); err != nil {
				t.Errorf("%s with cutoff %s: %v", method, cutoff, err)
			}
		}
	}
	// What is not read may be anything.
	if _, err := planner.NewMeasure(countingBy(calc.MethodMean, calc.Thresholds{LowerC: 10, UpperC: math.NaN()}), nil); err != nil {
		t.Errorf("an upper limit that is not read: %v", err)
	}
}

func TestMeasureBasesAndUnits(t *testing.T) {
	means := "[hourly midrange]"
	for _, row := range []struct {
		counting planner.Counting
		bases    string
		unit     planner.Unit
		onMean   bool
	}{
		{planner.Counting{Counts: planner.ByDays}, "[none]", planner.Days, false},
		{planner.Counting{Counts: planner.ByDegreeDays}, means, planner.DegreeDays, true},
		{countingBy(calc.MethodMean, calc.Thresholds{}), means, planner.DegreeDays, true},
		{countingBy(calc.MethodFlooredExtremes, calc.Thresholds{}), "[extremes]", planner.DegreeDays, false},
		{countingBy(calc.MethodFourCase, calc.Thresholds{}), "[extremes]", planner.DegreeDays, false},
		{countingBy(calc.MethodSingleTriangle, calc.Thresholds{}), "[extremes]", planner.DegreeDays, false},
		{countingBy(calc.MethodDoubleTriangle, calc.Thresholds{}), "[extremes]", planner.DegreeDays, false},
		{countingBy(calc.MethodSingleSine, calc.Thresholds{}), "[extremes]", planner.DegreeDays, false},
		{countingBy(calc.MethodDoubleSine, calc.Thresholds{}), "[extremes]", planner.DegreeDays, false},
		{countingBy(calc.MethodDegreeHours, calc.Thresholds{}), "[readings]", planner.DegreeDays, false},
		{planner.Counting{Counts: planner.ByGrowthDays}, means, planner.GrowthDays, true},
		{planner.Counting{Counts: planner.ByNitrogen}, means, planner.NitrogenGM2, true},
	} {
		m := measure(t, row.counting, cool(3))
		if fmt.Sprint(m.Bases()) != row.bases || m.Unit() != row.unit || row.counting.StandsOnMean() != row.onMean {
			t.Errorf("%+v: bases %v, unit %s, on a mean %t", row.counting, m.Bases(), m.Unit(), row.counting.StandsOnMean())
		}
	}
	if (planner.Counting{Counts: "weeks"}).StandsOnMean() {
		t.Error("a counting that makes no sense stands on a mean")
	}
}

// Values of knownday's rows, each with its own source; a method on what it needs.
func TestDegreeDaysOfKnownDays(t *testing.T) {
	days := map[string]planner.DayFacts{}
	for _, d := range knownday.Days() {
		facts := full(0, d.HighC, d.LowC, d.HourlyMeanC)
		facts.HoursC = d.HoursC
		days[d.Name] = facts
	}
	for _, row := range knownday.AllDegreeDays() {
		basis, method := planner.Hourly, calc.Method(row.Method)
		if row.Method == "midrange" {
			basis, method = planner.Midrange, calc.MethodMean
		}
		limits := calc.Thresholds{LowerC: row.LowerC}
		if row.UpperC > row.LowerC {
			limits.UpperC, limits.Cutoff = row.UpperC, calc.CutoffHorizontal
		}
		day := days[row.Day]
		units, standing := measure(t, countingBy(method, limits), nil).Units(day, day, basis)
		if standing != planner.Own || !within(units, row.WantC, max(row.Tolerance, 1e-12)) {
			t.Errorf("%s, %s, %g to %g: %.12g (%d), want %.12g", row.Day, row.Method, row.LowerC, row.UpperC, units, standing, row.WantC)
		}
	}
}

// Values computed at 50 digits for base 10 and upper limit 30 (low 18, high 36,
// next low 21; low 4, high 18, next low 7), printed to 6 decimals.
func TestEveryMethod(t *testing.T) {
	warm, mild := full(0, 36, 18, 27), full(0, 18, 4, 11)
	warmNext, mildNext := full(1, 30, 21, 25), full(1, 15, 7, 11)
	cut := func(c calc.Cutoff) calc.Thresholds { return calc.Thresholds{LowerC: 10, UpperC: 30, Cutoff: c} }
	for _, row := range []struct {
		method calc.Method
		limits calc.Thresholds
		warm   float64
		mild   float64
	}{
		{calc.MethodMean, cut(calc.CutoffNone), 17, 1},
		{calc.MethodFlooredExtremes, cut(calc.CutoffNone), 17, 4},
		{calc.MethodFlooredExtremes, cut(calc.CutoffHorizontal), 14, 4},
		{calc.MethodFourCase, cut(calc.CutoffNone), 17, 2.5},
		{calc.MethodSingleSine, cut(calc.CutoffNone), 17, 2.750945},
		{calc.MethodSingleSine, cut(calc.CutoffHorizontal), 15.474531, 2.750945},
		{calc.MethodSingleSine, cut(calc.CutoffIntermediate), 13.949061, 2.750945},
		{calc.MethodSingleSine, cut(calc.CutoffVertical), 7.638000, 2.750945},
		{calc.MethodSingleTriangle, cut(calc.CutoffHorizontal), 16, 2.285714},
		{calc.MethodSingleTriangle, cut(calc.CutoffVertical), 9.333333, 2.285714},
		{calc.MethodDoubleSine, cut(calc.CutoffNone), 17.75, 2.967917},
		{calc.MethodDoubleSine, cut(calc.CutoffHorizontal), 16.144649, 2.967917},
		{calc.MethodDoubleTriangle, cut(calc.CutoffHorizontal), 16.65, 2.597403},
		{calc.MethodDoubleTriangle, cut(calc.CutoffIntermediate), 15.55, 2.597403},
	} {
		m := measure(t, countingBy(row.method, row.limits), nil)
		for _, day := range []struct {
			day, next planner.DayFacts
			want      float64
		}{{warm, warmNext, row.warm}, {mild, mildNext, row.mild}} {
			units, standing := m.Units(day.day, day.next, m.Bases()[0])
			if standing != planner.Own || !within(units, day.want, 0.5e-6) {
				t.Errorf("%s, %s, %g to %g: %.7g (%d), want %.7g", row.method, row.limits.Cutoff, day.day.LowC, day.day.HighC, units, standing, day.want)
			}
		}
	}
	// A next night that is not known is taken as this one.
	double := measure(t, countingBy(calc.MethodDoubleSine, calc.Thresholds{LowerC: 10}), nil)
	single := measure(t, countingBy(calc.MethodSingleSine, calc.Thresholds{LowerC: 10}), nil)
	a, _ := double.Units(mild, planner.DayFacts{Day: 1}, planner.Extremes)
	b, _ := single.Units(mild, planner.DayFacts{Day: 1}, planner.Extremes)
	if !within(a, b, 1e-12) {
		t.Errorf("double sine without a next night is %g, single sine %g", a, b)
	}
}

// What stands in where a day lacks what the basis needs.
func TestStandings(t *testing.T) {
	invented := knownday.Invented()
	hours := full(0, invented.HighC, invented.LowC, invented.HourlyMeanC)
	hours.HoursC = invented.HoursC
	published := planner.DayFacts{HasHourly: true, HourlyC: 18, Published: true}
	extremes := planner.DayFacts{HasExtremes: true, HighC: 26.8, LowC: 11.9}
	nothing := planner.DayFacts{}
	base15 := calc.Thresholds{LowerC: 15, UpperC: 24, Cutoff: calc.CutoffHorizontal}
	mean, sine, degreeHours := countingBy("", calc.Thresholds{LowerC: 10}), countingBy(calc.MethodSingleSine, base15), countingBy(calc.MethodDegreeHours, base15)
	growth := planner.Counting{Counts: planner.ByGrowthDays}
	for _, row := range []struct {
		name     string
		counting planner.Counting
		day      planner.DayFacts
		basis    planner.Basis
		want     float64
		standing planner.Standing
	}{
		{"days need nothing", planner.Counting{Counts: planner.ByDays}, nothing, planner.NoBasis, 1, planner.Own},
		{"mean, hourly", mean, hours, planner.Hourly, 8.7041666667, planner.Own},
		{"mean, midrange", mean, hours, planner.Midrange, 9.35, planner.Own},
		{"mean, hourly on a day of extremes", mean, extremes, planner.Hourly, 9.35, planner.StandIn},
		{"mean, midrange on a published mean", mean, published, planner.Midrange, 8, planner.StandIn},
		{"mean, nothing", mean, nothing, planner.Hourly, 0, planner.Nothing},
		{"sine on extremes", sine, extremes, planner.Extremes, 4.43806088525, planner.Own},
		{"sine on a published mean: a flat day", sine, published, planner.Extremes, 3, planner.StandIn},
		{"sine, nothing", sine, nothing, planner.Extremes, 0, planner.Nothing},
		{"degree-hours on readings", degreeHours, hours, planner.Readings, 3.95416666667, planner.Own},
		{"degree-hours on extremes: a sine", degreeHours, extremes, planner.Readings, 4.43806088525, planner.StandIn},
		{"degree-hours on a published mean", degreeHours, published, planner.Readings, 3, planner.StandIn},
		{"degree-hours, nothing", degreeHours, nothing, planner.Readings, 0, planner.Nothing},
		{"growth, hourly on extremes", growth, planner.DayFacts{HasExtremes: true, HighC: 16, LowC: 14}, planner.Hourly, 0.661514655649, planner.StandIn},
		{"growth, own", growth, known(0, 15), planner.Midrange, 0.661514655649, planner.Own},
		{"growth, nothing", growth, nothing, planner.Midrange, 0, planner.Nothing},
	} {
		units, standing := measure(t, row.counting, cool(3)).Units(row.day, nothing, row.basis)
		if standing != row.standing || !within(units, row.want, 1e-9) {
			t.Errorf("%s: %.12g (%d), want %.12g (%d)", row.name, units, standing, row.want, row.standing)
		}
	}
	for _, counts := range []planner.Counts{planner.ByGrowthDays, planner.ByNitrogen} {
		if units, standing := measure(t, planner.Counting{Counts: counts}, nil).Units(hours, hours, planner.Hourly); units != 0 || standing != planner.Nothing {
			t.Errorf("%s without turf gives %g (%d)", counts, units, standing)
		}
	}
}

// Growth potential of 15 °C is 0.66151 (cool season, Gelernter & Stowell 2005)
// and 0.07337 (warm season); nitrogen of 3 g/m² a month at it, computed at 50
// digits for months of 28 to 31 days.
func TestNitrogenUseByMonth(t *testing.T) {
	m := measure(t, planner.Counting{Counts: planner.ByNitrogen}, cool(3))
	for day, want := range map[string]float64{
		"2023-02-10": 0.0708765702481, "2024-02-10": 0.0684325505844, "2024-04-30": 0.0661514655649, "2024-01-31": 0.0640175473209,
	} {
		units, standing := m.Units(known(date(day), 15), planner.DayFacts{}, planner.Hourly)
		if standing != planner.Own || !within(units, want, 1e-12) {
			t.Errorf("%s: %.13f (%d), want %.13f", day, units, standing, want)
		}
	}
	without := measure(t, planner.Counting{Counts: planner.ByNitrogen}, cool(0))
	if units, _ := without.Units(known(0, 15), planner.DayFacts{}, planner.Hourly); units != 0 {
		t.Errorf("a ceiling that was not said gives %g", units)
	}
}

// Overseeding: each day counts on its own grass.
func TestTurfByDate(t *testing.T) {
	change := date("2024-10-01")
	turf := planner.Always(planner.Turf{Grass: "warm", Curve: calc.WarmSeason(), CeilingGM2: 4}).
		With(change, planner.Turf{Grass: "cool", Curve: calc.CoolSeason(), CeilingGM2: 3})
	growth := measure(t, planner.Counting{Counts: planner.ByGrowthDays}, turf.On)
	for _, row := range []struct {
		day  planner.Day
		want float64
	}{{change - 1, 0.07337}, {change, 0.66151}, {change + 100, 0.66151}} {
		if units, _ := growth.Units(known(row.day, 15), planner.DayFacts{}, planner.Hourly); !within(units, row.want, 0.5e-5) {
			t.Errorf("%s: %.5f, want %.5f", row.day, units, row.want)
		}
	}
	plan := planOf(change+1, []float64{15, 15}, times(30, 15))
	plan.Surfaces[0].Turf = turf
	plan.Works = []planner.Work{workOn(greens, 1, "growth", planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByGrowthDays}, Target: 5, Basis: planner.Hourly})}
	plan.Log = []planner.Entry{done(change-2, 1, 0)}
	if got := due(t, plan).Total.Total; !within(got, 0.07337+0.66151, 1e-5) {
		t.Errorf("a day of each grass sums to %g, want 0.73488", got)
	}
}

// The units of a day are never negative and never without a number.
func TestUnitsAreNeverNegative(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		method := rapid.SampledFrom(calc.Methods()).Draw(t, "method")
		counting := rapid.SampledFrom([]planner.Counting{
			{Counts: planner.ByDays}, {Counts: planner.ByGrowthDays}, {Counts: planner.ByNitrogen},
			countingBy(method, calc.Thresholds{
				LowerC: drawTemperature(t, -10, 20, "base"), UpperC: drawTemperature(t, 21, 40, "upper"),
				Cutoff: rapid.SampledFrom(method.Cutoffs()).Draw(t, "cutoff")}),
		}).Draw(t, "counting")
		m, err := planner.NewMeasure(counting, cool(rapid.Float64Range(0, 20).Draw(t, "ceiling")))
		if err != nil {
			t.Fatal(err)
		}
		day, next := drawDay(t, 3), drawDay(t, 4)
		for _, basis := range m.Bases() {
			units, standing := m.Units(day, next, basis)
			if !(units >= 0) || math.IsInf(units, 0) || standing == planner.Nothing && units != 0 {
				t.Fatalf("%+v on %s: %+v gives %g (%d)", counting, basis, day, units, standing)
			}
			if empty := standing == planner.Nothing; empty != day.Empty() && counting.Counts != planner.ByDays {
				t.Fatalf("%+v on %s: %+v stands on %d", counting, basis, day, standing)
			}
		}
	})
}

// drawDay draws a day of which more or less is known.
func drawDay(t *rapid.T, number planner.Day) planner.DayFacts {
	day := planner.DayFacts{Day: number, SlotsWanted: 24}
	low := drawTemperature(t, -40, 40, "low")
	high := low + drawTemperature(t, 0, 20, "span")
	mean := low + (high-low)*rapid.Float64Range(0, 1).Draw(t, "mean")
	if rapid.Bool().Draw(t, "extremes") {
		day.HasExtremes, day.HighC, day.LowC, day.ExtremesFrom = true, high, low, planner.FromStation
	}
	if rapid.Bool().Draw(t, "mean known") {
		day.HasHourly, day.HourlyC = true, mean
		if rapid.Bool().Draw(t, "hours") {
			day.SlotsReal, day.HoursC = 24, times(24, mean)
		}
	}
	return day
}
