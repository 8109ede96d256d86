package command

import (
	"context"
	"fmt"

	"swardbook/bot/briefing"
	"swardbook/bot/chart"
	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) whyCompare() Command {
	return Command{
		Path: "why compare", Short: "the two means compared, and what it does to decisions",
		Long: "Takes the days that have both means. The difference is the high/low mean less the 24-hour mean: " +
			"above 0 the high/low mean runs warm.",
		Options: []Option{
			{Name: "from", Kind: Day, Past: true, Help: "first day; 1 January of the last day's year when not given", Example: "2013-01-01"},
			{Name: "to", Kind: Day, Past: true, Help: "last day; yesterday when not given", Example: "2013-12-31"},
			d.siteOption(),
		},
		Examples: []string{"/why compare", "/why compare from:2013-03-01 to:2013-05-31"},
		Run:      d.runWhyCompare,
	}
}

func (d Desk) runWhyCompare(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	to, err := v.day("to", v.today-1)
	if err != nil {
		return reply.Reply{}, err
	}
	from, err := v.day("from", planner.DayOf(to.Year(), 1, 1))
	if err != nil {
		return reply.Reply{}, err
	}
	if from > to {
		return reply.Reply{}, planner.Problemf(planner.Invalid, "From %s is after to %s.", from, to).
			WithHint("/why compare from:2013-03-01 to:2013-05-31")
	}
	_, evaluation, err := v.evaluate(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	record, err := v.book.Record(ctx, v.site.ID)
	if err != nil {
		return reply.Reply{}, err
	}
	means := planner.CompareMeans(record, from, to)
	r := reply.Of(reply.Heading("The two means"), reply.Textf("%s to %s", from, to))
	r.Private = true
	r.Add(meansBlocks(means, v.site.Units)...)
	picture, ok, err := chart.Means(record, means, v.site.Units)
	if err != nil {
		return reply.Reply{}, err
	}
	if ok {
		r.Add(picture)
	}
	r.Add(decisionBlocks(evaluation)...)
	r.Figures = append(means.Figures(), evaluation.Figures()...)
	return r, nil
}

func meansBlocks(means planner.Means, units planner.Units) []reply.Block {
	if means.Days == 0 {
		return []reply.Block{reply.Text("No day has both means: the 24-hour mean needs hourly readings, the high/low mean highs and lows.")}
	}
	show := func(c float64) string {
		return fmt.Sprintf("%+.2f %s", units.Difference(c), units.Degree())
	}
	fields := reply.Fields{
		{Name: "days with both", Value: fmt.Sprint(means.Days)},
		{Name: "difference", Value: show(means.DifferenceC)},
		{Name: "size of it", Value: show(means.AbsDifferenceC)[1:]},
	}
	if means.HasSpread {
		fields = append(fields, reply.Field{Name: "spread (sd)", Value: show(means.SpreadC)[1:]})
	}
	fields = append(fields, reply.Field{Name: "largest", Value: show(means.LargestC)}, reply.Field{Name: "on", Value: means.LargestDay.String()})
	return []reply.Block{fields, reply.Text("difference: high/low mean less 24-hour mean")}
}

// decisionBlocks show this season's totals and this morning's due dates on
// both means.
func decisionBlocks(e planner.Evaluation) []reply.Block {
	var blocks []reply.Block
	if len(e.Totals) > 0 {
		table := reply.Table{Title: "This season", Columns: []reply.Column{reply.Left("total"), reply.Right("24-hour"), reply.Right("high/low")}}
		for _, state := range e.Totals {
			table.Rows = append(table.Rows, briefing.TotalRow(state, e.Site.Units))
		}
		blocks = append(blocks, table)
	}
	table := reply.Table{Title: "Due", Columns: []reply.Column{reply.Left("work"), reply.Right("24-hour"), reply.Right("high/low")}}
	for _, state := range e.Works {
		hourly, hasHourly := state.On(planner.Hourly)
		midrange, hasMidrange := state.On(planner.Midrange)
		if hasHourly && hasMidrange {
			table.Rows = append(table.Rows, []string{briefing.Title(state), standing(hourly), standing(midrange)})
		}
	}
	if len(table.Rows) > 0 {
		blocks = append(blocks, table)
	}
	return blocks
}

// standing is the date on a mean; "-" where the other mean stands in on every
// day.
func standing(facts planner.DueFacts) string {
	if facts.Total.AllStandIn() {
		return "-"
	}
	return passageText(facts.Date())
}
