package planner

import (
	"errors"
	"fmt"
)

// Kind of a Problem: what went wrong, for machines.
type Kind string

// The kinds of problems.
const (
	Invalid   Kind = "invalid"   // what was typed or read cannot be used
	Missing   Kind = "missing"   // something needed was not given
	NotFound  Kind = "not-found" // no such site, surface, work …
	Taken     Kind = "taken"     // the name is in use
	Forbidden Kind = "forbidden" // the caller's role may not
	Refused   Kind = "refused"   // a file or an edit was refused whole
	Busy      Kind = "busy"      // somebody else holds the store; try again
	Internal  Kind = "internal"  // our own mistake
)

// Problem is an error that a person can act on.
type Problem struct {
	Kind    Kind
	Message string // what is wrong, and where
	Hint    string // what to do, with an example that works
	Cause   error  // for the log
}

// Problemf makes a problem of the kind.
func Problemf(kind Kind, format string, args ...any) *Problem {
	return &Problem{Kind: kind, Message: fmt.Sprintf(format, args...)}
}

// WithHint returns the problem with what to do about it.
func (p *Problem) WithHint(format string, args ...any) *Problem {
	out := *p
	out.Hint = fmt.Sprintf(format, args...)
	return &out
}

// WithCause returns the problem with the error beneath it.
func (p *Problem) WithCause(cause error) *Problem {
	out := *p
	out.Cause = cause
	return &out
}

// Error is the message; the hint is shown beside it, not in it.
func (p *Problem) Error() string { return p.Message }

// Unwrap returns the cause.
func (p *Problem) Unwrap() error { return p.Cause }

// KindOf returns the kind of the error: a Problem's own, else Internal.
func KindOf(err error) Kind {
	var problem *Problem
	if errors.As(err, &problem) {
		return problem.Kind
	}
	return Internal
}
