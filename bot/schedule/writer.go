package schedule

import (
	"context"
	"fmt"
	"slices"
	"strings"
	"time"

	"swardbook/bot/briefing"
	"swardbook/bot/command"
	"swardbook/bot/reply"
	"swardbook/planner"
)

// Desk writes posts by the same commands that people type.
type Desk struct {
	Table command.Table
	Book  *planner.Book
}

var _ Writer = Desk{}

// Compose runs the post's command for its day, says what is late, missed or
// missing, and puts the buttons of a post under it.
func (d Desk) Compose(ctx context.Context, task Task, now time.Time) (Content, error) {
	setup, site, err := d.site(ctx, task.Post)
	if err != nil {
		return Content{}, err
	}
	kind, ok := command.PostKind(task.Post.What)
	if !ok {
		return Content{}, planner.Problemf(planner.Invalid, "%q is nothing that can be posted", task.Post.What)
	}
	one := len(setup.Sites) == 1
	pairs := slices.Clone(kind.Pairs)
	if kind.Dated {
		pairs = append(pairs, command.Pair{Name: "date", Value: task.Day.String()})
	}
	line := siteLine(kind.Path, site, one, pairs...)
	r, err := d.Table.Run(ctx, command.Request{
		Caller: command.Caller{ID: "post", Name: By, Role: command.Lead}, Now: now, Line: line, Confirmed: true})
	if err != nil {
		return Content{}, err
	}
	whole, err := d.Whole(ctx, task.Post, task.Day)
	if err != nil {
		return Content{}, err
	}
	partial := !whole
	corrected, err := d.corrected(ctx, task, site)
	if err != nil {
		return Content{}, err
	}
	if notes := append(notes(task, partial, site), corrected...); len(notes) > 0 {
		r.Blocks = slices.Insert(r.Blocks, underHeading(r.Blocks), reply.Block(reply.Text(strings.Join(notes, "\n"))))
	}
	r.Private, r.Confirm = false, nil
	r.Blocks = append(withoutActions(r.Blocks), d.actions(site, one))
	return Content{Reply: r, Partial: partial}, nil
}

// corrected tells what late readings have moved since the last post, in a line.
func (d Desk) corrected(ctx context.Context, task Task, site planner.Site) ([]string, error) {
	posted := task.Posted
	if kind, _ := command.PostKind(task.Post.What); !kind.Yesterday || len(posted.Figures) == 0 {
		return nil, nil
	}
	plan, err := d.Book.Plan(ctx, site, posted.Day, task.Day)
	if err != nil {
		return nil, err
	}
	now, err := planner.Evaluate(plan)
	if err != nil {
		return nil, err
	}
	line := briefing.CorrectionLine(posted.Day, planner.Corrections(posted.Figures, now.Figures()), site.Units)
	if line == "" {
		return nil, nil
	}
	return []string{line}, nil
}

func (d Desk) site(ctx context.Context, post planner.Post) (planner.Setup, planner.Site, error) {
	setup, err := d.Book.Setup(ctx)
	if err != nil {
		return setup, planner.Site{}, err
	}
	for _, site := range setup.Sites {
		if site.ID == post.Site {
			return setup, site, nil
		}
	}
	return setup, planner.Site{}, planner.Problemf(planner.NotFound, "the post's site was dropped")
}

// Whole reports whether the day before has what the site's record has of its
// days: hourly readings if there are any, a high and a low in any case. A post
// that does not tell of yesterday lacks nothing.
func (d Desk) Whole(ctx context.Context, post planner.Post, day planner.Day) (bool, error) {
	if kind, ok := command.PostKind(post.What); ok && !kind.Yesterday {
		return true, nil
	}
	record, err := d.Book.Record(ctx, post.Site)
	if err != nil {
		return false, err
	}
	for i := len(record.Facts) - 1; i >= 0; i-- {
		if facts := record.Facts[i]; facts.Day == day-1 {
			return facts.HasExtremes && (facts.HasHourly || !record.HasHourly()), nil
		}
	}
	return false, nil
}

// siteLine is a command about the site; of a team's only site it need not say so.
func siteLine(path string, site planner.Site, only bool, pairs ...command.Pair) string {
	if !only {
		pairs = append(pairs, command.Pair{Name: "site", Value: site.Name})
	}
	return command.Line(path, pairs...)
}

// notes are the lines above a post.
func notes(task Task, partial bool, site planner.Site) []string {
	var lines []string
	if task.Part == 1 {
		lines = append(lines, "Yesterday's weather is in: this takes the place of today's first post.")
	} else if task.Late {
		lines = append(lines, "Late: this was due at "+task.Post.Clock()+".")
	}
	var none, unsure []planner.Day
	for _, missed := range task.Missed {
		if missed.Unsure {
			unsure = append(unsure, missed.Day)
		} else {
			none = append(none, missed.Day)
		}
	}
	if len(none) > 0 {
		lines = append(lines, "No post went out on "+days(none)+".")
	}
	if len(unsure) > 0 {
		lines = append(lines, "Whether a post went out on "+days(unsure)+" is not known.")
	}
	if partial && task.Part == 0 {
		lines = append(lines, "Yesterday's weather is not whole yet. Once it is, this post is followed up.")
	}
	return lines
}

// days names one day, or says how many and from which to which.
func days(all []planner.Day) string {
	if len(all) == 1 {
		return all[0].Short()
	}
	return fmt.Sprintf("%d days, %s to %s", len(all), all[0].Short(), all[len(all)-1].Short())
}

// underHeading is the place of the first block that is not the post's heading.
func underHeading(blocks []reply.Block) int {
	if len(blocks) > 0 {
		if _, ok := blocks[0].(reply.Heading); ok {
			return 1
		}
	}
	return 0
}

func withoutActions(blocks []reply.Block) []reply.Block {
	var rest []reply.Block
	for _, block := range blocks {
		if _, ok := block.(reply.Actions); !ok {
			rest = append(rest, block)
		}
	}
	return rest
}

// actions are the buttons of a post.
func (d Desk) actions(site planner.Site, only bool) reply.Actions {
	var actions reply.Actions
	for _, button := range []struct{ label, path string }{
		{"Due", "due"}, {"Done…", "done"}, {"Sheet", "sheet get"}, {"More", "season"},
	} {
		if _, found := d.Table.Find(button.path); found {
			actions = append(actions, reply.Action{Label: button.label, Line: siteLine(button.path, site, only)})
		}
	}
	return actions
}
