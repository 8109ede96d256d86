package workbook

import (
	"fmt"
	"math"

	"github.com/xuri/excelize/v2"

	"swardbook/planner"
)

// printedColumns are A to Z: those after them keep what is as issued.
const printedColumns = 26

// workWide is how wide its columns are, in letters.
const workWide = 13

// workColumns are the heads of the works, A to AG.
func (b *book) workColumns() []string {
	area := b.units.Amounts(planner.MassRate).Area
	return []string{"surface", "work", "mean", "counts by", "unit", "base", "upper limit", "target or reserve", "count starts after", "least days between",
		"total through yesterday", "target of this count", "date on the path", "early", "middle", "late", "due", "days until",
		"the rate is of", "rate, the last logged", "unit of the rate", "nitrogen in it, %", "area, " + area, "product for the area", "unit", "nitrogen in that",
		"units as issued", "total as issued", "start as issued", "target of this count as issued", "nitrogen used before the sheet", "in words", "with its product"}
}

// totalIssued is the column of the total through yesterday as issued.
const totalIssued = "AB"

// askTheBot is what a cell says when only the bot could tell it.
const askTheBot = "ask the bot"

// works writes the works, the grass and the log: the inputs.
func (b *book) works(p *page) error {
	if err := p.SetColWidth(1, len(b.workColumns()), workWide); err != nil {
		return err
	}
	if err := p.SetPanes(&excelize.Panes{Freeze: true, XSplit: 2, TopLeftCell: "C1", ActivePane: "topRight"}); err != nil {
		return err
	}
	if _, err := p.add(b.value(title, "Works and log")); err != nil {
		return err
	}
	if _, err := p.add(b.value(small, "as of"), b.value(date, serial(b.Plan.AsOf)), b.value(small, "weather, as a mark"), b.value(oneDecimal, b.weatherMark()),
		b.value(small, "weather changed"), b.live(small, fmt.Sprintf("IFERROR(ABS(%s-wb_weather)>0.0000001,TRUE)", weatherMarkText()), false)); err != nil {
		return err
	}
	if _, err := p.add(b.value(small, "Framed yellow cells are inputs. Early, middle and late ask the bot once a day, a base or a curve is changed. "+
		"The rate is the last one logged, or what you type: Swardbook prescribes none.")); err != nil {
		return err
	}
	if _, err := p.tall(b.heads(b.workColumns()...)...); err != nil {
		return err
	}
	for w := range b.Data.Works {
		for c := range b.Data.Works[w].Counts {
			if _, err := p.wrapped(lineHeight, 2*workWide, b.workRow(w, c)...); err != nil {
				return err
			}
		}
	}
	if err := b.workRules(p, worksHead+1, worksHead+b.at.counts); err != nil {
		return err
	}
	if err := b.grass(p); err != nil {
		return err
	}
	return b.log(p)
}

// workRules say what the inputs of the works take.
func (b *book) workRules(p *page, first, last int) error {
	for _, input := range []struct {
		col    string
		takes  kind
		prompt string
	}{
		{"F", b.temperatures(), "The base in " + b.units.Degree() + "."},
		{"G", b.temperatures(), "The upper limit in " + b.units.Degree() + "."},
		{"H", numbers(0, 180000), "The total at which the work falls due, or the nitrogen reserve."},
		{"I", dates(), "The date after which the count starts."},
		{"J", wholes(0, 366), "Least days between two passes."},
		{"T", numbers(0, 10000), "What is given, in the unit beside it. The label's rate is the law."},
		{"V", numbers(0, 82), "Nitrogen of the product by mass, percent."},
	} {
		if err := p.takes(input.col, first, last, input.takes, input.prompt); err != nil {
			return err
		}
	}
	return nil
}

// weatherMark is a number that another high, low or mean of any day changes:
// the values, and whether there is one, each weighed by its day, so that two
// days exchanged do not go unseen. weatherMarkText is its formula.
func (b *book) weatherMark() float64 {
	mark := 0.0
	for _, day := range b.Data.Days {
		f, at := day.Facts, serial(day.Facts.Day)
		mark += 100 * math.Sin(at)
		if f.HasExtremes {
			mark += b.units.Temperature(f.HighC)*math.Sin(at) + b.units.Temperature(f.LowC)*math.Sin(at+1)
			mark += 100 * (math.Sin(at) + math.Sin(at+1))
		}
		if f.HasHourly {
			mark += (b.units.Temperature(f.HourlyC) + 100) * math.Sin(at+2)
		}
	}
	return mark
}

func weatherMarkText() string {
	text := "100*SUMPRODUCT(--ISNUMBER(d_date),SIN(d_date))"
	for _, cells := range [][2]string{{"d_high", "SIN(d_date)"}, {"d_low", "SIN(d_date+1)"}, {"d_mean", "SIN(d_date+2)"}} {
		text += fmt.Sprintf("+SUMPRODUCT(%[1]s,%[2]s)+100*SUMPRODUCT(--ISNUMBER(%[1]s),%[2]s)", cells[0], cells[1])
	}
	return text
}

// unitsMark is such a number of the units that the days give a count.
func (b *book) unitsMark(count planner.SheetCount, unit planner.Unit) float64 {
	mark := 0.0
	for i, units := range count.Units {
		mark += b.show(units, unit) * (2 + math.Sin(serial(b.Data.Days[i].Facts.Day)))
	}
	return mark
}

func unitsMarkText(units string) string { return fmt.Sprintf("SUMPRODUCT(%s,2+SIN(d_date))", units) }

// passageCell is a date, or says that it is beyond the sheet.
func passageCell(at planner.Passage) any {
	if !at.Known {
		return beyond
	}
	return serial(at.Day)
}

func (b *book) workRow(w, c int) []any {
	work, count, r := b.Data.Works[w], b.Data.Works[w].Counts[c], b.at.works[w].counts[c].row
	state := work.State
	_, unit := b.units.Show(0, state.Unit)
	cells := []any{b.value(plainText, state.Surface.Name), b.value(plainText, state.Work.Name), b.value(plainText, count.Due.Basis.Words()),
		b.value(plainText, string(state.Settings.Counts)), b.value(plainText, unit)}
	cells = append(cells, b.inputs(work, c)...)
	cells = append(cells, b.results(w, c, r)...)
	cells = append(cells, b.amounts(work, c, r)...)
	cells = append(cells, b.value(twoDecimals, b.unitsMark(count, state.Unit)), b.value(twoDecimals, b.show(count.Through, state.Unit)),
		b.value(date, serial(state.LastDone)), b.value(twoDecimals, b.show(count.Due.Target, state.Unit)), b.value(twoDecimals, count.CarriedGM2))
	return append(cells, b.words(work, r)...)
}

// workInput is one of the cells F to J of a work.
type workInput struct {
	name        string
	look, shown style // as an input, and where it is repeated
	value       float64
	known       bool
	fixed       string // the formula of a cell that is no input
}

func (b *book) workInputs(work planner.SheetWork) []workInput {
	state, settings := work.State, work.State.Settings
	cuts := settings.Thresholds.Cutoff != "" && settings.Thresholds.Cutoff != "none"
	byDegrees := settings.Counts == planner.ByDegreeDays
	inputs := []workInput{
		{"base", inNumber, oneDecimal, b.units.Temperature(settings.Thresholds.LowerC), byDegrees, ""},
		{"upper", inNumber, oneDecimal, b.units.Temperature(settings.Thresholds.UpperC), byDegrees && cuts, ""},
		{"target", inTwo, twoDecimals, b.show(settings.Target, state.Unit), true, ""},
		{"last", inDate, date, serial(state.LastDone), true, ""},
		{"gap", inNumber, whole, float64(settings.Limits.LeastDays), true, ""},
	}
	if settings.Counts == planner.ByNitrogen {
		inputs[3].fixed = lastFeedText(state.Surface.ID)
	}
	return inputs
}

// inputs are the cells F to J: of a work's first count as inputs, of its second
// repeated.
func (b *book) inputs(work planner.SheetWork, c int) []any {
	var cells []any
	for _, input := range b.workInputs(work) {
		switch {
		case !input.known:
			cells = append(cells, b.value(plainText, ""))
		case c > 0:
			cells = append(cells, b.live(input.shown, workName(work, input.name), input.value))
		case input.fixed != "":
			cells = append(cells, b.live(input.shown, input.fixed, input.value))
		default:
			cells = append(cells, b.value(input.look, input.value))
		}
	}
	return cells
}

// results are the cells K to R.
func (b *book) results(w, c, r int) []any {
	work, count := b.Data.Works[w], b.Data.Works[w].Counts[c]
	state, due := work.State, count.Due
	cell := func(col string) string { return fmt.Sprintf("%s%d", col, r) }
	path := fmt.Sprintf(`IFERROR(IF(COUNT(%[1]s:%[2]s)<2,"%[3]s",%[4]s),"%[3]s")`, cell("K"), cell("L"), askTheBot,
		passageText("d_date", countName(work, count, "total"), "", cell("L"), cell("I")))
	cells := []any{
		b.live(twoDecimals, b.throughText(w, c, cell), b.show(count.Through, state.Unit)),
		b.live(twoDecimals, b.targetText(work, count, cell), b.show(due.Target, state.Unit)),
		b.live(date, path, passageCell(due.Path)),
	}
	ask := b.askText(work, countName(work, count, "units"), cell)
	for i, passage := range []planner.Passage{due.Early, due.Middle, due.Late} {
		if !due.SpreadKnown && i != 1 {
			cells = append(cells, b.value(plainText, "no spread known"))
			continue
		}
		curve := fmt.Sprintf("IF(AND(ISNUMBER(%[1]s),%[1]s<wb_asof),%[1]s,%[2]s)", cell("M"),
			passageText("c_date", countName(work, count, curveNames[i]), fmt.Sprintf("+(%s-%s)", cell("K"), cell(totalIssued)), cell("L"), cell("I")))
		if work.Gap { // members differ in the past too: the date is as issued
			curve = fmt.Sprintf("%q", beyond)
			if passage.Known {
				curve = fmt.Sprintf("%.0f", serial(passage.Day))
			}
		}
		cells = append(cells, b.live(date, fmt.Sprintf(`IFERROR(IF(%[1]s,"%[2]s",%[3]s),"%[2]s")`, ask, askTheBot, curve), passageCell(passage)))
	}
	return append(cells, b.dueCells(state, due, cell)...)
}

// seasonsMost is told instead of a date once a limit of the season is reached.
const seasonsMost = "season's most reached"

// dueCells are the date told and the days until it.
func (b *book) dueCells(state planner.WorkState, due planner.DueFacts, cell func(string) string) []any {
	until := any("")
	told := due.Date()
	if told.Known {
		until = float64(told.Day - b.Plan.AsOf)
	}
	untilText := fmt.Sprintf(`IF(ISNUMBER(%[1]s),%[1]s-wb_asof,"")`, cell("Q"))
	if state.Status == planner.Full {
		return []any{b.value(plainText, seasonsMost), b.live(whole, untilText, "")}
	}
	text := cell("O")
	if due.GapFrom > planner.DayMin {
		text = fmt.Sprintf("IF(AND(ISNUMBER(%[1]s),%[2]s>0),MAX(%[1]s,%[3]s+%[2]s),%[1]s)", cell("O"), cell("J"), gapFromText(due, cell))
	}
	return []any{b.live(strong, text, passageCell(told)), b.live(whole, untilText, until)}
}

// gapFromText is the day from which the least days between two passes run: the
// last pass or, where that is another one (of a part, of the work's own feeds), as
// issued until another last date is typed.
func gapFromText(due planner.DueFacts, cell func(string) string) string {
	if due.GapFrom == due.Since-1 {
		return cell("I")
	}
	return fmt.Sprintf("IF(%[1]s=%[2]s,%.0[3]f,%[1]s)", cell("I"), cell("AC"), serial(due.GapFrom))
}

// throughText is the total through yesterday. A count that starts before the
// days of the sheet, and one over hours that are as issued, asks the bot.
func (b *book) throughText(w, c int, cell func(string) string) string {
	work := b.Data.Works[w]
	ask := cell("I") + "+1<MIN(d_date)"
	if b.at.works[w].hours != "" {
		ask = fmt.Sprintf("OR(%s,wb_changed,%s)", ask, b.changed(workName(work, "base"), workName(work, "upper")))
	}
	return fmt.Sprintf(`IFERROR(IF(%[1]s,"%[2]s",SUMIFS(%[3]s,d_date,">"&%[4]s,d_date,"<"&wb_asof)),"%[2]s")`, ask, askTheBot, countName(work, work.Counts[c], "units"), cell("I"))
}

// targetText is the target of the count: the input, or, of a work that counts
// by nitrogen, what was there at the end of the day of the newest feed less the
// reserve. What was used before the sheet is as issued; once the first feed
// before it, or the grass, is another one, it asks the bot.
func (b *book) targetText(work planner.SheetWork, count planner.SheetCount, cell func(string) string) string {
	surface := work.State.Surface
	if work.State.Settings.Counts != planner.ByNitrogen {
		return cell("H")
	}
	first := firstFeedText(surface.ID)
	since := planner.Day(0)
	for _, nitrogen := range b.Data.Nitrogen {
		if nitrogen.State.Surface.ID == surface.ID {
			since = nitrogen.State.Since
		}
	}
	before := fmt.Sprintf("%s+1<MIN(d_date)", first)
	return fmt.Sprintf(`IFERROR(IF(AND(%[1]s,OR(%[2]s<>%.0[3]f,%[4]s)),"%[5]s",SUMIFS(log_quick,log_surface,%[6]d)+%[7]s-IF(%[1]s,%[8]s,0)-SUMIFS(%[9]s,d_date,">"&%[2]s,d_date,"<="&%[10]s)-%[11]s),"%[5]s")`,
		before, first, serial(since), b.turfChanged(surface), askTheBot, surface.ID, slowThroughText(surface.ID, cell("I")), cell("AE"),
		usedName(surface, count.Due.Basis), cell("I"), cell("H"))
}

// askText is true once the issued curves no longer tell the dates. They are
// totals of the members from the count's start as issued, so that they hold
// while members and their counting are as issued:
//
//   - another target, reserve or least days between: they hold, for the curve
//     of a rank is read at any target;
//   - another last date, the feeds of the log at once: they hold, shifted by
//     what the total through yesterday differs, as all members share the past.
//     Not so from the plan's morning on, where the past begins to differ, nor
//     over days that the record lacks, which each member fills by itself;
//   - a high, low or mean of any day, a row of the days taken out (wb_changed),
//     base, upper limit, optimum, width, monthly ceiling, and slow nitrogen,
//     which are in the units of each day: they do not hold. A day put in without
//     a date, and rows put in above the works, change nothing;
//   - a count that began before days which the record lacks has its dates as
//     issued: any other start or target asks.
//
// What cannot be computed at all (a cell with text, a count from before the
// sheet's first day) asks too.
func (b *book) askText(work planner.SheetWork, units string, cell func(string) string) string {
	counts := work.State.Settings.Counts
	start := fmt.Sprintf("%[1]s>=wb_asof,%[2]s>=wb_asof", cell("I"), cell("AC"))
	ask := fmt.Sprintf("COUNT(%s:%s)<2,ABS(%s-%s)>0.000001", cell("K"), cell("L"), unitsMarkText(units), cell("AA"))
	if counts != planner.ByDays {
		start += fmt.Sprintf(`,SUMPRODUCT((LEFT(d_from,7)="%s")*(d_date>%s)*(d_date<=%s))>0`, missing, cell("I"), cell("AC"))
		ask += ",wb_changed"
	}
	switch counts {
	case planner.ByDegreeDays:
		ask += "," + b.changed(workName(work, "base"), workName(work, "upper"))
	case planner.ByGrowthDays, planner.ByNitrogen:
		ask += "," + b.turfChanged(work.State.Surface)
	}
	if work.Gap {
		start = "TRUE"
		ask += fmt.Sprintf(",ABS(%s-%s)>0.000000001", cell("L"), cell("AD"))
	}
	return fmt.Sprintf("OR(%s,AND(%s<>%s,OR(%s)))", ask, cell("I"), cell("AC"), start)
}

// curves writes the issued totals at the ranks of the dates.
func (b *book) curves(p *page) error {
	heads := []string{"day"}
	for _, work := range b.Data.Works {
		for _, count := range work.Counts {
			for _, which := range curveNames {
				heads = append(heads, fmt.Sprintf("%s %s, %s, %s", work.State.Surface.Name, work.State.Work.Name, count.Due.Basis.Words(), which))
			}
		}
	}
	if err := p.SetPanes(&excelize.Panes{Freeze: true, XSplit: 1, YSplit: 1, TopLeftCell: "B2", ActivePane: "bottomRight"}); err != nil {
		return err
	}
	if _, err := p.add(b.heads(heads...)...); err != nil {
		return err
	}
	for i := range b.ahead() {
		cells := []any{b.value(date, serial(b.Plan.AsOf+planner.Day(i)))}
		for _, work := range b.Data.Works {
			for _, count := range work.Counts {
				for _, curve := range count.Curves {
					cells = append(cells, b.known(twoDecimals, b.show(at(curve, i), work.State.Unit), i < len(curve)))
				}
			}
		}
		if _, err := p.add(cells...); err != nil {
			return err
		}
	}
	return nil
}

func at(values []float64, i int) float64 {
	if i < len(values) {
		return values[i]
	}
	return 0
}
