package command

import (
	"strings"
	"unicode/utf8"

	"swardbook/planner"
)

// Call is a command line that was read.
type Call struct {
	Command *Command
	Values  Values
	Line    string // canonical: options in the command's order, no confirmation
	Code    string // of confirm:CODE, empty when not given
}

const (
	// maxLine is the longest command line read, in characters: more than all
	// options of a command filled to the brim.
	maxLine = 4000
	// maxPath is the most words of a command's path.
	maxPath = 3
	// confirmName is the option every command has without saying so.
	confirmName = "confirm"
)

// ParseLine reads a command line:
//
//	/due surface:greens work:"spring feed"
//
// The slash may be left out. Words without a name fill the options that are
// not named, in their order. Of two commands whose paths fit, the longer is
// meant. Values with spaces stand in quotes, a quote inside as \"; days and
// lists may do without ("when:3 days ago", "highs:29 30 28"). Every error is a
// *planner.Problem.
func (t Table) ParseLine(line string) (Call, error) {
	command, rest, err := t.locate(line)
	if err != nil {
		return Call{}, err
	}
	return parseOptions(command, rest)
}

// locate finds the command a line names, and the words after its path.
func (t Table) locate(line string) (*Command, []word, error) {
	if utf8.RuneCountInString(line) > maxLine {
		return nil, nil, planner.Problemf(planner.Invalid, "a command of more than %d characters is not read", maxLine).
			WithHint("Shorten it.")
	}
	words, err := split(line)
	if err != nil {
		return nil, nil, err
	}
	words, path := pathWords(words)
	for n := min(len(path), maxPath); n > 0; n-- {
		if command, ok := t.Find(strings.Join(path[:n], " ")); ok {
			return command, words[n:], nil
		}
	}
	return nil, nil, t.unknownCommand(path)
}

// pathWords gives the words without the leading slash, and those at the front
// that can be a path.
func pathWords(words []word) ([]word, []string) {
	if len(words) > 0 && words[0].bare() {
		words[0].text = strings.TrimPrefix(words[0].text, "/")
		if words[0].text == "" {
			words = words[1:]
		}
	}
	var path []string
	for _, w := range words {
		if !w.bare() || len(path) == maxPath {
			break
		}
		path = append(path, strings.ToLower(w.text))
	}
	return words, path
}

// parseOptions reads the words after a command's path.
func parseOptions(command *Command, words []word) (Call, error) {
	p := parser{command: command, given: make(map[string]value)}
	if err := p.named(words); err != nil {
		return Call{}, err
	}
	if err := p.unnamed(); err != nil {
		return Call{}, err
	}
	call := Call{Command: command, Values: Values{p.given}, Code: p.code}
	call.Line = Request{Command: command, Values: call.Values}.LineWith("", "")
	var needed []string
	for _, option := range command.Options {
		if _, ok := p.given[option.Name]; option.Required && !ok {
			needed = append(needed, option.Name)
		}
	}
	if len(needed) > 0 {
		return Call{}, missing(command, call.Line, needed...)
	}
	return call, nil
}

type parser struct {
	command *Command
	given   map[string]value
	code    string
	bare    []run // words without a name
}

// run is words without a name that stand together, and the pair before them,
// nil at the front.
type run struct {
	words []word
	after *pair
}

// pair is an option that was given and what of it was read as its value.
type pair struct {
	option *Option
	text   string
	quoted bool
}

// named reads the pairs and leaves the other words in p.bare.
func (p *parser) named(words []word) error {
	var current run
	for i := 0; i < len(words); {
		if !words[i].pair {
			if err := p.equals(words[i]); err != nil {
				return err
			}
			current.words = append(current.words, words[i])
			i++
			continue
		}
		p.bare = append(p.bare, current)
		taken, read, err := p.pair(words[i:])
		if err != nil {
			return err
		}
		current = run{after: read}
		i += taken
	}
	p.bare = append(p.bare, current)
	return nil
}

// pair reads the pair at the front and says how many words it takes; what it
// reads is nil for a code.
func (p *parser) pair(words []word) (int, *pair, error) {
	first, from := words[0], 0
	option, err := p.meant(first.name)
	if err != nil {
		return 0, nil, err
	}
	if first.text == "" && !first.quoted { // "when: today"
		if len(words) == 1 || words[1].pair {
			return 0, nil, noValue(first.name, option)
		}
		from = 1
	}
	if first.name == confirmName {
		if p.code != "" {
			return 0, nil, planner.Problemf(planner.Invalid, "%s is given twice", confirmName).WithHint("Give it once.")
		}
		p.code = words[from].text
		return from + 1, nil, nil
	}
	text, taken := gather(option, words[from:])
	return from + taken, &pair{option, text, words[from].quoted}, p.set(option, text)
}

// meant is the option with the name, or the only one whose name begins with
// it; nil for the code that confirms.
func (p *parser) meant(name string) (*Option, error) {
	if name == confirmName {
		return nil, nil
	}
	begun := p.command.begun(name)
	switch len(begun) {
	case 0:
		return nil, unknownOption(p.command, name)
	case 1:
		return begun[0], nil
	}
	return nil, severalOptions(name, begun)
}

func noValue(name string, option *Option) error {
	problem := planner.Problemf(planner.Missing, "%s: has no value", name)
	if option == nil {
		return problem
	}
	return problem.WithHint("%s", option.hint())
}

// unnamed gives the words without a name to the options not given, in order.
func (p *parser) unnamed() error {
	next := 0
	for _, run := range p.bare {
		for at := 0; at < len(run.words); {
			words := run.words[at:]
			for next < len(p.command.Options) && p.has(&p.command.Options[next]) {
				next++
			}
			if next == len(p.command.Options) {
				return p.unquoted(run, at, p.tooMany(words[0]))
			}
			option := &p.command.Options[next]
			text, taken := gather(option, words)
			if option.Kind == Text && next == len(p.command.Options)-1 && !words[0].quoted {
				text, taken = joined(words), len(words)
			}
			if err := p.set(option, text); err != nil {
				return p.unquoted(run, at, err)
			}
			at += taken
		}
	}
	return nil
}

func (p *parser) has(option *Option) bool {
	_, given := p.given[option.Name]
	return given
}

func (p *parser) tooMany(w word) error {
	problem := planner.Problemf(planner.Invalid, "/%s does not know what to do with %q", p.command.Path, shorten(w.text))
	if len(p.command.Options) == 0 {
		return problem.WithHint("It takes no options: /%s", p.command.Path)
	}
	return problem.WithHint("A value with spaces stands in quotes. Like: %s", p.command.example())
}

// set reads a value and keeps it.
func (p *parser) set(option *Option, text string) error {
	if p.has(option) {
		return planner.Problemf(planner.Invalid, "%s is given twice", option.Name).
			WithHint("Give it once: %s:%s", option.Name, quote(option.example()))
	}
	read, err := option.read(text)
	if err != nil {
		return err
	}
	p.given[option.Name] = read
	return nil
}

// mostDayWords is the most words of a day: "mon, 1 jul 2013 at 6:10 pm".
const mostDayWords = 7

// gather takes the value at the front, with those words after it that can only
// belong to it: "3 days ago", "29 30 28", "greens, tees", "29 c".
func gather(option *Option, words []word) (text string, taken int) {
	if words[0].quoted {
		return words[0].text, 1
	}
	run := 1
	for run < len(words) && words[run].bare() {
		run++
	}
	if option.Kind == Day || option.Kind == MonthDay {
		for n := min(run, mostDayWords); n > 1; n-- {
			if text := joined(words[:n]); option.fits(text) {
				return text, n
			}
		}
		return words[0].text, 1
	}
	taken = 1
	for taken < run && option.goesOn(words[taken-1].text, words[taken].text) {
		taken++
	}
	return joined(words[:taken]), taken
}

// goesOn says whether a bare word belongs to the value whose last word stands
// before it.
func (o *Option) goesOn(last, next string) bool {
	comma := strings.HasSuffix(last, ",") || strings.HasPrefix(next, ",")
	switch o.Kind {
	case Names:
		return comma
	case Numbers:
		return comma || o.fits(next)
	case Temperature, Warming, Target:
		return unitOf(next) != "" && o.fits(last+next)
	}
	return false
}

func (o *Option) fits(text string) bool {
	_, err := o.read(text)
	return err == nil
}

func joined(words []word) string {
	texts := make([]string, len(words))
	for i, w := range words {
		texts[i] = w.text
	}
	return strings.Join(texts, " ")
}
