package reply

import (
	"errors"
	"regexp"
	"strings"
	"unicode"
	"unicode/utf8"

	"swardbook/planner"
)

// Wrong gives an error in the two sentences a person is shown: what was wrong,
// and what to do (empty when nothing can be). An error that is no
// *planner.Problem shows an apology, never its own text.
func Wrong(err error) (message, hint string) {
	var problem *planner.Problem
	if !errors.As(err, &problem) {
		return "Something went wrong on our side.", "Nothing you typed is at fault. Try again, or tell whoever runs this."
	}
	return Sentence(problem.Message), Sentence(problem.Hint)
}

// OfError is the reply that shows an error to the caller alone.
func OfError(err error) Reply {
	message, hint := Wrong(err)
	out := Of(Text(message))
	if hint != "" {
		out.Add(Text(hint))
	}
	out.Private = true
	return out
}

// Sentence begins the text with a capital and ends it with a stop. There is no
// stop where it would spoil something to type: after "Like: /due greens", or a
// last word like surface:greens. A word in quotes or a time is nothing to type.
func Sentence(text string) string {
	text = strings.TrimSpace(text)
	if text == "" {
		return ""
	}
	first, size := utf8.DecodeRuneInString(text)
	text = string(unicode.ToUpper(first)) + text[size:]
	last, _ := utf8.DecodeLastRuneInString(text)
	if strings.ContainsRune(".?!:…", last) || endsInLine(text) {
		return text
	}
	return text + "."
}

// typedPair is an option with its value at the end of a text, as it is typed.
var typedPair = regexp.MustCompile(`(?:^|\s)[A-Za-z][A-Za-z0-9-]*:(?:[^"\s]\S*|"[^"]*[^":]")$`)

func endsInLine(text string) bool {
	line := strings.LastIndex(text, ": /")
	return typedPair.MatchString(text) || line >= 0 && !strings.Contains(text[line:], ". ")
}
