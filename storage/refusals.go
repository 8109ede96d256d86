package storage

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"swardbook/planner"
)

const (
	// mostRefusals is how many refused rows a report lists.
	mostRefusals = 100
	// worstReasons is how many reasons the refusal of a file names.
	worstReasons = 3
)

// refusals collects refused rows in line order: all are counted, few are kept.
type refusals struct {
	count   int
	reasons []reason // in the order in which they came
	others  []planner.Refusal
}

// reason is one reason and how often it came.
type reason struct {
	text  string
	count int
	first planner.Refusal
}

// add counts a row under a reason, of which there must be few: it holds no
// value and no line.
func (r *refusals) add(text string, row planner.Refusal) {
	r.count++
	i := slices.IndexFunc(r.reasons, func(known reason) bool { return known.text == text })
	if i < 0 {
		r.reasons = append(r.reasons, reason{text: text, count: 1, first: row})
		return
	}
	r.reasons[i].count++
	if len(r.others) < mostRefusals {
		r.others = append(r.others, row)
	}
}

// list returns the first row of every reason and, up to mostRefusals in all,
// the earliest others, in line order; nil when there is none.
func (r *refusals) list() []planner.Refusal {
	var all []planner.Refusal
	for _, known := range r.reasons {
		known.first.Alike = known.count
		all = append(all, known.first)
	}
	all = append(all, r.others[:max(0, min(len(r.others), mostRefusals-len(all)))]...)
	slices.SortFunc(all, func(a, b planner.Refusal) int { return cmp.Compare(a.Line, b.Line) })
	return all
}

// worst names the commonest reasons, each with its first line and value.
func (r *refusals) worst() string {
	byCount := slices.Clone(r.reasons)
	slices.SortStableFunc(byCount, func(a, b reason) int { return cmp.Compare(b.count, a.count) })
	var parts []string
	for i, known := range byCount {
		if i == worstReasons {
			parts = append(parts, fmt.Sprintf("and %d other reasons", len(byCount)-i))
			break
		}
		parts = append(parts, fmt.Sprintf("%d × %s (line %d: %q)", known.count, known.text, known.first.Line, known.first.Value))
	}
	return strings.Join(parts, "; ")
}
