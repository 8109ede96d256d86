// Package command is the table of commands: the name of each, its options and
// their kinds, who may run it, what it does. One table serves the chat server
// and the terminal.
//
// It must not know who shows a reply or where a command line came from, it
// reads no clock, and it keeps nothing between two commands.
package command

import (
	"context"
	"io"
	"strings"
	"time"

	"swardbook/bot/reply"
	"swardbook/planner"
)

// Role is what a caller may do. A higher role may all that a lower one may.
type Role int

// The roles.
const (
	Crew Role = iota // reads, logs, undoes own work
	Lead             // may also set up
)

// String is the role's word.
func (r Role) String() string {
	if r == Lead {
		return "lead"
	}
	return "crew"
}

// Caller is who gave the command. ID never changes; Name is for people.
type Caller struct {
	ID   string
	Name string
	Role Role
}

// Handler runs a command. It changes nothing while the request says Ask. An
// error a person can act on is a *planner.Problem; any other error is logged
// and told as our own mistake.
type Handler func(ctx context.Context, req Request) (reply.Reply, error)

// Command is one command.
type Command struct {
	Path     string   // one to three words: "setup work add"
	Short    string   // what it does, at most 100 characters
	Long     string   // more of it, for help; may be empty
	Options  []Option // required ones first
	Who      Role     // the least role that may run it
	Listed   bool     // shown to the crew
	Asks     bool     // says what it will mean and asks before it acts
	Shared   bool     // what it answers once it has acted is for everybody, not for the caller alone
	Examples []string // command lines that work, the first being the plainest
	Run      Handler
}

// Option finds one of the command's options.
func (c *Command) Option(name string) (*Option, bool) {
	for i := range c.Options {
		if c.Options[i].Name == name {
			return &c.Options[i], true
		}
	}
	return nil, false
}

// leastName is the fewest letters that an option's name is cut short to: one
// letter and a colon is the drive of a path.
const leastName = 2

// begun are the options whose names begin with the name, or the one that has it.
func (c *Command) begun(name string) (options []*Option) {
	if option, found := c.Option(name); found {
		return []*Option{option}
	}
	for i := range c.Options {
		if len(name) >= leastName && strings.HasPrefix(c.Options[i].Name, name) {
			options = append(options, &c.Options[i])
		}
	}
	return options
}

// example is a line that works, for hints.
func (c *Command) example() string {
	if len(c.Examples) == 0 {
		return "/" + c.Path
	}
	return c.Examples[0]
}

// words are the words of the command's path.
func (c *Command) words() []string { return strings.Fields(c.Path) }

// Request is one call of a command. Whoever takes commands in fills Caller,
// Now, LocalClock, Line, OpenFile and perhaps Confirmed; Table.Run does the
// rest before the handler sees it.
type Request struct {
	Caller Caller
	// Now is when the command was given. With LocalClock its UTC fields are
	// what a clock at the site shows, whichever site that is; else it is an
	// instant.
	Now        time.Time
	LocalClock bool
	// Line is the command line: as typed when it comes in, in canonical form
	// (Line, without the confirmation) in the handler.
	Line string
	// Command is the table's entry that Line names; set by Table.Run.
	Command *Command
	// Values are the options given; set by Table.Run.
	Values Values
	// Ask tells the handler to say what it would do, and change nothing.
	Ask bool
	// Confirmed says that the caller has said yes. Set when the command comes
	// in it skips the question.
	Confirmed bool
	// Channel is the chat channel the command came from; empty where there is
	// none.
	Channel string
	// OpenFile opens the file that a File option names; nil where there are no
	// files.
	OpenFile func(name string) (io.ReadCloser, error)
	// Progress, when not nil, is told the rows of a long file as they are read.
	Progress func(rows int)
}

// TodayAt is the calendar day of the request on a clock in the zone; nil means
// UTC.
func (r Request) TodayAt(zone *time.Location) planner.Day {
	if r.LocalClock || zone == nil {
		zone = time.UTC
	}
	return planner.DayIn(r.Now, zone)
}

// NowAt is the time of the request in the zone; nil means UTC. Under
// LocalClock a time that the zone's clocks skip is moved as time.Date does.
func (r Request) NowAt(zone *time.Location) time.Time {
	if zone == nil {
		zone = time.UTC
	}
	if !r.LocalClock {
		return r.Now.In(zone)
	}
	now := r.Now.UTC()
	return time.Date(now.Year(), now.Month(), now.Day(), now.Hour(), now.Minute(), now.Second(), now.Nanosecond(), zone)
}

// Open opens the file that the option names.
func (r Request) Open(name string) (io.ReadCloser, error) {
	file, given := r.Values.File(name)
	if !given {
		return nil, r.Missing(name)
	}
	if r.OpenFile == nil {
		return nil, planner.Problemf(planner.Refused, "files cannot be given here")
	}
	return r.OpenFile(file)
}

// LineWith is the request's line with the option set to the value, for a
// button or for the line to confirm. An empty value leaves the option out.
func (r Request) LineWith(name, value string) string {
	pairs := make([]Pair, 0, len(r.Values.given)+1)
	set := false
	if r.Command == nil {
		return r.Line
	}
	for _, option := range r.Command.Options {
		text, given := r.Values.Text(option.Name)
		if option.Name == name {
			text, given, set = value, value != "", true
		}
		if given {
			pairs = append(pairs, Pair{option.Name, text})
		}
	}
	if !set && value != "" {
		pairs = append(pairs, Pair{name, value})
	}
	return Line(r.Command.Path, pairs...)
}
