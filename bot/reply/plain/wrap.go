package plain

import (
	"strings"

	"github.com/mattn/go-runewidth"
)

const (
	// DefaultWidth is the number of columns of a phone's screen.
	DefaultWidth = 34
	// leastWidth is the fewest columns that text is wrapped at: below it
	// hardly a word fits.
	leastWidth = 12
)

// columns measures text in a fixed way, whatever the machine's language: "°"
// takes one column, a Chinese letter two.
var columns = runewidth.Condition{}

func widthOf(text string) int { return columns.StringWidth(text) }

// wrap breaks text into lines of at most width columns, at spaces where it
// can. Lines after the first of a paragraph are indented by hang columns more
// than it is. Nothing is lost but the spaces where it breaks.
func wrap(text string, width, hang int) []string {
	var lines []string
	for _, paragraph := range strings.Split(strings.TrimRight(text, "\n"), "\n") {
		body := strings.TrimLeft(paragraph, " ")
		indent := min(len(paragraph)-len(body), width/2)
		lines = append(lines, wrapLine(strings.Fields(body), width, indent, min(indent+hang, width/2))...)
	}
	return lines
}

func wrapLine(words []string, width, indent, hang int) []string {
	var lines []string
	line, room, empty := strings.Repeat(" ", indent), width-indent, true
	next := func() {
		lines = append(lines, strings.TrimRight(line, " "))
		line, room, empty = strings.Repeat(" ", hang), width-hang, true
	}
	for _, word := range words {
		if !empty && widthOf(word)+1 > room {
			next()
		}
		if !empty {
			line, room = line+" ", room-1
		}
		for widthOf(word) > room {
			head := columns.Truncate(word, room, "")
			if head == "" {
				break // a letter wider than the room: it stands out by one
			}
			line, word = line+head, word[len(head):]
			next()
		}
		line, room, empty = line+word, room-widthOf(word), false
	}
	next()
	return lines
}

// oneLine puts text with line breaks on one line.
func oneLine(text string) string { return strings.Join(strings.Fields(text), " ") }

// pad fills text with spaces up to the width.
func pad(text string, width int, right bool) string {
	space := strings.Repeat(" ", max(0, width-widthOf(text)))
	if right {
		return space + text
	}
	return text + space
}
