package workbook

import (
	"fmt"

	"github.com/xuri/excelize/v2"

	"swardbook/planner"
)

// days writes the arithmetic, a row a day.
func (b *book) days(p *page) error {
	if err := p.SetColWidth(1, b.at.columns, 11); err != nil {
		return err
	}
	if err := p.SetPanes(&excelize.Panes{Freeze: true, XSplit: 1, YSplit: daysHead, TopLeftCell: fmt.Sprintf("B%d", daysHead+1), ActivePane: "bottomRight"}); err != nil {
		return err
	}
	if _, err := p.add(b.value(title, "The days and their arithmetic, in "+b.units.Degree())); err != nil {
		return err
	}
	if _, err := p.tall(b.heads(b.dayHeads()...)...); err != nil {
		return err
	}
	for i := range b.Data.Days {
		if _, err := p.add(b.dayRow(i)...); err != nil {
			return err
		}
	}
	if len(b.Data.Days) == 0 {
		return nil
	}
	for _, input := range []struct{ col, what string }{{"B", "High"}, {"C", "Low"}, {"D", "24-hour mean"}} {
		if err := p.takes(input.col, b.at.firstRow, b.at.lastRow, b.temperatures(),
			input.what+" of the day in "+b.units.Degree()+". Clear the 24-hour mean of a day you type."); err != nil {
			return err
		}
	}
	return nil
}

func (b *book) dayHeads() []string {
	heads := []string{"day", "high", "low", "24-hour mean", "high/low mean", "from", "24-hour mean used", "high/low mean used", "high used", "low used", "next low"}
	for _, surface := range b.Plan.Surfaces {
		heads = append(heads, surface.Name+" growth, 24-hour", surface.Name+" growth, high/low")
	}
	for _, nitrogen := range b.Data.Nitrogen {
		name := nitrogen.State.Surface.Name
		heads = append(heads, name+" slow nitrogen that came, g/m²")
		for _, facts := range nitrogen.State.Bases {
			heads = append(heads, name+" nitrogen used, "+facts.Basis.Words())
		}
	}
	for i, work := range b.Data.Works {
		name := work.State.Surface.Name + " " + work.State.Work.Name
		if b.at.works[i].hours != "" {
			heads = append(heads, name+" from hours, as issued")
		}
		for _, count := range work.Counts {
			heads = append(heads, name+", "+count.Due.Basis.Words(), "running total")
		}
	}
	return heads
}

// known is a number, or an empty cell.
func (b *book) known(look style, value float64, known bool) excelize.Cell {
	if !known {
		return excelize.Cell{StyleID: b.look[look]}
	}
	return b.value(look, value)
}

// orBlank is the value of a formula that gives "" where a number is missing.
func orBlank(value float64, known bool) any {
	if !known {
		return ""
	}
	return value
}

func (b *book) dayRow(i int) []any {
	day, row := b.Data.Days[i], b.at.firstRow+i
	facts := day.Facts
	midrangeC, hasMidrange := facts.Mean(planner.Midrange)
	meanC, midC := facts.HourlyC, midrangeC
	if !facts.HasHourly {
		meanC = midrangeC
	}
	if !hasMidrange {
		midC = facts.HourlyC
	}
	highC, lowC := facts.HighC, facts.LowC
	if !facts.HasExtremes {
		highC, lowC = facts.HourlyC, facts.HourlyC
	}
	any1 := !facts.Empty()
	t := b.units.Temperature
	f := func(format string) string { return fmt.Sprintf(format, row) }
	cells := []any{
		b.value(date, serial(facts.Day)),
		b.known(inNumber, t(facts.HighC), facts.HasExtremes), b.known(inNumber, t(facts.LowC), facts.HasExtremes),
		b.known(inNumber, t(facts.HourlyC), facts.HasHourly),
		b.live(oneDecimal, midrangeText(row), orBlank(t(midrangeC), hasMidrange)),
		b.value(plainText, b.source(day)),
		b.live(oneDecimal, f(`IF(COUNT(D%[1]d)=1,D%[1]d,E%[1]d)`), orBlank(t(meanC), any1)),
		b.live(oneDecimal, f(`IF(COUNT(E%[1]d)=1,E%[1]d,IF(COUNT(D%[1]d)=1,D%[1]d,""))`), orBlank(t(midC), any1)),
		b.live(oneDecimal, f(`IF(COUNT(B%[1]d:C%[1]d)=2,B%[1]d,IF(COUNT(D%[1]d)=1,D%[1]d,""))`), orBlank(t(highC), any1)),
		b.live(oneDecimal, f(`IF(COUNT(B%[1]d:C%[1]d)=2,C%[1]d,IF(COUNT(D%[1]d)=1,D%[1]d,""))`), orBlank(t(lowC), any1)),
		b.nextLow(i, row, lowC),
	}
	for _, surface := range b.Plan.Surfaces {
		turf, at := turfOn(surface, facts.Day)
		for _, mean := range []struct {
			col string
			c   float64
		}{{"G", meanC}, {"H", midC}} {
			text := growthText(fmt.Sprintf("%s%d", mean.col, row), turfName(surface, at, "optimum"), turfName(surface, at, "width"), turf.Curve.HeldAbove)
			gp, err := turf.Curve.Potential(mean.c)
			if err != nil || !any1 {
				gp = 0
			}
			cells = append(cells, b.live(percent, text, gp))
		}
	}
	for _, nitrogen := range b.Data.Nitrogen {
		cells = append(cells, b.nitrogenCells(nitrogen, i, row)...)
	}
	for w := range b.Data.Works {
		cells = append(cells, b.countCells(w, i, row)...)
	}
	return cells
}

// nextLow is the low of the night after: the next day's, else the day's own. It
// is as issued where the record and the days ahead meet in a gap.
func (b *book) nextLow(i, row int, lowC float64) excelize.Cell {
	day := b.Data.Days[i]
	if day.NextLowC.Known {
		return b.value(oneDecimal, b.units.Temperature(day.NextLowC.Value))
	}
	value := lowC
	if next := i + 1; next < len(b.Data.Days) && day.Facts.HasExtremes && b.Data.Days[next].Facts.HasExtremes {
		value = b.Data.Days[next].Facts.LowC
	}
	text := fmt.Sprintf(`IF(AND(COUNT(B%[1]d:C%[1]d)=2,COUNTIFS(d_date,A%[1]d+1,d_high,">-999",d_low,">-999")=1),SUMIFS(d_low,d_date,A%[1]d+1),J%[1]d)`, row)
	return b.live(oneDecimal, text, orBlank(b.units.Temperature(value), !day.Facts.Empty()))
}

// turfOn is the turf of the day and its place among the surface's.
func turfOn(surface planner.Surface, day planner.Day) (turf planner.Turf, at int) {
	for i, from := range surface.Turf {
		if i == 0 || from.Day <= day {
			turf, at = from.Value, i
		}
	}
	return turf, at
}

// nitrogenCells are a fed surface's cells of one day: what came of slow feeds,
// what is used on either mean.
func (b *book) nitrogenCells(nitrogen planner.SheetNitrogen, i, row int) []any {
	day, surface := b.Data.Days[i].Facts.Day, nitrogen.State.Surface
	came := 0.0
	for _, feed := range nitrogen.Feeds {
		came += feed.Released(day)
	}
	through := func(day string) string { return slowThroughText(surface.ID, day) }
	cells := []any{b.live(twoDecimals, through(fmt.Sprintf("A%d", row))+"-"+through(fmt.Sprintf("(A%d-1)", row)), came)}
	_, at := turfOn(surface, day)
	for j, facts := range nitrogen.State.Bases {
		growth := fmt.Sprintf("%s%d", b.at.growth[surface.ID][facts.Basis], row)
		cells = append(cells, b.live(twoDecimals, nitrogenText(growth, turfName(surface, at, "ceiling"), fmt.Sprintf("A%d", row)), nitrogen.Uses[j].GM2[i]))
	}
	return cells
}

// countCells are a work's cells of one day.
func (b *book) countCells(w, i, row int) []any {
	work, place := b.Data.Works[w], b.at.works[w]
	day := b.Data.Days[i].Facts
	var cells []any
	if place.hours != "" {
		cells = append(cells, b.known(twoDecimals, b.show(work.Counts[0].Units[i], work.State.Unit), day.HoursC != nil))
	}
	for _, count := range work.Counts {
		last := workName(work, "last")
		total := fmt.Sprintf(`IF(A%[1]d<=%[2]s,0,SUMIFS(%[3]s,d_date,">"&%[2]s,d_date,"<="&A%[1]d))`, row, last, countName(work, count, "units"))
		cells = append(cells, b.live(twoDecimals, b.unitsText(work, place, count.Due.Basis, row), b.show(count.Units[i], work.State.Unit)),
			b.live(twoDecimals, total, b.show(count.Running[i], work.State.Unit)))
	}
	return cells
}

// unitsText is the formula of the units that a day gives a work.
func (b *book) unitsText(work planner.SheetWork, place workPlace, basis planner.Basis, row int) string {
	settings := work.State.Settings
	surface := work.State.Surface
	mean, growth := "G", planner.Hourly
	if basis == planner.Midrange {
		mean, growth = "H", planner.Midrange
	}
	cell := func(col string) string { return fmt.Sprintf("%s%d", col, row) }
	switch settings.Counts {
	case planner.ByDays:
		return fmt.Sprintf("COUNT(%s)", cell("A"))
	case planner.ByGrowthDays:
		return cell(b.at.growth[surface.ID][growth])
	case planner.ByNitrogen:
		at := b.at.nitrogen[surface.ID]
		return cell(at.used[growth]) + "-" + cell(at.slow)
	}
	text := degreeDayText(settings.Method, settings.Thresholds.Cutoff, dayCells{cell(mean), cell("I"), cell("J"), cell("K")},
		workName(work, "base"), workName(work, "upper"))
	if place.hours != "" {
		return fmt.Sprintf("IF(COUNT(%s)=1,%s,%s)", cell(place.hours), cell(place.hours), text)
	}
	return text
}

// missing begins what is said of a past day that the record lacks.
const missing = "missing"

// source says where a day comes from.
func (b *book) source(day planner.SheetDay) string {
	switch {
	case day.Facts.Empty():
		return missing
	case day.Path && day.Facts.Day < b.Plan.AsOf:
		return missing + ": as days ahead"
	case day.Facts.ExtremesFrom == planner.FromHand:
		return "typed"
	case day.Path:
		return "days ahead"
	case day.Facts.ExtremesFrom == planner.FromLine:
		return "straight line"
	}
	return "measured"
}
