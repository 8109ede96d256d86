package workbook

import (
	"fmt"
	"strings"

	"github.com/xuri/excelize/v2"

	"swardbook/calc"
	"swardbook/planner"
)

const (
	weekHead     = 3
	mostSurfaces = 3 // with a growth column in the week
	mostCounts   = 2 // works with a degree-day column in the week
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

// week writes the sheet that is pinned up: key numbers, then a row a day.
func (b *book) week(p *page) error {
	wides := append([]float64{20, 8, 8, 12, 9}, make([]float64, b.weekColumns()-9)...)
	for i, wide := range append(wides, 22, 13, 7, 18) {
		if wide == 0 {
			wide = 12
		}
		if err := p.SetColWidth(i+1, i+1, wide); err != nil {
			return err
		}
	}
	if err := p.SetPanes(&excelize.Panes{Freeze: true, YSplit: weekHead, TopLeftCell: fmt.Sprintf("A%d", weekHead+1), ActivePane: "bottomLeft"}); err != nil {
		return err
	}
	if _, err := p.add(b.value(title, fmt.Sprintf("%s, %s to %s", b.Plan.Site.Name, b.Plan.AsOf.Short(), (b.Plan.AsOf+planner.Day(7*b.Weeks-1)).Short()))); err != nil {
		return err
	}
	if _, err := p.add(b.value(small, "Readings through "+(b.Plan.AsOf-1).Short()+". "+b.Ahead)); err != nil {
		return err
	}
	if _, err := p.add(b.heads("work", "total", "target", "due", "days until", "early", "late", "how it stands", "counted in")...); err != nil {
		return err
	}
	for _, state := range b.Evaluation.Works {
		if _, err := p.tall(b.keyRow(state)...); err != nil {
			return err
		}
	}
	if _, err := p.add(); err != nil {
		return err
	}
	if _, err := p.tall(b.heads(b.weekHeads()...)...); err != nil {
		return err
	}
	for i := range 7 * b.Weeks {
		if _, err := p.tall(b.weekRow(p.row+1, i)...); err != nil {
			return err
		}
	}
	_, err := p.add(b.value(small, b.Caution))
	return err
}

// keyRow is how one work stands, read from the sheet works and log.
func (b *book) keyRow(state planner.WorkState) []any {
	name := b.value(plainText, state.Surface.Name+" "+state.Work.Name)
	for w, work := range b.Data.Works {
		if work.State.Work.ID != state.Work.ID {
			continue
		}
		c := ownCount(work)
		due, row := work.Counts[c].Due, b.at.works[w].counts[c].row
		from := func(col string) string { return fmt.Sprintf("'%s'!%s%d", worksSheet, col, row) }
		until := any("")
		if told := due.Date(); told.Known {
			until = float64(told.Day - b.Plan.AsOf)
		}
		_, unit := b.units.Show(0, state.Unit)
		cells := []any{name, b.live(oneDecimal, from("K"), b.show(work.Counts[c].Through, state.Unit)), b.live(oneDecimal, from("L"), b.show(due.Target, state.Unit)),
			b.live(strong, from("Q"), passageCell(due.Date())), b.live(whole, from("R"), until)}
		for i, passage := range []planner.Passage{due.Early, due.Late} {
			if !due.SpreadKnown {
				cells = append(cells, b.value(plainText, "not known"))
				continue
			}
			cells = append(cells, b.live(date, from([]string{"N", "P"}[i]), passageCell(passage)))
		}
		if due.Basis != planner.NoBasis {
			unit += ", " + due.Basis.Words()
		}
		return append(cells, b.value(plainText, stands(state)), b.value(plainText, unit))
	}
	cells := []any{name}
	for range 6 {
		cells = append(cells, b.value(plainText, ""))
	}
	return append(cells, b.value(plainText, stands(state)), b.value(plainText, ""))
}

// stands says how the work stood on the morning.
func stands(state planner.WorkState) string {
	text := string(state.Status)
	if facts, ok := state.OwnFacts(); ok && facts.Held.Known {
		text += "; held by the least days between"
	}
	if state.Closed != nil {
		text += "; closed: " + state.Closed.Why
	}
	if len(state.Behind) > 0 {
		text += "; behind: " + strings.Join(state.Behind, ", ")
	}
	return text
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

// weekColumns is how many columns the week has.
func (b *book) weekColumns() int { return 9 + len(b.weekSurfaces()) + len(b.degreeDayWorks()) }

func (b *book) weekHeads() []string {
	heads := []string{"day", "high " + b.units.Degree(), "low " + b.units.Degree(), "24-hour mean", "high/low mean"}
	for _, surface := range b.weekSurfaces() {
		heads = append(heads, surface.Name+" growth")
	}
	for _, w := range b.degreeDayWorks() {
		state := b.Data.Works[w].State
		heads = append(heads, fmt.Sprintf("%s %s, %s-days", state.Surface.Name, state.Work.Name, b.units.Degree()))
	}
	return append(heads, "falls due", "closed", "done", "notes")
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
	cells := []any{b.value(date, serial(day)),
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
	text, falls := b.fallsDue(row, i, day)
	due := b.value(plainText, "")
	if text != "" {
		due = b.live(plainText, text, falls)
	}
	return append(cells, due, b.value(plainText, b.closedOn(day)), b.value(room, "☐"), b.value(room, ""))
}

// fallsDue names the works due on the day, on the first day also those due
// before. The names are read from cells, never written into the formula.
func (b *book) fallsDue(row, i int, day planner.Day) (text, value string) {
	var parts, names []string
	compare := "="
	if i == 0 {
		compare = "<="
	}
	for w, work := range b.Data.Works {
		c := ownCount(work)
		at := b.at.works[w].counts[c].row
		from := func(col string) string { return fmt.Sprintf("'%s'!%s%d", worksSheet, col, at) }
		parts = append(parts, fmt.Sprintf(`IF(AND(ISNUMBER(%[1]s),%[1]s%[2]s$A%[3]d),%[4]s&" "&%[5]s&"; ","")`, from("Q"), compare, row, from("A"), from("B")))
		if told := work.Counts[c].Due.Date(); told.Known && (told.Day == day || i == 0 && told.Day < day) {
			names = append(names, work.State.Surface.Name+" "+work.State.Work.Name+"; ")
		}
	}
	return strings.Join(parts, "&"), strings.Join(names, "")
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

// notes writes what the words mean, and the formulas with their sources.
func (b *book) notes(p *page) error {
	for i, wide := range []float64{26, 70, 44, 70} {
		if err := p.SetColWidth(i+1, i+1, wide); err != nil {
			return err
		}
	}
	if _, err := p.add(b.value(title, "Notes")); err != nil {
		return err
	}
	id := fmt.Sprintf("swardbook-sheet-%d-form-%d", b.ID, Form)
	for _, line := range [][2]string{
		{"sheet", id},
		{"path", "The days ahead that this sheet computes on: typed days first, then the mean of past years."},
		{"likely", "Early to late: eight years in ten fell between them. They stand on curves issued with the sheet; when a day, a base or a curve is edited only the bot can tell them."},
		{"days ahead", b.Ahead},
		{"beyond this sheet", "The total does not reach its target on the days of this sheet."},
		{"growth", "Growth potential knows temperature only: not water, shade, wear or disease."},
		{"cautions", b.Caution},
		{"", "Swardbook plans dates; it prescribes no product and no rate."},
	} {
		if _, err := p.add(b.value(wrapped, line[0]), b.value(wrapped, line[1])); err != nil {
			return err
		}
	}
	if _, err := p.add(); err != nil {
		return err
	}
	if _, err := p.add(b.heads("formula", "in words", "source", "in the cells")...); err != nil {
		return err
	}
	for _, formula := range calc.Catalogue() {
		text, _ := CellText(formula.ID)
		if _, err := p.add(b.value(wrapped, formula.Title), b.value(wrapped, formula.Words),
			b.value(wrapped, formula.Origin()), b.value(wrapped, text)); err != nil {
			return err
		}
	}
	return nil
}
