package command

import (
	"strings"
	"testing"
	"unicode/utf8"

	"pgregory.net/rapid"
)

func TestHelpWithin(t *testing.T) {
	for _, row := range []struct {
		help string
		most int
		want string
	}{
		{"which site; not needed with one", 100, "which site; not needed with one"},
		{"which site; not needed with one", 30, "which site"},
		{"with slow: over how many weeks it comes", 30, "with slow"},
		{"the first by rank gives the record", 30, "the first by rank gives the…"},
		{"a; b c d e f g h i j k l m n o p q r s t", 30, "a; b c d e f g h i j k l m n…"},
		{strings.Repeat("x", 40), 30, strings.Repeat("x", 29) + "…"},
		{"short", 3, "short"}, // never less room than LeastHelp
	} {
		if got := (&Option{Help: row.help}).HelpWithin(row.most); got != row.want {
			t.Errorf("%q in %d: got %q, want %q", row.help, row.most, got, row.want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		help, most := rapid.StringN(1, 100, -1).Draw(t, "help"), rapid.IntRange(LeastHelp, 120).Draw(t, "most")
		got := (&Option{Help: help}).HelpWithin(most)
		if n := utf8.RuneCountInString(got); n > most || n == 0 {
			t.Fatalf("%q has %d characters of %d", got, n, most)
		}
	})
}
