package command

import (
	"context"
	"encoding/json"
	"fmt"
	"strings"

	"swardbook/bot/briefing"
	"swardbook/bot/reply"
	"swardbook/planner"
	"swardbook/planner/workbook"
)

func (d Desk) sheetGet() Command {
	return Command{
		Path: "sheet get", Short: "the weekly plan as a workbook", Listed: true,
		Long: "The first sheet is the week, on one page. The sheets behind it hold the arithmetic as formulas: " +
			"change a framed yellow cell and the dates follow.",
		Options: []Option{
			d.surfaceOption(),
			{Name: "weeks", Kind: Whole, Range: Between(1, 8), Help: "weeks on the first sheet; 1 when not given", Example: "2"},
			{Name: "paper", Kind: Choice, Choices: []string{"a4", "letter"}, Help: "paper to print on; letter on sites that show °F"},
			d.siteOption(),
		},
		Examples: []string{"/sheet get", "/sheet get greens weeks:2"},
		Run:      d.runSheetGet,
	}
}

func (d Desk) runSheetGet(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	if d.Sheets == nil {
		return reply.Reply{}, planner.Problemf(planner.Refused, "Sheets cannot be made here.")
	}
	plan, evaluation, err := v.sheetPlan(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	weeks, given := v.Values.Whole("weeks")
	if !given {
		weeks = 1
	}
	data, err := planner.SheetOf(plan, evaluation, 7*weeks)
	if err != nil {
		return reply.Reply{}, err
	}
	inputs, err := json.Marshal(struct {
		Plan planner.Plan
		Days []planner.SheetDay
	}{sheetInputs(plan), data.Days})
	if err != nil {
		return reply.Reply{}, fmt.Errorf("write the sheet's inputs: %w", err)
	}
	stamp, ahead := v.stamp(), briefing.AheadNote(plan.Outlook)
	outlook, err := plan.Outlook.Issue(stamp.At, plan.Record.Revision, ahead)
	if err != nil {
		return reply.Reply{}, err
	}
	kept, err := d.Sheets.KeepSheet(ctx, planner.Sheet{Site: v.site.ID, Form: workbook.Form, AsOf: v.today, Issued: stamp.At, By: stamp.By,
		Inputs: inputs, Engine: plan.Outlook.Engine, Outlook: outlook})
	if err != nil {
		return reply.Reply{}, err
	}
	seasons, err := seasonCurves(plan)
	if err != nil {
		return reply.Reply{}, err
	}
	paper := textOr(v.Values, "paper", "a4")
	content, err := workbook.Build(workbook.Input{
		ID: kept.ID, Plan: plan, Evaluation: evaluation, Data: data, Weeks: weeks,
		Letter:  paper == "letter" || !v.Values.Has("paper") && v.site.Units == planner.Fahrenheit,
		Ahead:   ahead,
		Caution: strings.ReplaceAll(briefing.Cautions(evaluation.Works), "\n", " "),
		Seasons: seasons,
	})
	if err != nil {
		return reply.Reply{}, err
	}
	r := reply.Of(reply.Heading(fmt.Sprintf("Sheet %d", kept.ID)),
		reply.Textf("%s, %s to %s", v.site.Name, v.today.Short(), (v.today+planner.Day(7*weeks-1)).Short()),
		reply.File{Name: fmt.Sprintf("week-%s-%d.xlsx", v.today, kept.ID), Content: content})
	r.Figures = evaluation.Figures()
	r.Private = true
	return r, nil
}

// seasonCurves are the season totals of the plan beside past years.
func seasonCurves(plan planner.Plan) ([]planner.SeasonCurves, error) {
	var all []planner.SeasonCurves
	for _, total := range plan.Totals {
		season, err := planner.CompareSeason(plan, total)
		if err != nil {
			return nil, err
		}
		curves, err := season.Curves(plan)
		if err != nil {
			return nil, err
		}
		all = append(all, curves)
	}
	return all, nil
}

// sheetInputs is the plan without the record, and without the days ahead that
// are kept beside it.
func sheetInputs(plan planner.Plan) planner.Plan {
	plan.Record = planner.Record{Revision: plan.Record.Revision}
	plan.Outlook.Members, plan.Outlook.Path, plan.Rain = nil, nil, nil
	return plan
}

// sheetPlan is this morning's plan, of one surface when it is named.
func (v visit) sheetPlan(ctx context.Context) (planner.Plan, planner.Evaluation, error) {
	plan, err := v.plan(ctx, v.today)
	if err != nil {
		return planner.Plan{}, planner.Evaluation{}, err
	}
	if name, given := v.Values.Text("surface"); given {
		surface, err := v.setup.Surface(v.site, name)
		if err != nil {
			return planner.Plan{}, planner.Evaluation{}, err
		}
		plan.Surfaces, plan.Works = []planner.Surface{surface}, plan.WorksOn(surface.ID)
	}
	evaluation, err := planner.Evaluate(plan)
	return plan, evaluation, err
}
