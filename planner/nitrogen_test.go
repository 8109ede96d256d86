package planner_test

import (
	"testing"

	"pgregory.net/rapid"

	"swardbook/planner"
)

// fed is a morning on which the greens are fed on days of June 2024. It is 20 °C
// throughout, where cool-season growth potential is 1: a ceiling of 3 g/m² is
// used at 0.1 a day in June and 3/31 in July.
func fed(asOf planner.Day, reserve float64, feeds ...planner.Entry) planner.Plan {
	plan := planOf(asOf, times(120, 20), times(120, 20))
	plan.Works, plan.Log = []planner.Work{feed(reserve)}, feeds
	return plan
}

// A ledger by hand.
func TestNitrogenBalance(t *testing.T) {
	june := date("2024-05-31") // june+1 is 1 June
	for _, row := range []struct {
		name    string
		asOf    planner.Day
		reserve float64
		feeds   []planner.Entry
		since   planner.Day
		target  float64 // what may be used before the feed is due
		used    float64 // of it, through yesterday
		due     string
	}{
		{"one feed: 2 g last 20 days", june + 5, 0, []planner.Entry{done(june+1, 2, 2)}, june + 2, 2, 0.3, "2024-06-21"},
		{"down to a reserve of 0.5", june + 5, 0.5, []planner.Entry{done(june+1, 2, 2)}, june + 2, 1.5, 0.3, "2024-06-16"},
		// 2 - 10·0.1 + 1.5 = 2.5 left on 11 June: 19 days of June take 1.9, 0.6 is used by the 7th of July.
		{"an early feed adds up", june + 15, 0, []planner.Entry{done(june+1, 2, 2), done(june+11, 2, 1.5)}, june + 12, 2.5, 0.3, "2024-07-07"},
		// 0.5 - 10·0.1 + 1 = 0.5 left.
		{"a late feed starts short", june + 13, 0, []planner.Entry{done(june+1, 2, 0.5), done(june+11, 2, 1)}, june + 12, 0.5, 0.1, "2024-06-16"},
		{"a feed that does not make up: due at once", june + 13, 0, []planner.Entry{done(june+1, 2, 0.5), done(june+11, 2, 0.3)}, june + 12, -0.2, 0.1, "2024-06-11"},
		{"a reserve that the feed does not reach", june + 3, 1, []planner.Entry{done(june+1, 2, 0.8)}, june + 2, -0.2, 0.1, "2024-06-01"},
		{"fed by another work of the surface", june + 5, 0, []planner.Entry{done(june+1, 2, 1), done(june+1, 3, 1)}, june + 2, 2, 0.3, "2024-06-21"},
		{"another surface's feed does not count", june + 5, 0, []planner.Entry{done(june+1, 2, 2), done(june+2, 4, 2)}, june + 2, 2, 0.3, "2024-06-21"},
		{"a pass without nitrogen is no feed", june + 5, 0, []planner.Entry{done(june+1, 2, 2), done(june+3, 2, 0)}, june + 2, 2, 0.3, "2024-06-21"},
		// 2 - 1 + 1 = 2 left on 11 June: 1.9 by the end of June, 1.9968 by 1 July.
		{"fed today", june + 11, 0, []planner.Entry{done(june+1, 2, 2), done(june+11, 2, 1)}, june + 12, 2, 0, "2024-07-02"},
		{"fed ahead", june + 5, 0, []planner.Entry{done(june+1, 2, 2), done(june+11, 2, 1)}, june + 12, 2, 0, "2024-07-02"},
	} {
		plan := fed(row.asOf, row.reserve, row.feeds...)
		plan.Works = append(plan.Works, workOn(greens, 3, "spray", degreeDays(200)), workOn(tees, 4, "feed", plan.Works[0].Settings[0].Value))
		facts, ok := evaluate(t, plan).Works[0].OwnFacts()
		if !ok || facts.Since != row.since || !within(facts.Target, row.target, 1e-9) || !within(facts.Total.Total, row.used, 1e-9) || facts.Date() != on(row.due) {
			t.Errorf("%s: since %s, target %g, used %g, due %s; want %s, %g, %g, %s", row.name,
				facts.Since, facts.Target, facts.Total.Total, written(facts.Date()), row.since, row.target, row.used, row.due)
		}
	}
}

// Nothing is lost: all that was given is what was used and what is left, and it
// does not matter in which order the feeds were logged.
func TestNitrogenIsConserved(t *testing.T) {
	asOf := date("2024-06-20")
	rapid.Check(t, func(t *rapid.T) {
		plan := planOf(asOf, drawRow(t, 60, 0, "past"), drawRow(t, 20, 0, "ahead"))
		plan.Works = []planner.Work{feed(0)}
		days := rapid.SliceOfNDistinct(rapid.IntRange(1, 59), 1, 6, func(day int) int { return day }).Draw(t, "ago")
		amounts := make([]float64, len(days))
		var forward, backward []planner.Edit
		given, first, last := 0.0, asOf, asOf-60
		for i, ago := range days {
			day := asOf - planner.Day(ago)
			amounts[i] = rapid.Float64Range(0.1, 5).Draw(t, "given")
			given += amounts[i]
			first, last = min(first, day), max(last, day)
			edit := planner.DoWork{Work: 2, Name: "feed", Day: day, NitrogenGM2: amounts[i]}
			forward, backward = append(forward, edit), append([]planner.Edit{edit}, backward...)
		}
		one, refusals := planner.Apply(plan, forward...)
		if refusals != nil {
			t.Fatal(refusals)
		}
		other, _ := planner.Apply(plan, backward...)
		facts, again := due(t, one), due(t, other)
		if facts.Since != again.Since || !within(facts.Target, again.Target, 1e-9) || facts.Date() != again.Date() {
			t.Fatalf("logged one way %+v, the other way %+v", facts, again)
		}
		// By the measure alone: used since the first feed.
		m, err := planner.NewMeasure(planner.Counting{Counts: planner.ByNitrogen}, plan.Surfaces[0].Turf.On)
		if err != nil {
			t.Fatal(err)
		}
		used := 0.0
		for day := first + 1; day < asOf; day++ {
			units, _ := m.Units(plan.Record.At(day), planner.DayFacts{}, planner.Hourly)
			used += units
		}
		if left := facts.Target - facts.Total.Total; facts.Since != last+1 || !within(given, used+left, 1e-9) {
			t.Fatalf("%g was given, %g used, %g is left since %s", given, used, left, facts.Since)
		}
	})
}
