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
		b.value(twoDecimals, difference(means.LargestC)), b.value(date, serial(means.LargestDay))); err != nil {
		return err
	}
	if _, err := p.add(b.value(small, "The difference is the high/low mean less the 24-hour mean. The largest is as issued.")); err != nil {
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
			b.live(twoDecimals, fmt.Sprintf(`IF(COUNT(B%[1]d:C%[1]d)=2,C%[1]d-B%[1]d,"")`, row), difference(midrangeC-facts.HourlyC))); err != nil {
			return err
		}
	}
	return nil
}

// nitrogen writes the balance of every surface that was fed.
func (b *book) nitrogen(p *page) error {
	if err := p.SetColWidth(1, 9, 16); err != nil {
		return err
	}
	if _, err := p.add(b.value(title, "Nitrogen through yesterday, g N/m²")); err != nil {
		return err
	}
	if _, err := p.tall(b.heads("surface", "since", "given", "slow, still to come", "mean", "used", "left", "given this season", "set aside for the season")...); err != nil {
		return err
	}
	for _, state := range b.Evaluation.Nitrogen {
		for _, facts := range state.Bases {
			row := p.row + 1
			if _, err := p.add(b.value(plainText, state.Surface.Name), b.value(date, serial(state.Since)), b.value(twoDecimals, state.GivenGM2),
				b.value(twoDecimals, state.SlowToComeGM2), b.value(plainText, facts.Basis.Words()), b.value(twoDecimals, facts.Used.Total),
				b.live(twoDecimals, fmt.Sprintf("C%[1]d-D%[1]d-F%[1]d", row), facts.LeftGM2),
				b.value(twoDecimals, state.SeasonGivenGM2), b.known(twoDecimals, state.BudgetGM2, state.BudgetGM2 > 0)); err != nil {
				return err
			}
		}
	}
	for _, line := range []string{
		"left = given - slow, still to come - used. What was given and used is as issued; the days behind it are in the sheet days.",
		"The slow share comes in a straight line over its weeks: common practice.",
	} {
		if _, err := p.add(b.value(small, line)); err != nil {
			return err
		}
	}
	return nil
}
