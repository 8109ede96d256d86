package workbook

import (
	"fmt"

	"github.com/xuri/excelize/v2"

	"swardbook/planner"
)

const meansHead = 5 // row of the heads of the compared days

// bothMeans are the measured days of the sheet that have both means.
func (b *book) bothMeans() []planner.DayFacts {
	var days []planner.DayFacts
	for _, day := range b.Data.Days {
		facts := b.Plan.Record.At(day.Facts.Day)
		if facts.HasExtremes && facts.HasHourly && facts.Day < b.Plan.AsOf {
			days = append(days, facts)
		}
	}
	return days
}

// means compares the two means over the sheet's measured days.
func (b *book) means(p *page) error {
	if err := p.SetColWidth(1, 6, 18); err != nil {
		return err
	}
	if err := p.SetPanes(&excelize.Panes{Freeze: true, YSplit: meansHead, TopLeftCell: fmt.Sprintf("A%d", meansHead+1), ActivePane: "bottomLeft"}); err != nil {
		return err
	}
	if _, err := p.add(b.value(title, "The two means compared, in "+b.units.Degree())); err != nil {
		return err
	}
	days := b.bothMeans()
	if len(days) == 0 {
		_, err := p.add(b.value(small, "No day of this sheet has both means."))
		return err
	}
	if _, err := p.add(b.heads("days with both", "difference", "size of it", "spread (sd)", "largest", "on")...); err != nil {
		return err
	}
	means := planner.CompareMeans(b.Plan.Record, days[0].Day, days[len(days)-1].Day)
	all := fmt.Sprintf("$D$%d:$D$%d", meansHead+1, meansHead+len(days))
	difference := b.units.Difference
	if _, err := p.add(
		b.live(whole, "COUNT("+all+")", float64(means.Days)),
		b.live(twoDecimals, fmt.Sprintf(`IF(COUNT(%[1]s)=0,"",AVERAGE(%[1]s))`, all), difference(means.DifferenceC)),
		b.live(twoDecimals, fmt.Sprintf(`IF(COUNT(%[1]s)=0,"",(SUMIF(%[1]s,">0")-SUMIF(%[1]s,"<0"))/COUNT(%[1]s))`, all), difference(means.AbsDifferenceC)),
		b.live(twoDecimals, fmt.Sprintf(`IF(COUNT(%[1]s)<2,"",STDEV(%[1]s))`, all), orBlank(difference(means.SpreadC), means.HasSpread)),
		b.live(twoDecimals, fmt.Sprintf(`IF(COUNT(%[1]s)=0,"",INDEX(%[1]s,%[2]s))`, all, largestText(all)), difference(means.LargestC)),
		b.live(date, fmt.Sprintf(`IF(COUNT(%[1]s)=0,"",INDEX(%[3]s,%[2]s))`, all, largestText(all), fmt.Sprintf("$A$%d:$A$%d", meansHead+1, meansHead+len(days))), serial(means.LargestDay))); err != nil {
		return err
	}
	if _, err := p.add(b.value(small, "The difference is the high/low mean less the 24-hour mean. The largest is so by size; of equal ones the earliest.")); err != nil {
		return err
	}
	if _, err := p.add(b.heads("day", "24-hour mean", "high/low mean", "difference")...); err != nil {
		return err
	}
	for _, facts := range days {
		row := p.row + 1
		midrangeC, _ := facts.Mean(planner.Midrange)
		lookup := func(cells string) string {
			found := fmt.Sprintf("INDEX(%s,MATCH(A%d,d_date,0))", cells, row)
			return fmt.Sprintf(`IF(COUNT(%[1]s)=1,%[1]s,"")`, found)
		}
		if _, err := p.add(b.value(date, serial(facts.Day)),
			b.live(twoDecimals, lookup("d_mean"), b.units.Temperature(facts.HourlyC)),
			b.live(twoDecimals, lookup(b.dayRange("E")), b.units.Temperature(midrangeC)),
			b.live(twoDecimals, fmt.Sprintf(`IF(COUNT(B%[1]d:C%[1]d)=2,ROUND(C%[1]d-B%[1]d,10),"")`, row), difference(midrangeC-facts.HourlyC))); err != nil {
			return err
		}
	}
	return nil
}

// largestText is the place of the difference largest by size among the cells,
// the first of equal ones. The cells are rounded, so that equal ones are equal.
func largestText(cells string) string {
	most, least := fmt.Sprintf("MATCH(MAX(%[1]s),%[1]s,0)", cells), fmt.Sprintf("MATCH(MIN(%[1]s),%[1]s,0)", cells)
	return fmt.Sprintf("IF(MAX(%[1]s)=-MIN(%[1]s),MIN(%[2]s,%[3]s),IF(MAX(%[1]s)>-MIN(%[1]s),%[2]s,%[3]s))", cells, most, least)
}
