// Package briefing puts figures into words: the morning post, and the lines
// about works that other replies share.
//
// It must not know how a reply is shown or where figures come from, and it
// computes none: everything it says is read from an evaluation.
package briefing

import (
	"fmt"
	"slices"
	"strings"

	"swardbook/bot/reply"
	"swardbook/planner"
)

// Morning composes the morning post: work first, figures last, every line at
// most 34 columns once shown on a phone.
func Morning(e planner.Evaluation) reply.Reply {
	r := reply.Of(reply.Heading(e.Site.Name + ", " + e.AsOf.Short()))
	r.Add(workBlocks(e)...)
	r.Add(yesterdayBlocks(e)...)
	for _, nitrogen := range e.Nitrogen {
		r.Add(reply.Text(NitrogenLine(nitrogen, e.Works)))
	}
	r.Add(totalBlocks(e)...)
	r.Figures = e.Figures()
	return r
}

// workBlocks lists every work, the most urgent first.
func workBlocks(e planner.Evaluation) []reply.Block {
	if len(e.Works) == 0 {
		return []reply.Block{reply.Text("No work is set up yet: /help start")}
	}
	var blocks []reply.Block
	for _, closed := range e.Closed {
		blocks = append(blocks, reply.Text("Closed today: "+closed.Name))
	}
	urgent := false
	for _, state := range ByUrgency(e.Works) {
		blocks = append(blocks, reply.Text(strings.Join(Brief(state, e), "\n")))
		urgent = urgent || isUrgent(state.Status)
	}
	if urgent {
		blocks = append(blocks, reply.Text(Cautions(e.Works)))
	}
	if note := AheadNote(e.Outlook); note != "" {
		blocks = append(blocks, reply.Text(note))
	}
	return blocks
}

// Caution stands under work that is due: Swardbook plans dates, no more.
const Caution = "Label, local rules and the state of the turf come first: /help cautions"

// FeedCaution stands under a feed that is due.
const FeedCaution = "No feed on frozen, saturated, dormant or drought-browned turf, nor before heavy rain."

// Cautions are the cautions that go with the works that are due.
func Cautions(states []planner.WorkState) string {
	text := Caution
	for _, state := range states {
		if isUrgent(state.Status) && state.Settings.Counts == planner.ByNitrogen {
			return text + "\n" + FeedCaution
		}
	}
	return text
}

func isUrgent(status planner.Status) bool {
	return status == planner.Overdue || status == planner.Due || status == planner.DueToday
}

// ByUrgency orders works: overdue, due, due today, then by date, then those
// without a date or without a first entry.
func ByUrgency(states []planner.WorkState) []planner.WorkState {
	order := []planner.Status{planner.Overdue, planner.Due, planner.DueToday, planner.NotYet, planner.NoDate,
		planner.Full, planner.NotStarted, planner.Resting}
	sorted := slices.Clone(states)
	slices.SortStableFunc(sorted, func(a, b planner.WorkState) int {
		if d := slices.Index(order, a.Status) - slices.Index(order, b.Status); d != 0 {
			return d
		}
		return int(dateOf(a) - dateOf(b))
	})
	return sorted
}

func dateOf(state planner.WorkState) planner.Day {
	facts, _ := state.OwnFacts()
	return facts.Date().Day
}

// Title names a work with its surface.
func Title(state planner.WorkState) string { return state.Surface.Name + " " + state.Work.Name }

// Brief is a work in three or four short lines: when, how sure, how far the
// count is, on which mean, and the other mean's date where it differs.
func Brief(state planner.WorkState, e planner.Evaluation) []string {
	facts, started := state.OwnFacts()
	switch {
	case state.Status == planner.Resting && state.Resumes.Known:
		return []string{Title(state) + ": resting", "on again " + state.Resumes.Day.Short()}
	case state.Status == planner.Resting:
		return []string{Title(state) + ": resting"}
	case !started:
		return append([]string{Title(state) + ": not started", "log the last one with /done"}, InTheWay(state)...)
	}
	lines := []string{Title(state) + ": " + headline(state, facts)}
	if soon := soonAndSure(state, facts, e.AsOf); soon != "" && state.Status != planner.Full {
		lines = append(lines, soon)
	}
	lines = append(lines, Progress(state, facts, e))
	if mean := whichMean(state, facts); mean != "" {
		lines = append(lines, mean)
	}
	lines = append(lines, facts.Total.Notes()...)
	return append(lines, InTheWay(state)...)
}

// headline is the date, or how the work stands.
func headline(state planner.WorkState, facts planner.DueFacts) string {
	switch state.Status {
	case planner.Overdue:
		return "OVERDUE"
	case planner.Due:
		return "due"
	case planner.DueToday:
		return "due today"
	case planner.NoDate:
		return "no date"
	case planner.Full:
		return "season's most reached"
	}
	return facts.Date().Day.Short()
}

// dated writes a day with its year where that is not the morning's.
func dated(day, asOf planner.Day) string {
	if day.Year() == asOf.Year() {
		return day.Short()
	}
	return fmt.Sprintf("%s %d", day.Short(), day.Year())
}

func soonAndSure(state planner.WorkState, facts planner.DueFacts, asOf planner.Day) string {
	date := facts.Date()
	switch {
	case !date.Known:
		return "not within a year"
	case date.Day < asOf:
		return fmt.Sprintf("since %s, %s ago", dated(date.Day, asOf), Days(int(asOf-date.Day)))
	}
	sure := HowSure(facts, asOf)
	if date.Day == asOf {
		return sure
	}
	text := "in " + Days(int(date.Day-asOf))
	if sure != "" {
		text += ", " + sure
	}
	return text
}

// whichMean says which mean the date stands on, and the other mean's date
// where it differs.
func whichMean(state planner.WorkState, facts planner.DueFacts) string {
	if facts.Basis == planner.NoBasis {
		return ""
	}
	text := facts.Basis.Words()
	other, ok := state.OtherFacts()
	switch {
	case !ok || facts.Date() == other.Date():
		return text
	case !other.Date().Known:
		return text + "; " + shortBasis(other.Basis) + ": no date"
	}
	return text + "; " + shortBasis(other.Basis) + ": " + DayMonth(other.Date().Day)
}

// shortBasis names a mean beside the other one.
func shortBasis(basis planner.Basis) string { return strings.TrimSuffix(basis.Words(), " mean") }

// DayMonth writes a day without its weekday: "4 Jun".
func DayMonth(day planner.Day) string {
	_, text, _ := strings.Cut(day.Short(), " ")
	return text
}

// When says when the work falls or fell due.
func When(state planner.WorkState, asOf planner.Day) string {
	facts, started := state.OwnFacts()
	switch date := facts.Date(); {
	case state.Status == planner.Resting:
		return "resting"
	case !started:
		return "not started"
	case state.Status == planner.Full:
		return "season's most reached"
	case !date.Known:
		return "no date within a year"
	case date.Day < asOf:
		return "due since " + date.Day.Short()
	case date.Day == asOf:
		return "due today"
	default:
		return fmt.Sprintf("%s, in %s", date.Day.Short(), Days(int(date.Day-asOf)))
	}
}

// farAhead is how many days ahead a date means little without past years to
// tell the season by (common practice: weather is foretold for two weeks).
const farAhead = 30

// HowSure says between which dates the due date is likely to fall; "" once it
// has passed, when early and late are one day, and when it is not the count that
// decides it but the least days between.
func HowSure(facts planner.DueFacts, asOf planner.Day) string {
	date := facts.Date()
	switch {
	case date.Known && date.Day < asOf, facts.Basis == planner.NoBasis, facts.Held.Known:
		return ""
	case !facts.SpreadKnown && date.Known && date.Day > asOf+farAhead:
		return "a mere guess so far ahead"
	case !facts.SpreadKnown:
		return "no spread known"
	case !facts.Early.Known:
		return ""
	case !facts.Late.Known:
		return DayMonth(facts.Early.Day) + " at the earliest"
	case facts.Early.Day == facts.Late.Day:
		return ""
	}
	early, late := DayMonth(facts.Early.Day), DayMonth(facts.Late.Day)
	if early[strings.IndexByte(early, ' '):] == late[strings.IndexByte(late, ' '):] {
		early = early[:strings.IndexByte(early, ' ')]
	}
	return "likely " + early + " to " + late
}

// Progress says how far the count is, with unit and base.
func Progress(state planner.WorkState, facts planner.DueFacts, e planner.Evaluation) string {
	units := e.Site.Units
	total := Amount(facts.Total.Total, state.Unit, units)
	if facts.Total.Missing > 0 {
		total = "at least " + total
	}
	target, unit := units.Show(facts.Target, state.Unit)
	if state.Unit == planner.Days && target == 1 {
		unit = "day"
	}
	text := fmt.Sprintf("%s of %s %s", total, Plain(target), unit)
	if balance, ok := balanceOf(state, facts.Basis, e); ok {
		text = LeftText(balance)
		if reserve := state.Settings.Target; reserve > 0 {
			text += ", reserve " + Plain(reserve)
		}
	}
	if base := Base(state.Settings.Counting, units); base != "" {
		text += " " + base
	}
	if state.Status == planner.DueToday && !facts.Held.Known {
		does := "fill it"
		if state.Settings.Counts == planner.ByNitrogen {
			does = "use it up"
		}
		text += ", today should " + does
	}
	return text
}

// balanceOf is the nitrogen balance of the work's surface on the basis; ok is
// false for a work that does not count by nitrogen.
func balanceOf(state planner.WorkState, basis planner.Basis, e planner.Evaluation) (planner.NitrogenFacts, bool) {
	for _, nitrogen := range e.Nitrogen {
		for _, facts := range nitrogen.Bases {
			if state.Settings.Counts == planner.ByNitrogen && nitrogen.Surface.ID == state.Surface.ID && facts.Basis == basis {
				return facts, true
			}
		}
	}
	return planner.NitrogenFacts{}, false
}

// LeftText says what is left of a balance through yesterday, or short. Missing
// days used some too: then that much is left at most, or short at least.
func LeftText(facts planner.NitrogenFacts) string {
	text, bound := fmt.Sprintf("%s g N/m² left", Digits(facts.LeftGM2, planner.NitrogenGM2)), " at most"
	if facts.LeftGM2 < 0 {
		text, bound = fmt.Sprintf("%s g N/m² short", Digits(-facts.LeftGM2, planner.NitrogenGM2)), " at least"
	}
	if facts.Used.Missing > 0 {
		text += bound
	}
	return text
}

// Base names the base of a degree-day count and its upper limit, in the site's
// unit.
func Base(counting planner.Counting, units planner.Units) string {
	if counting.Counts != planner.ByDegreeDays {
		return ""
	}
	return "base " + Plain(units.Temperature(counting.Thresholds.LowerC))
}

// AheadNote says what the days ahead stand on.
func AheadNote(outlook planner.Outlook) string {
	var parts []string
	if outlook.Typed > 0 {
		parts = append(parts, Days(outlook.Typed)+" typed by hand")
	}
	switch {
	case outlook.Years > 1:
		parts = append(parts, fmt.Sprintf("%d past years", outlook.Years))
	case outlook.Years == 1:
		parts = append(parts, "one past year, no spread known")
	default:
		parts = append(parts, "the last 14 days' mean, no spread known")
	}
	return "Days ahead: " + strings.Join(parts, ", then ") + "."
}

// Days writes a number of days.
func Days(n int) string {
	if n == 1 {
		return "1 day"
	}
	return fmt.Sprintf("%d days", n)
}
