package chart

import (
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// The ticks are round values inside the axis, few enough to be read at the width
// of a phone, and each with a label of its own.
func TestValueTicks(t *testing.T) {
	for _, row := range []struct {
		lowest, highest float64
		want            string
	}{
		{0, 5.1, "0 1 2 3 4 5"}, {0, 350, "0 100 200 300"}, {-0.6, 1.34, "-0.5 0.0 0.5 1.0"},
		{0, 0.3, "0.00 0.05 0.10 0.15 0.20 0.25 0.30"}, {7, 7, "7"}, {0, 6, "0 1 2 3 4 5 6"},
	} {
		var labels []string
		for _, tick := range valueTicks(row.lowest, row.highest) {
			labels = append(labels, tick.Label)
		}
		if got := strings.Join(labels, " "); got != row.want {
			t.Errorf("%v to %v: %s, want %s", row.lowest, row.highest, got, row.want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		lowest := rapid.Float64Range(-1e4, 1e4).Draw(t, "lowest")
		highest := lowest + rapid.Float64Range(1e-3, 1e5).Draw(t, "span")
		ticks := valueTicks(lowest, highest)
		if len(ticks) < 2 || len(ticks) > 7 {
			t.Fatalf("%d ticks", len(ticks))
		}
		labels := map[string]bool{}
		for i, tick := range ticks {
			if slack := (highest - lowest) * 1e-6; tick.Value < lowest-slack || tick.Value > highest+slack || i > 0 && tick.Value <= ticks[i-1].Value || labels[tick.Label] {
				t.Fatalf("tick %v of %v to %v", tick, lowest, highest)
			}
			labels[tick.Label] = true
		}
	})
}
