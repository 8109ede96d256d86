package briefing

import (
	"fmt"
	"strings"

	"swardbook/planner"
)

// CorrectionLine tells in one line what late readings have moved since a
// morning's post: "Wed corrected: greens regulator 188 to 196, late readings".
// It names the first figure and how many more; "" when nothing moved.
func CorrectionLine(posted planner.Day, corrections []planner.Correction, units planner.Units) string {
	if len(corrections) == 0 {
		return ""
	}
	first := corrections[0]
	text := fmt.Sprintf("%s corrected: %s %s to %s", posted.Weekday().String()[:3], figureName(first.Key),
		Amount(first.Was, first.Unit, units), Amount(first.Is, first.Unit, units))
	if more := len(corrections) - 1; more > 0 {
		text += fmt.Sprintf(" and %d more", more)
	}
	return text + ", late readings"
}

// figureName puts a figure's key into words.
func figureName(key string) string {
	parts := strings.Split(key, ".")
	switch {
	case parts[0] == "due" && len(parts) == 5:
		return parts[1] + " " + parts[2]
	case parts[0] == "total" && len(parts) == 3:
		return parts[1]
	case key == "yesterday.hourly_mean_c":
		return planner.Hourly.Words()
	}
	return planner.Midrange.Words()
}
