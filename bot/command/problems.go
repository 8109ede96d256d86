package command

import (
	"fmt"
	"slices"
	"strings"

	"swardbook/planner"
)

// MissingOptions is the cause of a Missing problem: a chat server can ask for
// the options with a form instead of showing the problem.
type MissingOptions struct {
	Command *Command
	Options []Option // still needed
	Line    string   // what was given so far
}

// Error names the options.
func (m *MissingOptions) Error() string {
	names := make([]string, len(m.Options))
	for i, option := range m.Options {
		names[i] = option.Name
	}
	return "missing " + strings.Join(names, ", ")
}

// Missing asks for options that this call needs. A handler returns it when an
// option is required only together with others. Of those it names, the ones
// that were given are not asked for again, unless all were: then their values
// do not do.
func (r Request) Missing(names ...string) error {
	if lacking := slices.DeleteFunc(slices.Clone(names), r.Values.Has); len(lacking) > 0 {
		names = lacking
	} else {
		r.Values = r.Values.without(names)
	}
	if r.Command == nil {
		return planner.Problemf(planner.Missing, "still needed: %s", strings.Join(names, ", "))
	}
	return missing(r.Command, r.LineWith("", ""), names...)
}

func missing(command *Command, line string, names ...string) error {
	cause := &MissingOptions{Command: command, Line: line}
	questions := make([]string, len(names))
	for i, name := range names {
		questions[i] = name
		option, ok := command.Option(name)
		if !ok {
			continue
		}
		cause.Options = append(cause.Options, *option)
		questions[i] = fmt.Sprintf("%s (%s)", name, option.Help)
		line += " " + name + ":" + quote(option.example())
	}
	return planner.Problemf(planner.Missing, "still needed: %s", strings.Join(questions, ", ")).
		WithHint("Like: %s", line).WithCause(cause)
}

// Invalid is the problem of a value that cannot be used: the message says what
// is wrong, the hint what the option takes.
func (r Request) Invalid(name, format string, args ...any) error {
	problem := planner.Problemf(planner.Invalid, format, args...)
	if r.Command == nil {
		return problem
	}
	option, ok := r.Command.Option(name)
	if !ok {
		return problem
	}
	return problem.WithHint("%s", option.hint())
}

// hint says what an option takes, with an example.
func (o *Option) hint() string {
	return fmt.Sprintf("%s takes %s%s. Like: %s:%s", o.Name, o.Allowed(), kinds[o.Kind].more, o.Name, quote(o.example()))
}

// mayNot is the problem of a caller whose role is too low.
func mayNot(command *Command) error {
	return planner.Problemf(planner.Forbidden, "only a %s may use /%s", command.Who, command.Path).
		WithHint("Ask a %s to do it.", command.Who)
}

// unknownOption names the options there are.
func unknownOption(command *Command, name string) error {
	problem := planner.Problemf(planner.Invalid, "/%s has no option %q", command.Path, name)
	names := make([]string, len(command.Options))
	for i, option := range command.Options {
		names[i] = option.Name
	}
	if len(names) == 0 {
		return problem.WithHint("It takes none: /%s", command.Path)
	}
	if near := nearest(name, names); len(near) > 0 {
		return problem.WithHint("Perhaps you mean %s:", strings.Join(near[:min(len(near), maxNear)], ": or "))
	}
	return problem.WithHint("It takes %s. Like: %s", strings.Join(names, ", "), command.example())
}

// severalOptions names the options that a name cut short could be.
func severalOptions(name string, begun []*Option) error {
	names := make([]string, len(begun))
	for i, option := range begun {
		names[i] = option.Name + ":"
	}
	return planner.Problemf(planner.Invalid, "%s: could be %s", name, strings.Join(names, " or ")).
		WithHint("Write one of them out. Like: %s:%s", begun[0].Name, quote(begun[0].example()))
}

// equals refuses rate=2, which is written rate:2.
func (p *parser) equals(w word) error {
	name, text, found := strings.Cut(w.text, "=")
	begun := p.command.begun(strings.ToLower(name))
	if !found || w.quoted || len(begun) != 1 {
		return nil
	}
	option := begun[0]
	if text == "" || strings.ContainsFunc(text, func(r rune) bool { return closing(r) != 0 }) {
		text = option.example() // it goes on in the next words
	}
	return planner.Problemf(planner.Invalid, "%q is not read", shorten(w.text)).
		WithHint("Between an option and its value stands a colon. Write %s:%s", option.Name, quote(shorten(text)))
}

// unquoted is the problem of words that nothing can be done with, from the
// place in their run on: err, but that a value before them lacks its quotes
// when it is text that they may belong to.
func (p *parser) unquoted(words run, at int, err error) error {
	if words.after == nil || words.after.quoted {
		return err
	}
	option := words.after.option
	switch option.Kind {
	case Text:
	case Name, Names, File:
		if at > 0 { // a word between them has been taken for something else
			return err
		}
	default:
		return err
	}
	whole := words.after.text + " " + joined(words.words)
	return planner.Problemf(planner.Invalid, "%s: a value of several words stands in quotes", option.Name).
		WithHint("Put it in quotes: %s:%s", option.Name, quote(whole))
}

// unknownCommand names the commands that were perhaps meant.
func (t Table) unknownCommand(words []string) error {
	if len(words) == 0 {
		return planner.Problemf(planner.Missing, "no command was given").WithHint("Type /help to see what there is.")
	}
	known := len(words)
	for known > 0 && len(t.under(words[:known])) == 0 {
		known--
	}
	if known == 0 {
		return t.unknownFirst(words)
	}
	var next []string
	for _, command := range t.under(words[:known]) {
		if name := command.words()[known]; len(next) == 0 || next[len(next)-1] != name {
			next = append(next, name)
		}
	}
	path := "/" + strings.Join(words[:known], " ")
	if known == len(words) {
		return planner.Problemf(planner.Missing, "%s is the beginning of a command", path).
			WithHint("Go on with one of: %s. Like: %s %s", strings.Join(next, ", "), path, next[0])
	}
	problem := planner.Problemf(planner.NotFound, "%s cannot be followed by %q", path, shorten(words[known]))
	if near := nearest(words[known], next); len(near) > 0 {
		next = near
	}
	return problem.WithHint("Use one of: %s. Like: %s %s", strings.Join(next, ", "), path, next[0])
}

func (t Table) unknownFirst(words []string) error {
	problem := planner.Problemf(planner.NotFound, "there is no command /%s", shorten(words[0]))
	var near []string
	for _, command := range t.All() {
		if len(nearest(words[0], command.words())) > 0 {
			near = append(near, "/"+command.Path)
		}
	}
	if len(near) == 0 {
		return problem.WithHint("Type /help to see what there is.")
	}
	return problem.WithHint("Perhaps you mean %s.", strings.Join(near[:min(len(near), maxNear)], " or "))
}

// maxNear is the most names offered for a mistyped one.
const maxNear = 5

// nearest are the names that differ from the word by little more than a slip
// of the finger, or that begin with it, nearest first.
func nearest(word string, names []string) []string {
	if len(word) > 2*maxName { // too long to be a slip, and slow to compare
		return nil
	}
	slips := max(1, len(word)/3)
	byDistance := make([][]string, slips+2)
	for _, name := range names {
		d := distance(word, name)
		if d > slips {
			d = slips + 1
		}
		if d <= slips || len(word) >= 3 && strings.HasPrefix(name, word) {
			byDistance[d] = append(byDistance[d], name)
		}
	}
	return slices.Concat(byDistance...)
}

// distance is the number of letters to add, drop, change, or swap with the
// next one, to make b of a (optimal string alignment).
func distance(a, b string) int {
	x, y := []rune(a), []rune(b)
	rows := make([][]int, len(x)+1)
	for i := range rows {
		rows[i] = make([]int, len(y)+1)
		rows[i][0] = i
	}
	for j := range rows[0] {
		rows[0][j] = j
	}
	for i := 1; i <= len(x); i++ {
		for j := 1; j <= len(y); j++ {
			change := 1
			if x[i-1] == y[j-1] {
				change = 0
			}
			rows[i][j] = min(rows[i-1][j]+1, rows[i][j-1]+1, rows[i-1][j-1]+change)
			if i > 1 && j > 1 && x[i-1] == y[j-2] && x[i-2] == y[j-1] {
				rows[i][j] = min(rows[i][j], rows[i-2][j-2]+1)
			}
		}
	}
	return rows[len(x)][len(y)]
}
