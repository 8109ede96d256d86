package briefing

import (
	"fmt"
	"math"
	"strings"
	"time"

	"swardbook/planner"
)

// InTheWay says what holds or flags a work's date: the least days between two
// passes, the most a season, closed days, its season, parts that are behind, a
// doubtful pass. One short line each; none when nothing is in the way.
func InTheWay(state planner.WorkState) []string {
	var lines []string
	add := func(format string, args ...any) { lines = append(lines, fmt.Sprintf(format, args...)) }
	facts, started := state.OwnFacts()
	if started && facts.Held.Known {
		add("count full %s; your %d-day gap holds it to %s", DayMonth(facts.Middle.Day), state.Settings.Limits.LeastDays, facts.Held.Day.Short())
	}
	limits := state.Settings.Limits
	if limits.MostTimes > 0 {
		add("%d of %d times since %s", state.Season.Times, limits.MostTimes, DayMonth(state.Season.Since))
	}
	if limits.MostTotal > 0 {
		add("%s of at most %s given since %s", Plain(state.Season.Given), Plain(limits.MostTotal), DayMonth(state.Season.Since))
		if state.Season.Given > limits.MostTotal {
			add("past your most of a season")
		}
	}
	if state.RestsThen {
		add("rests then: its season ends %s", monthDay(state.Settings.Season.To))
	}
	if closed := state.Closed; closed != nil {
		add("closed then: %s", closed.Why)
		switch {
		case closed.Before.Known && closed.After.Known:
			add("last day before %s, first after %s", DayMonth(closed.Before.Day), DayMonth(closed.After.Day))
		case closed.After.Known:
			add("first day after: %s", closed.After.Day.Short())
		}
	}
	for _, part := range state.Behind {
		add("%s not done yet: the old count stands for it", part)
	}
	if doubted := state.Doubted; doubted != nil {
		add("last pass doubtful; without it: %s", passage(doubted.Date()))
	}
	if hours := state.Settings.RainFreeHours; hours > 0 && isUrgent(state.Status) {
		add("%s rain-free hours after it", Plain(hours))
	}
	if state.Rain != nil {
		lines = append(lines, RainQuestion(*state.Rain), fmt.Sprintf("(entry %d: result:good, doubtful or lost)", state.Rain.Entry))
	}
	if state.AskForgotten {
		add("was it done on or about %s and not logged?", DayMonth(facts.Date().Day))
	}
	return lines
}

// OriginLine says what a work's target was found with, as it does not hold for
// anything else; "" when the lead has not said.
func OriginLine(origin planner.Origin) string {
	var parts []string
	add := func(given bool, format string, value any) {
		if given {
			parts = append(parts, fmt.Sprintf(format, value))
		}
	}
	add(origin.Source != "", "from %s", origin.Source)
	add(origin.Ingredient != "", "%s", origin.Ingredient)
	add(origin.Grass != "", "on %s", origin.Grass)
	add(origin.HeightMM > 0, "at %s mm", Plain(origin.HeightMM))
	if len(parts) == 0 {
		return ""
	}
	return "target " + strings.Join(parts, ", ")
}

// TargetCaution stands where a target is set or changed.
const TargetCaution = "A target holds for the product, grass, height of cut and mean it was found with; it does not transfer."

// RainQuestion asks whether a pass that it rained on still counts.
func RainQuestion(rain planner.RainAfter) string {
	mm := Plain(math.Round(10*rain.MM) / 10)
	if mm == "0" {
		mm = "under 0.1"
	}
	return fmt.Sprintf("%s mm fell %s after: still count it?", mm, soon(rain.First))
}

// soon writes a time within some days: "40 min", "3 h".
func soon(after time.Duration) string {
	if after < 2*time.Hour {
		return fmt.Sprintf("%.0f min", after.Minutes())
	}
	return fmt.Sprintf("%.0f h", after.Hours())
}

// RainNote says what is known of the rain after the entry's pass of a work with
// rain-free hours; "" when there is nothing to say, or it is said already.
func RainNote(settings planner.WorkSettings, entry planner.Entry, plan planner.Plan) string {
	hours := settings.RainFreeHours
	rain, known := plan.RainAfter(entry, hours)
	switch {
	case !(hours > 0) || entry.Result != planner.Good || entry.RainCounts:
		return ""
	case known && rain.Rained():
		return RainQuestion(rain) + "\nif not, say result:doubtful or result:lost"
	case known && rain.Whole:
		return "no rain in its " + Plain(hours) + " rain-free hours"
	case entry.Clock == "" && len(plan.Rain) > 0:
		return Plain(hours) + " rain-free hours: say the time, and the rain is looked up, as in when:\"today 06:10\""
	}
	return Plain(hours) + " rain-free hours: if it rained sooner, amend it with result:doubtful or lost"
}

func passage(p planner.Passage) string {
	if !p.Known {
		return "no date"
	}
	return p.Day.Short()
}

func monthDay(m planner.MonthDay) string { return DayMonth(m.In(2023)) }

// PassNotes say what to check before the entry's pass of the work: how far the
// running count is, the gap to the last pass, the season's limits, closed days,
// much nitrogen. state is the work as it stands without the pass.
func PassNotes(state planner.WorkState, entry planner.Entry, plan planner.Plan) []string {
	day := entry.Day
	pass, _ := entry.Of(state.Work.ID)
	var lines []string
	add := func(format string, args ...any) { lines = append(lines, fmt.Sprintf(format, args...)) }
	facts, started := state.OwnFacts()
	if started && state.Status == planner.NotYet && facts.Target > 0 && day > state.LastDone {
		add("at %.0f %% of the interval: check the label's least gap and season total", 100*facts.Total.Total/facts.Target)
	}
	limits := state.Settings.Limits
	if before, ok := plan.PassBefore(entry, state.Work.ID); ok && before.Day == day {
		add("logged on that day already: entry %d", before.ID)
	} else if gap := int(day - before.Day); ok && gap < limits.LeastDays {
		add("%s after the last: your least is %d", Days(gap), limits.LeastDays)
	}
	if limits.MostTimes > 0 && state.Season.Times+1 > limits.MostTimes {
		add("past your most of %d times a season", limits.MostTimes)
	}
	if pass.NitrogenGM2 > planner.WordGM2 {
		add("%s g N/m² in one pass: nitrogen or product? Check the label", Plain(pass.NitrogenGM2))
	}
	if closed, ok := plan.ClosedOn(state.Work.ID, day); ok {
		add("%s is closed: %s", day.Short(), closed.Name)
	}
	if !state.Settings.Season.On(day) {
		add("out of its season")
	}
	return lines
}

// NitrogenLine is a surface's balance on the mean of its works: what is left,
// what is still to come, the season against its budget.
func NitrogenLine(state planner.NitrogenState, works []planner.WorkState) string {
	own := planner.Basis("")
	for _, work := range works {
		if work.Surface.ID == state.Surface.ID && work.Settings.Counts == planner.ByNitrogen {
			own = work.Own
		}
	}
	facts := state.Bases[0]
	for _, on := range state.Bases {
		if on.Basis == own {
			facts = on
		}
	}
	text := state.Surface.Name + " nitrogen: " + LeftText(facts)
	if state.SlowToComeGM2 > 0.005 {
		text += fmt.Sprintf("\n%s still to come slowly", Digits(state.SlowToComeGM2, planner.NitrogenGM2))
	}
	text += fmt.Sprintf("\nseason so far %s", Digits(state.SeasonGivenGM2, planner.NitrogenGM2))
	if state.BudgetGM2 > 0 {
		text += fmt.Sprintf(" of %s", Plain(state.BudgetGM2))
	}
	return text + "\n" + facts.Basis.Words()
}
