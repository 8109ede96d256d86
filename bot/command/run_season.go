package command

import (
	"context"
	"strconv"

	"swardbook/bot/briefing"
	"swardbook/bot/chart"
	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) season() Command {
	return Command{
		Path: "season", Short: "the season totals so far beside past years",
		Options:  []Option{{Name: "total", Kind: Name, Help: "which season total; all when not given", Example: "gdd10", Complete: d.names(totalNames)}, d.siteOption()},
		Examples: []string{"/season", "/season total:gdd10"},
		Run:      d.runSeason,
	}
}

func totalNames(v visit) []string {
	return namesOf(v.setup.TotalsOf(v.site.ID), func(t planner.Total) string { return t.Name })
}

func (d Desk) runSeason(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	totals := v.setup.TotalsOf(v.site.ID)
	if name, given := v.Values.Text("total"); given || len(totals) == 0 {
		total, err := v.setup.Total(v.site, name)
		if err != nil {
			return reply.Reply{}, err
		}
		totals = []planner.Total{total}
	}
	plan, err := v.plan(ctx, v.today)
	if err != nil {
		return reply.Reply{}, err
	}
	r := reply.Reply{Private: true}
	for _, total := range totals {
		season, err := planner.CompareSeason(plan, total)
		if err != nil {
			return reply.Reply{}, err
		}
		r.Add(seasonTable(season, v.site.Units), reply.Text(briefing.TotalNote(season.State, v.site.Units)))
		picture, ok, err := chart.Season(plan, season)
		if err != nil {
			return reply.Reply{}, err
		}
		if ok && len(totals) == 1 {
			r.Add(picture)
		}
		r.Figures = append(r.Figures, season.Figures()...)
	}
	return r, nil
}

// seasonTable has a row a year, this one first, each through yesterday's date.
func seasonTable(season planner.Season, units planner.Units) reply.Table {
	table := reply.Table{
		Title:   season.State.Total.Name,
		Columns: []reply.Column{reply.Left("from"), reply.Right("24-hour"), reply.Right("high/low")},
	}
	row := func(year int, bases []planner.TotalFacts) {
		state := season.State
		state.Bases = bases
		cells := briefing.TotalRow(state, units)
		cells[0] = strconv.Itoa(year)
		table.Rows = append(table.Rows, cells)
	}
	row(season.State.Start.Year(), season.State.Bases)
	for _, year := range season.Past {
		row(year.Start.Year(), year.Bases)
	}
	return table
}
