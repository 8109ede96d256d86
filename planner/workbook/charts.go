package workbook

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strconv"

	"github.com/xuri/excelize/v2"

	"swardbook/planner"
)

const (
	mostSeasons = 3 // season totals with a chart
	mostCharts  = 6 // works with a chart
	// The size of a chart in columns and rows of its sheet, 704 by 400 dots: on a
	// phone it is shrunk to half and its letters must still be read.
	chartColumns, chartRows = 11, 20
	// So many stand on a printed page of A4 or Letter at this percentage, also
	// where the wider letters of another font widen the columns.
	chartsOnPage, chartsPercent = 3, 66
	// What the sheet's columns and rows measure, and how many dots the library
	// takes them for when it places a chart.
	chartColumnWide, chartRowHigh = 9.14, 15.0
	columnDots, rowDots           = 73, 18
	// A chart goes on after the last date by a quarter of its days, so that a
	// higher target is still on it; weekAhead is the least that it shows.
	roomBeyond, weekAhead = 4, 7
)

// The inks differ in lightness, and no two lines of a chart share a dash.
const (
	darkInk  = "122B4A"
	warmInk  = "A04A00"
	midInk   = "7393B7"
	shadeInk = "BFCFE2"
	blackInk = "202020"
)

// The strokes. Sizes are points.
var (
	unseen  = stroke{kind: area}
	band    = stroke{kind: area, ink: shadeInk}
	pillar  = stroke{kind: bar, ink: midInk}
	thick   = stroke{line, darkInk, 3, "solid"}
	onward  = stroke{line, darkInk, 3, "sysDash"}
	dashed  = stroke{line, warmInk, 2.5, "dash"}
	average = stroke{line, darkInk, 2.5, "dash"}
	dotted  = stroke{line, blackInk, 2, "sysDot"}
)

// placeCharts fixes what is drawn and the cells that it is drawn from.
func (b *book) placeCharts() {
	b.drawWorks()
	b.drawSeasons()
	b.drawMeans()
}

// drawn keeps a chart.
func (b *book) drawn(block *chartBlock, d drawing) {
	d.title, d.titleAt, d.axis, d.axisAt = block.title, block.titleAt(), block.axis, block.axisAt()
	b.drawings = append(b.drawings, d)
}

// undrawn keeps why something has no chart.
func (b *book) undrawn(format string, args ...any) {
	b.without = append(b.without, fmt.Sprintf(format, args...))
}

// charts writes the sheet of charts, one below the other.
func (b *book) chartsPage(p *page) error {
	// Said again by column: not every program goes by the sheet's own width.
	if err := p.SetColWidth(1, chartColumns, chartColumnWide); err != nil {
		return err
	}
	if _, err := p.add(b.value(title, "Charts")); err != nil {
		return err
	}
	lines := append([]string{"So far, days ahead and target move with the framed yellow cells. Likely and the seasons are as issued;",
		"likely closes once a day, a base or a curve is changed: ask the bot then."}, b.without...)
	for _, text := range lines {
		if _, err := p.add(b.value(small, text)); err != nil {
			return err
		}
	}
	row := p.row + 2
	for i, d := range b.drawings {
		if i > 0 && i%chartsOnPage == 0 {
			if err := p.InsertPageBreak(fmt.Sprintf("A%d", row)); err != nil {
				return err
			}
			row++
		}
		if err := b.put(p, fmt.Sprintf("A%d", row), d); err != nil {
			return fmt.Errorf("draw %q: %w", d.title, err)
		}
		row += chartRows + 1
	}
	return nil
}

// drawSeasons draws the season totals so far beside past years.
func (b *book) drawSeasons() {
	if len(b.Seasons) == 0 {
		b.undrawn("No season total is set up.")
	}
	if len(b.Seasons) > mostSeasons {
		b.undrawn("Of %d season totals the first %d are drawn.", len(b.Seasons), mostSeasons)
	}
	for _, curves := range b.Seasons[:min(len(b.Seasons), mostSeasons)] {
		if len(curves.This) == 0 {
			b.undrawn("%s: no day of its season is over.", curves.Season.State.Total.Name)
			continue
		}
		b.drawSeason(curves)
	}
}

// drawSeason draws one season total; what it shows is as issued.
func (b *book) drawSeason(curves planner.SeasonCurves) {
	state := curves.Season.State
	shown := func(values []float64) []float64 {
		out := make([]float64, len(values))
		for i, value := range values {
			out[i] = b.show(value, state.Unit)
		}
		return out
	}
	block := b.block(state.Total.Name+": season so far", b.units.Counted(state.Unit, state.Settings.Counting))
	dates := daysFrom(state.Start, len(curves.This))
	last := len(dates) - 1
	var drawn []curve
	add := func(column chartColumn) int {
		block.columns = append(block.columns, column)
		return len(block.columns) - 1
	}
	numbers := func(head string, values []float64) int {
		return add(chartColumn{head: head, look: twoDecimals, values: values})
	}
	add(chartColumn{head: "day", look: date, values: dates})
	this := shown(curves.This)
	year := strconv.Itoa(state.Start.Year())
	alt := fmt.Sprintf("%s, season total in %s: as issued %s stands at %.0f.", state.Total.Name, block.axis, year, this[last])
	if lowest, highest := shown(curves.Lowest), shown(curves.Highest); len(lowest) > 0 {
		low, high := numbers("lowest of past years", lowest), numbers("highest of past years", highest)
		between := newColumn("past years", len(lowest))
		for i := range lowest {
			row := chartHead + 1 + i
			between.set(i, block.cell(high, row)+"-"+block.cell(low, row), highest[i]-lowest[i])
		}
		drawn = append(drawn, block.curve(low, unseen), block.curve(add(between), band))
		alt += fmt.Sprintf(" Past years stood at %.0f to %.0f by the same date.", lowest[last], highest[last])
	}
	if newest := shown(curves.Newest); len(newest) > 0 {
		past := strconv.Itoa(curves.Season.Past[0].Start.Year())
		drawn = append(drawn, block.curve(numbers(past, newest), dashed))
		alt += fmt.Sprintf(" %s stood at %.0f.", past, newest[last])
	}
	drawn = append(drawn, block.curve(numbers(year, this), thick))
	b.drawn(block, drawing{dates: dates, datesAt: block.cellsAt(0), curves: drawn, alt: alt})
}

// daysFrom are the spreadsheet's numbers of so many days.
func daysFrom(first planner.Day, days int) []float64 {
	out := make([]float64, days)
	for i := range out {
		out[i] = serial(first + planner.Day(i))
	}
	return out
}

// drawMeans draws the difference of the two means from the sheet that compares
// them.
func (b *book) drawMeans() {
	days := b.bothMeans()
	if len(days) == 0 {
		b.undrawn("No day of this sheet has both means.")
		return
	}
	cells := func(col string) string {
		return fmt.Sprintf("'%s'!$%s$%d:$%s$%d", meansSheet, col, meansHead+1, col, meansHead+len(days))
	}
	means := planner.CompareMeans(b.Plan.Record, days[0].Day, days[len(days)-1].Day)
	onAverage := b.units.Difference(means.DifferenceC)
	block := b.block("High/low mean less 24-hour mean", b.units.Degree())
	on := chartColumn{head: "on average", look: twoDecimals}
	var dates, differences []float64
	for _, facts := range days {
		midrangeC, _ := facts.Mean(planner.Midrange)
		dates, differences = append(dates, serial(facts.Day)), append(differences, b.units.Difference(midrangeC-facts.HourlyC))
		on.values = append(on.values, onAverage)
		on.formulas = append(on.formulas, fmt.Sprintf("N('%s'!$B$3)", meansSheet))
	}
	block.columns = []chartColumn{on}
	b.drawn(block, drawing{dates: dates, datesAt: cells("A"), curves: []curve{
		{stroke: pillar, name: "difference", nameAt: fmt.Sprintf("'%s'!$D$%d", meansSheet, meansHead), at: cells("D"), values: differences},
		block.curve(0, average),
	}, alt: fmt.Sprintf("%s, days with both from %s to %s: %d; as issued %+.2f %s on average, the largest %+.2f on %s.", block.title, days[0].Day, days[len(days)-1].Day, means.Days,
		onAverage, block.axis, b.units.Difference(means.LargestC), means.LargestDay.Short())})
}

// drawWorks draws the started works that fall due soonest.
func (b *book) drawWorks() {
	if len(b.Data.Works) == 0 {
		b.undrawn("No work is started.")
	}
	for _, state := range b.Evaluation.Works {
		if len(state.Bases) == 0 {
			b.undrawn("%s %s is not started.", state.Surface.Name, state.Work.Name)
		}
	}
	if len(b.Data.Works) > mostCharts {
		b.undrawn("Of %d works the %d that fall due soonest are drawn.", len(b.Data.Works), mostCharts)
	}
	soonest := make([]int, len(b.Data.Works))
	due := make([]planner.Day, len(soonest))
	for w, work := range b.Data.Works {
		soonest[w], due[w] = w, planner.DayMax
		if told := work.Counts[ownCount(work)].Due.Date(); told.Known {
			due[w] = told.Day
		}
	}
	slices.SortStableFunc(soonest, func(x, y int) int { return cmp.Compare(due[x], due[y]) })
	for _, w := range soonest[:min(len(soonest), mostCharts)] {
		b.drawWork(w)
	}
}

// drawWork draws a work's running total with its band to the target. All cells
// are formulas over the sheet's inputs: a changed input moves the lines.
func (b *book) drawWork(w int) {
	work := b.Data.Works[w]
	count, state := work.Counts[ownCount(work)], work.State
	first, last := b.workDays(count)
	if last <= first {
		b.undrawn("%s %s: no day to draw.", state.Surface.Name, state.Work.Name)
		return
	}
	block := b.block(state.Surface.Name+" "+state.Work.Name, b.units.Counted(state.Unit, state.Settings.Counting))
	from := func(col string) string { return b.workCell(w, col) }
	// Once the issued curves no longer tell the dates, the band closes.
	ask := fmt.Sprintf("AND(ISTEXT(%[1]s),%[1]s=%[2]q)", from("N"), askTheBot)
	shift := from("K") + "-" + from(totalIssued)
	block.beside = []excelize.Cell{b.live(small, ask, false), b.live(twoDecimals, shift, 0.0)}
	block.columns = b.totals(block, w, first, int(last-first)+1)
	drawn := []curve{block.curve(1, thick), block.curve(2, onward), block.curve(3, dotted)}
	if count.Due.SpreadKnown && state.Settings.Counts != planner.ByDays {
		block.columns = append(block.columns, b.likely(block, w, first)...)
		drawn = append([]curve{block.curve(4, unseen), block.curve(5, band)}, drawn...)
	}
	b.drawn(block, drawing{dates: block.columns[0].values, datesAt: block.cellsAt(0), curves: drawn, alt: b.workWords(block, count, state)})
}

// workCell is a cell of the work's own count on the sheet works and log.
func (b *book) workCell(w int, col string) string {
	return fmt.Sprintf("'%s'!$%s$%d", worksSheet, col, b.at.works[w].counts[ownCount(b.Data.Works[w])].row)
}

// totals are the columns of a work's days, of its total so far and on the days
// ahead, and of its target. The two totals join on yesterday.
func (b *book) totals(block *chartBlock, w int, first planner.Day, rows int) []chartColumn {
	work := b.Data.Works[w]
	count, unit := work.Counts[ownCount(work)], work.State.Unit
	soFar, ahead, target := newColumn("so far", rows), newColumn("days ahead", rows), newColumn("target", rows)
	for i := range rows {
		day, row := first+planner.Day(i), chartHead+1+i
		running := b.show(count.Running[day-b.Data.Days[0].Facts.Day], unit)
		total := fmt.Sprintf(`IF(%[1]s<=%[2]s,0,SUMIFS(%[3]s,d_date,">"&%[2]s,d_date,"<="&%[1]s))`, block.cell(0, row), workName(work, "last"), countName(work, count, "units"))
		switch yesterday := b.Plan.AsOf - 1; {
		case day < yesterday:
			soFar.set(i, total, running)
		case day == yesterday:
			soFar.set(i, total, running)
			ahead.set(i, block.cell(1, row), running)
		default:
			ahead.set(i, total, running)
		}
		target.set(i, b.workCell(w, "L"), b.show(count.Due.Target, unit))
	}
	return []chartColumn{{head: "day", look: date, values: daysFrom(first, rows)}, soFar, ahead, target}
}

// likely are the columns of a work's band: its lower edge, and its width. Before
// the morning it lies closed on the total, from then on it stands on the issued
// curves, moved by what was counted since.
func (b *book) likely(block *chartBlock, w int, first planner.Day) []chartColumn {
	work := b.Data.Works[w]
	c := ownCount(work)
	count, unit, rows := work.Counts[c], work.State.Unit, len(block.columns[0].values)
	askAt, shiftAt := "$"+column(block.column+1)+"$2", "$"+column(block.column+2)+"$2"
	low, width := newColumn("late", rows), newColumn("likely", rows)
	for i := range rows {
		day, row := first+planner.Day(i), chartHead+1+i
		total := 2
		if day < b.Plan.AsOf {
			total = 1
		}
		own := block.cell(total, row)
		low.set(i, own, block.columns[total].values[i])
		width.set(i, "", 0)
		at := int(day - b.Plan.AsOf)
		if at < 0 || at >= len(count.Curves[2]) {
			continue
		}
		early, late := b.show(count.Curves[0][at], unit), b.show(count.Curves[2][at], unit)
		issued := func(which int) string {
			return fmt.Sprintf("'%s'!%s%d", curvesSheet, column(b.at.works[w].counts[c].curve+which), 2+at)
		}
		low.set(i, fmt.Sprintf("IF(%s,%s,%s+%s)", askAt, own, issued(2), shiftAt), late)
		width.set(i, fmt.Sprintf("IF(%s,0,%s-%s)", askAt, issued(0), issued(2)), early-late)
	}
	return []chartColumn{low, width}
}

// newColumn is a column of empty cells.
func newColumn(head string, rows int) chartColumn {
	c := chartColumn{head: head, look: twoDecimals, values: make([]float64, rows), formulas: make([]string, rows)}
	for i := range c.values {
		c.values[i] = math.NaN()
	}
	return c
}

func (c chartColumn) set(i int, formula string, value float64) {
	c.formulas[i], c.values[i] = formula, value
}

// workDays are the first and last day of a work's chart: from the last pass to
// some days after the last date.
func (b *book) workDays(count planner.SheetCount) (first, last planner.Day) {
	days := b.Data.Days
	first, last = count.Due.Since-1, b.Plan.AsOf+weekAhead
	for _, date := range []planner.Passage{count.Due.Path, count.Due.Late, count.Due.Held} {
		if date.Known {
			last = max(last, date.Day+(date.Day-first)/roomBeyond+2)
		}
	}
	return max(first, days[0].Facts.Day), min(last, days[len(days)-1].Facts.Day)
}

// workWords say what the chart shows.
func (b *book) workWords(block *chartBlock, count planner.SheetCount, state planner.WorkState) string {
	text := fmt.Sprintf("%s, running total in %s", block.title, block.axis)
	if state.Own != planner.NoBasis {
		text += ", " + state.Own.Words()
	}
	text += fmt.Sprintf(": as issued %.2f of %.2f through %s", b.show(count.Through, state.Unit), b.show(count.Due.Target, state.Unit), (b.Plan.AsOf - 1).Short())
	due := count.Due
	switch {
	case !due.Path.Known:
		return text + "; the days ahead do not reach the target."
	case due.Path.Day < b.Plan.AsOf:
		return text + "; it reached the target on " + due.Path.Day.Short() + "."
	}
	text += "; the days ahead reach the target on " + due.Path.Day.Short()
	if due.SpreadKnown && due.Early.Known && due.Late.Known && due.Early != due.Late {
		text += fmt.Sprintf(", likely %s to %s", due.Early.Day.Short(), due.Late.Day.Short())
	}
	return text + "."
}
