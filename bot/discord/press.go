package discord

import (
	"context"
	"strconv"
	"strings"
	"time"

	"github.com/bwmarrin/discordgo"

	"swardbook/planner"
)

// What a button, or a form, does with its line.
const (
	runLine     = 'r' // run it; with options missing, ask for them with a form
	confirmLine = 'y' // run it: it holds the confirmation
	refuseLine  = 'n' // take the question away
	askOptions  = 'a' // ask for the options in extra with a form
	formLine    = 'f' // a form: run it with what was filled in
)

// kinds are all of these.
const kinds = "rynaf"

// press is what a button or a form stands for. It holds no right: that is
// looked up when somebody presses it.
type press struct {
	kind  rune
	extra string // options to ask for, or a post's marker
	line  string
}

// version of the encoding; a button of another one is answered with a note.
const pressVersion = "1"

// encode writes the press as a custom_id. A line that does not fit is kept in
// the store, and the id holds its number.
func (p press) encode(ctx context.Context, lines planner.LineKeeper, now time.Time) (string, error) {
	head := string(p.kind) + pressVersion + ":" + p.extra + ":"
	if unitsOf(head+p.line) <= maxCustomID {
		return head + p.line, nil
	}
	number, err := lines.KeepLine(ctx, p.line, now)
	if err != nil {
		return "", err
	}
	return head + "#" + strconv.FormatInt(number, 10), nil
}

// decode reads a custom_id back: a button that is too old, or of another
// program, is a NotFound problem.
func decode(ctx context.Context, lines func(context.Context) (planner.LineKeeper, error), id string) (press, error) {
	old := planner.Problemf(planner.NotFound, "this button is too old").WithHint("Type the command instead.")
	head, rest, found := strings.Cut(id, ":")
	extra, line, both := strings.Cut(rest, ":")
	if !found || !both || len(head) != 2 || head[1:] != pressVersion || !strings.Contains(kinds, head[:1]) {
		return press{}, old
	}
	p := press{kind: rune(head[0]), extra: extra, line: line}
	if text, kept := strings.CutPrefix(line, "#"); kept {
		number, err := strconv.ParseInt(text, 10, 64)
		if err != nil {
			return press{}, old
		}
		keeper, err := lines(ctx)
		if err != nil {
			return press{}, err
		}
		if p.line, err = keeper.Line(ctx, number); err != nil {
			return press{}, err
		}
	}
	return p, nil
}

// rows lays buttons out, five in a row.
func rows(ctx context.Context, buttons []labelled, lines planner.LineKeeper, now time.Time) ([]discordgo.MessageComponent, error) {
	all := []discordgo.MessageComponent{}
	var row discordgo.ActionsRow
	seen := map[string]bool{}
	for _, button := range buttons {
		id, err := button.press.encode(ctx, lines, now)
		if err != nil {
			return nil, err
		}
		if seen[id] {
			continue
		}
		seen[id] = true
		row.Components = append(row.Components, discordgo.Button{Label: shortened(button.label, maxLabel), Style: button.style, CustomID: id})
		if len(row.Components) == maxRow {
			all, row = append(all, row), discordgo.ActionsRow{}
		}
	}
	if len(row.Components) > 0 {
		all = append(all, row)
	}
	return all, nil
}
