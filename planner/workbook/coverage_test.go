package workbook_test

import (
	"fmt"
	"slices"
	"testing"
	"time"

	"swardbook/planner"
)

// The sixty plans that are recalculated hold everything that a sheet is made
// of; each of these stands in two of them at least, on started works.
func TestSixtyPlansHoldEverything(t *testing.T) {
	wanted := []string{
		"units c", "units f", "north", "south", "A4", "Letter", "one member", "three members", "ten members", "typed days ahead",
		"counts days", "counts degree-days", "counts growth-days", "counts nitrogen",
		"hourly", "midrange", "extremes", "readings", "none", "own mean not said", "method not said",
		"no 24-hour mean in the record", "no high and low in the record", "a day with one mean only", "a day of one temperature", "a day with hours",
		"short gap", "long gap", "yesterday missing", "done before the record", "long gap on °F", "long gap with ten members",
		"past 29 February", "past a year's end", "29 February ahead", "a year's end ahead",
		"fallen", "held above", "grass changed", "grass changes ahead", "no ceiling",
		"parts done", "parts behind", "watered in", "doubtful", "lost", "done ahead", "done too long ago", "never done",
		"slow feed", "several feeds", "reserve not left", "other work fed the surface",
		"least days hold", "most times", "most total", "full", "latest", "resting by word", "out of season", "season on", "rests then", "season starts empty",
		"closed", "closed on the date", "closed every year", "due", "overdue", "not yet", "today", "no date", "beyond the sheet", "setting changed",
		"four surfaces",
	}
	for weeks := 1; weeks <= 8; weeks++ {
		wanted = append(wanted, fmt.Sprintf("%d weeks", weeks))
	}
	for _, pair := range methodCutoffs() {
		wanted = append(wanted, string(pair.Method)+" "+string(pair.Thresholds.Cutoff))
	}
	held := map[string]int{}
	for number := range uint64(60) {
		input := randomInput(t, number)
		seen := map[string]bool{}
		see := func(what string, is bool) {
			if is {
				seen[what] = true
			}
		}
		see(fmt.Sprintf("%d weeks", input.Weeks), true)
		see(map[bool]string{false: "A4", true: "Letter"}[input.Letter], true)
		seeSite(input.Plan, see)
		seeDays(input.Data.Days, see)
		for _, state := range input.Evaluation.Works {
			seeState(input.Plan, state, see)
		}
		for _, work := range input.Data.Works {
			seeCounted(input.Plan, work, see)
		}
		for what := range seen {
			held[what]++
			if !slices.Contains(wanted, what) {
				t.Fatalf("%q is not among what is wanted", what)
			}
		}
	}
	for _, what := range wanted {
		if held[what] < 2 {
			t.Errorf("%q stands in %d of the plans", what, held[what])
		}
	}
}

func seeSite(p planner.Plan, see func(string, bool)) {
	see("units c", p.Site.Units == planner.Celsius)
	see("units f", p.Site.Units == planner.Fahrenheit)
	see("north", p.Site.Lat > 0)
	see("south", p.Site.Lat < 0)
	see("four surfaces", len(p.Surfaces) == 4)
	members := map[int]string{1: "one member", 3: "three members", 10: "ten members"}[len(p.Outlook.Members)]
	see(members, true)
	see("typed days ahead", p.Outlook.Typed > 0)
	hourly, extremes := p.Record.HasHourly(), slices.ContainsFunc(p.Record.Facts, func(f planner.DayFacts) bool { return f.HasExtremes })
	see("no 24-hour mean in the record", !hourly)
	see("no high and low in the record", !extremes)
	long := p.Outlook.Start < p.AsOf && p.Outlook.Start >= p.Record.Facts[0].Day
	see("long gap", long)
	see("long gap on °F", long && p.Site.Units == planner.Fahrenheit)
	see("long gap with ten members", long && len(p.Outlook.Members) == 10)
	see("yesterday missing", p.Record.At(p.AsOf-1).Empty())
	for _, closed := range p.Closed {
		see("closed", true)
		see("closed every year", closed.Yearly)
	}
	for _, surface := range p.Surfaces {
		for _, turf := range surface.Turf {
			see("held above", turf.Value.Curve.HeldAbove)
			see("fallen", !turf.Value.Curve.HeldAbove)
			see("no ceiling", turf.Value.CeilingGM2 == 0)
			see("grass changed", turf.Day > planner.DayMin && turf.Day < p.AsOf)
			see("grass changes ahead", turf.Day > p.AsOf)
		}
	}
}

func seeDays(days []planner.SheetDay, see func(string, bool)) {
	for _, day := range days {
		f := day.Facts
		see("short gap", f.ExtremesFrom == planner.FromLine)
		see("a day with one mean only", !f.Empty() && f.HasHourly != f.HasExtremes)
		see("a day of one temperature", f.HasExtremes && f.HighC == f.LowC)
		see("a day with hours", f.HoursC != nil)
	}
}

func seeState(p planner.Plan, state planner.WorkState, see func(string, bool)) {
	s := state.Settings
	see("resting by word", s.Season.Resting)
	see("out of season", state.Status == planner.Resting && !s.Season.Resting)
	see("full", state.Status == planner.Full)
	see("done too long ago", len(state.Bases) > 0 && state.LastDone < p.AsOf-400)
	logged := slices.ContainsFunc(p.Log, func(e planner.Entry) bool { _, of := e.Of(state.Work.ID); return of })
	see("never done", !logged && state.Status == planner.NotStarted)
}

func seeCounted(p planner.Plan, work planner.SheetWork, see func(string, bool)) {
	state, s := work.State, work.State.Settings
	see("counts "+string(s.Counts), true)
	if s.Counts == planner.ByDegreeDays {
		method, cutoff := s.Method, s.Thresholds.Cutoff
		see("method not said", method == "")
		if method == "" {
			method = "mean"
		}
		if cutoff == "" {
			cutoff = "none"
		}
		see(string(method)+" "+string(cutoff), true)
	}
	see("own mean not said", s.Basis == "" && len(work.Counts) == 2)
	see("setting changed", len(state.Work.Settings) > 1)
	see("season on", s.Season.From.Month != 0)
	see("rests then", state.RestsThen)
	see("season starts empty", s.Season.StartsEmpty && s.Counts == planner.ByNitrogen)
	see("most times", s.Limits.MostTimes > 0)
	see("most total", s.Limits.MostTotal > 0)
	see("latest", s.Latest > 0)
	see("doubtful", state.Doubted != nil)
	see("parts behind", len(state.Behind) > 0)
	see("done ahead", state.LastDone >= p.AsOf)
	see("closed on the date", state.Closed != nil)
	status := map[planner.Status]string{planner.Due: "due", planner.Overdue: "overdue", planner.NotYet: "not yet", planner.DueToday: "today", planner.NoDate: "no date"}[state.Status]
	see(status, status != "")
	feeds := 0
	for _, entry := range p.Log {
		pass, of := entry.Of(state.Work.ID)
		if of && s.Counts == planner.ByNitrogen && pass.NitrogenGM2 > 0 && entry.Result != planner.Lost {
			feeds++
			see("slow feed", pass.SlowShare > 0)
		}
		see("lost", of && entry.Result == planner.Lost)
		see("parts done", of && pass.Part != 0)
		see("watered in", of && s.WateredIn && entry.Watered > entry.Day && entry.Watered == state.LastDone)
		see("other work fed the surface", s.Counts == planner.ByNitrogen && !of && entry.Day == state.LastDone)
	}
	see("several feeds", feeds > 1)
	for _, count := range work.Counts {
		due := count.Due
		see(string(due.Basis), true)
		see("least days hold", due.Held.Known)
		see("reserve not left", due.Target <= 0)
		see("done before the record", due.Since < p.Record.Facts[0].Day)
		see("beyond the sheet", !due.Path.Known)
		from, to := due.Since, p.AsOf-1
		see("past 29 February", dateIn(from, to, time.February, 29))
		see("past a year's end", from <= to && from.Year() < to.Year())
		if told := due.Date(); told.Known {
			see("29 February ahead", dateIn(p.AsOf, told.Day, time.February, 29))
			see("a year's end ahead", told.Day > p.AsOf && p.AsOf.Year() < told.Day.Year())
		}
	}
}

// dateIn reports whether the month and day lie among the days.
func dateIn(from, to planner.Day, month time.Month, date int) bool {
	for day := from; day <= to; day++ {
		if _, m, d := day.Date(); m == month && d == date {
			return true
		}
	}
	return false
}
