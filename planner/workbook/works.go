package workbook

import (
	"fmt"
	"strings"

	"github.com/xuri/excelize/v2"

	"swardbook/planner"
)

func workColumns() []string {
	return []string{"surface", "work", "mean", "counts by", "unit", "base", "upper limit", "target or reserve", "count starts after", "least days between",
		"total through yesterday", "target of this count", "date on the path", "early", "middle", "late", "due", "days until",
		"units as issued", "total as issued", "start as issued", "target as issued", "nitrogen used before the sheet"}
}

// askTheBot is what a date cell says when only members could tell it.
const askTheBot = "ask the bot"

// works writes the works, the grass and the log: the inputs.
func (b *book) works(p *page) error {
	if err := p.SetColWidth(1, len(workColumns()), 13); err != nil {
		return err
	}
	if _, err := p.add(b.value(title, "Works and log")); err != nil {
		return err
	}
	weather := 0.0
	for _, day := range b.Data.Days {
		if f := day.Facts; f.HasExtremes {
			weather += b.units.Temperature(f.HighC) + 2*b.units.Temperature(f.LowC)
		}
		if f := day.Facts; f.HasHourly {
			weather += 3 * b.units.Temperature(f.HourlyC)
		}
	}
	if _, err := p.add(b.value(small, "as of"), b.value(date, serial(b.Plan.AsOf)), b.value(small, "weather as issued"), b.value(oneDecimal, weather),
		b.value(small, "weather changed"), b.live(small, "ABS(SUM(d_high)+2*SUM(d_low)+3*SUM(d_mean)-wb_weather)>0.0000001", false)); err != nil {
		return err
	}
	if _, err := p.add(b.value(small, "Framed yellow cells are inputs. Early, middle and late ask the bot once a day, a base or a curve is changed.")); err != nil {
		return err
	}
	if _, err := p.tall(b.heads(workColumns()...)...); err != nil {
		return err
	}
	for w := range b.Data.Works {
		for c := range b.Data.Works[w].Counts {
			if _, err := p.add(b.workRow(w, c)...); err != nil {
				return err
			}
		}
	}
	if b.at.counts > 0 {
		first, last := worksHead+1, worksHead+b.at.counts
		if err := p.number(fmt.Sprintf("F%d:G%d", first, last), -148, 144, "Degrees "+b.units.Degree()+"."); err != nil {
			return err
		}
		if err := p.number(fmt.Sprintf("H%d:H%d", first, last), 0, 180000, "The total at which the work falls due, or the nitrogen reserve."); err != nil {
			return err
		}
		if err := p.number(fmt.Sprintf("I%d:I%d", first, last), serial(0), serial(planner.DayMax), "The date after which the count starts."); err != nil {
			return err
		}
		if err := p.number(fmt.Sprintf("J%d:J%d", first, last), 0, 366, "Least days between two passes."); err != nil {
			return err
		}
	}
	if err := b.grass(p); err != nil {
		return err
	}
	return b.log(p)
}

// passageCell is a date, or says that it is beyond the sheet.
func passageCell(at planner.Passage) any {
	if !at.Known {
		return beyond
	}
	return serial(at.Day)
}

func (b *book) workRow(w, c int) []any {
	work, count, at := b.Data.Works[w], b.Data.Works[w].Counts[c], b.at.works[w].counts[c]
	state, r, settings := work.State, at.row, work.State.Settings
	_, unit := b.units.Show(0, state.Unit)
	cells := []any{b.value(plainText, state.Surface.Name), b.value(plainText, state.Work.Name), b.value(plainText, count.Due.Basis.Words()),
		b.value(plainText, string(settings.Counts)), b.value(plainText, unit)}
	cells = append(cells, b.inputs(work, c, r)...)
	cells = append(cells, b.results(work, count, r)...)
	sum := 0.0
	for _, units := range count.Units {
		sum += b.show(units, state.Unit)
	}
	return append(cells, b.value(twoDecimals, sum), b.value(twoDecimals, b.show(count.Through, state.Unit)), b.value(date, serial(state.LastDone)),
		b.value(twoDecimals, b.show(settings.Target, state.Unit)), b.value(twoDecimals, count.CarriedGM2))
}

// inputs are the cells F to J: of a work's first count as inputs, of its second
// repeated.
func (b *book) inputs(work planner.SheetWork, c, r int) []any {
	state, settings := work.State, work.State.Settings
	cuts := settings.Thresholds.Cutoff != "" && settings.Thresholds.Cutoff != "none"
	byDegrees := settings.Counts == planner.ByDegreeDays
	values := []struct {
		look  style
		shown style
		value float64
		known bool
		fixed string // the formula of a cell that is no input
	}{
		{inNumber, oneDecimal, b.units.Temperature(settings.Thresholds.LowerC), byDegrees, ""},
		{inNumber, oneDecimal, b.units.Temperature(settings.Thresholds.UpperC), byDegrees && cuts, ""},
		{inTwo, twoDecimals, b.show(settings.Target, state.Unit), true, ""},
		{inDate, date, serial(state.LastDone), true, ""},
		{inNumber, whole, float64(settings.Limits.LeastDays), true, ""},
	}
	if settings.Counts == planner.ByNitrogen {
		values[3].fixed = fmt.Sprintf("SUMPRODUCT(MAX((log_surface=%d)*log_date))", state.Surface.ID)
	}
	cells := make([]any, len(values))
	for i, v := range values {
		name := workName(work, []string{"base", "upper", "target", "last", "gap"}[i])
		switch {
		case !v.known:
			cells[i] = b.value(plainText, "")
		case c > 0:
			cells[i] = b.live(v.shown, name, v.value)
		case v.fixed != "":
			cells[i] = b.live(v.shown, v.fixed, v.value)
		default:
			cells[i] = b.value(v.look, v.value)
		}
	}
	return cells
}

// results are the cells K to R.
func (b *book) results(work planner.SheetWork, count planner.SheetCount, r int) []any {
	state, due := work.State, count.Due
	units, total := countName(work, count, "units"), countName(work, count, "total")
	cell := func(col string) string { return fmt.Sprintf("%s%d", col, r) }
	target := cell("H")
	if state.Settings.Counts == planner.ByNitrogen {
		target = fmt.Sprintf(`SUMIFS(log_quick,log_surface,%[1]d)-%[2]s-SUMIFS(%[3]s,d_date,">"&SUMPRODUCT(MIN(log_date+1000000*(log_surface<>%[1]d))),d_date,"<="&%[4]s)-%[5]s`,
			state.Surface.ID, cell("W"), units, cell("I"), cell("H"))
	}
	cells := []any{
		b.live(twoDecimals, fmt.Sprintf(`SUMIFS(%s,d_date,">"&%s,d_date,"<"&wb_asof)`, units, cell("I")), b.show(count.Through, state.Unit)),
		b.live(twoDecimals, target, b.show(due.Target, state.Unit)),
		b.live(date, passageText("d_date", total, "", cell("L"), cell("I")), passageCell(due.Path)),
	}
	ask := b.askText(work, units, cell)
	for i, passage := range []planner.Passage{due.Early, due.Middle, due.Late} {
		if !due.SpreadKnown && i != 1 {
			cells = append(cells, b.value(plainText, "no spread known"))
			continue
		}
		curve := fmt.Sprintf("IF(AND(ISNUMBER(%[1]s),%[1]s<wb_asof),%[1]s,%[2]s)", cell("M"),
			passageText("c_date", countName(work, count, curveNames[i]), fmt.Sprintf("+(%s-%s)", cell("K"), cell("T")), cell("L"), cell("I")))
		if work.Gap { // members differ in the past too: the date is as issued
			curve = fmt.Sprintf("%q", beyond)
			if passage.Known {
				curve = fmt.Sprintf("%.0f", serial(passage.Day))
			}
		}
		cells = append(cells, b.live(date, fmt.Sprintf("IF(%s,%q,%s)", ask, askTheBot, curve), passageCell(passage)))
	}
	until := any("")
	if told := due.Date(); told.Known {
		until = float64(told.Day - b.Plan.AsOf)
	}
	told := fmt.Sprintf("IF(AND(ISNUMBER(%[1]s),%[2]s>0),MAX(%[1]s,%[3]s+%[2]s),%[1]s)", cell("O"), cell("J"), cell("I"))
	return append(cells, b.live(strong, told, passageCell(due.Date())),
		b.live(whole, fmt.Sprintf(`IF(ISNUMBER(%[1]s),%[1]s-wb_asof,"")`, cell("Q")), until))
}

// askText is true once the issued curves no longer tell the dates.
func (b *book) askText(work planner.SheetWork, units string, cell func(string) string) string {
	changed := "wb_changed"
	if work.State.Settings.Counts == planner.ByDays {
		changed = "FALSE"
	}
	start := fmt.Sprintf("OR(%s>=wb_asof,%s>=wb_asof)", cell("I"), cell("U"))
	target := "FALSE"
	if work.Gap {
		start, target = "TRUE", fmt.Sprintf("%s<>%s", cell("H"), cell("V"))
	}
	return fmt.Sprintf("OR(%s,ABS(SUM(%s)-%s)>0.000001,AND(%s<>%s,%s),%s)", changed, units, cell("S"), cell("I"), cell("U"), start, target)
}

func (b *book) grass(p *page) error {
	if _, err := p.add(); err != nil {
		return err
	}
	if _, err := p.add(b.heads("surface", "from", "optimum", "width", "most nitrogen a month, g/m²", "area, m²")...); err != nil {
		return err
	}
	first := p.row + 1
	for _, surface := range b.Plan.Surfaces {
		for i, turf := range surface.Turf {
			from := any("always")
			if i > 0 {
				from = serial(turf.Day)
			}
			if _, err := p.add(b.value(plainText, surface.Name), b.value(date, from), b.value(inTwo, b.units.Temperature(turf.Value.Curve.OptimumC)),
				b.value(inTwo, b.units.Difference(turf.Value.Curve.WidthC)), b.value(inTwo, turf.Value.CeilingGM2), b.value(whole, surface.AreaM2)); err != nil {
				return err
			}
		}
	}
	if p.row < first {
		return nil
	}
	if err := p.number(fmt.Sprintf("C%d:C%d", first, p.row), -148, 144, "The mean temperature of full growth."); err != nil {
		return err
	}
	if err := p.number(fmt.Sprintf("D%d:D%d", first, p.row), 0.1, 100, "Degrees from the optimum at which growth is 61 %."); err != nil {
		return err
	}
	return p.number(fmt.Sprintf("E%d:E%d", first, p.row), 0, 20, "Nitrogen in g/m² that a month of perfect growing weather uses.")
}

// log writes the feeds that count, then the newest lines of the work log.
func (b *book) log(p *page) error {
	if _, err := p.add(); err != nil {
		return err
	}
	if _, err := p.add(b.heads("surface number", "surface", "fed on", "at once, g N/m²", "slow, g N/m²", "over days")...); err != nil {
		return err
	}
	feeds := b.feeds()
	if len(feeds) == 0 {
		if _, err := p.add(b.value(whole, 0.0), b.value(plainText, "none"), b.value(date, serial(0)), b.value(twoDecimals, 0.0), b.value(twoDecimals, 0.0), b.value(whole, 1.0)); err != nil {
			return err
		}
	}
	first := p.row + 1
	for _, feed := range feeds {
		over := 7 * feed.Weeks
		if over <= 0 {
			over = 1
		}
		slow := feed.SlowGM2
		if feed.Weeks <= 0 {
			slow = 0
		}
		if _, err := p.add(b.value(whole, float64(feed.surface.ID)), b.value(plainText, feed.surface.Name), b.value(inDate, serial(feed.Day)),
			b.value(inTwo, feed.QuickGM2), b.value(inTwo, slow), b.value(inNumber, over)); err != nil {
			return err
		}
	}
	if len(feeds) > 0 {
		if err := p.number(fmt.Sprintf("D%d:E%d", first, p.row), 0, 100, "Nitrogen in g/m² over the whole surface."); err != nil {
			return err
		}
	}
	if _, err := p.add(); err != nil {
		return err
	}
	if _, err := p.add(b.heads("done on", "what", "by", "note")...); err != nil {
		return err
	}
	for _, entry := range b.passes() {
		if _, err := p.add(b.value(date, serial(entry.Day)), b.value(plainText, b.what(entry)), b.value(plainText, entry.By), b.value(plainText, entry.Note)); err != nil {
			return err
		}
	}
	return nil
}

// what names the works of an entry.
func (b *book) what(entry planner.Entry) string {
	var names []string
	for _, pass := range entry.Passes {
		for _, work := range b.Plan.Works {
			if work.ID == pass.Work {
				surface, _ := b.Plan.Surface(work.Surface)
				names = append(names, surface.Name+" "+work.Name)
			}
		}
	}
	return strings.Join(names, ", ")
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
