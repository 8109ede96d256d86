package command

import (
	"regexp"
	"strings"
	"unicode"
	"unicode/utf8"

	"swardbook/planner"
)

// Pair is an option and its value as text.
type Pair struct{ Name, Value string }

// Line writes a command line: "/due surface:greens", with quotes where a value
// needs them. ParseLine reads back the same path and values.
func Line(path string, pairs ...Pair) string {
	var b strings.Builder
	b.WriteString("/" + path)
	for _, pair := range pairs {
		b.WriteString(" " + pair.Name + ":" + quote(pair.Value))
	}
	return b.String()
}

// quote puts a value in quotes when it could not be read back without.
func quote(text string) string {
	first, _ := utf8.DecodeRuneInString(text)
	if text != "" && closing(first) == 0 && !strings.ContainsFunc(text, unicode.IsSpace) {
		return text
	}
	return `"` + strings.NewReplacer(`\`, `\\`, `"`, `\"`).Replace(text) + `"`
}

// closing is the quote that ends what the quote opens, 0 when it opens none.
// Phones type curly quotes by themselves.
func closing(open rune) rune {
	switch open {
	case '"':
		return '"'
	case '“', '”':
		return '”'
	}
	return 0
}

// word is one word of a line: a bare one, or name:text.
type word struct {
	name   string // of a pair, lower case
	text   string
	pair   bool
	quoted bool
	start  int // where it starts, in bytes
}

// bare is a word that belongs to nothing yet and may belong to its neighbour.
func (w word) bare() bool { return !w.pair && !w.quoted }

var pairPattern = regexp.MustCompile(`^([A-Za-z][A-Za-z0-9-]{0,31}):`)

// split cuts a line into words. Only a quote that is never closed, or is closed
// in the middle of a word, is an error.
func split(line string) ([]word, error) {
	var words []word
	for at := 0; at < len(line); {
		r, size := utf8.DecodeRuneInString(line[at:])
		if unicode.IsSpace(r) {
			at += size
			continue
		}
		w := word{start: at}
		if match := pairPattern.FindString(line[at:]); match != "" {
			w.pair, w.name = true, strings.ToLower(strings.TrimSuffix(match, ":"))
			at += len(match)
		}
		text, quoted, end, err := readWord(line, at)
		if err != nil {
			return words, err
		}
		w.text, w.quoted, at = text, quoted, end
		words = append(words, w)
	}
	return words, nil
}

// readWord reads the text that starts at the byte, quoted or up to the next
// white space, and says where it ends.
func readWord(line string, at int) (text string, quoted bool, end int, err error) {
	open, size := utf8.DecodeRuneInString(line[at:])
	last := closing(open)
	if at == len(line) || last == 0 {
		length := strings.IndexFunc(line[at:], unicode.IsSpace)
		if length < 0 {
			length = len(line) - at
		}
		return line[at : at+length], false, at + length, nil
	}
	var b strings.Builder
	for i := at + size; i < len(line); {
		r, size := utf8.DecodeRuneInString(line[i:])
		switch {
		case r == '\\' && i+1 < len(line) && (line[i+1] == '"' || line[i+1] == '\\'):
			b.WriteByte(line[i+1])
			i += 2
			continue
		case r == last:
			after, _ := utf8.DecodeRuneInString(line[i+size:])
			if i+size < len(line) && !unicode.IsSpace(after) {
				return "", true, 0, planner.Problemf(planner.Invalid, "after the closing quote of %s comes a space", line[at:i+size]).
					WithHint(`%s`, `Put the whole value in quotes: note:"dry, hand watered".`)
			}
			return b.String(), true, i + size, nil
		}
		b.WriteString(line[i : i+size])
		i += size
	}
	return "", true, 0, planner.Problemf(planner.Invalid, "the quote before %s is not closed", shorten(line[at+size:])).
		WithHint(`%s`, `Close it: note:"dry, hand watered". A quote inside is written \".`)
}

// shorten cuts what is repeated in a message.
func shorten(text string) string {
	runes := []rune(text)
	if len(runes) > 40 {
		return string(runes[:39]) + "…"
	}
	return text
}

// WithoutComment cuts a comment off a line of a script: # at the start or
// after white space, outside quotes, and all that follows.
func WithoutComment(line string) string {
	words, _ := split(line) // of a line with a bad quote: the words before it
	for _, w := range words {
		if w.bare() && strings.HasPrefix(w.text, "#") {
			return strings.TrimSpace(line[:w.start])
		}
	}
	return strings.TrimSpace(line)
}

// clean makes typed text fit to keep and to show: valid UTF-8, no control
// characters but line breaks, no white space around it.
func clean(text string) string {
	text = strings.ReplaceAll(strings.ToValidUTF8(text, "�"), "\r\n", "\n")
	text = strings.Map(func(r rune) rune {
		if unicode.IsControl(r) && r != '\n' {
			return ' '
		}
		return r
	}, text)
	return strings.TrimSpace(text)
}
