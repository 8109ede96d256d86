package planner_test

import (
	"fmt"

	"swardbook/calc"
	"swardbook/planner"
)

// A morning at Quillmere, an invented ground: the greens were sprayed on 1 June
// and are due again at 200 °C-days above 0 °C. Two past years go on warmer and
// cooler.
func quillmereInJune() planner.Plan {
	asOf := planner.DayOf(2024, 6, 9)
	plan := planner.Plan{
		Site:     planner.Site{ID: 1, Name: "Quillmere", Units: planner.Celsius},
		AsOf:     asOf,
		Surfaces: []planner.Surface{{ID: 1, Site: 1, Name: "greens", Turf: planner.Always(planner.Turf{Grass: "cool", Curve: calc.CoolSeason()})}},
		Works: []planner.Work{{ID: 1, Surface: 1, Name: "regulator", Settings: planner.Always(planner.WorkSettings{
			Counting: planner.Counting{Counts: planner.ByDegreeDays}, Target: 200, Basis: planner.Hourly})}},
		Log:     []planner.Entry{{ID: 1, Site: 1, Day: planner.DayOf(2024, 6, 1), Passes: []planner.Pass{{Work: 1}}, By: "Ash"}},
		Outlook: planner.Outlook{AsOf: asOf, Start: asOf, Members: make([][]planner.DayFacts, 2)},
	}
	for i := range 8 { // 1 to 8 June
		plan.Record.Facts = append(plan.Record.Facts, planner.DayFacts{
			Day: asOf - 8 + planner.Day(i), HasExtremes: true, HighC: 23, LowC: 14, HasHourly: true, HourlyC: 18})
	}
	for i := range 30 {
		for year, meanC := range []float64{16, 20} {
			plan.Outlook.Members[year] = append(plan.Outlook.Members[year], planner.DayFacts{
				Day: asOf + planner.Day(i), HasExtremes: true, HighC: meanC + 5, LowC: meanC - 4, HasHourly: true, HourlyC: meanC})
		}
		plan.Outlook.Path = append(plan.Outlook.Path, planner.DayFacts{
			Day: asOf + planner.Day(i), HasExtremes: true, HighC: 23, LowC: 14, HasHourly: true, HourlyC: 18})
	}
	return plan
}

func ExampleEvaluate() {
	evaluation, err := planner.Evaluate(quillmereInJune())
	if err != nil {
		fmt.Println(err)
		return
	}
	work := evaluation.Works[0]
	facts, _ := work.OwnFacts()
	fmt.Printf("%s: %g of %g %s through yesterday, %s\n", work.Work.Name, facts.Total.Total, facts.Target, work.Unit, work.Status)
	fmt.Println("early", facts.Early.Day.Short())
	fmt.Println("late ", facts.Late.Day.Short())
	date, _ := evaluation.Figures().Get("due.greens.regulator.midrange.path")
	fmt.Println("on the high/low mean, along the path:", planner.Day(date.Value))
	// Output:
	// regulator: 126 of 200 °C-days through yesterday, not yet
	// early Wed 12 Jun
	// late  Thu 13 Jun
	// on the high/low mean, along the path: 2024-06-12
}

func ExampleApply() {
	plan := quillmereInJune()
	edits := []planner.Edit{
		planner.Warm{From: plan.AsOf, Days: 3, ByC: 4},
		planner.SetTarget{Work: 1, Name: "greens regulator", Target: 250, Unit: planner.DegreeDays},
		planner.SetDay{Day: plan.AsOf - 1, HighC: 30, LowC: 18},
	}
	changed, refusals := planner.Apply(plan, edits...)
	for _, edit := range edits[:2] {
		fmt.Println(edit.Sentence(plan.Site.Units))
	}
	for _, refusal := range refusals {
		fmt.Println("refused:", refusal)
	}
	for _, one := range []planner.Plan{plan, changed} {
		evaluation, err := planner.Evaluate(one)
		if err != nil {
			fmt.Println(err)
			return
		}
		facts, _ := evaluation.Works[0].OwnFacts()
		fmt.Println("due", facts.Date().Day.Short())
	}
	// Output:
	// 4 °C warmer for 3 days from Sun 9 Jun
	// greens regulator at 250 °C-days
	// refused: Sat 8 Jun at 30/18 °C: Sat 8 Jun is not among the days ahead
	// due Wed 12 Jun
	// due Fri 14 Jun
}

// Three invented days; on the third the station sent no readings.
func ExampleCompareMeans() {
	first := planner.DayOf(2024, 6, 1)
	record := planner.Record{Facts: []planner.DayFacts{
		{Day: first, HasExtremes: true, HighC: 26.8, LowC: 11.9, HasHourly: true, HourlyC: 18.7},
		{Day: first + 1, HasExtremes: true, HighC: 24, LowC: 13, HasHourly: true, HourlyC: 18.75},
		{Day: first + 2, HasExtremes: true, HighC: 22, LowC: 12},
	}}
	means := planner.CompareMeans(record, first, first+2)
	fmt.Printf("%d days: high/low mean %+.2f °C against the 24-hour mean, sd %.2f\n", means.Days, means.DifferenceC, means.SpreadC)
	fmt.Printf("largest %+.2f °C on %s\n", means.LargestC, means.LargestDay.Short())
	// Output:
	// 2 days: high/low mean +0.20 °C against the 24-hour mean, sd 0.64
	// largest +0.65 °C on Sat 1 Jun
}

// Readings on the hour in a zone five hours behind UTC; those of 03:00 and 04:00
// never came.
func ExampleBuildDay() {
	rule := planner.DayRule{OffsetSeconds: -5 * 3600, Boundary: planner.StandardMidnight}
	window := rule.Window(nil, planner.DayOf(2024, 6, 4))
	var readings []planner.Reading
	for hour := range 24 {
		if hour == 3 || hour == 4 {
			continue
		}
		readings = append(readings, planner.Reading{At: window.Start + int64(hour)*3600, C: 10 + float64(hour)/2})
	}
	day := planner.BuildDay(window, readings, nil)
	fmt.Printf("%s: 24-hour mean %.2f °C of %d readings, %d bridged\n", day.Day, day.HourlyC, day.SlotsReal, day.SlotsBridged)
	fmt.Printf("high %.1f, low %.1f °C, of the readings: %t\n", day.HighC, day.LowC, day.ExtremesFrom == planner.FromHourly)
	// Output:
	// 2024-06-04: 24-hour mean 15.75 °C of 22 readings, 2 bridged
	// high 21.5, low 10.0 °C, of the readings: true
}
