package briefing

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"swardbook/bot/reply"
	"swardbook/planner"
)

// decimals says how many decimals a figure is told with. Text is a rounding of
// the figure; the figure itself is kept whole.
func decimals(unit planner.Unit) int {
	switch unit {
	case planner.DegreesC, planner.DifferenceC, planner.GrowthDays:
		return 1
	case planner.NitrogenGM2:
		return 2
	default:
		return 0
	}
}

// Digits writes a value already in the site's unit with the decimals its unit
// is told with.
func Digits(shown float64, unit planner.Unit) string {
	text := strconv.FormatFloat(shown, 'f', decimals(unit), 64)
	if strings.Trim(text, "-0.") == "" {
		return strings.TrimPrefix(text, "-") // never "-0"
	}
	return text
}

// Plain writes a value that was typed, such as a target or a base, with at most
// two decimals and no spare zeros.
func Plain(value float64) string {
	return strconv.FormatFloat(math.Round(value*100)/100+0, 'f', -1, 64)
}

// Amount writes a figure in the site's unit, without the unit.
func Amount(value float64, unit planner.Unit, units planner.Units) string {
	shown, _ := units.Show(value, unit)
	return Digits(shown, unit)
}

// yesterdayBlocks tell the last day of the record: high and low, both means,
// what is missing or doubtful, growth potential of each surface.
func yesterdayBlocks(e planner.Evaluation) []reply.Block {
	y, units := e.Yesterday, e.Site.Units
	blocks := []reply.Block{reply.Heading("Yesterday, " + y.Day.Short())}
	blocks = append(blocks, DayFields(y.DayFacts, units))
	if y.Empty() {
		return blocks
	}
	if note := DayNote(y.DayFacts); note != "" {
		blocks = append(blocks, reply.Text(note))
	}
	if y.HasExtremes && y.LowC < planner.WhiteFrostC {
		blocks = append(blocks, reply.Text("Low near or below freezing: grass can be white with frost while the air is a few degrees above. Keep traffic off frozen turf."))
	}
	if len(y.Growth) > 0 {
		blocks = append(blocks, growthTable(y))
	}
	return blocks
}

// DayFields are the high, the low and both means of a day.
func DayFields(day planner.DayFacts, units planner.Units) reply.Fields {
	show := func(c float64) string { return Amount(c, planner.DegreesC, units) + " " + units.Degree() }
	missing := "missing"
	fields := reply.Fields{{Name: "high", Value: missing}, {Name: "low", Value: missing}}
	if day.HasExtremes {
		fields[0].Value, fields[1].Value = show(day.HighC), show(day.LowC)
	}
	for _, basis := range []planner.Basis{planner.Hourly, planner.Midrange} {
		value := missing
		if meanC, known := day.Mean(basis); known {
			value = show(meanC)
		}
		fields = append(fields, reply.Field{Name: basis.Words(), Value: value})
	}
	return fields
}

// DayNote says what a day's figures rest on where it is not simply 24 readings
// and the station's own extremes; "" when there is nothing to say.
func DayNote(day planner.DayFacts) string {
	note := ""
	add := func(format string, args ...any) {
		if note != "" {
			note += " "
		}
		note += fmt.Sprintf(format, args...)
	}
	switch {
	case day.Published:
		add("24-hour mean as the station gives it.")
	case day.SlotsReal > 0 && day.SlotsReal < day.SlotsWanted:
		add("%d of %d readings, %d bridged.", day.SlotsReal, day.SlotsWanted, day.SlotsBridged)
	}
	if day.ExtremesFrom == planner.FromHourly {
		add("High and low are of the readings.")
	}
	if day.Doubt != "" {
		add("Doubtful: %s.", day.Doubt)
	}
	switch {
	case day.Other != "" && day.OtherDays > 0:
		add("From %s, its mean difference over %d days taken off.", day.Other, day.OtherDays)
	case day.Other != "":
		add("From %s, as measured there.", day.Other)
	}
	return note
}

func growthTable(y planner.Yesterday) reply.Table {
	table := reply.Table{
		Title:   "Growth potential",
		Columns: []reply.Column{reply.Left("surface"), reply.Right("24-hour"), reply.Right("high/low")},
	}
	for _, growth := range y.Growth {
		row := []string{growth.Surface.Name}
		for _, basis := range []planner.Basis{planner.Hourly, planner.Midrange} {
			cell := "-"
			if gp, ok := growth.Means[basis]; ok {
				cell = Amount(gp, planner.Share, planner.Celsius) + " %"
			}
			row = append(row, cell)
		}
		table.Rows = append(table.Rows, row)
	}
	return table
}

// totalBlocks tell the season totals on both means.
func totalBlocks(e planner.Evaluation) []reply.Block {
	if len(e.Totals) == 0 {
		return nil
	}
	table := reply.Table{
		Title:   "Season totals",
		Columns: []reply.Column{reply.Left("total"), reply.Right("24-hour"), reply.Right("high/low")},
	}
	blocks := []reply.Block{}
	for _, state := range e.Totals {
		table.Rows = append(table.Rows, TotalRow(state, e.Site.Units))
		blocks = append(blocks, reply.Text(TotalNote(state, e.Site.Units)))
		for _, mark := range state.Marks {
			if line := MarkLine(state, mark, e); line != "" {
				blocks = append(blocks, reply.Text(line))
			}
		}
	}
	return append([]reply.Block{table}, blocks...)
}

// TotalRow is a season total's name and its sum on either mean; "-" where the
// other mean stands in on every day. A total that stands on neither mean has
// its one sum in the first place.
func TotalRow(state planner.TotalState, units planner.Units) []string {
	if len(state.Bases) == 1 {
		return []string{state.Total.Name, SumText(state.Bases[0].Sum, state.Unit, units), "-"}
	}
	row := []string{state.Total.Name}
	for _, facts := range state.Bases {
		cell := "-"
		if !facts.Sum.AllStandIn() {
			cell = SumText(facts.Sum, state.Unit, units)
		}
		row = append(row, cell)
	}
	return row
}

// SumText writes a sum; one with days missing has a plus behind it, which the
// notes explain.
func SumText(sum planner.Sum, unit planner.Unit, units planner.Units) string {
	text := Amount(sum.Total, unit, units)
	if sum.Missing > 0 {
		text += "+"
	}
	return text
}

// TotalNote says since when a total runs, its unit and base, and what it rests
// on.
func TotalNote(state planner.TotalState, units planner.Units) string {
	_, unit := units.Show(0, state.Unit)
	text := fmt.Sprintf("%s: %s", state.Total.Name, unit)
	if base := Base(state.Settings.Counting, units); base != "" {
		text += " " + base
	}
	text += " since " + DayMonth(state.Start)
	if len(state.Bases) == 1 {
		text += ", " + state.Bases[0].Basis.Words()
	}
	return strings.Join(append([]string{text}, sumNotes(state.Bases)...), "\n")
}

// sumNotes are the notes of the sums that are shown; where the two means differ
// in them each says its own.
func sumNotes(bases []planner.TotalFacts) []string {
	var shown []planner.TotalFacts
	for _, facts := range bases {
		if !facts.Sum.AllStandIn() {
			shown = append(shown, facts)
		}
	}
	if len(shown) == 0 {
		return nil
	}
	first := shown[0].Sum.Notes()
	if len(shown) == 1 || slices.Equal(first, shown[1].Sum.Notes()) {
		return first
	}
	var notes []string
	for _, facts := range shown {
		for _, note := range facts.Sum.Notes() {
			notes = append(notes, shortBasis(facts.Basis)+": "+note)
		}
	}
	return notes
}

// MarkLine says when a season total reaches a mark, on the 24-hour mean where
// the total has it; "" for a mark passed more than a week ago.
func MarkLine(state planner.TotalState, mark planner.MarkState, e planner.Evaluation) string {
	facts := mark.Bases[0]
	if facts.Total.AllStandIn() {
		facts = mark.Bases[len(mark.Bases)-1]
	}
	at, _ := e.Site.Units.Show(mark.Mark.At, state.Unit)
	text := fmt.Sprintf("%s (%s at %s): ", mark.Mark.Name, state.Total.Name, Plain(at))
	date := facts.Date()
	switch {
	case !date.Known:
		return text + "not within a year"
	case e.AsOf-date.Day > 7:
		return ""
	case date.Day < e.AsOf:
		return text + "passed " + date.Day.Short()
	case date.Day == e.AsOf:
		text += "today"
	default:
		text += date.Day.Short()
	}
	if sure := HowSure(facts, e.AsOf); sure != "" {
		text += ", " + sure
	}
	return text + ", " + facts.Basis.Words()
}
