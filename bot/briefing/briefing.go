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
	urgent := false
	for _, state := range ByUrgency(e.Works) {
		blocks = append(blocks, reply.Text(strings.Join(Brief(state, e), "\n")))
		urgent = urgent || isUrgent(state.Status)
	}
	if urgent {
		blocks = append(blocks, reply.Text(Caution))
	}
	if note := AheadNote(e.Outlook); note != "" {
		blocks = append(blocks, reply.Text(note))
	}
	return blocks
}

// Caution stands under work that is due: Swardbook plans dates, no more.
const Caution = "Label, local rules and the state of the turf come first: /help cautions"

func isUrgent(status planner.Status) bool {
	return status == planner.Overdue || status == planner.Due || status == planner.DueToday
}

// ByUrgency orders works: overdue, due, due today, then by date, then those
// without a date or without a first entry.
func ByUrgency(states []planner.WorkState) []planner.WorkState {
	order := []planner.Status{planner.Overdue, planner.Due, planner.DueToday, planner.NotYet, planner.NoDate, planner.NotStarted}
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

// Brief is a work in two to four short lines: when, how sure, how far the
// count is, and the other mean's date where it differs.
func Brief(state planner.WorkState, e planner.Evaluation) []string {
	facts, started := state.OwnFacts()
	if !started {
		return []string{Title(state) + ": not started", "log the last one with /done"}
	}
	lines := []string{Title(state) + ": " + When(state, e.AsOf)}
	if sure := HowSure(facts, e.AsOf); sure != "" {
		lines = append(lines, sure)
	}
	lines = append(lines, Progress(state, facts, e))
	if other := OtherMean(state, e.AsOf); other != "" {
		lines = append(lines, other)
	}
	return lines
}

// When says when the work falls or fell due.
func When(state planner.WorkState, asOf planner.Day) string {
	facts, started := state.OwnFacts()
	date := facts.Date()
	switch {
	case !started:
		return "not started"
	case !date.Known:
		return "no date within a year"
	case state.Status == planner.Overdue:
		return "OVERDUE since " + date.Day.Short()
	case state.Status == planner.Due:
		return "due since " + date.Day.Short()
	case state.Status == planner.DueToday:
		return "due today"
	}
	return fmt.Sprintf("in %s, %s", Days(int(date.Day-asOf)), date.Day.Short())
}

// HowSure says between which dates the due date is likely to fall; "" once it
// has passed, or when early and late are one day.
func HowSure(facts planner.DueFacts, asOf planner.Day) string {
	date := facts.Date()
	switch {
	case date.Known && date.Day < asOf, facts.Basis == planner.NoBasis:
		return ""
	case !facts.SpreadKnown:
		return "no spread known"
	case !facts.Early.Known:
		return ""
	case !facts.Late.Known:
		return "at the earliest " + facts.Early.Day.Short()
	case facts.Early.Day == facts.Late.Day:
		return ""
	}
	return "likely " + facts.Early.Day.Short() + " to " + facts.Late.Day.Short()
}

// Progress says how far the count is, with unit, base and mean.
func Progress(state planner.WorkState, facts planner.DueFacts, e planner.Evaluation) string {
	total := Amount(facts.Total.Total, state.Unit, e.Site.Units)
	if facts.Total.Missing > 0 {
		total = "at least " + total
	}
	target, unit := e.Site.Units.Show(facts.Target, state.Unit)
	text := fmt.Sprintf("%s of %s %s", total, Digits(target, state.Unit), unit)
	if state.Settings.Counts == planner.ByNitrogen {
		left, _ := e.Site.Units.Show(facts.Target-facts.Total.Total, state.Unit)
		text = fmt.Sprintf("%s %s left to use", Digits(left, state.Unit), unit)
	}
	if base := Base(state.Settings.Counting, e.Site.Units); base != "" {
		text += " " + base
	}
	if state.Status == planner.DueToday {
		text += " through yesterday, today should fill it"
	}
	if facts.Basis != planner.NoBasis {
		text += ", " + facts.Basis.Words()
	}
	return text + notes(facts.Total.Notes())
}

// OtherMean gives the date on the other mean where it differs.
func OtherMean(state planner.WorkState, asOf planner.Day) string {
	own, _ := state.OwnFacts()
	other, ok := state.OtherFacts()
	if !ok || own.Date() == other.Date() {
		return ""
	}
	if !other.Date().Known {
		return other.Basis.Words() + ": no date"
	}
	return other.Basis.Words() + ": " + other.Date().Day.Short()
}

// Base names the base of a degree-day count and its upper limit, in the site's
// unit.
func Base(counting planner.Counting, units planner.Units) string {
	if counting.Counts != planner.ByDegreeDays {
		return ""
	}
	return "base " + Digits(units.Temperature(counting.Thresholds.LowerC), planner.Count)
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

func notes(list []string) string {
	if len(list) == 0 {
		return ""
	}
	return " (" + strings.Join(list, "; ") + ")"
}

// Days writes a number of days.
func Days(n int) string {
	if n == 1 {
		return "1 day"
	}
	return fmt.Sprintf("%d days", n)
}
