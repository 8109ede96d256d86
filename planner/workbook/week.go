package workbook

import (
	"fmt"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"

	"github.com/xuri/excelize/v2"

	"swardbook/planner"
)

const (
	weekHead     = 3
	mostSurfaces = 3 // with a growth column in the week
	mostCounts   = 2 // works with a degree-day column in the week
	// Widths of columns, in letters: of days and names, and of words.
	nameWide, wordsWide = 17, 21
)

// ownCount is the count of a work on its own mean.
func ownCount(work planner.SheetWork) int {
	for i, count := range work.Counts {
		if count.Due.Basis == work.State.Own {
			return i
		}
	}
	return 0
}

// week writes the sheet that is pinned up: key numbers, then a row a day. On a
// phone the first three columns are seen: what is to be done stands in them, and
// the weather behind it.
func (b *book) week(p *page) error {
	const narrow = 10.5
	wides := append([]float64{nameWide, wordsWide, wordsWide, 12, 7, 18, 9, 9, 11, 11}, slices.Repeat([]float64{narrow}, b.weekColumns()-weatherEnd)...)
	for len(wides) < productColumn+1 {
		wides = append(wides, narrow)
	}
	for i, wide := range wides {
		if err := p.SetColWidth(i+1, i+1, wide); err != nil {
			return err
		}
	}
	if err := p.SetPanes(&excelize.Panes{Freeze: true, XSplit: 1, YSplit: 1, TopLeftCell: "B2", ActivePane: "bottomRight"}); err != nil {
		return err
	}
	if _, err := p.add(b.value(title, fmt.Sprintf("%s, %s to %s", b.Plan.Site.Name, b.Plan.AsOf.Short(), (b.Plan.AsOf+planner.Day(7*b.Weeks-1)).Short()))); err != nil {
		return err
	}
	if _, err := p.add(b.value(small, "Readings through "+(b.Plan.AsOf-1).Short()+". "+b.Ahead)); err != nil {
		return err
	}
	if err := b.keyRows(p); err != nil {
		return err
	}
	if _, err := p.add(); err != nil {
		return err
	}
	if _, err := p.tall(b.heads(b.weekHeads()...)...); err != nil {
		return err
	}
	first := p.row + 1
	for i := range 7 * b.Weeks {
		if _, err := p.wrapped(handHeight, wordsWide, b.weekRow(p.row+1, i)...); err != nil {
			return err
		}
	}
	done, notes := "E", "F"
	if err := p.takes(done, first, p.row, texts(20), "Tick it when it is done."); err != nil {
		return err
	}
	if err := p.takes(notes, first, p.row, texts(500), "Room for notes."); err != nil {
		return err
	}
	_, err := p.add(b.value(small, b.Caution))
	return err
}

// The columns of the key numbers that are wider than one: what a count is in, E
// and F, and the product, K to the last.
const (
	unitColumn    = 5
	weatherEnd    = 10 // of the days: the last column but growth and degree days
	productColumn = 11
)

// weekEnd is the last column of the week.
func (b *book) weekEnd() int { return max(b.weekColumns(), productColumn+1) }

// keyRows write a row for each work.
func (b *book) keyRows(p *page) error {
	rows := [][]any{b.keyCells(head, b.heads("work", "due", "how it stood that morning", "days until", "counted in", "total", "target", "early", "late", "product for the surface"))}
	for _, state := range b.Evaluation.Works {
		rows = append(rows, b.keyCells(plainText, b.keyRow(state)))
	}
	for i, cells := range rows {
		least := float64(lineHeight)
		if i > 0 { // a name has one column
			name := fmt.Sprint(cells[0].(excelize.Cell).Value)
			least = max(handHeight, float64(lineHeight*((utf8.RuneCountInString(name)+nameWide-1)/nameWide)))
		}
		row, err := p.wrapped(least, wordsWide-2, cells...)
		if err != nil {
			return err
		}
		for _, span := range [][2]int{{unitColumn, unitColumn + 1}, {productColumn, b.weekEnd()}} {
			if err := p.MergeCell(fmt.Sprintf("%s%d", column(span[0]), row), fmt.Sprintf("%s%d", column(span[1]), row)); err != nil {
				return err
			}
		}
	}
	return nil
}

// keyCells puts the cells of a key row into their columns, the rest empty.
func (b *book) keyCells(look style, cells []any) []any {
	row := slices.Insert(cells, unitColumn, any(b.value(look, "")))
	for len(row) < b.weekEnd() {
		row = append(row, b.value(look, ""))
	}
	return row
}

// keyRow is how one work stands, read from the sheet works and log.
func (b *book) keyRow(state planner.WorkState) []any {
	name, stands, blank := b.value(plainText, state.Surface.Name+" "+state.Work.Name), b.value(plainText, b.stands(state)), b.value(plainText, "")
	for w, work := range b.Data.Works {
		if work.State.Work.ID != state.Work.ID {
			continue
		}
		c := ownCount(work)
		due, row := work.Counts[c].Due, b.at.works[w].counts[c].row
		from := func(col string) string { return fmt.Sprintf("'%s'!%s%d", worksSheet, col, row) }
		told, until := any(seasonsMost), any("")
		if date := due.Date(); state.Status != planner.Full {
			told = passageCell(date)
			if date.Known {
				until = float64(date.Day - b.Plan.AsOf)
			}
		}
		unit := b.units.Counted(state.Unit, state.Settings.Counting)
		if due.Basis != planner.NoBasis {
			unit += ", " + due.Basis.Words()
		}
		cells := []any{name, b.live(strong, from("Q"), told), stands, b.live(whole, from("R"), until), b.value(plainText, unit),
			b.live(oneDecimal, from("K"), b.show(work.Counts[c].Through, state.Unit)), b.live(oneDecimal, from("L"), b.show(due.Target, state.Unit))}
		for i, passage := range []planner.Passage{due.Early, due.Late} {
			switch {
			case state.Status == planner.Full:
				cells = append(cells, blank)
			case !due.SpreadKnown:
				cells = append(cells, b.value(plainText, "not known"))
			default:
				cells = append(cells, b.live(date, from([]string{"N", "P"}[i]), passageCell(passage)))
			}
		}
		return append(cells, b.live(plainText, b.rateText(work, row), b.rateWords(work)))
	}
	cells := []any{name, blank, stands, blank, blank, blank, blank, blank, blank, blank}
	if facts, started := state.OwnFacts(); started && facts.Date().Known && state.Status != planner.Full {
		// Last done before the sheet's days: the date is as issued.
		cells[1], cells[3] = b.value(strong, serial(facts.Date().Day)), b.value(whole, float64(facts.Date().Day-b.Plan.AsOf))
	}
	return cells
}

// leftOut are the rows of the key numbers of works that are due and whose
// count begins before the days of the sheet.
func (b *book) leftOut() (rows []string, names string) {
	for i, state := range b.Evaluation.Works {
		facts, started := state.OwnFacts()
		counted := slices.ContainsFunc(b.Data.Works, func(work planner.SheetWork) bool { return work.State.Work.ID == state.Work.ID })
		if date := facts.Date(); started && !counted && date.Known && date.Day <= b.Plan.AsOf && state.Status != planner.Full {
			rows = append(rows, strconv.Itoa(weekHead+1+i))
			names += between + state.Surface.Name + " " + state.Work.Name
		}
	}
	return rows, names
}

// stands says how the work stood on the morning, and what is in the way of its
// date.
func (b *book) stands(state planner.WorkState) string {
	facts, started := state.OwnFacts()
	switch {
	case state.Status == planner.Resting && state.Resumes.Known:
		return "resting; on again " + state.Resumes.Day.Short()
	case state.Status == planner.Resting:
		return "resting"
	case !started:
		return "not started: log the last one"
	}
	text := string(state.Status)
	switch state.Status {
	case planner.Full:
		text = seasonsMost
	case planner.DueToday:
		text = "due today"
	}
	if state.LastDone < b.firstDay() {
		text += "; last done " + state.LastDone.String() + ", before this sheet"
	}
	if facts.Held.Known {
		text += fmt.Sprintf("; held by the %d days between", state.Settings.Limits.LeastDays)
	}
	if state.RestsThen {
		text += "; its season ends before"
	}
	if closed := state.Closed; closed != nil {
		text += "; closed then: " + closed.Why
		if closed.Before.Known {
			text += ", open " + closed.Before.Day.Short()
		}
		if closed.After.Known {
			text += ", again from " + closed.After.Day.Short()
		}
	}
	if len(state.Behind) > 0 {
		text += "; not done yet: " + strings.Join(state.Behind, ", ")
	}
	if state.Doubted != nil {
		text += "; last pass doubtful"
	}
	return text
}

// firstDay is the first day of the sheet.
func (b *book) firstDay() planner.Day {
	if len(b.Data.Days) == 0 {
		return b.Plan.AsOf
	}
	return b.Data.Days[0].Facts.Day
}

// degreeDayWorks are the places of the works with a column in the week.
func (b *book) degreeDayWorks() []int {
	var works []int
	for w, work := range b.Data.Works {
		if work.State.Settings.Counts == planner.ByDegreeDays && len(works) < mostCounts {
			works = append(works, w)
		}
	}
	return works
}

// weekSurfaces are the surfaces with a growth column in the week.
func (b *book) weekSurfaces() []planner.Surface {
	return b.Plan.Surfaces[:min(len(b.Plan.Surfaces), mostSurfaces)]
}

// weekColumns is how many columns the days of the week have.
func (b *book) weekColumns() int { return weatherEnd + len(b.weekSurfaces()) + len(b.degreeDayWorks()) }

func (b *book) weekHeads() []string {
	heads := []string{"day", "falls due", "product", "closed", "done", "notes", "high " + b.units.Degree(), "low " + b.units.Degree(), "24-hour mean", "high/low mean"}
	for _, surface := range b.weekSurfaces() {
		heads = append(heads, surface.Name+" growth")
	}
	for _, w := range b.degreeDayWorks() {
		state := b.Data.Works[w].State
		heads = append(heads, fmt.Sprintf("%s %s, %s-days", state.Surface.Name, state.Work.Name, b.units.Degree()))
	}
	return heads
}

// weekRow is one day of the week.
func (b *book) weekRow(row, i int) []any {
	day := b.Plan.AsOf + planner.Day(i)
	at := 0
	if len(b.Data.Days) > 0 {
		at = int(day - b.Data.Days[0].Facts.Day)
	}
	facts := planner.DayFacts{Day: day}
	inside := at < len(b.Data.Days)
	if inside {
		facts = b.Data.Days[at].Facts
	}
	lookup := func(cells string) string {
		found := fmt.Sprintf("INDEX(%s,MATCH(A%d,d_date,0))", cells, row)
		return fmt.Sprintf(`IF(COUNT(%[1]s)=1,%[1]s,"")`, found)
	}
	t := b.units.Temperature
	mid, hasMid := facts.Mean(planner.Midrange)
	cells := []any{b.value(date, serial(day)), b.fallsDue(row, i, day), b.onDay(row, i, day, "AG", b.productWords),
		b.value(plainText, b.closedOn(day)), b.value(room, "☐"), b.value(room, ""),
		b.live(oneDecimal, lookup("d_high"), orBlank(t(facts.HighC), facts.HasExtremes)),
		b.live(oneDecimal, lookup("d_low"), orBlank(t(facts.LowC), facts.HasExtremes)),
		b.live(oneDecimal, lookup("d_mean"), orBlank(t(facts.HourlyC), facts.HasHourly)),
		b.live(oneDecimal, lookup(b.dayRange("E")), orBlank(t(mid), hasMid))}
	basis := planner.Midrange
	if b.Plan.Record.HasHourly() {
		basis = planner.Hourly
	}
	for _, surface := range b.weekSurfaces() {
		gp := 0.0
		meanC, known := facts.Mean(basis)
		if !known {
			meanC, known = facts.Mean(basis.Other())
		}
		if value, err := surface.Turf.On(day).Curve.Potential(meanC); err == nil && known {
			gp = value
		}
		cells = append(cells, b.live(percent, lookup(b.dayRange(b.at.growth[surface.ID][basis])), orBlank(gp, inside)))
	}
	for _, w := range b.degreeDayWorks() {
		work := b.Data.Works[w]
		count := work.Counts[ownCount(work)]
		units := 0.0
		if inside {
			units = b.show(count.Units[at], work.State.Unit)
		}
		cells = append(cells, b.live(oneDecimal, lookup(countName(work, count, "units")), orBlank(units, inside)))
	}
	return cells
}

// fallsDue names the works due on the day, on the first day also those that were
// due before, works left out of the sheet among them.
func (b *book) fallsDue(row, i int, day planner.Day) excelize.Cell {
	if i > 0 {
		return b.onDay(row, i, day, "AF", workWords)
	}
	rows, names := b.leftOut()
	for i, row := range rows {
		rows[i] = fmt.Sprintf(`%q&$A$%s`, between, row)
	}
	return b.onDay(row, i, day, "AF", workWords, joined{rows, names})
}

// longestFormula is what a spreadsheet program takes as one formula.
const longestFormula = 8192

// joined are parts of a formula that joins words, and what they say.
type joined struct {
	parts []string
	said  string
}

// onDay joins the words of the works due on the day, on the first day also of
// those due before. The words are read from a column of works and log, never
// written into the formula. Of more works than a formula can name, some hundred,
// they are as issued.
func (b *book) onDay(row, i int, day planner.Day, col string, words func(planner.SheetWork) string, more ...joined) excelize.Cell {
	var parts []string
	said, compare := "", "="
	if i == 0 {
		compare = "<="
	}
	for w, work := range b.Data.Works {
		c := ownCount(work)
		at := b.at.works[w].counts[c].row
		parts = append(parts, fmt.Sprintf(`IFERROR(IF('%[1]s'!Q%[2]d%[3]s$A%[4]d,'%[1]s'!%[5]s%[2]d,""),"")`, worksSheet, at, compare, row, col))
		if told := work.Counts[c].Due.Date(); work.State.Status != planner.Full && told.Known && (told.Day == day || i == 0 && told.Day < day) {
			said += words(work)
		}
	}
	for _, other := range more {
		parts, said = append(parts, other.parts...), said+other.said
	}
	said = strings.TrimPrefix(said, between)
	text := fmt.Sprintf("MID(%s,%d,%d)", strings.Join(parts, "&"), 1+len(between), longestFormula)
	if len(parts) == 0 || len(text) > longestFormula {
		return b.value(plainText, said)
	}
	return b.live(plainText, text, said)
}

// closedOn names what closes any work on the day.
func (b *book) closedOn(day planner.Day) string {
	var names []string
	for _, closed := range b.Plan.Closed {
		for _, work := range b.Plan.Works {
			if closed.Covers(work.ID, day) {
				names = append(names, closed.Name)
				break
			}
		}
	}
	return strings.Join(names, "; ")
}
