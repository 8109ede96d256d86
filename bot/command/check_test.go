package command

import (
	"fmt"
	"math"
	"strings"
	"testing"
)

func TestCheckFindsWhatIsWrong(t *testing.T) {
	long := strings.Repeat("x", maxDescription+1)
	many := func(n int) (options []Option) {
		for i := range n {
			options = append(options, Option{Name: fmt.Sprintf("o%d", i), Kind: Text, Help: "an option"})
		}
		return options
	}
	tests := []struct {
		name string
		bend func(*Command) // of a command that passes
		want string
	}{
		{"nothing", func(*Command) {}, ""},
		{"no path", func(c *Command) { c.Path = "" }, "a path is 1 to 3 words"},
		{"four words", func(c *Command) { c.Path = "a b c d" }, "a path is 1 to 3 words"},
		{"two spaces", func(c *Command) { c.Path = "a  b" }, "a path is 1 to 3 words"},
		{"capital", func(c *Command) { c.Path = "Due" }, `the name "Due"`},
		{"long name", func(c *Command) { c.Path = strings.Repeat("x", maxName+1) }, "the name"},
		{"no description", func(c *Command) { c.Short = "" }, "has 0 characters"},
		{"long description", func(c *Command) { c.Short = long }, "has 101 characters"},
		{"nothing to run", func(c *Command) { c.Run = nil }, "has nothing to run"},
		{"shown to those who may not", func(c *Command) { c.Who, c.Listed = Lead, true }, "is shown to the crew"},
		{"26 options", func(c *Command) { c.Options = many(26) }, "26 options, at most 25"},
		{"option twice", func(c *Command) { c.Options = append(c.Options, c.Options[0]) }, "is taken"},
		{"option confirm", func(c *Command) { c.Options[0].Name = "confirm" }, "option name confirm is taken"},
		{"required after optional", func(c *Command) {
			c.Options = append(c.Options, Option{Name: "z", Kind: Text, Help: "z", Required: true})
		}, "option z is required and stands after"},
		{"option name", func(c *Command) { c.Options[0].Name = "Surface" }, `the name "Surface"`},
		{"option without help", func(c *Command) { c.Options[0].Help = "" }, "has 0 characters"},
		{"option without kind", func(c *Command) { c.Options[0].Kind = 0 }, "has no kind"},
		{"unknown kind", func(c *Command) { c.Options[0].Kind = 99 }, "has no kind"},
		{"choice without choices", func(c *Command) { c.Options[0].Kind = Choice }, "0 choices"},
		{"choices without choice", func(c *Command) { c.Options[0].Choices = []string{"a"} }, "1 choices"},
		{"choice twice", func(c *Command) { c.Options[0].Kind, c.Options[0].Choices = Choice, []string{"a", "a"} }, `choice "a" is there twice`},
		{"26 choices", func(c *Command) {
			c.Options[0].Kind, c.Options[0].Choices = Choice, strings.Split("a b c d e f g h i j k l m n o p q r s t u v w x y z", " ")
		}, "26 choices"},
		{"past text", func(c *Command) { c.Options[0].Past = true }, "only a Day can be past"},
		{"range of a text", func(c *Command) { c.Options[0].Range = AtLeast(0) }, "the range bounds no number"},
		{"empty range", func(c *Command) { c.Options[0].Kind, c.Options[0].Range = Number, Between(2, 1) }, "or is empty"},
		{"range of no number", func(c *Command) { c.Options[0].Kind, c.Options[0].Range = Number, Between(math.NaN(), 1) }, "or is empty"},
		{"own example does not fit", func(c *Command) { c.Options[0].Kind, c.Options[0].Example = Number, "dry" }, `example "dry"`},
		{"no example", func(c *Command) { c.Examples = nil }, "has no example"},
		{"example cannot be read", func(c *Command) { c.Examples = []string{"/x nonsense:1"} }, "no option"},
		{"example of another command", func(c *Command) { c.Examples = []string{"/other thing"} }, "is of another command"},
		{"example without slash", func(c *Command) { c.Examples = []string{"x"} }, "begins without a slash"},
		{"a command that others begin with", func(c *Command) { c.Path, c.Examples = "other", []string{"/other"} }, "/other is a command itself"},
		{"twice", func(c *Command) { c.Path, c.Examples = "other thing", []string{"/other thing"} }, "is there twice"},
		{"too much text", func(c *Command) {
			c.Options = many(25)
			for i := range c.Options {
				c.Options[i].Kind = Choice
				for j := range 10 {
					c.Options[i].Choices = append(c.Options[i].Choices, fmt.Sprintf("%020d", j))
				}
			}
		}, "characters, at most 8000"},
	}
	for _, test := range tests {
		good := Command{Path: "x", Short: "something", Run: echo, Examples: []string{"/x"},
			Options: []Option{{Name: "first", Kind: Text, Help: "the first option"}}}
		test.bend(&good)
		other := Command{Path: "other thing", Short: "something", Run: echo, Examples: []string{"/other thing"}}
		err := New(nil, other, good).Check()
		if test.want == "" && err != nil || test.want != "" && (err == nil || !strings.Contains(err.Error(), test.want)) {
			t.Errorf("%s: %v, want %q", test.name, err, test.want)
		}
	}
}

func TestCheckCountsBranchesAndCommands(t *testing.T) {
	var branches, tops []Command
	for i := range 101 {
		name := fmt.Sprintf("c%d", i)
		tops = append(tops, Command{Path: name, Short: "something", Run: echo, Examples: []string{"/" + name}})
		if i < 26 {
			branches = append(branches, Command{Path: "setup " + name, Short: "something", Run: echo, Examples: []string{"/setup " + name}})
		}
	}
	if err := New(nil, branches...).Check(); err == nil || !strings.Contains(err.Error(), "26 words follow /setup") {
		t.Errorf("26 words after one: %v", err)
	}
	if err := New(nil, branches[:25]...).Check(); err != nil {
		t.Errorf("25 words after one: %v", err)
	}
	if err := New(nil, tops...).Check(); err == nil || !strings.Contains(err.Error(), "101 first words") {
		t.Errorf("101 commands: %v", err)
	}
	if err := New(nil, tops[:100]...).Check(); err != nil {
		t.Errorf("100 commands: %v", err)
	}
}

// The examples of hints are values that work, whatever the range.
func TestExamplesOfHintsWork(t *testing.T) {
	for kind := Text; kind <= File; kind++ {
		option := Option{Name: "x", Kind: kind, Help: "x"}
		if kind == Choice {
			option.Choices = []string{"a b", "c"}
		}
		if err := option.check(); err != nil {
			t.Errorf("kind %d: %v", kind, err)
		}
		for _, bounds := range []*Range{Between(500, 600), Between(-9, -5), AtLeast(1000), Between(math.Inf(-1), -4), Between(0.5, 1.5)} {
			if option.Range = bounds; kind == Number || kind == Target || kind == Temperature || kind == Warming {
				if err := option.check(); err != nil {
					t.Errorf("kind %d in %v: %v", kind, *bounds, err)
				}
			}
		}
	}
}
