package planner_test

import (
	"fmt"
	"math"
	"testing"
	"time"
	_ "time/tzdata" // the tests cut days in zones, on machines that may have none

	"pgregory.net/rapid"

	"swardbook/calc"
	"swardbook/planner"
)

// Quillmere, its surfaces, works and weather are invented.

const (
	greens = planner.SurfaceID(1)
	tees   = planner.SurfaceID(2)
)

// missing stands for a day without weather in a row of temperatures.
var missing = math.NaN()

// date is a day by its text; a test that mistypes one stops.
func date(text string) planner.Day {
	day, err := planner.ParseDay(text)
	if err != nil {
		panic(err)
	}
	return day
}

// utc is an instant in UTC seconds.
func utc(text string) int64 {
	at, err := time.Parse(time.RFC3339, text)
	if err != nil {
		panic(err)
	}
	return at.Unix()
}

func zone(t testing.TB, name string) *time.Location {
	t.Helper()
	loaded, err := time.LoadLocation(name)
	if err != nil {
		t.Fatal(err)
	}
	return loaded
}

func within(got, want, tolerance float64) bool { return math.Abs(got-want) <= tolerance }

// known is a day with both means, as a day of one temperature has them.
func known(day planner.Day, c float64) planner.DayFacts {
	return full(day, c, c, c)
}

// full is a day whose two means may differ.
func full(day planner.Day, highC, lowC, hourlyC float64) planner.DayFacts {
	return planner.DayFacts{
		Day: day, HasExtremes: true, HighC: highC, LowC: lowC, ExtremesFrom: planner.FromStation,
		HasHourly: true, HourlyC: hourlyC, SlotsReal: 24, SlotsWanted: 24,
	}
}

// flat is a run of days of one temperature each; missing ones know nothing.
func flat(first planner.Day, temperaturesC ...float64) []planner.DayFacts {
	days := make([]planner.DayFacts, len(temperaturesC))
	for i, c := range temperaturesC {
		days[i] = planner.DayFacts{Day: first + planner.Day(i), SlotsWanted: 24}
		if !math.IsNaN(c) {
			days[i] = known(first+planner.Day(i), c)
		}
	}
	return days
}

// times repeats a temperature.
func times(n int, c float64) []float64 {
	row := make([]float64, n)
	for i := range row {
		row[i] = c
	}
	return row
}

// outlookOf is days ahead with a member for each row; the path is their mean.
func outlookOf(asOf planner.Day, members ...[]float64) planner.Outlook {
	out := planner.Outlook{AsOf: asOf, Start: asOf, Engine: 1}
	mean := make([]float64, len(members[0]))
	for _, row := range members {
		out.Members = append(out.Members, flat(asOf, row...))
		for i, c := range row {
			mean[i] += c / float64(len(members))
		}
	}
	out.Path = flat(asOf, mean...)
	return out
}

// planOf is a morning at Quillmere: the past temperatures end yesterday, each
// row of members begins today. Works and log are the caller's to add.
func planOf(asOf planner.Day, pastC []float64, members ...[]float64) planner.Plan {
	return planner.Plan{
		Site:   quillmere(),
		AsOf:   asOf,
		Record: planner.Record{Facts: flat(asOf-planner.Day(len(pastC)), pastC...), Revision: 1},
		Surfaces: []planner.Surface{
			{ID: greens, Site: 1, Name: "greens", Turf: planner.Always(planner.Turf{Grass: "cool", Curve: calc.CoolSeason(), CeilingGM2: 3})},
			{ID: tees, Site: 1, Name: "tees", Turf: planner.Always(planner.Turf{Grass: "warm", Curve: calc.WarmSeason(), CeilingGM2: 4})},
		},
		Outlook: outlookOf(asOf, members...),
	}
}

func quillmere() planner.Site {
	return planner.Site{
		ID: 1, Name: "Quillmere", Lat: 40.7, Lon: -74.2, Zone: "America/New_York", Units: planner.Celsius,
		Rules: planner.Always(planner.DayRule{OffsetSeconds: -5 * 3600, Boundary: planner.StandardMidnight}),
	}
}

// workOn is a work with one setting.
func workOn(surface planner.SurfaceID, id planner.WorkID, name string, settings planner.WorkSettings) planner.Work {
	return planner.Work{ID: id, Surface: surface, Name: name, Settings: planner.Always(settings)}
}

// degreeDays counts by degree days above 0 °C on a work's own 24-hour mean.
func degreeDays(target float64) planner.WorkSettings {
	return planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByDegreeDays}, Target: target, Basis: planner.Hourly}
}

// regulator is the usual work of these tests: number 1 on the greens.
func regulator(target float64) planner.Work {
	return workOn(greens, 1, "regulator", degreeDays(target))
}

// feed is a work by nitrogen, number 2 on the greens.
func feed(reserve float64) planner.Work {
	return workOn(greens, 2, "feed", planner.WorkSettings{
		Counting: planner.Counting{Counts: planner.ByNitrogen}, Target: reserve, Basis: planner.Hourly})
}

// done is an entry of one pass.
func done(day planner.Day, work planner.WorkID, nitrogenGM2 float64) planner.Entry {
	return planner.Entry{ID: planner.EntryID(day), Site: 1, Day: day, By: "Ash",
		Passes: []planner.Pass{{Work: work, NitrogenGM2: nitrogenGM2}}}
}

func evaluate(t rapid.TB, plan planner.Plan) planner.Evaluation {
	t.Helper()
	e, err := planner.Evaluate(plan)
	if err != nil {
		t.Fatalf("evaluate: %v", err)
	}
	return e
}

// only is the state of a plan's only work.
func only(t rapid.TB, plan planner.Plan) planner.WorkState {
	t.Helper()
	e := evaluate(t, plan)
	if len(e.Works) != 1 {
		t.Fatalf("%d works, want 1", len(e.Works))
	}
	return e.Works[0]
}

// due is the count of a plan's only work on its own mean.
func due(t rapid.TB, plan planner.Plan) planner.DueFacts {
	t.Helper()
	facts, ok := only(t, plan).OwnFacts()
	if !ok {
		t.Fatal("the work has no figures on its own mean")
	}
	return facts
}

// on is a passage on a day.
func on(text string) planner.Passage { return planner.Passage{Day: date(text), Known: true} }

// written is a passage as a failure shows it.
func written(p planner.Passage) string {
	if !p.Known {
		return "no date"
	}
	return p.Day.String()
}

// wantKind demands a problem of the kind, with something to read.
func wantKind(t testing.TB, what string, err error, kind planner.Kind) {
	t.Helper()
	switch {
	case err == nil:
		t.Errorf("%s: no error, want a %s problem", what, kind)
	case planner.KindOf(err) != kind:
		t.Errorf("%s: %v is a %s problem, want %s", what, err, planner.KindOf(err), kind)
	case err.Error() == "":
		t.Errorf("%s: the problem says nothing", what)
	}
}

// shot is everything a value holds, for telling whether it was changed.
func shot(value any) string { return fmt.Sprintf("%+v", value) }

// drawTemperature draws a tenth of a degree between two bounds.
func drawTemperature(t *rapid.T, low, high int, label string) float64 {
	return float64(rapid.IntRange(10*low, 10*high).Draw(t, label)) / 10
}

// drawRow draws n temperatures, a share of them missing.
func drawRow(t *rapid.T, n, missingPercent int, label string) []float64 {
	row := make([]float64, n)
	for i := range row {
		row[i] = drawTemperature(t, -15, 40, label)
		if rapid.IntRange(1, 100).Draw(t, "missing") <= missingPercent {
			row[i] = missing
		}
	}
	return row
}
