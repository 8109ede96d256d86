package command

import (
	"context"

	"swardbook/bot/reply"
	"swardbook/planner"
)

// kept saves a noun and tells what was done.
func (d Desk) kept(ctx context.Context, stamp planner.Stamp, noun planner.Noun, said reply.Reply) (reply.Reply, error) {
	if _, err := d.Book.Save(ctx, stamp, noun); err != nil {
		return reply.Reply{}, err
	}
	return said, nil
}

// dropping is the question before something is dropped, or the dropping.
func (d Desk) dropping(ctx context.Context, req Request, stamp planner.Stamp, archived planner.Noun, what, with string) (reply.Reply, error) {
	if req.Ask {
		return reply.Reply{Private: true, Blocks: []reply.Block{reply.Textf("Drops %s%s. Its history is kept.", what, with)},
			Confirm: &reply.Confirm{Question: "Drop it?"}}, nil
	}
	return d.kept(ctx, stamp, archived, reply.Of(reply.Textf("Dropped %s.", what)))
}

// nameOption names the thing that a set-up command is about.
func nameOption(help, example string, complete func(context.Context, Request, string) []string) Option {
	return Option{Name: "name", Kind: Name, Required: true, Help: help, Example: example, Complete: complete}
}

func newNameOption() Option {
	return Option{Name: "new-name", Kind: Name, Help: "another name", Example: "north greens"}
}

// renamed is the new name when one is given.
func renamed(values Values, name string) string { return textOr(values, "new-name", name) }

// listed shows names and what is set, or the line that adds the first.
func listed(fields reply.Fields, none string) reply.Reply {
	if len(fields) == 0 {
		return reply.Reply{Private: true, Blocks: []reply.Block{reply.Text(none)}}
	}
	return reply.Reply{Private: true, Blocks: []reply.Block{fields}}
}
