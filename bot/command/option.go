package command

import (
	"context"
	"fmt"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"
)

// Kind is what an option takes.
type Kind int

// The kinds.
const (
	Text        Kind = iota + 1 // any text
	Name                        // a name of ours: 1 to 32 letters, digits, spaces, hyphens
	Names                       // one or more names with commas between
	Number                      // 2.5
	Whole                       // 3
	Numbers                     // a list of numbers: 29 30 28
	Day                         // a date, or words like "yesterday"
	MonthDay                    // a day of every year: 03-01 or 1 mar
	Choice                      // one of Choices
	Temperature                 // 29, 29c or 84f
	Warming                     // a difference of temperatures: 2, -1.5c or 3f
	Target                      // 200, 200c or 360f: a total of what a work counts
	Yes                         // yes or no
	File                        // a file; in the terminal its path
	ChatChannel                 // a channel of the chat server, by its id
	ChatGroup                   // a group of people of the chat server, by its id
)

// Range bounds a number, both ends included.
type Range struct{ Min, Max float64 }

// Between is the range with both ends.
func Between(lowest, highest float64) *Range { return &Range{lowest, highest} }

// AtLeast is the range with no upper end.
func AtLeast(lowest float64) *Range { return &Range{lowest, math.Inf(1)} }

// Option is one option of a command.
type Option struct {
	Name     string
	Kind     Kind
	Required bool
	Help     string   // what it is, at most 100 characters; asked when it is missing
	Choices  []string // of a Choice, at most 25
	Range    *Range   // of the number kinds; in the typed unit
	Past     bool     // of a Day: what is done or known by then; a weekday means the last one
	Clock    bool     // of a Day: a time may stand behind it, like "today 06:10" or "today 5pm"
	Example  string   // a value that works; empty takes the kind's own
	// Complete offers values that begin with the prefix, at most 25. The
	// request holds the options given so far.
	Complete func(ctx context.Context, req Request, prefix string) []string
}

// example is a value that works.
func (o *Option) example() string {
	switch {
	case o.Example != "":
		return o.Example
	case len(o.Choices) > 0:
		return o.Choices[0]
	}
	example := kinds[o.Kind].example
	if o.Range == nil {
		return example
	}
	if number, _, ok := readNumber(example); ok && (number < o.Range.Min || number > o.Range.Max) {
		return plain(math.Ceil(max(o.Range.Min, -math.MaxInt32)))
	}
	return example
}

// LeastHelp is the least room, in characters, that whoever shows options gives
// to the help of one.
const LeastHelp = 30

// HelpWithin is the option's help in at most so many characters, at least
// LeastHelp: whole if it fits, else up to the end of a part of it, else up to
// the end of a word with "…" behind. /help shows the whole.
func (o *Option) HelpWithin(most int) string {
	most = max(most, LeastHelp)
	runes := []rune(o.Help)
	if len(runes) <= most {
		return o.Help
	}
	const leastPart = 8
	for _, end := range []string{";", ":", ","} {
		part, _, found := strings.Cut(o.Help, end)
		if n := utf8.RuneCountInString(part); found && n >= leastPart && n <= most {
			return part
		}
	}
	text := string(runes[:most-1])
	if space := strings.LastIndexByte(text, ' '); space >= leastPart {
		text = text[:space]
	}
	return text + "…"
}

// Allowed says in words what the option takes.
func (o *Option) Allowed() string {
	allowed := kinds[o.Kind].allowed
	if o.Kind == Choice {
		allowed = "one of " + strings.Join(o.Choices, ", ")
	}
	if o.Range != nil {
		allowed += o.Range.words()
	}
	return allowed
}

func (r *Range) words() string {
	switch {
	case math.IsInf(r.Min, -1) && math.IsInf(r.Max, 1):
		return ""
	case math.IsInf(r.Max, 1):
		return fmt.Sprintf(", %s or more", plain(r.Min))
	case math.IsInf(r.Min, -1):
		return fmt.Sprintf(", %s or less", plain(r.Max))
	}
	return fmt.Sprintf(", %s to %s", plain(r.Min), plain(r.Max))
}

// plain writes a number as a person types it: no exponent, no spare zeros.
func plain(number float64) string { return strconv.FormatFloat(number, 'f', -1, 64) }

// kinds says of each kind what it takes, more of that for who got it wrong, and
// a value that works.
var kinds = map[Kind]struct{ allowed, more, example string }{
	Text:        {"a text", "", "dry"},
	Name:        {"a name", " (1 to 32 letters, digits, single spaces and hyphens)", "greens"},
	Names:       {"names with commas between", " (each once, of 1 to 32 letters, digits, single spaces and hyphens)", "greens,tees"},
	Number:      {"a number", "", "2.5"},
	Whole:       {"a whole number", "", "3"},
	Numbers:     {"numbers with spaces or commas between", "", "29,30,28"},
	Day:         {"a day", " (2013-06-20, 4 jun, mon, yesterday, 3 days ago, in 3 days)", "today"},
	MonthDay:    {"a month and day", " (03-01 or 1 mar)", "03-01"},
	Choice:      {"", "", ""}, // its own choices
	Temperature: {"a temperature", " (29, 29c or 84f)", "29"},
	Warming:     {"a difference in degrees", " (2, -1.5c or 3f)", "2"},
	Target:      {"a number", " (200, 200c or 360f)", "200"},
	Yes:         {"yes or no", "", "yes"},
	File:        {"a file", "", "week.csv"},
	ChatChannel: {"a channel of the chat server", " (chosen from its list, or its number)", "1010101010101010101"},
	ChatGroup:   {"a group of the chat server", " (chosen from its list, or its number)", "2020202020202020202"},
}
