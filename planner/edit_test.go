package planner_test

import (
	"errors"
	"math"
	"reflect"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"swardbook/calc"
	"swardbook/planner"
)

// whatIf is a morning of two members with a regulator and a feed in the log.
func whatIf() planner.Plan {
	asOf := date("2024-07-01") // a Monday
	plan := planOf(asOf, times(30, 20), times(30, 20), times(30, 22))
	plan.Works = []planner.Work{regulator(200), feed(0)}
	plan.Log = []planner.Entry{done(asOf-5, 1, 0), done(asOf-4, 2, 2)}
	return plan
}

func TestEditSentences(t *testing.T) {
	day := date("2024-07-01")
	for _, row := range []struct {
		edit planner.Edit
		c, f string
	}{
		{planner.Warm{From: day, Days: 5, ByC: 3}, "3 °C warmer for 5 days from Mon 1 Jul", "5.4 °F warmer for 5 days from Mon 1 Jul"},
		{planner.Warm{From: day, Days: 1, ByC: -2.5}, "2.5 °C cooler for 1 day from Mon 1 Jul", "4.5 °F cooler for 1 day from Mon 1 Jul"},
		{planner.Warm{From: day, ByC: 1}, "1 °C warmer from Mon 1 Jul on", "1.8 °F warmer from Mon 1 Jul on"},
		{planner.SetDay{Day: day, HighC: 30, LowC: -5}, "Mon 1 Jul at 30/-5 °C", "Mon 1 Jul at 86/23 °F"},
		{planner.SetDay{Day: day, HighC: 20.25, LowC: -0.001}, "Mon 1 Jul at 20.25/0 °C", "Mon 1 Jul at 68.45/32 °F"},
		{planner.DoWork{Work: 2, Name: "greens feed", Day: day, NitrogenGM2: 2}, "greens feed done on Mon 1 Jul at 2 g N/m²", "greens feed done on Mon 1 Jul at 2 g N/m²"},
		{planner.DoWork{Work: 1, Name: "greens regulator", Day: day}, "greens regulator done on Mon 1 Jul", "greens regulator done on Mon 1 Jul"},
		{planner.SetTarget{Work: 1, Name: "greens regulator", Target: 200, Unit: planner.DegreeDays}, "greens regulator at 200 °C-days", "greens regulator at 360 °F-days"},
		{planner.SetTarget{Work: 2, Name: "greens feed", Target: 0.5, Unit: planner.NitrogenGM2}, "greens feed at 0.5 g N/m²", "greens feed at 0.5 g N/m²"},
		{planner.SetTarget{Work: 3, Name: "cut", Target: 2, Unit: planner.Days}, "cut at 2 days", "cut at 2 days"},
		{planner.DoWork{Work: 1, Name: "greens regulator", Day: day, Part: 1, PartName: "front nine"}, "greens regulator (front nine) done on Mon 1 Jul", "greens regulator (front nine) done on Mon 1 Jul"},
		{planner.SetLimits{Work: 1, Name: "cut", Limits: planner.Limits{LeastDays: 1}}, "cut with at least 1 day between", "cut with at least 1 day between"},
		{planner.SetLimits{Work: 1, Name: "cut", Limits: planner.Limits{LeastDays: 10, MostTimes: 4}}, "cut with at least 10 days between, at most 4 times a season", "cut with at least 10 days between, at most 4 times a season"},
		{planner.SetLimits{Work: 1, Name: "cut", Limits: planner.Limits{MostTimes: 1}}, "cut with at most 1 time a season", "cut with at most 1 time a season"},
		{planner.SetSeason{Work: 1, Name: "cut", Resting: true}, "cut resting", "cut resting"},
		{planner.SetSeason{Work: 1, Name: "cut"}, "cut on", "cut on"},
		{planner.SetRainFree{Work: 1, Name: "cut", Hours: 6.5}, "cut with 6.5 rain-free hours", "cut with 6.5 rain-free hours"},
		{planner.SetResult{Work: 1, Name: "cut", Result: planner.Lost}, "the last cut lost", "the last cut lost"},
		{planner.SetResult{Work: 1, Name: "cut"}, "the last cut good", "the last cut good"},
		{planner.SetGrass{Surface: 1, Name: "greens", Grass: "warm"}, "greens with warm grass", "greens with warm grass"},
	} {
		if c, f := row.edit.Sentence(planner.Celsius), row.edit.Sentence(planner.Fahrenheit); c != row.c || f != row.f {
			t.Errorf("%q and %q, want %q and %q", c, f, row.c, row.f)
		}
	}
}

func TestWarm(t *testing.T) {
	plan := whatIf()
	last := plan.AsOf + 29
	for _, row := range []struct {
		edit     planner.Warm
		from, to planner.Day // both warmer
	}{
		{planner.Warm{From: plan.AsOf, Days: 3, ByC: 5}, plan.AsOf, plan.AsOf + 2},
		{planner.Warm{From: plan.AsOf + 2, Days: 1, ByC: -5}, plan.AsOf + 2, plan.AsOf + 2},
		{planner.Warm{From: plan.AsOf + 10, ByC: 5}, plan.AsOf + 10, last},
		{planner.Warm{From: last, ByC: 5}, last, last},
		{planner.Warm{From: plan.AsOf + 28, Days: 99, ByC: 30}, plan.AsOf + 28, last},
		{planner.Warm{From: plan.AsOf + 28, Days: math.MaxInt32, ByC: -30}, plan.AsOf + 28, last},
		{planner.Warm{From: plan.AsOf + 28, Days: math.MaxInt, ByC: 1}, plan.AsOf + 28, last},
	} {
		changed, refusals := planner.Apply(plan, row.edit)
		if refusals != nil {
			t.Errorf("%s: %v", row.edit.Sentence(planner.Celsius), refusals)
			continue
		}
		rows := append([][]planner.DayFacts{changed.Outlook.Path}, changed.Outlook.Members...)
		for i, was := range append([][]planner.DayFacts{plan.Outlook.Path}, plan.Outlook.Members...) {
			for j, day := range was {
				want := day
				if day.Day >= row.from && day.Day <= row.to {
					want = day.Warmer(row.edit.ByC)
				}
				if !reflect.DeepEqual(rows[i][j], want) {
					t.Fatalf("%s: row %d, %s is %+v, want %+v", row.edit.Sentence(planner.Celsius), i, day.Day, rows[i][j], want)
				}
			}
		}
	}
}

// A gap before the morning is weather that was: it is not made warmer.
func TestWarmLeavesThePast(t *testing.T) {
	plan := whatIf()
	plan.Outlook = outlookOf(plan.AsOf-3, times(30, 20))
	plan.Outlook.AsOf = plan.AsOf
	changed, _ := planner.Apply(plan, planner.Warm{From: plan.AsOf, ByC: 5})
	for i, day := range changed.Outlook.Path {
		if want := 20 + 5*float64(map[bool]int{true: 1}[i >= 3]); day.HighC != want {
			t.Errorf("%s is at %g, want %g", day.Day, day.HighC, want)
		}
	}
}

func TestSetDay(t *testing.T) {
	plan := whatIf()
	for _, day := range []planner.Day{plan.AsOf, plan.AsOf + 7, plan.AsOf + 29} {
		changed, refusals := planner.Apply(plan, planner.SetDay{Day: day, HighC: 30, LowC: 14})
		if refusals != nil {
			t.Fatal(refusals)
		}
		for _, row := range append([][]planner.DayFacts{changed.Outlook.Path}, changed.Outlook.Members...) {
			facts := row[day-plan.AsOf]
			if facts.Day != day || facts.HighC != 30 || facts.LowC != 14 || facts.HasHourly || facts.ExtremesFrom != planner.FromHand {
				t.Errorf("%s is %+v", day, facts)
			}
			if meanC, ok := facts.Mean(planner.Midrange); !ok || meanC != 22 {
				t.Errorf("%s has a high/low mean of %g", day, meanC)
			}
		}
	}
}

func TestSetTarget(t *testing.T) {
	plan := whatIf()
	settings := plan.Works[0].Settings[0].Value
	settings.Latest = 300
	plan.Works[0].Settings = planner.Always(settings)
	for target, want := range map[float64]string{100: "2024-07-01", 200: "2024-07-06", 90: "2024-07-01", 80: "2024-06-30"} {
		changed, refusals := planner.Apply(plan, planner.SetTarget{Work: 1, Name: "regulator", Target: target})
		if refusals != nil {
			t.Fatal(refusals)
		}
		facts, _ := evaluate(t, changed).Works[0].OwnFacts()
		if facts.Early != on(want) && facts.Middle != on(want) || facts.Target != target {
			t.Errorf("target %g: due %s of %g, want %s", target, written(facts.Middle), facts.Target, want)
		}
		if got := changed.Works[0].Settings.On(plan.AsOf); got.Latest != 0 || got.Target != target {
			t.Errorf("target %g: settings %+v; the old latest does not go with a new target", target, got)
		}
		// Yesterday's target is what it was.
		if got := changed.Works[0].Settings.On(plan.AsOf - 1); got != settings {
			t.Errorf("the day before has %+v", got)
		}
	}
}

func TestRefusedEdits(t *testing.T) {
	plan := whatIf()
	end := plan.AsOf + 30
	for _, row := range []struct {
		edit planner.Edit
		kind planner.Kind
	}{
		{planner.Warm{From: plan.AsOf - 1, ByC: 3}, planner.Invalid},
		{planner.Warm{From: end, ByC: 3}, planner.Invalid},
		{planner.Warm{From: plan.AsOf, ByC: 30.1}, planner.Invalid},
		{planner.Warm{From: plan.AsOf, ByC: -31}, planner.Invalid},
		{planner.Warm{From: plan.AsOf, ByC: math.NaN()}, planner.Invalid},
		{planner.Warm{From: plan.AsOf, ByC: 3, Days: -1}, planner.Invalid},
		{planner.SetDay{Day: plan.AsOf - 1, HighC: 20, LowC: 10}, planner.Invalid},
		{planner.SetDay{Day: end, HighC: 20, LowC: 10}, planner.Invalid},
		{planner.SetDay{Day: plan.AsOf, HighC: 10, LowC: 20}, planner.Invalid},
		{planner.SetDay{Day: plan.AsOf, HighC: 99, LowC: 20}, planner.Invalid},
		{planner.SetDay{Day: plan.AsOf, HighC: math.NaN(), LowC: 20}, planner.Invalid},
		{planner.DoWork{Work: 1, Day: end}, planner.Invalid},
		{planner.DoWork{Work: 1, Day: planner.DayMin - 1}, planner.Invalid},
		{planner.DoWork{Work: 2, Day: plan.AsOf, NitrogenGM2: 50.1}, planner.Invalid},
		{planner.DoWork{Work: 2, Day: plan.AsOf, NitrogenGM2: -1}, planner.Invalid},
		{planner.DoWork{Work: 2, Day: plan.AsOf, NitrogenGM2: math.NaN()}, planner.Invalid},
		{planner.DoWork{Work: 77, Day: plan.AsOf}, planner.NotFound},
		{planner.SetTarget{Work: 77, Target: 100}, planner.NotFound},
		{planner.SetTarget{Work: 1, Target: 0}, planner.Invalid},
		{planner.SetTarget{Work: 1, Target: -5}, planner.Invalid},
		{planner.SetTarget{Work: 1, Target: math.NaN()}, planner.Invalid},
		{planner.SetTarget{Work: 1, Target: math.Inf(1)}, planner.Invalid},
		{planner.SetTarget{Work: 2, Target: -0.1}, planner.Invalid},
		{planner.SetSeason{Work: 77}, planner.NotFound},
		{planner.SetRainFree{Work: 77, Hours: 2}, planner.NotFound},
		{planner.SetRainFree{Work: 1, Hours: math.NaN()}, planner.Invalid},
		{planner.SetRainFree{Work: 1, Hours: 999}, planner.Invalid},
		{planner.SetResult{Work: 77, Result: planner.Lost}, planner.NotFound},
		{planner.SetResult{Work: 1, Result: "wet"}, planner.Invalid},
		{planner.SetGrass{Surface: 77, Grass: "warm", Curve: calc.WarmSeason()}, planner.NotFound},
		{planner.SetGrass{Surface: 1, Grass: "own", Curve: calc.GrowthCurve{OptimumC: 20, WidthC: -1}}, planner.Invalid},
	} {
		changed, refusals := planner.Apply(plan, row.edit)
		if len(refusals) != 1 {
			t.Errorf("%#v: refusals %v", row.edit, refusals)
			continue
		}
		wantKind(t, shot(row.edit), refusals[0], row.kind)
		var problem *planner.Problem
		if !errors.As(refusals[0], &problem) || !strings.HasPrefix(refusals[0].Error(), row.edit.Sentence(planner.Celsius)+": ") {
			t.Errorf("%#v: the refusal %q does not say which edit", row.edit, refusals[0])
		}
		if !reflect.DeepEqual(changed, plan) {
			t.Errorf("%#v: a refused edit changed the plan", row.edit)
		}
	}
}

// Edits are made in order; a refused one does not stop the others.
func TestEditsCompose(t *testing.T) {
	plan := whatIf()
	edits := []planner.Edit{
		planner.Warm{From: plan.AsOf, Days: 10, ByC: 5},
		planner.SetDay{Day: plan.AsOf + 3, HighC: 10, LowC: 10}, // after the warming: not warmed
		planner.Warm{From: plan.AsOf - 9, ByC: 5},               // refused
		planner.Warm{From: plan.AsOf + 3, Days: 1, ByC: 1},
		planner.DoWork{Work: 1, Name: "regulator", Day: plan.AsOf},
		planner.SetTarget{Work: 1, Name: "regulator", Target: 61},
	}
	changed, refusals := planner.Apply(plan, edits...)
	if len(refusals) != 1 || changed.Outlook.Path[3].HighC != 11 || changed.Outlook.Path[4].HighC != 26 {
		t.Errorf("refusals %v, day four at %g", refusals, changed.Outlook.Path[3].HighC)
	}
	stepwise := plan
	for _, edit := range edits {
		stepwise, _ = planner.Apply(stepwise, edit)
	}
	if !reflect.DeepEqual(changed, stepwise) {
		t.Errorf("all at once\n%+v\none by one\n%+v", changed, stepwise)
	}
	// 25 and 27 on 2 July, as much on the 3rd, 11 on the 4th.
	facts, _ := evaluate(t, changed).Works[0].OwnFacts()
	if facts.Early != on("2024-07-04") || facts.Late != on("2024-07-04") || facts.Since != date("2024-07-02") {
		t.Errorf("due %s to %s since %s", written(facts.Early), written(facts.Late), facts.Since)
	}
	if same, refusals := planner.Apply(plan); refusals != nil || !reflect.DeepEqual(same, plan) {
		t.Error("no edits changed the plan")
	}
}

// The plan given is left as it was, and two what-ifs of one plan do not meet,
// whatever room its slices have.
func TestApplyLeavesThePlan(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		plan := drawPlan(t)
		plan.Log = append(make([]planner.Entry, 0, len(plan.Log)+4), plan.Log...)
		plan.Works = append(make([]planner.Work, 0, len(plan.Works)+4), plan.Works...)
		before := shot(plan)
		edits := func() []planner.Edit {
			return rapid.SliceOfN(rapid.Custom(func(t *rapid.T) planner.Edit {
				day := plan.AsOf + planner.Day(rapid.IntRange(-5, 35).Draw(t, "day"))
				work := planner.WorkID(rapid.IntRange(1, 6).Draw(t, "work"))
				return rapid.SampledFrom([]planner.Edit{
					planner.Warm{From: day, Days: rapid.IntRange(-1, 9).Draw(t, "days"), ByC: drawTemperature(t, -35, 35, "by")},
					planner.SetDay{Day: day, HighC: drawTemperature(t, 0, 40, "high"), LowC: drawTemperature(t, -10, 20, "low")},
					planner.DoWork{Work: work, Name: "work", Day: day, NitrogenGM2: drawTemperature(t, -1, 6, "rate")},
					planner.SetTarget{Work: work, Name: "work", Target: drawTemperature(t, -1, 300, "target"), Unit: planner.DegreeDays},
					planner.SetSeason{Work: work, Name: "work", Resting: rapid.Bool().Draw(t, "resting")},
					planner.SetResult{Work: work, Name: "work", Result: rapid.SampledFrom([]planner.Result{planner.Good, planner.Doubtful, planner.Lost}).Draw(t, "result")},
					planner.SetGrass{Surface: planner.SurfaceID(rapid.IntRange(1, 3).Draw(t, "surface")), Grass: "warm", Curve: calc.WarmSeason()},
					planner.SetRainFree{Work: work, Name: "work", Hours: drawTemperature(t, -1, 300, "hours")},
					planner.SetLimits{Work: work, Name: "work", Limits: planner.Limits{LeastDays: rapid.IntRange(-1, 40).Draw(t, "gap"), MostTimes: rapid.IntRange(0, 4).Draw(t, "most")}},
				}).Draw(t, "edit")
			}), 0, 5).Draw(t, "edits")
		}
		one, other := edits(), edits()
		changed, _ := planner.Apply(plan, one...)
		kept := shot(changed)
		if second, _ := planner.Apply(plan, other...); shot(second) != "" && shot(changed) != kept {
			t.Fatalf("a second what-if changed the first:\n%s\nwas\n%s", shot(changed), kept)
		}
		if after := shot(plan); after != before {
			t.Fatalf("the plan was\n%s\nand became\n%s", before, after)
		}
		checkFigures(t, evaluate(t, changed).Figures())
	})
}

func TestUnits(t *testing.T) {
	c, f := planner.Celsius, planner.Fahrenheit
	for _, row := range []struct {
		value  float64
		unit   planner.Unit
		c, f   float64
		nc, nf string
	}{
		{100, planner.DegreesC, 100, 212, "°C", "°F"},
		{-40, planner.DegreesC, -40, -40, "°C", "°F"},
		{5, planner.DifferenceC, 5, 9, "°C", "°F"},
		{200, planner.DegreeDays, 200, 360, "°C-days", "°F-days"},
		{0.25, planner.Share, 25, 25, "%", "%"},
		{3, planner.NitrogenGM2, 3, 3, "g N/m²", "g N/m²"},
		{2, planner.Days, 2, 2, "days", "days"},
	} {
		shownC, nameC := c.Show(row.value, row.unit)
		shownF, nameF := f.Show(row.value, row.unit)
		if !within(shownC, row.c, 1e-9) || !within(shownF, row.f, 1e-9) || nameC != row.nc || nameF != row.nf {
			t.Errorf("%g %s: %g %s and %g %s", row.value, row.unit, shownC, nameC, shownF, nameF)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		value := drawTemperature(t, -100, 100, "value")
		for _, units := range []planner.Units{c, f} {
			if !within(units.TemperatureC(units.Temperature(value)), value, 1e-9) || !within(units.DifferenceC(units.Difference(value)), value, 1e-9) {
				t.Fatalf("%g in %s does not come back", value, units.Degree())
			}
		}
		if !within(f.Temperature(value), calc.FahrenheitFromCelsius(value), 0) || c.Temperature(value) != value {
			t.Fatalf("%g °C is %g °F", value, f.Temperature(value))
		}
	})
}
