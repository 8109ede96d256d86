package command

import (
	"context"
	"fmt"
	"strconv"
	"strings"

	"swardbook/bot/briefing"
	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) done() Command {
	return Command{
		Path: "done", Short: "log what was done: one pass over one or more surfaces", Listed: true, Asks: true,
		Long: "The count starts again the day after. It shows what the entry will mean and asks once; /log undo takes it back. " +
			"This log is not the legal spray record.",
		Options: []Option{
			{Name: "surfaces", Kind: Names, Required: true, Help: "where it was done", Example: "greens", Complete: d.names(surfaceNames)},
			{Name: "works", Kind: Names, Required: true, Help: "what was done", Example: "regulator", Complete: d.names(workNames)},
			{Name: "when", Kind: Day, Past: true, Help: "the day it was done; today when not given", Example: "yesterday"},
			{Name: "rate", Kind: Number, Range: AtLeast(0), Help: "nitrogen given, g N/m²", Example: "2.5"},
			{Name: "note", Kind: Text, Help: "anything worth keeping", Example: "wind from the west"},
			d.siteOption(),
		},
		Examples: []string{"/done greens regulator", "/done surfaces:greens works:feed when:yesterday rate:2.5"},
		Run:      d.runDone,
	}
}

func (d Desk) runDone(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	entry, titles, err := v.entry()
	if err != nil {
		return reply.Reply{}, err
	}
	plan, before, err := v.evaluate(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	edits := make([]planner.Edit, len(entry.Passes))
	for i, pass := range entry.Passes {
		edits[i] = planner.DoWork{Work: pass.Work, Name: titles[i], Day: entry.Day, NitrogenGM2: pass.NitrogenGM2}
	}
	changed, refusals := planner.Apply(plan, edits...)
	if len(refusals) > 0 {
		return reply.Reply{}, refusals[0]
	}
	after, err := planner.Evaluate(changed)
	if err != nil {
		return reply.Reply{}, err
	}
	r := v.meaning(entry, titles, before, after)
	if v.Ask {
		r.Private = true
		r.Confirm = &reply.Confirm{Question: "Log this?", Line: v.LineWith("when", entry.Day.String())}
		return r, nil
	}
	kept, err := v.book.Save(ctx, v.stamp(), entry)
	if err != nil {
		return reply.Reply{}, err
	}
	id := strconv.FormatInt(kept.Key(), 10)
	r.Blocks = append([]reply.Block{reply.Text("Logged as entry " + id + ".")}, r.Blocks...)
	r.Add(reply.Actions{{Label: "Undo", Line: Line("log undo", Pair{"entry", id})}, {Label: "Due", Line: "/due"}})
	return r, nil
}

// entry builds the entry that the request describes, and a title for each pass.
func (v visit) entry() (planner.Entry, []string, error) {
	day, err := v.day("when", v.today)
	if err != nil {
		return planner.Entry{}, nil, err
	}
	if day > v.today {
		return planner.Entry{}, nil, planner.Problemf(planner.Invalid, "%s is ahead of today.", day.Short()).
			WithHint("Log it when it is done. To see what it would mean: /whatif work-on:%s", day)
	}
	note, _ := v.Values.Text("note")
	entry := planner.Entry{Site: v.site.ID, Day: day, By: v.Caller.Name, At: v.stamp().At, Note: note}
	rate, _ := v.Values.Number("rate")
	surfaces, _ := v.Values.Names("surfaces")
	works, _ := v.Values.Names("works")
	if rate > 0 && len(works) > 1 {
		return planner.Entry{}, nil, planner.Problemf(planner.Invalid, "Which of the works gave the nitrogen?").
			WithHint("Log the feed on a line of its own.")
	}
	var titles []string
	for _, surfaceName := range surfaces {
		surface, err := v.setup.Surface(v.site, surfaceName)
		if err != nil {
			return planner.Entry{}, nil, err
		}
		for _, workName := range works {
			work, err := v.setup.Work(surface, workName)
			if err != nil {
				return planner.Entry{}, nil, err
			}
			if work.Settings.On(v.today).Counts == planner.ByNitrogen && rate == 0 {
				return planner.Entry{}, nil, v.Missing("rate")
			}
			entry.Passes = append(entry.Passes, planner.Pass{Work: work.ID, NitrogenGM2: rate})
			titles = append(titles, surface.Name+" "+work.Name)
		}
	}
	return entry, titles, entry.Check()
}

// meaning says what an entry does to counts and dates.
func (v visit) meaning(entry planner.Entry, titles []string, before, after planner.Evaluation) reply.Reply {
	r := reply.Of()
	for i, pass := range entry.Passes {
		lines := []string{titles[i] + ", " + entry.Day.Short()}
		if pass.NitrogenGM2 > 0 {
			lines[0] += fmt.Sprintf(", %s g N/m²", briefing.Digits(pass.NitrogenGM2, planner.NitrogenGM2))
		}
		if state, ok := stateOf(before.Works, pass.Work); ok {
			lines = append(lines, earlyNote(state)...)
		}
		if state, ok := stateOf(after.Works, pass.Work); ok {
			if facts, started := state.OwnFacts(); started {
				lines = append(lines, "counts from "+facts.Since.Short(), "next: "+briefing.When(state, v.today))
				if sure := briefing.HowSure(facts, v.today); sure != "" {
					lines = append(lines, sure)
				}
			}
			r.Figures = append(r.Figures, state.Figures(v.today)...)
		}
		r.Add(reply.Text(strings.Join(lines, "\n")))
	}
	return r
}

// earlyNote warns when a count that is still running is started again.
func earlyNote(state planner.WorkState) []string {
	facts, started := state.OwnFacts()
	if !started || state.Status != planner.NotYet || facts.Target <= 0 {
		return nil
	}
	share := 100 * facts.Total.Total / facts.Target
	return []string{fmt.Sprintf("at %.0f %% of the interval: check the label's least gap and season total", share)}
}

func stateOf(states []planner.WorkState, id planner.WorkID) (planner.WorkState, bool) {
	for _, state := range states {
		if state.Work.ID == id {
			return state, true
		}
	}
	return planner.WorkState{}, false
}
