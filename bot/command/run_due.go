package command

import (
	"context"
	"strconv"
	"strings"

	"swardbook/bot/briefing"
	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) due() Command {
	return Command{
		Path: "due", Short: "days until due, the date, how sure", Listed: true,
		Long: "One date on the work's own mean; the other mean's date stands below it only when it differs. " +
			"\"Likely\" runs from the early date to the late one: eight years in ten fell between them.",
		Options:  []Option{d.surfaceOption(), d.workOption(), d.siteOption()},
		Examples: []string{"/due", "/due greens", "/due surface:greens work:regulator"},
		Run:      d.runDue,
	}
}

func (d Desk) surfaceOption() Option {
	return Option{Name: "surface", Kind: Name, Help: "which surface", Example: "greens", Complete: d.names(surfaceNames)}
}

func (d Desk) workOption() Option {
	return Option{Name: "work", Kind: Name, Help: "which work", Example: "regulator", Complete: d.names(workNames)}
}

// required returns the option as one that must be given.
func required(option Option) Option {
	option.Required = true
	return option
}

func (d Desk) runDue(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	_, evaluation, err := v.evaluate(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	states, err := v.chosen(evaluation.Works)
	if err != nil {
		return reply.Reply{}, err
	}
	r := reply.Reply{Private: true}
	for _, state := range briefing.ByUrgency(states) {
		r.Add(reply.Text(strings.Join(briefing.Brief(state, evaluation), "\n")))
		r.Figures = append(r.Figures, state.Figures(v.today)...)
	}
	if origin := briefing.OriginLine(states[0].Settings.Origin); len(states) == 1 && origin != "" {
		r.Add(reply.Text(origin))
	}
	r.Add(rainAnswers(states)...)
	if !v.Values.Has("surface") && !v.Values.Has("work") {
		for _, total := range evaluation.Totals {
			for _, mark := range total.Marks {
				if line := briefing.MarkLine(total, mark, evaluation); line != "" {
					r.Add(reply.Text(line))
				}
				r.Figures = append(r.Figures, mark.Figures(total, v.today)...)
			}
		}
	}
	r.Add(reply.Text(briefing.AheadNote(evaluation.Outlook)), reply.Text(briefing.Cautions(states)))
	return r, nil
}

// rainAnswers are the buttons that answer whether passes that it rained on
// still count.
func rainAnswers(states []planner.WorkState) []reply.Block {
	var blocks []reply.Block
	asked := map[planner.EntryID]bool{}
	for _, state := range states {
		if state.Rain == nil || asked[state.Rain.Entry] {
			continue
		}
		asked[state.Rain.Entry] = true
		var answers reply.Actions
		for _, result := range []string{"good", string(planner.Doubtful), string(planner.Lost)} {
			id := strconv.FormatInt(int64(state.Rain.Entry), 10)
			answers = append(answers, reply.Action{Label: "Entry " + id + ": " + result, Line: Line("log amend", Pair{"entry", id}, Pair{"result", result})})
		}
		blocks = append(blocks, answers)
	}
	return blocks
}

// chosen keeps the works that the surface and work options name; none left is
// a problem that names what there is.
func (v visit) chosen(states []planner.WorkState) ([]planner.WorkState, error) {
	if len(states) == 0 {
		_, err := v.setup.Work(planner.Surface{Name: "any surface"}, "")
		return nil, err
	}
	surfaceName, hasSurface := v.Values.Text("surface")
	workName, hasWork := v.Values.Text("work")
	if hasSurface {
		surface, err := v.setup.Surface(v.site, surfaceName)
		if err != nil {
			return nil, err
		}
		if hasWork {
			if _, err := v.setup.Work(surface, workName); err != nil {
				return nil, err
			}
		}
	}
	var kept []planner.WorkState
	for _, state := range states {
		if hasSurface && planner.NameKey(state.Surface.Name) != planner.NameKey(surfaceName) {
			continue
		}
		if hasWork && planner.NameKey(state.Work.Name) != planner.NameKey(workName) {
			continue
		}
		kept = append(kept, state)
	}
	if len(kept) == 0 {
		return nil, v.noSuchWork(workName)
	}
	return kept, nil
}

func (v visit) noSuchWork(name string) error {
	return planner.Problemf(planner.NotFound, "There is no work %q here.", name).
		WithHint("There is: %s.", strings.Join(workNames(v), ", "))
}
