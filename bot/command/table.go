package command

import (
	"log/slog"
	"slices"
)

// Table is the table of commands. It is not changed once made and may be used
// from several goroutines.
type Table struct {
	commands []Command
	log      *slog.Logger
}

// New makes a table. The log takes what a user is not shown (a panic's stack,
// an error without a sentence); nil throws it away.
func New(log *slog.Logger, commands ...Command) Table {
	if log == nil {
		log = slog.New(slog.DiscardHandler)
	}
	return Table{commands: slices.Clone(commands), log: log}
}

// All are the commands in the order of the table.
func (t Table) All() []*Command {
	all := make([]*Command, len(t.commands))
	for i := range t.commands {
		all[i] = &t.commands[i]
	}
	return all
}

// Find returns the command with the path.
func (t Table) Find(path string) (*Command, bool) {
	for i := range t.commands {
		if t.commands[i].Path == path {
			return &t.commands[i], true
		}
	}
	return nil, false
}

// Visible are the commands that a role is shown: to the crew the listed ones,
// to a lead all.
func (t Table) Visible(role Role) []*Command {
	return slices.DeleteFunc(t.All(), func(c *Command) bool {
		return role < Lead && (!c.Listed || c.Who > role)
	})
}

// under are the commands whose path begins with the words.
func (t Table) under(words []string) []*Command {
	return slices.DeleteFunc(t.All(), func(c *Command) bool {
		path := c.words()
		return len(path) <= len(words) || !slices.Equal(path[:len(words)], words)
	})
}
