package command

import (
	"context"

	"swardbook/bot/briefing"
	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) briefing() Command {
	return Command{
		Path: "briefing", Short: "the morning post, now or for a past day", Listed: true, Shared: true,
		Long: "A past day is computed again on readings up to that morning, and on what was logged and set up by then.",
		Options: []Option{{Name: "date", Kind: Day, Past: true, Help: "which morning; today when not given", Example: "yesterday"},
			{Name: "post", Kind: Choice, Choices: []string{"morning", "tomorrow"}, Help: "the morning's, or the evening's about tomorrow"}, d.siteOption()},
		Examples: []string{"/briefing", "/briefing date:2013-07-01", "/briefing post:tomorrow"},
		Run:      d.runBriefing,
	}
}

func (d Desk) runBriefing(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	asOf, err := v.day("date", v.today)
	if err != nil {
		return reply.Reply{}, err
	}
	if asOf > v.today {
		return reply.Reply{}, planner.Problemf(planner.Invalid, "%s is ahead of today.", shortOn(asOf, v.today)).
			WithHint("/due says what falls due, /weather ahead what weather is expected.")
	}
	if post, _ := v.Values.Text("post"); post == "tomorrow" {
		return v.evening(ctx, asOf)
	}
	plan, err := v.plan(ctx, asOf)
	if err != nil {
		return reply.Reply{}, err
	}
	evaluation, err := planner.Evaluate(plan)
	if err != nil {
		return reply.Reply{}, err
	}
	r := briefing.Morning(evaluation)
	if note := recordNote(plan); note != "" {
		r.Add(reply.Text(note))
	}
	return r, nil
}

// evening tells the next day.
func (v visit) evening(ctx context.Context, asOf planner.Day) (reply.Reply, error) {
	plan, err := v.plan(ctx, asOf)
	if err != nil {
		return reply.Reply{}, err
	}
	tomorrow, err := planner.NextDay(plan)
	if err != nil {
		return reply.Reply{}, err
	}
	return briefing.Evening(tomorrow, plan), nil
}

// recordNote says when the record is empty or ends before yesterday.
func recordNote(plan planner.Plan) string {
	for i := len(plan.Record.Facts) - 1; i >= 0; i-- {
		facts := plan.Record.Facts[i]
		if facts.Empty() {
			continue
		}
		if facts.Day == plan.AsOf-1 {
			return ""
		}
		return "The record ends " + facts.Day.Short() + " " + facts.Day.String()[:4] + ": bring in newer readings with /weather file."
	}
	return "There is no weather yet: bring in the station's file with /weather file."
}
