package planner

import (
	"math"
	"strings"
)

// Correction is a figure that was posted and is another one now.
type Correction struct {
	Key     string
	Was, Is float64
	Unit    Unit
}

// correctedBy is by how much a total must have moved before it is told: less
// would not show in a post.
func correctedBy(unit Unit) float64 {
	switch unit {
	case DegreeDays:
		return 0.5
	case GrowthDays, DegreesC:
		return 0.05
	case NitrogenGM2:
		return 0.005
	}
	return math.Inf(1)
}

// Corrections compares the figures that were posted on a morning with those
// that the same morning gives now, and returns what late readings have moved:
// running totals of works and seasons, and the two means of the day before. A
// figure that is new or gone is no correction, nor is a count that an entry
// logged since has started elsewhere.
func Corrections(posted, now Figures) []Correction {
	var out []Correction
	for _, was := range posted {
		if !isTold(was.Key) {
			continue
		}
		is, ok := now.Get(was.Key)
		if since := strings.TrimSuffix(was.Key, "total") + "since"; ok && posted.value(since) != now.value(since) {
			continue
		}
		if ok && is.Unit == was.Unit && math.Abs(is.Value-was.Value) >= correctedBy(was.Unit) {
			out = append(out, Correction{was.Key, was.Value, is.Value, was.Unit})
		}
	}
	return out
}

// isTold reports whether a figure is one that a crew plans by.
func isTold(key string) bool {
	return strings.HasPrefix(key, "due.") && strings.HasSuffix(key, ".total") ||
		strings.HasPrefix(key, "total.") || strings.HasPrefix(key, "yesterday.") && strings.HasSuffix(key, "_mean_c")
}
