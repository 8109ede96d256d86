package command

import (
	"context"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"
)

// maxSuggestions is the most values offered for an option.
const maxSuggestions = maxChoices

// Complete gives the lines that the partial line can be completed to, one word
// further: a command, an option's name, a value. The request needs a Caller,
// whose role decides which commands are offered, and what the options' own
// Complete need.
func (t Table) Complete(ctx context.Context, req Request, partial string) []string {
	words, err := split(partial)
	editing := err != nil
	if editing { // a quote that is still open
		if words, err = split(partial + `"`); err != nil {
			return nil
		}
	}
	end, _ := utf8.DecodeLastRuneInString(partial)
	var last word
	head := partial
	if len(words) > 0 && (editing || !unicode.IsSpace(end)) {
		last, words = words[len(words)-1], words[:len(words)-1]
		head = partial[:last.start]
	}
	words, path := pathWords(words)
	if len(path) == len(words) {
		if lines := t.completePath(req.Caller.Role, path, last); len(lines) > 0 {
			return lines
		}
	}
	for n := len(path); n > 0; n-- {
		if command, found := t.Find(strings.Join(path[:n], " ")); found && command.Who <= req.Caller.Role {
			req.Command, req.Values = command, valuesSoFar(command, words[n:])
			return t.completeOption(ctx, req, head, last)
		}
	}
	return nil
}

// completePath offers the next word of a path.
func (t Table) completePath(role Role, path []string, last word) []string {
	if last.pair || last.quoted {
		return nil
	}
	prefix := strings.ToLower(last.text)
	if len(path) == 0 {
		prefix = strings.TrimPrefix(prefix, "/")
	}
	var lines []string
	for _, command := range t.Visible(role) {
		words := command.words()
		if len(words) <= len(path) || !slices.Equal(words[:len(path)], path) || !strings.HasPrefix(words[len(path)], prefix) {
			continue
		}
		line := "/" + strings.Join(words[:len(path)+1], " ") + " "
		if !slices.Contains(lines, line) {
			lines = append(lines, line)
		}
	}
	return lines
}

// Begun gives the command that a line begins and the options given so far,
// whether or not those that are required are among them; false for a line that
// begins no command.
func (t Table) Begun(line string) (*Command, Values, bool) {
	command, words, err := t.locate(line)
	if err != nil {
		return nil, Values{}, false
	}
	return command, valuesSoFar(command, words), true
}

// valuesSoFar reads what can be read of the options so far.
func valuesSoFar(command *Command, words []word) Values {
	p := parser{command: command, given: make(map[string]value)}
	if err := p.named(words); err == nil {
		_ = p.unnamed() // what was read before an error still helps
	}
	return Values{p.given}
}

// completeOption offers names of options, and values.
func (t Table) completeOption(ctx context.Context, req Request, head string, last word) []string {
	if last.pair {
		name := last.name
		if begun := req.Command.begun(name); len(begun) == 1 {
			name = begun[0].Name
		}
		return t.completeValue(ctx, req, name, last.text, head+name+":")
	}
	var lines []string
	positional := ""
	for _, option := range req.Command.Options {
		if req.Values.Has(option.Name) {
			continue
		}
		if positional == "" {
			positional = option.Name
		}
		if !last.quoted && strings.HasPrefix(option.Name, strings.ToLower(last.text)) {
			lines = append(lines, head+option.Name+":")
		}
	}
	return append(lines, t.completeValue(ctx, req, positional, last.text, head)...)
}

func (t Table) completeValue(ctx context.Context, req Request, name, prefix, head string) []string {
	var lines []string
	for _, value := range t.suggest(ctx, req, name, prefix) {
		if strings.HasPrefix(strings.ToLower(value), strings.ToLower(prefix)) {
			lines = append(lines, head+quote(value)+" ")
		}
	}
	return lines
}

// Suggest gives at most 25 values for the option of the command that the
// request's line begins, as a chat server asks for while somebody types. It
// gives none for a command the caller may not run.
func (t Table) Suggest(ctx context.Context, req Request, name, prefix string) []string {
	command, words, err := t.locate(req.Line)
	if err != nil || command.Who > req.Caller.Role {
		return nil
	}
	req.Command, req.Values = command, valuesSoFar(command, words)
	return t.suggest(ctx, req, name, prefix)
}

// suggest gives values; of a list, the list so far with its last name
// completed.
func (t Table) suggest(ctx context.Context, req Request, name, prefix string) (values []string) {
	option, found := req.Command.Option(name)
	if !found {
		return nil
	}
	before, last := "", prefix
	if at := strings.LastIndex(prefix, ","); option.Kind == Names && at >= 0 {
		before, last = prefix[:at+1], strings.TrimSpace(prefix[at+1:])
	}
	defer func() {
		if cause := recover(); cause != nil {
			t.log.ErrorContext(ctx, "completion went wrong", "command", req.Command.Path, "option", name, "panic", cause)
			values = nil
		}
	}()
	for _, value := range option.offers(ctx, req, last) {
		if len(values) < maxSuggestions {
			values = append(values, before+value)
		}
	}
	return values
}

func (o *Option) offers(ctx context.Context, req Request, prefix string) []string {
	if o.Complete != nil {
		return o.Complete(ctx, req, prefix)
	}
	offers := o.Choices
	switch o.Kind {
	case Yes:
		offers = []string{"yes", "no"}
	case Day:
		offers = []string{"today", "tomorrow", "in 3 days"}
		if o.Past {
			offers = []string{"today", "yesterday", "3 days ago"}
		}
	}
	return slices.DeleteFunc(slices.Clone(offers), func(offer string) bool {
		return !strings.HasPrefix(offer, strings.ToLower(prefix))
	})
}
