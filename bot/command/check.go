package command

import (
	"errors"
	"fmt"
	"regexp"
	"slices"
	"strings"
	"unicode/utf8"
)

// Limits of a table of commands: those of the chat server's open documentation
// of its application commands, in characters or in number. A table inside them
// fits every place commands are shown in.
const (
	maxCommands    = 100 // first words
	maxBranches    = 25  // words that may follow a word of a path
	maxOptions     = 25
	maxChoices     = 25
	maxName        = 32   // a word of a path, an option's name
	maxDescription = 100  // Short, Help
	maxChoice      = 100  // a choice
	maxSum         = 8000 // all names, descriptions and values under a first word
)

var namePattern = regexp.MustCompile(`^[a-z0-9][a-z0-9-]*$`)

// Check says everything that is wrong with the table: names, lengths, numbers,
// required options after others, examples that cannot be read. A test runs it;
// a table that passes is never refused by who shows it.
func (t Table) Check() error {
	var wrong []error
	seen := make(map[string]bool)
	sums := make(map[string]int)
	for _, command := range t.All() {
		err := errors.Join(t.checkPath(command), checkCommand(command), t.checkExamples(command))
		if seen[command.Path] {
			err = errors.Join(err, errors.New("is there twice"))
		}
		if err != nil {
			wrong = append(wrong, fmt.Errorf("command %q: %w", command.Path, err))
		}
		seen[command.Path] = true
		sums[strings.SplitN(command.Path, " ", 2)[0]] += characters(command)
	}
	if len(sums) > maxCommands {
		wrong = append(wrong, fmt.Errorf("%d first words, at most %d", len(sums), maxCommands))
	}
	for first, sum := range sums {
		if sum > maxSum {
			wrong = append(wrong, fmt.Errorf("/%s: names, descriptions and values have %d characters, at most %d", first, sum, maxSum))
		}
	}
	return errors.Join(wrong...)
}

// characters is what a command adds to the characters under its first word. A choice
// counts twice, as its label and as its value; an option's help counts as far
// as a chat server with little room must show it; the words of the path count for
// each command, which is more than they will be.
func characters(command *Command) int {
	sum := len(command.Path) + utf8.RuneCountInString(command.Short)
	for _, option := range command.Options {
		sum += len(option.Name) + utf8.RuneCountInString(option.HelpWithin(LeastHelp))
		for _, choice := range option.Choices {
			sum += 2 * utf8.RuneCountInString(choice)
		}
	}
	return sum
}

func (t Table) checkPath(command *Command) error {
	words := command.words()
	if len(words) == 0 || len(words) > maxPath || strings.Join(words, " ") != command.Path {
		return fmt.Errorf("a path is 1 to %d words with single spaces", maxPath)
	}
	for _, w := range words {
		if err := checkName(w); err != nil {
			return err
		}
	}
	for n := 1; n < len(words); n++ {
		if _, found := t.Find(strings.Join(words[:n], " ")); found {
			return fmt.Errorf("/%s is a command itself", strings.Join(words[:n], " "))
		}
		next := make(map[string]bool)
		for _, other := range t.under(words[:n]) {
			next[other.words()[n]] = true
		}
		if len(next) > maxBranches {
			return fmt.Errorf("%d words follow /%s, at most %d", len(next), strings.Join(words[:n], " "), maxBranches)
		}
	}
	return nil
}

func checkName(name string) error {
	if len(name) > maxName || !namePattern.MatchString(name) {
		return fmt.Errorf("the name %q is not 1 to %d lower case letters, digits and hyphens", name, maxName)
	}
	return nil
}

func checkDescription(what, text string) error {
	if n := utf8.RuneCountInString(text); n < 1 || n > maxDescription || text != clean(text) {
		return fmt.Errorf("the description of %s has %d characters, not 1 to %d", what, n, maxDescription)
	}
	return nil
}

func checkCommand(command *Command) error {
	wrong := []error{checkDescription("the command", command.Short)}
	if command.Run == nil {
		wrong = append(wrong, errors.New("has nothing to run"))
	}
	if command.Listed && command.Who > Crew {
		wrong = append(wrong, errors.New("is shown to the crew, which may not run it"))
	}
	if len(command.Options) > maxOptions {
		wrong = append(wrong, fmt.Errorf("%d options, at most %d", len(command.Options), maxOptions))
	}
	seen := map[string]bool{confirmName: true}
	optional := false
	for i := range command.Options {
		option := &command.Options[i]
		if seen[option.Name] {
			wrong = append(wrong, fmt.Errorf("the option name %s is taken", option.Name))
		}
		if optional && option.Required {
			wrong = append(wrong, fmt.Errorf("option %s is required and stands after one that is not", option.Name))
		}
		seen[option.Name], optional = true, optional || !option.Required
		if err := option.check(); err != nil {
			wrong = append(wrong, fmt.Errorf("option %s: %w", option.Name, err))
		}
	}
	return errors.Join(wrong...)
}

// ranged are the kinds that a Range bounds.
var ranged = []Kind{Number, Whole, Numbers, Temperature, Warming, Target}

func (o *Option) check() error {
	if _, known := kinds[o.Kind]; !known {
		return fmt.Errorf("has no kind (%d)", o.Kind)
	}
	wrong := []error{checkName(o.Name), checkDescription("the option", o.Help)}
	if (o.Kind == Choice) != (len(o.Choices) > 0) || len(o.Choices) > maxChoices {
		wrong = append(wrong, fmt.Errorf("%d choices; a Choice has 1 to %d, others none", len(o.Choices), maxChoices))
	}
	for i, choice := range o.Choices {
		n := utf8.RuneCountInString(choice)
		if n < 1 || n > maxChoice || slices.Contains(o.Choices[:i], choice) {
			wrong = append(wrong, fmt.Errorf("choice %q is there twice or has not 1 to %d characters", choice, maxChoice))
		}
	}
	if o.Complete != nil && o.Kind == Choice {
		wrong = append(wrong, errors.New("a Choice completes itself"))
	}
	if o.Past && o.Kind != Day {
		wrong = append(wrong, errors.New("only a Day can be past"))
	}
	if o.Range != nil && (!slices.Contains(ranged, o.Kind) || !(o.Range.Min <= o.Range.Max)) {
		wrong = append(wrong, errors.New("the range bounds no number, or is empty"))
	}
	if err := errors.Join(wrong...); err != nil {
		return err
	}
	if _, err := o.read(o.example()); err != nil {
		return fmt.Errorf("example %q: %w", o.example(), err)
	}
	return nil
}

// checkExamples reads the examples; one that names another command, or leaves
// out what is required, does not work.
func (t Table) checkExamples(command *Command) error {
	if len(command.Examples) == 0 {
		return errors.New("has no example")
	}
	for _, example := range command.Examples {
		call, err := t.ParseLine(example)
		if err != nil {
			return fmt.Errorf("example %s: %w", example, err)
		}
		if call.Command.Path != command.Path || !strings.HasPrefix(example, "/") {
			return fmt.Errorf("example %s is of another command, or begins without a slash", example)
		}
	}
	return nil
}
