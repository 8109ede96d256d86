package workbook

import (
	"fmt"

	"swardbook/planner"
)

// nitrogen writes the balance of every surface that was fed, as formulas over
// the log's feeds and the days.
func (b *book) nitrogen(p *page) error {
	if err := p.SetColWidth(1, 12, 14); err != nil {
		return err
	}
	if _, err := p.add(b.value(title, "Nitrogen through yesterday, g N/m²")); err != nil {
		return err
	}
	if _, err := p.tall(b.heads("surface", "since", "given", "slow, still to come", "mean", "used", "left", "given this season", "set aside for the season",
		"used before the sheet, as issued", "since, as issued", "season began")...); err != nil {
		return err
	}
	for _, nitrogen := range b.Data.Nitrogen {
		for i := range nitrogen.State.Bases {
			if _, err := p.add(b.balance(nitrogen, i, p.row+1)...); err != nil {
				return err
			}
		}
	}
	for _, line := range []string{
		"left = given - slow, still to come - used. They follow the feeds of the log, the days, and the inputs of the grass.",
		"As issued: what was used before the first day of the sheet, the day the season began, and what is set aside. Once a first feed before",
		"that day, or the grass behind it, is changed, used and left ask the bot. Days missing from the record are left out of what was used.",
		"The slow share comes in a straight line over its weeks: common practice.",
	} {
		if _, err := p.add(b.value(small, line)); err != nil {
			return err
		}
	}
	return nil
}

// balance is a surface's balance on one mean.
func (b *book) balance(nitrogen planner.SheetNitrogen, i, r int) []any {
	state, id := nitrogen.State, nitrogen.State.Surface.ID
	facts, use := state.Bases[i], nitrogen.Uses[i]
	of := func(format string) string { return fmt.Sprintf(format, id) }
	cell := func(col string) string { return fmt.Sprintf("%s%d", col, r) }
	before := fmt.Sprintf("IF(ISNUMBER(%[1]s),%[1]s+1<MIN(d_date),FALSE)", cell("B"))
	used := fmt.Sprintf(`IFERROR(IF(AND(%[1]s,OR(%[2]s<>%[3]s,%[4]s)),"%[5]s",IF(%[1]s,%[6]s,0)+SUMPRODUCT((d_date>%[2]s)*(d_date<wb_asof)*(LEFT(d_from,7)<>"missing")*%[7]s)),"%[5]s")`,
		before, cell("B"), cell("K"), b.turfChanged(state.Surface), askTheBot, cell("J"), usedName(state.Surface, facts.Basis))
	return []any{
		b.value(plainText, state.Surface.Name),
		b.live(date, fmt.Sprintf(`IF(SUMPRODUCT(%s)=0,"not fed",%s)`, fedText(id), firstFeedText(id)), serial(state.Since)),
		b.live(twoDecimals, of("SUMIFS(log_quick,log_surface,%[1]d)+SUMIFS(log_slow,log_surface,%[1]d)"), state.GivenGM2),
		b.live(twoDecimals, of("SUMIFS(log_slow,log_surface,%d)-")+slowThroughText(id, "(wb_asof-1)"), state.SlowToComeGM2),
		b.value(plainText, facts.Basis.Words()),
		b.live(twoDecimals, used, facts.Used.Total),
		b.live(twoDecimals, fmt.Sprintf(`IF(ISNUMBER(%[1]s),%[2]s-%[3]s-%[1]s,"%[4]s")`, cell("F"), cell("C"), cell("D"), askTheBot), facts.LeftGM2),
		b.live(twoDecimals, fmt.Sprintf(`SUMIFS(log_quick,log_surface,%[1]d,log_date,">="&%[2]s)+SUMIFS(log_slow,log_surface,%[1]d,log_date,">="&%[2]s)`, id, cell("L")), state.SeasonGivenGM2),
		b.known(twoDecimals, state.BudgetGM2, state.BudgetGM2 > 0),
		b.value(twoDecimals, use.CarriedGM2), b.value(date, serial(state.Since)), b.value(date, serial(nitrogen.Season)),
	}
}

// turfChanged is true once an input of the surface's grass was changed.
func (b *book) turfChanged(surface planner.Surface) string {
	var names []string
	for i := range surface.Turf {
		names = append(names, turfName(surface, i, "optimum"), turfName(surface, i, "width"), turfName(surface, i, "ceiling"))
	}
	return b.changed(names...)
}

// fedText is 1 for the rows of the log that fed the surface, else 0.
func fedText(id planner.SurfaceID) string {
	return fmt.Sprintf("(log_surface=%d)*(log_quick+log_slow>0)", id)
}

// firstFeedText is the date of the surface's first feed.
func firstFeedText(id planner.SurfaceID) string {
	return fmt.Sprintf("SUMPRODUCT(MIN(log_date+1000000*(1-%s)))", fedText(id))
}

// lastFeedText is the date of the surface's newest feed; 0 without one.
func lastFeedText(id planner.SurfaceID) string {
	return fmt.Sprintf("SUMPRODUCT(MAX(%s*log_date))", fedText(id))
}

// slowThroughText is the slow nitrogen of the surface that came by the end of
// the day: of each feed the share min(max(day - date, 0), days) / days, written
// without MIN and MAX, which would take the least of all rows.
func slowThroughText(id planner.SurfaceID, day string) string {
	after := fmt.Sprintf("(%[1]s-log_date+ABS(%[1]s-log_date))/2", day)
	return fmt.Sprintf("SUMPRODUCT((log_surface=%d)*log_slow*(%[2]s+log_days-ABS(%[2]s-log_days))/2/(log_days+(log_days=0)))", id, after)
}
