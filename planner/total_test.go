package planner_test

import (
	"reflect"
	"testing"
	"time"

	"swardbook/calc"
	"swardbook/planner"
)

// totalFrom is a season total of degree days above 0 °C.
func totalFrom(start planner.MonthDay) planner.Total {
	return planner.Total{ID: 1, Site: 1, Name: "gdd", Settings: planner.Always(planner.TotalSettings{
		Counting: planner.Counting{Counts: planner.ByDegreeDays}, Start: start})}
}

func TestSeasonStartOfTheSite(t *testing.T) {
	for lat, want := range map[float64]string{40.7: "01-01", 0: "01-01", -0.1: "07-01", -37.8: "07-01"} {
		if got := (planner.Site{Lat: lat}).SeasonStart(); got.String() != want {
			t.Errorf("latitude %g: %s, want %s", lat, got, want)
		}
	}
}

// A total includes its start date and runs to yesterday.
func TestSeasonTotal(t *testing.T) {
	july := planner.Site{Lat: -37}.SeasonStart()
	january := planner.Site{Lat: 40}.SeasonStart()
	for _, row := range []struct {
		name  string
		start planner.MonthDay
		asOf  string
		since string
		days  int
	}{
		{"north", january, "2024-03-01", "2024-01-01", 60},
		{"north, new year's day", january, "2024-01-01", "2024-01-01", 0},
		{"north, a day later", january, "2024-01-02", "2024-01-01", 1},
		{"north, last day", january, "2023-12-31", "2023-01-01", 364},
		{"south, across the year's end", july, "2024-03-01", "2023-07-01", 244},
		{"south, start today", july, "2024-07-01", "2024-07-01", 0},
		{"south, the day before", july, "2024-06-30", "2023-07-01", 365},
		{"own start, across the year's end", planner.MonthDay{Month: time.December, Day: 31}, "2024-01-02", "2023-12-31", 2},
		{"from a leap day", planner.MonthDay{Month: time.February, Day: 29}, "2023-03-02", "2023-02-28", 2},
		{"from a leap day, in a leap year", planner.MonthDay{Month: time.February, Day: 29}, "2024-03-02", "2024-02-29", 2},
	} {
		plan := planOf(date(row.asOf), times(800, 2), times(30, 2))
		plan.Totals = []planner.Total{totalFrom(row.start)}
		state := evaluate(t, plan).Totals[0]
		if state.Start != date(row.since) || state.Unit != planner.DegreeDays {
			t.Errorf("%s: since %s in %s, want %s", row.name, state.Start, state.Unit, row.since)
		}
		for _, facts := range state.Bases {
			if want := (planner.Sum{Total: 2 * float64(row.days), Days: row.days}); facts.Sum != want {
				t.Errorf("%s on %s: %+v, want %+v", row.name, facts.Basis, facts.Sum, want)
			}
		}
		if _, ok := state.On(planner.Midrange); !ok || len(state.Bases) != 2 {
			t.Errorf("%s: bases %+v", row.name, state.Bases)
		}
		if _, ok := state.On(planner.Extremes); ok {
			t.Errorf("%s: a basis that the measure does not have", row.name)
		}
	}
}

// What a sum rests on, and how it says so.
func TestSumStandsOn(t *testing.T) {
	asOf := date("2024-01-11")
	onlyExtremes := func(day planner.Day) planner.DayFacts {
		return planner.DayFacts{Day: day, HasExtremes: true, HighC: 30, LowC: 10, ExtremesFrom: planner.FromStation}
	}
	for _, row := range []struct {
		name  string
		c     []float64 // ten days from 1 January
		turn  []int     // days that have extremes alone, with a high/low mean of 20
		want  planner.Sum
		notes []string
		all   bool // all stand in
	}{
		{"whole", times(10, 10), nil, planner.Sum{Total: 100, Days: 10}, nil, false},
		{"other mean", times(10, 10), []int{3}, planner.Sum{Total: 110, Days: 10, StandIn: 1}, []string{"1 day on the other mean"}, false},
		{"other mean throughout", times(10, 10), []int{0, 1, 2, 3, 4, 5, 6, 7, 8, 9}, planner.Sum{Total: 200, Days: 10, StandIn: 10}, []string{"10 days on the other mean"}, true},
		{"a line of one", []float64{10, 10, missing, 16, 10, 10, 10, 10, 10, 10}, nil, planner.Sum{Total: 109, Days: 10, Line: 1}, []string{"1 day on a straight line"}, false},
		{"a line of three", []float64{10, 10, missing, missing, missing, 18, 10, 10, 10, 10}, nil, planner.Sum{Total: 120, Days: 10, Line: 3}, []string{"3 days on a straight line"}, false},
		{"four missing", []float64{10, 10, missing, missing, missing, missing, 10, 10, 10, 10}, nil, planner.Sum{Total: 60, Days: 10, Missing: 4}, []string{"4 days missing"}, false},
		{"yesterday missing", []float64{10, 10, 10, 10, 10, 10, 10, 10, 10, missing}, nil, planner.Sum{Total: 90, Days: 10, Missing: 1}, []string{"1 day missing"}, false},
		{"a line between unlike days", []float64{10, 10, missing, 16, 10, 10, 10, 10, 10, 10}, []int{3}, planner.Sum{Total: 115, Days: 10, StandIn: 1, Line: 1},
			[]string{"1 day on the other mean", "1 day on a straight line"}, false},
		{"all of it", []float64{missing, 10, missing, 16, missing, missing, missing, missing, 10, 10}, []int{9}, planner.Sum{Total: 69, Days: 10, StandIn: 1, Line: 1, Missing: 5},
			[]string{"5 days missing", "1 day on the other mean", "1 day on a straight line"}, false},
	} {
		plan := planOf(asOf, row.c, times(30, 10))
		for _, i := range row.turn {
			plan.Record.Facts[i] = onlyExtremes(plan.Record.Facts[i].Day)
		}
		plan.Totals = []planner.Total{totalFrom(planner.MonthDay{Month: time.January, Day: 1})}
		facts, _ := evaluate(t, plan).Totals[0].On(planner.Hourly)
		if !within(facts.Sum.Total, row.want.Total, 1e-9) {
			t.Errorf("%s: total %g, want %g", row.name, facts.Sum.Total, row.want.Total)
		}
		facts.Sum.Total = row.want.Total
		if facts.Sum != row.want || !reflect.DeepEqual(facts.Sum.Notes(), row.notes) || facts.Sum.AllStandIn() != row.all {
			t.Errorf("%s: %+v, notes %q, all stand in %t; want %+v, %q, %t", row.name, facts.Sum, facts.Sum.Notes(), facts.Sum.AllStandIn(), row.want, row.notes, row.all)
		}
	}
	if (planner.Sum{}).AllStandIn() {
		t.Error("a sum of no days stands on the other mean")
	}
}

// Both means are summed, each labelled for itself.
func TestTotalOnBothMeans(t *testing.T) {
	plan := planOf(date("2024-01-03"), []float64{0, 0}, times(9, 0))
	plan.Record.Facts = []planner.DayFacts{full(date("2024-01-01"), 20, 10, 14), full(date("2024-01-02"), 22, 12, 16)}
	plan.Totals = []planner.Total{totalFrom(planner.MonthDay{Month: time.January, Day: 1})}
	state := evaluate(t, plan).Totals[0]
	for basis, want := range map[planner.Basis]float64{planner.Hourly: 30, planner.Midrange: 32} {
		if facts, _ := state.On(basis); facts.Sum.Total != want || facts.Sum.StandIn != 0 {
			t.Errorf("%s: %+v, want %g", basis, facts.Sum, want)
		}
	}
}

// Past years are counted through the same month and day.
func TestCompareSeason(t *testing.T) {
	for _, row := range []struct {
		name, start, asOf string
		first             string // of the record
		years             []string
		days              []int
	}{
		{"two years", "01-01", "2024-04-11", "2022-01-01", []string{"2023-01-01", "2022-01-01"}, []int{100, 100}},
		{"29 February is yesterday", "01-01", "2024-03-01", "2022-01-01", []string{"2023-01-01", "2022-01-01"}, []int{59, 59}},
		{"29 February is today", "01-01", "2024-02-29", "2023-01-01", []string{"2023-01-01"}, []int{59}},
		{"yesterday is 28 February", "01-01", "2023-03-01", "2020-01-01", []string{"2022-01-01", "2021-01-01", "2020-01-01"}, []int{59, 59, 59}},
		{"across the year's end", "07-01", "2024-01-02", "2022-07-01", []string{"2022-07-01"}, []int{185}},
		{"starts today", "04-11", "2024-04-11", "2023-01-01", []string{"2023-04-11"}, []int{0}},
		{"new year's day", "01-01", "2024-01-01", "2021-12-31", []string{"2023-01-01", "2022-01-01"}, []int{0, 0}},
		{"a tenth missing", "01-01", "2024-04-11", "2023-01-11", []string{"2023-01-01"}, []int{100}},
		{"more than a tenth missing", "01-01", "2024-04-11", "2023-01-12", nil, nil},
		{"no past years", "01-01", "2024-04-11", "2023-06-01", nil, nil},
		{"ten years at most", "01-01", "2024-01-11", "2010-01-01",
			[]string{"2023-01-01", "2022-01-01", "2021-01-01", "2020-01-01", "2019-01-01", "2018-01-01", "2017-01-01", "2016-01-01", "2015-01-01", "2014-01-01"},
			[]int{10, 10, 10, 10, 10, 10, 10, 10, 10, 10}},
	} {
		start, err := planner.ParseMonthDay(row.start)
		if err != nil {
			t.Fatal(err)
		}
		plan := planOf(date(row.asOf), times(int(date(row.asOf)-date(row.first)), 3), times(30, 3))
		total := totalFrom(start)
		season, err := planner.CompareSeason(plan, total)
		if err != nil {
			t.Errorf("%s: %v", row.name, err)
			continue
		}
		plan.Totals = []planner.Total{total}
		if want := evaluate(t, plan).Totals[0]; !reflect.DeepEqual(season.State, want) {
			t.Errorf("%s: this season %+v, want %+v", row.name, season.State, want)
		}
		var years []string
		var days []int
		for _, year := range season.Past {
			years = append(years, year.Start.String())
			days = append(days, year.Bases[0].Sum.Days)
			if sum := year.Bases[0].Sum; !within(sum.Total, 3*float64(sum.Days-sum.Missing), 1e-9) || int(year.End-year.Start) != sum.Days {
				t.Errorf("%s: %s to %s sums to %+v", row.name, year.Start, year.End, sum)
			}
		}
		if !reflect.DeepEqual(years, row.years) || !reflect.DeepEqual(days, row.days) {
			t.Errorf("%s: years %v of %v days, want %v of %v", row.name, years, days, row.years, row.days)
		}
		checkFigures(t, season.Figures())
	}
	plan := planOf(date("2024-04-11"), nil, times(9, 3))
	plan.Record = planner.Record{}
	if season, err := planner.CompareSeason(plan, totalFrom(planner.MonthDay{Month: time.January, Day: 1})); err != nil || season.Past != nil {
		t.Errorf("no record: %+v, %v", season, err)
	}
	if _, err := planner.CompareSeason(plan, planner.Total{Name: "empty"}); err == nil {
		t.Error("a total that counts nothing was compared")
	}
}

func TestTotalOfGrowthDays(t *testing.T) {
	plan := planOf(date("2024-01-03"), []float64{20, 15}, times(9, 0))
	total := totalFrom(planner.MonthDay{Month: time.January, Day: 1})
	total.Settings = planner.Always(planner.TotalSettings{
		Counting: planner.Counting{Counts: planner.ByGrowthDays}, Curve: calc.CoolSeason(), Start: planner.MonthDay{Month: time.January, Day: 1}})
	plan.Totals = []planner.Total{total}
	state := evaluate(t, plan).Totals[0]
	// Potential at 20 °C is 1, at 15 °C 0.66151 (Gelernter & Stowell 2005).
	if facts, _ := state.On(planner.Midrange); !within(facts.Sum.Total, 1.66151, 0.5e-5) || state.Unit != planner.GrowthDays {
		t.Errorf("%+v in %s, want 1.66151", facts.Sum, state.Unit)
	}
}

// A change of settings counts from its day on, and not before.
func TestTotalOnItsSettingsThen(t *testing.T) {
	asOf := date("2024-03-01")
	total := totalFrom(planner.MonthDay{Month: time.January, Day: 1})
	total.Settings = total.Settings.With(date("2024-02-15"), planner.TotalSettings{
		Counting: countingBy(calc.MethodMean, calc.Thresholds{LowerC: 5}), Start: planner.MonthDay{Month: time.February, Day: 1}})
	for asOf, want := range map[planner.Day]planner.Sum{asOf: {Total: 29, Days: 29}, date("2024-02-14"): {Total: 44 * 6, Days: 44}} {
		plan := planOf(asOf, times(200, 6), times(9, 6))
		plan.Totals = []planner.Total{total}
		if facts, _ := evaluate(t, plan).Totals[0].On(planner.Hourly); !within(facts.Sum.Total, want.Total, 1e-9) || facts.Sum.Days != want.Days {
			t.Errorf("%s: %+v, want %+v", asOf, facts.Sum, want)
		}
	}
}
