package command

import (
	"fmt"
	"strings"

	"swardbook/bot/reply"
)

// Help explains one command: how it is typed, what each option takes, lines
// that work.
func Help(command *Command) reply.Reply {
	about := command.Short + "."
	if command.Long != "" {
		about += "\n" + command.Long
	}
	if command.Asks {
		about += "\nIt says what it will mean and asks before it acts."
	}
	if command.Who > Crew {
		about += fmt.Sprintf("\nFor a %s.", command.Who)
	}
	out := reply.Of(reply.Heading(usage(command)), reply.Text(about))
	if len(command.Options) > 0 {
		fields := make(reply.Fields, len(command.Options))
		for i, option := range command.Options {
			takes := option.Allowed()
			if option.Required {
				takes += "; needed"
			}
			fields[i] = reply.Field{Name: option.Name, Value: fmt.Sprintf("%s (%s)", option.Help, takes)}
		}
		out.Add(fields)
	}
	if len(command.Examples) > 0 {
		out.Add(reply.Text("Like:\n" + strings.Join(command.Examples, "\n")))
	}
	return out
}

// usage is the command with its options, those in brackets that may be left
// out.
func usage(command *Command) string {
	line := "/" + command.Path
	for _, option := range command.Options {
		if option.Required {
			line += " " + option.Name
		} else {
			line += " [" + option.Name + "]"
		}
	}
	return line
}

// List names the commands a role is shown, the plain ones first, the others
// under the word they begin with.
func (t Table) List(role Role) reply.Reply {
	var plain reply.Fields
	groups := make(map[string]reply.Fields)
	var order []string
	for _, command := range t.Visible(role) {
		field := reply.Field{Name: "/" + command.Path, Value: command.Short}
		words := command.words()
		if len(words) == 1 {
			plain = append(plain, field)
			continue
		}
		if groups[words[0]] == nil {
			order = append(order, words[0])
		}
		groups[words[0]] = append(groups[words[0]], field)
	}
	var out reply.Reply
	if len(plain) > 0 {
		out.Add(plain)
	}
	for _, first := range order {
		out.Add(reply.Heading("/"+first), groups[first])
	}
	return out
}
