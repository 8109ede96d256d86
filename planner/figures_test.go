package planner_test

import (
	"math"
	"reflect"
	"slices"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"

	"swardbook/calc"
	"swardbook/planner"
)

// checkFigures holds what must be true of every list of figures.
func checkFigures(t rapid.TB, figures planner.Figures) {
	t.Helper()
	seen := map[string]bool{}
	for _, f := range figures {
		switch {
		case seen[f.Key]:
			t.Fatalf("the key %s comes twice", f.Key)
		case math.IsNaN(f.Value) || math.IsInf(f.Value, 0):
			t.Fatalf("%s is %g", f.Key, f.Value)
		case f.Unit == "" || f.Basis == "":
			t.Fatalf("%s says no unit or no basis: %+v", f.Key, f)
		case f.Key == "" || strings.ContainsAny(f.Key, " \t\n") || strings.ToLower(f.Key) != f.Key:
			t.Fatalf("the key %q is not lower case without spaces", f.Key)
		}
		seen[f.Key] = true
	}
}

func TestFiguresGetAndUnder(t *testing.T) {
	figures := planner.Figures{{Key: "a.b", Value: 1, Unit: planner.Count}, {Key: "c", Value: 2, Unit: planner.Count}}
	if got, ok := figures.Get("c"); !ok || got.Value != 2 {
		t.Errorf("c is %+v, %t", got, ok)
	}
	if got, ok := figures.Get("a"); ok {
		t.Errorf("a is %+v", got)
	}
	under := figures.Under("base.")
	if _, ok := under.Get("base.a.b"); !ok || len(under) != 2 || figures[0].Key != "a.b" {
		t.Errorf("%+v, from %+v", under, figures)
	}
}

// The keys of a morning, in the order of a briefing. Keys stay as they are.
func TestFiguresOfAMorning(t *testing.T) {
	asOf := date("2024-01-11")
	plan := planOf(asOf, times(10, 20), times(30, 20))
	yesterday := full(asOf-1, 26, 16, 20)
	yesterday.HoursC = times(24, 20)
	plan.Record.Facts[9] = yesterday
	plan.Surfaces = plan.Surfaces[:1]
	plan.Surfaces[0].Name = "Front Greens"
	plan.Totals = []planner.Total{totalFrom(planner.MonthDay{Month: time.January, Day: 1})}
	plan.Works = []planner.Work{regulator(100)}
	plan.Works[0].Name = "Growth Regulator"
	plan.Log = []planner.Entry{done(asOf-3, 1, 0)}
	figures := evaluate(t, plan).Figures()
	checkFigures(t, figures)
	var keys []string
	for _, f := range figures {
		keys = append(keys, f.Key)
	}
	count := "due.front-greens.growth-regulator."
	want := []string{
		"yesterday.date", "yesterday.high_c", "yesterday.low_c", "yesterday.readings", "yesterday.hourly_mean_c", "yesterday.midrange_mean_c",
		"yesterday.growth_potential.front-greens.hourly", "yesterday.growth_potential.front-greens.midrange", "yesterday.growth_potential.front-greens.hours",
		"total.gdd.hourly", "total.gdd.midrange",
		count + "hourly.total", count + "hourly.target", count + "hourly.since", count + "hourly.days_until", count + "hourly.date",
		count + "hourly.early", count + "hourly.middle", count + "hourly.late", count + "hourly.path",
		count + "midrange.total", count + "midrange.target", count + "midrange.since", count + "midrange.days_until", count + "midrange.date",
		count + "midrange.early", count + "midrange.middle", count + "midrange.late", count + "midrange.path",
	}
	if !reflect.DeepEqual(keys, want) {
		t.Errorf("keys\n%s\nwant\n%s", strings.Join(keys, "\n"), strings.Join(want, "\n"))
	}
	for key, value := range map[string]float64{
		"yesterday.date": float64(asOf - 1), "yesterday.high_c": 26, "yesterday.readings": 24, "yesterday.midrange_mean_c": 21,
		"yesterday.growth_potential.front-greens.hourly":   1,
		"yesterday.growth_potential.front-greens.midrange": 0.98361, // cool season at 21 °C (Gelernter & Stowell 2005)
		"yesterday.growth_potential.front-greens.hours":    1,
		"total.gdd.hourly": 200, "total.gdd.midrange": 201,
		count + "hourly.total": 40, count + "midrange.total": 41, count + "hourly.target": 100,
		count + "hourly.days_until": 2, count + "hourly.date": float64(asOf + 2),
	} {
		if f, ok := figures.Get(key); !ok || !within(f.Value, value, 0.5e-5) {
			t.Errorf("%s is %g (%t), want %g", key, f.Value, ok, value)
		}
	}
}

func TestYesterdayUnknown(t *testing.T) {
	plan := planOf(date("2024-01-11"), []float64{20, missing}, times(30, 20))
	e := evaluate(t, plan)
	if !e.Yesterday.Empty() || e.Yesterday.Day != plan.AsOf-1 {
		t.Errorf("yesterday is %+v", e.Yesterday)
	}
	for _, f := range e.Figures() {
		if strings.HasPrefix(f.Key, "yesterday.") && f.Key != "yesterday.date" && f.Key != "yesterday.readings" {
			t.Errorf("%s of a day of which nothing is known", f.Key)
		}
	}
}

// drawPlan draws a morning of any kind: gaps, all measures, past and future
// passes, one member or more.
func drawPlan(t *rapid.T) planner.Plan {
	asOf := date("2024-03-05") + planner.Day(rapid.IntRange(-40, 40).Draw(t, "as of"))
	ahead := rapid.IntRange(1, 30).Draw(t, "ahead")
	rows := make([][]float64, rapid.IntRange(1, 4).Draw(t, "members"))
	for i := range rows {
		rows[i] = drawRow(t, ahead, 10, "ahead")
	}
	plan := planOf(asOf, drawRow(t, rapid.IntRange(0, 30).Draw(t, "past"), 25, "past"), rows...)
	for i := range plan.Record.Facts {
		plan.Record.Facts[i] = drawDay(t, plan.Record.Facts[i].Day)
	}
	plan.Outlook.Typed, plan.Outlook.Years = rapid.IntRange(0, 3).Draw(t, "typed"), len(rows)-1
	if len(plan.Record.Facts) == 0 {
		plan.Record.Facts = nil
	}
	if rapid.Bool().Draw(t, "overseeded") {
		plan.Surfaces[1].Turf = plan.Surfaces[1].Turf.With(asOf-5, planner.Turf{Grass: "cool", Curve: calc.CoolSeason(), CeilingGM2: 2})
	}
	plan.Totals = []planner.Total{totalFrom(planner.MonthDay{Month: time.February, Day: 29})}
	for i := range rapid.IntRange(1, 5).Draw(t, "works") {
		method := rapid.SampledFrom(calc.Methods()).Draw(t, "method")
		settings := planner.WorkSettings{Counting: rapid.SampledFrom([]planner.Counting{
			{Counts: planner.ByDays}, {Counts: planner.ByDegreeDays}, {Counts: planner.ByGrowthDays}, {Counts: planner.ByNitrogen},
			countingBy(method, calc.Thresholds{LowerC: 5, UpperC: 30, Cutoff: rapid.SampledFrom(method.Cutoffs()).Draw(t, "cutoff")}),
		}).Draw(t, "counting")}
		settings.Target = rapid.Float64Range(0.5, 40).Draw(t, "target")
		settings.Basis = rapid.SampledFrom([]planner.Basis{"", planner.Hourly, planner.Midrange}).Draw(t, "basis")
		surface := rapid.SampledFrom([]planner.SurfaceID{greens, tees}).Draw(t, "surface")
		plan.Works = append(plan.Works, workOn(surface, planner.WorkID(i+1), "work "+string(rune('a'+i)), settings))
	}
	days := rapid.SliceOfN(rapid.IntRange(-40, 5), 0, 6).Draw(t, "log")
	slices.Sort(days)
	for i, day := range days {
		entry := done(asOf+planner.Day(day), planner.WorkID(rapid.IntRange(1, 6).Draw(t, "work")), rapid.Float64Range(0, 5).Draw(t, "nitrogen"))
		entry.ID = planner.EntryID(i + 1)
		plan.Log = append(plan.Log, entry)
	}
	return plan
}

// Whatever the morning: keys are unique, every value is a number, and the same
// plan gives the same figures in the same order without being touched.
func TestEvaluateIsPure(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		plan := drawPlan(t)
		before := shot(plan)
		first, second := evaluate(t, plan), evaluate(t, plan)
		checkFigures(t, first.Figures())
		if !reflect.DeepEqual(first, second) || !reflect.DeepEqual(first.Figures(), second.Figures()) {
			t.Fatalf("figures\n%+v\nand the next time\n%+v", first.Figures(), second.Figures())
		}
		if after := shot(plan); after != before {
			t.Fatalf("the plan was\n%s\nand became\n%s", before, after)
		}
		for _, total := range plan.Totals {
			season, err := planner.CompareSeason(plan, total)
			if err != nil {
				t.Fatal(err)
			}
			checkFigures(t, season.Figures())
		}
		for _, state := range first.Works {
			for _, facts := range state.Bases {
				if facts.Early.Known && facts.Middle.Known && facts.Early.Day > facts.Middle.Day ||
					facts.Late.Known && (!facts.Middle.Known || facts.Middle.Day > facts.Late.Day) {
					t.Fatalf("%s: %s, %s, %s", state.Work.Name, written(facts.Early), written(facts.Middle), written(facts.Late))
				}
			}
		}
	})
}
