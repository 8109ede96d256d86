package command

import (
	"context"
	"errors"
	"fmt"
	"runtime/debug"

	"swardbook/bot/reply"
	"swardbook/planner"
)

// Run runs the command line of the request: reads it, checks the caller's
// role, asks before an Asks command acts, and runs the handler.
//
// A command that asks runs twice. First the handler gets Ask and says what it
// will mean; the reply's Confirm then holds the line that acts and its code.
// With that code, or with Confirmed set by whoever takes commands in, the
// handler acts. Other commands may ask too, by answering with a Confirm while
// the request is not Confirmed.
//
// Every error is, or wraps, a *planner.Problem.
func (t Table) Run(ctx context.Context, req Request) (reply.Reply, error) {
	found, words, err := t.locate(req.Line)
	if err != nil {
		return reply.Reply{}, err
	}
	if req.Caller.Role < found.Who {
		return reply.Reply{}, mayNot(found)
	}
	call, err := parseOptions(found, words)
	if err != nil {
		return reply.Reply{}, err
	}
	req.Command, req.Values, req.Line = call.Command, call.Values, call.Line
	if call.Code != "" && !req.Confirmed {
		if err := checkCode(call.Code, req.Caller.ID, req.Line, req.Now); err != nil {
			return reply.Reply{}, err
		}
		req.Confirmed = true
	}
	req.Ask = found.Asks && !req.Confirmed
	out, err := t.handle(ctx, req)
	if err == nil {
		err = t.askBack(req, &out)
	}
	if err == nil {
		err = out.Check()
	}
	if err != nil {
		return reply.Reply{}, t.problem(ctx, req, err)
	}
	return out, nil
}

// askBack completes the question of a reply.
func (t Table) askBack(req Request, out *reply.Reply) error {
	if req.Confirmed {
		out.Confirm = nil // asked once is enough
		return nil
	}
	if out.Confirm == nil && !req.Ask {
		return nil
	}
	confirm := reply.Confirm{Line: req.Line}
	if asked := out.Confirm; asked != nil {
		confirm.Question = asked.Question
		if asked.Line != "" {
			call, err := t.ParseLine(asked.Line)
			if err != nil {
				return fmt.Errorf("line to confirm: %w", errors.New(err.Error()))
			}
			confirm.Line = call.Line
		}
	}
	if confirm.Question == "" {
		confirm.Question = "Do this?"
	}
	confirm.Code = confirmCode(req.Caller.ID, confirm.Line, minuteOf(req.Now))
	out.Confirm = &confirm
	return nil
}

// handle runs the handler; a panic in it is an error with its stack.
func (t Table) handle(ctx context.Context, req Request) (out reply.Reply, err error) {
	defer func() {
		if cause := recover(); cause != nil {
			err = &panicked{cause: cause, stack: debug.Stack()}
		}
	}()
	return req.Command.Run(ctx, req)
}

type panicked struct {
	cause any
	stack []byte
}

func (p *panicked) Error() string { return fmt.Sprintf("panic: %v", p.cause) }

// problem turns what a handler returned into a problem that can be shown, and
// logs what is not shown.
func (t Table) problem(ctx context.Context, req Request, err error) error {
	var problem *planner.Problem
	if errors.As(err, &problem) && problem.Kind != planner.Internal {
		return err
	}
	if problem == nil && ctx.Err() != nil && errors.Is(err, ctx.Err()) {
		return planner.Problemf(planner.Busy, "/%s was stopped before it was done", req.Command.Path).
			WithHint("Try again.").WithCause(err)
	}
	attributes := []any{"command", req.Command.Path, "caller", req.Caller.ID, "error", err}
	var crash *panicked
	if errors.As(err, &crash) {
		attributes = append(attributes, "stack", string(crash.stack))
	}
	t.log.ErrorContext(ctx, "command went wrong", attributes...)
	if problem != nil {
		return err
	}
	return planner.Problemf(planner.Internal, "something went wrong on our side in /%s", req.Command.Path).
		WithHint("Nothing you typed is at fault. It is in the log; try again, or tell whoever runs this.").WithCause(err)
}
