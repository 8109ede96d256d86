package discord

import (
	"regexp"
	"strings"
)

var (
	// marks are the signs that the service reads as markup anywhere.
	marks = regexp.MustCompile("[\\\\*_~`|>#\\[\\]()<@]")
	// emoji is a word between colons, which may become a picture.
	emoji = regexp.MustCompile(`:([A-Za-z_]\w*:)`)
	// bullet and number begin a list at the start of a line.
	bullet = regexp.MustCompile(`(?m)^(\s*)([-+]\s)`)
	number = regexp.MustCompile(`(?m)^(\s*\d+)(\.\s)`)
	// place is how a channel or a group stands in a reply, as it is typed.
	place = regexp.MustCompile(`\b(channel|group):(\d{15,20})\b`)
)

// escape makes text stand as it is: no markup, no mention. Channels and groups
// are shown by name, which pings nobody.
func escape(text string) string {
	text = marks.ReplaceAllString(text, `\$0`)
	text = emoji.ReplaceAllString(text, `\:$1`)
	text = bullet.ReplaceAllString(text, `$1\$2`)
	text = number.ReplaceAllString(text, `$1\$2`)
	return place.ReplaceAllStringFunc(text, func(found string) string {
		kind, id, _ := strings.Cut(found, ":")
		if kind == "channel" {
			return "<#" + id + ">"
		}
		return "<@&" + id + ">"
	})
}

// code makes text fit into a code block.
func code(text string) string { return strings.ReplaceAll(text, "`", "\u02cb") }

// plainLine makes text fit where markup is not read and lines do not break.
func plainLine(text string) string { return strings.Join(strings.Fields(text), " ") }

// cutUnits cuts a text into parts of at most so many UTF-16 units, at the end
// of a line if there is one, else of a word, else anywhere. Nothing is lost
// but the line break or space at the cut.
func cutUnits(text string, most int) []string {
	var parts []string
	for unitsOf(text) > most {
		end, units := 0, 0
		for at, r := range text {
			if units += unitsOf(string(r)); units > most {
				end = at
				break
			}
		}
		rest := end
		if line := strings.LastIndexByte(text[:end], '\n'); line > end/2 {
			end, rest = line, line+1
		} else if space := strings.LastIndexByte(text[:end], ' '); space > end/2 {
			end, rest = space, space+1
		} else if text[end-1] == '\\' { // not between a backslash and its sign
			end, rest = end-1, end-1
		}
		parts = append(parts, text[:end])
		text = text[rest:]
	}
	return append(parts, text)
}
