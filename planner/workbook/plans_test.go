package workbook_test

import (
	"math/rand/v2"
	"testing"

	"swardbook/calc"
	"swardbook/planner"
	"swardbook/planner/workbook"
)

// Quillmere, its works and its weather are invented.

const morning = planner.Day(19885) // 11 June 2024

// weatherOn is an invented day; now and then one mean is not known.
func weatherOn(r *rand.Rand, day planner.Day) planner.DayFacts {
	tenth := func(from, span float64) float64 { return float64(int(10*(from+span*r.Float64()))) / 10 }
	low := tenth(-2, 20)
	facts := planner.DayFacts{Day: day, HasExtremes: true, LowC: low, HighC: low + tenth(0, 18), ExtremesFrom: planner.FromStation, SlotsWanted: 24}
	facts.HasHourly, facts.HourlyC = true, facts.LowC+(facts.HighC-facts.LowC)*float64(int(100*r.Float64()))/100
	switch r.IntN(10) {
	case 0:
		facts.HasHourly = false
	case 1:
		facts.HasExtremes, facts.HighC, facts.LowC = false, 0, 0
	case 2:
		for range 24 {
			facts.HoursC = append(facts.HoursC, tenth(facts.LowC, facts.HighC-facts.LowC))
		}
	}
	return facts
}

// randomPlan is an invented plan: the measure, method, cutoff, units and gaps
// come from the number.
func randomPlan(number uint64) planner.Plan {
	r := rand.New(rand.NewPCG(number, 5))
	asOf := morning + planner.Day(r.IntN(366))
	plan := planner.Plan{AsOf: asOf, Site: planner.Site{ID: 1, Name: "Quillmere & Co", Lat: 40, Zone: "Europe/Dublin", Units: planner.Celsius}}
	if number%2 == 1 {
		plan.Site.Units = planner.Fahrenheit
	}
	if number%3 == 1 {
		plan.Site.Lat = -40
	}
	for day := asOf - 120; day < asOf; day++ {
		plan.Record.Facts = append(plan.Record.Facts, weatherOn(r, day))
	}
	start := asOf
	if number%4 == 3 { // a gap too long for a straight line, and a short one
		start = asOf - 30
		for i := range 6 {
			plan.Record.Facts[90+i] = planner.DayFacts{Day: start + planner.Day(i)}
		}
	}
	plan.Record.Facts[100] = planner.DayFacts{Day: asOf - 20}
	days := func() (days []planner.DayFacts) {
		for day := start; day < asOf+80; day++ {
			days = append(days, weatherOn(r, day))
		}
		return days
	}
	plan.Outlook = planner.Outlook{AsOf: asOf, Start: start, Path: days(), Engine: 1}
	for range []int{1, 3, 10}[r.IntN(3)] {
		plan.Outlook.Members = append(plan.Outlook.Members, days())
	}
	curves := []calc.GrowthCurve{calc.CoolSeason(), calc.WarmSeason(), calc.CoolSeasonF(), {OptimumC: 28, WidthC: 7, HeldAbove: true}}
	for id := planner.SurfaceID(1); id <= 2; id++ {
		turf := planner.Always(planner.Turf{Curve: curves[r.IntN(4)], CeilingGM2: 3}).
			With(asOf-10, planner.Turf{Curve: curves[r.IntN(4)], CeilingGM2: 4})
		plan.Surfaces = append(plan.Surfaces, planner.Surface{ID: id, Site: 1, Name: []string{"=greens", "pitch"}[id-1], Turf: turf})
	}
	plan.Closed = []planner.Closed{{ID: 1, Site: 1, Name: "match", From: asOf + 2, To: asOf + 20}}
	addWorks(&plan, r)
	return plan
}

// addWorks adds works of every measure and the passes that start them.
func addWorks(plan *planner.Plan, r *rand.Rand) {
	countings := []planner.Counting{{Counts: planner.ByDays}, {Counts: planner.ByGrowthDays}, {Counts: planner.ByNitrogen}}
	for range 3 {
		method := calc.Methods()[r.IntN(len(calc.Methods()))]
		cutoff := method.Cutoffs()[r.IntN(len(method.Cutoffs()))]
		countings = append(countings, planner.Counting{Counts: planner.ByDegreeDays, Method: method,
			Thresholds: calc.Thresholds{LowerC: float64(r.IntN(12)), UpperC: 14 + float64(r.IntN(12)), Cutoff: cutoff}})
	}
	targets := map[planner.Counts]float64{planner.ByDays: 20, planner.ByGrowthDays: 12, planner.ByNitrogen: 0.2, planner.ByDegreeDays: 150}
	for i, counting := range countings {
		id := planner.WorkID(i + 1)
		settings := planner.WorkSettings{Counting: counting, Target: targets[counting.Counts], Basis: planner.Hourly}
		if r.IntN(2) == 0 {
			settings.Basis = planner.Midrange
		}
		if r.IntN(3) == 0 {
			settings.Limits.LeastDays = 30
		}
		plan.Works = append(plan.Works, planner.Work{ID: id, Surface: planner.SurfaceID(1 + i%2), Name: "work " + string(rune('a'+i)), Settings: planner.Always(settings)})
		for range 1 + r.IntN(2) {
			entry := planner.Entry{Day: plan.AsOf - 1 - planner.Day(r.IntN(60)), Passes: []planner.Pass{{Work: id}}, By: "Ann", Note: "=1+1"}
			if counting.Counts == planner.ByNitrogen {
				entry.Passes[0].NitrogenGM2, entry.Passes[0].SlowShare, entry.Passes[0].SlowWeeks = 1.5, 0.4, 3.5
			}
			plan.Log = append(plan.Log, entry)
		}
	}
	// By day, as the plan's log stands.
	for i := range plan.Log {
		for j := i; j > 0 && plan.Log[j].Day < plan.Log[j-1].Day; j-- {
			plan.Log[j], plan.Log[j-1] = plan.Log[j-1], plan.Log[j]
		}
	}
}

// inputOf is what the plan's workbook is written from.
func inputOf(t testing.TB, plan planner.Plan, weeks int) workbook.Input {
	t.Helper()
	evaluation, err := planner.Evaluate(plan)
	if err != nil {
		t.Fatal(err)
	}
	data, err := planner.SheetOf(plan, evaluation, 7*weeks)
	if err != nil {
		t.Fatal(err)
	}
	return workbook.Input{ID: 7, Plan: plan, Evaluation: evaluation, Data: data, Weeks: weeks, Ahead: "Days ahead: past years.", Caution: "Label and local rules come first."}
}

func build(t testing.TB, plan planner.Plan) []byte {
	t.Helper()
	content, err := workbook.Build(inputOf(t, plan, 1))
	if err != nil {
		t.Fatal(err)
	}
	return content
}
