package storage

import (
	"fmt"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"swardbook/planner"
)

// The list holds the first row of every reason however late it comes, at most
// 100 rows, in line order, and all of them when they fit.
func TestRefusalsList(t *testing.T) {
	t.Parallel()
	rapid.Check(t, func(t *rapid.T) {
		var r refusals
		var all []planner.Refusal
		first := map[string]int{}
		for i := range rapid.IntRange(0, 400).Draw(t, "rows") {
			text := fmt.Sprint("reason ", rapid.IntRange(0, 20).Draw(t, "reason"))
			row := planner.Refusal{Line: i + 2, Value: "x", Reason: text}
			all = append(all, row)
			if _, ok := first[text]; !ok {
				first[text] = row.Line
			}
			r.add(text, row)
		}
		list := r.list()
		counted := 0
		for i := range list {
			counted += list[i].Alike
			list[i].Alike = 0
		}
		if counted != len(all) {
			t.Fatalf("the first rows of all reasons count %d of %d", counted, len(all))
		}
		if r.count != len(all) || len(list) != min(len(all), mostRefusals) {
			t.Fatalf("counted %d and listed %d of %d", r.count, len(list), len(all))
		}
		if len(all) <= mostRefusals && !slices.Equal(list, all) {
			t.Fatalf("listed %v of %v", list, all)
		}
		if !slices.IsSortedFunc(list, func(a, b planner.Refusal) int { return a.Line - b.Line }) {
			t.Fatalf("not in line order: %v", list)
		}
		for text, line := range first {
			if !slices.ContainsFunc(list, func(row planner.Refusal) bool { return row.Line == line && row.Reason == text }) {
				t.Fatalf("the first row of %q, line %d, is not listed", text, line)
			}
		}
	})
}

func TestWorstReasons(t *testing.T) {
	t.Parallel()
	var r refusals
	for i, text := range []string{"a", "b", "b", "c", "d", "d", "d", "e"} {
		r.add(text, planner.Refusal{Line: i + 2, Value: "v" + text, Reason: text})
	}
	want := `3 × d (line 6: "vd"); 2 × b (line 3: "vb"); 1 × a (line 2: "va"); and 2 other reasons`
	if got := r.worst(); got != want {
		t.Errorf("%s\nwant %s", got, want)
	}
}
