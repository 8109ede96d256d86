package reply

import (
	"errors"
	"fmt"
	"reflect"
	"strings"
	"testing"

	"swardbook/planner"
)

func ExampleOf() {
	r := Of(
		Textf("Due in %d days.", 3),
		Table{Columns: []Column{Left("work"), Right("total")}, Rows: [][]string{{"regulator", "188"}}},
		Actions{{Label: "Log it", Line: "/done greens regulator"}},
	)
	fmt.Println(len(r.Blocks), r.Check())
	// Output: 3 <nil>
}

func TestWithLeavesTheOriginal(t *testing.T) {
	base := Of(Text("a"), Text("b"))
	base.Blocks = base.Blocks[:1]
	one, two := base.With(Text("1")), base.With(Text("2"))
	if !reflect.DeepEqual(one, Of(Text("a"), Text("1"))) || !reflect.DeepEqual(two, Of(Text("a"), Text("2"))) || len(base.Blocks) != 1 {
		t.Errorf("got %v, %v from %v", one, two, base)
	}
	base.Add(Text("c"))
	if !reflect.DeepEqual(base, Of(Text("a"), Text("c"))) {
		t.Errorf("added: %v", base)
	}
}

func TestConfirmAnswer(t *testing.T) {
	if got, want := (Confirm{Line: "/done greens feed", Code: "AB2C"}).Answer(), "/done greens feed confirm:AB2C"; got != want {
		t.Errorf("answer %q, want %q", got, want)
	}
}

func TestCheck(t *testing.T) {
	x := func(n int) string { return strings.Repeat("°", n) } // limits are in characters, not bytes
	row := Table{Columns: []Column{Left("a"), Right("b")}}
	rows := func(n int) Table {
		out := row
		for range n {
			out.Rows = append(out.Rows, []string{"1", "2"})
		}
		return out
	}
	blocks := func(n int, block Block) (out []Block) {
		for range n {
			out = append(out, block)
		}
		return out
	}
	fields := func(n int) (out Fields) {
		for range n {
			out = append(out, Field{"a", "b"})
		}
		return out
	}
	actions := func(n int) (out Actions) {
		for range n {
			out = append(out, Action{Label: "a", Line: "/b"})
		}
		return out
	}
	file := File{Name: "week.xlsx", Content: []byte{1}}
	tests := []struct {
		name string
		good Reply // at its limit
		bad  Reply // one over it
		want string
	}{
		{"blocks", Of(blocks(60, Text("a"))...), Of(blocks(61, Text("a"))...), "61 blocks, at most 60"},
		{"heading", Of(Heading(x(256))), Of(Heading(x(257))), "heading has 257 characters, at most 256"},
		{"text", Of(Text(x(4000))), Of(Text(x(4001))), "text has 4001 characters"},
		{"no text", Of(Text("")), Of(Text("\xff")), "text is not UTF-8"},
		{"no columns", Of(row), Of(Table{}), "table has 0 columns"},
		{"rows", Of(rows(400)), Of(rows(401)), "401 rows"},
		{"title", Of(Table{Title: x(256), Columns: row.Columns}), Of(Table{Title: x(257), Columns: row.Columns}), "table title has 257"},
		{"column", Of(Table{Columns: []Column{Left(x(256))}}), Of(Table{Columns: []Column{Left(x(257))}}), "column name has 257"},
		{"columns", Of(Table{Columns: make([]Column, 12)}), Of(Table{Columns: make([]Column, 13)}), "table has 13 columns"},
		{"cells", Of(rows(1)), Of(Table{Columns: row.Columns, Rows: [][]string{{"1", "2"}, {"1"}}}), "table row 2 has 1 cells under 2 columns"},
		{"cell", Of(Table{Columns: row.Columns, Rows: [][]string{{"", x(1024)}}}), Of(Table{Columns: row.Columns, Rows: [][]string{{"", x(1025)}}}), "cell has 1025"},
		{"fields", Of(fields(60)), Of(fields(61)), "61 fields"},
		{"field name", Of(Fields{{x(256), "b"}}), Of(Fields{{x(257), "b"}}), "field name has 257"},
		{"field value", Of(Fields{{"a", x(1024)}}), Of(Fields{{"a", x(1025)}}), "field value has 1025"},
		{"empty field", Of(Fields{}), Of(Fields{{"a", ""}}), "has no name or no value"},
		{"actions", Of(actions(25)), Of(actions(26)), "26 actions"},
		{"label", Of(Actions{{Label: x(80), Line: "/a"}}), Of(Actions{{Label: x(81), Line: "/a"}}), "action label has 81"},
		{"line", Of(Actions{{Label: "a", Line: x(4000)}}), Of(Actions{{Label: "a", Line: x(4001)}}), "action line has 4001"},
		{"empty action", Of(Actions{}), Of(Actions{{Label: "a"}}), "has no label or no line"},
		{"files", Of(blocks(10, file)...), Of(append(blocks(10, file), Picture{Name: "a.png"})...), "11 files, at most 10"},
		{"file name", Of(File{Name: strings.Repeat("a", 100)}), Of(File{Name: strings.Repeat("a", 101)}), "file name"},
		{"path as name", Of(file), Of(File{Name: "../week.xlsx"}), "file name"},
		{"hidden name", Of(file), Of(Picture{Name: ".png"}), "file name"},
		{"file size", Of(File{Name: "a", Content: make([]byte, 8<<20)}), Of(File{Name: "a", Content: make([]byte, 8<<20+1)}), "8388609 bytes"},
		{"picture's words", Of(Picture{Name: "a.png", Alt: x(1024)}), Of(Picture{Name: "a.png", Alt: x(1025)}), "picture's words has 1025"},
		{"question", Reply{Confirm: &Confirm{Question: x(1024)}}, Reply{Confirm: &Confirm{Question: x(1025)}}, "question has 1025"},
		{"no block", Of(), Of(nil), "is no block"},
	}
	for _, test := range tests {
		if err := test.good.Check(); err != nil {
			t.Errorf("%s at the limit: %v", test.name, err)
		}
		if err := test.bad.Check(); err == nil || !strings.Contains(err.Error(), test.want) {
			t.Errorf("%s over the limit: %v, want %q", test.name, err, test.want)
		}
	}
}

func TestWrong(t *testing.T) {
	tests := []struct {
		err           error
		message, hint string
	}{
		{planner.Problemf(planner.NotFound, "no surface %q", "gren").WithHint("perhaps greens"), `No surface "gren".`, "Perhaps greens."},
		{fmt.Errorf("load plan: %w", planner.Problemf(planner.Busy, "somebody else holds the store")), "Somebody else holds the store.", ""},
		{errors.New("sql: 0x7f"), "Something went wrong on our side.", "Nothing you typed is at fault. Try again, or tell whoever runs this."},
	}
	for _, test := range tests {
		if message, hint := Wrong(test.err); message != test.message || hint != test.hint {
			t.Errorf("%v: %q, %q; want %q, %q", test.err, message, hint, test.message, test.hint)
		}
	}
	got := OfError(tests[0].err)
	if want := (Reply{Blocks: []Block{Text(`No surface "gren".`), Text("Perhaps greens.")}, Private: true}); !reflect.DeepEqual(got, want) {
		t.Errorf("reply %+v, want %+v", got, want)
	}
	if got := OfError(tests[1].err); len(got.Blocks) != 1 {
		t.Errorf("reply without a hint: %+v", got)
	}
}

func TestSentence(t *testing.T) {
	for text, want := range map[string]string{
		"":                                   "",
		"  ask a lead ":                      "Ask a lead.",
		"Already one.":                       "Already one.",
		"nitrogen or product?":               "Nitrogen or product?",
		"élan":                               "Élan.",
		"base takes a number. Like: base:10": "Base takes a number. Like: base:10",
		"Like: /due surface:greens":          "Like: /due surface:greens",
		"/due surface:greens":                "/due surface:greens",
		"Like: /setup work add":              "Like: /setup work add",
		"Try: /due. Then ask a lead":         "Try: /due. Then ask a lead.",
		"Type /help to see what there is":    "Type /help to see what there is.",
		"/due has no option \"x\"":           "/due has no option \"x\".",
		"there is no work \"cut:\"":          "There is no work \"cut:\".",
		"it is not \"greens feed:\"":         "It is not \"greens feed:\".",
		"there is no work \"a:b\"":           "There is no work \"a:b\".",
		"log it by 06:10":                    "Log it by 06:10.",
		"write note:\"dry\"":                 "Write note:\"dry\"",
		"like: note:\"dry and windy\"":       "Like: note:\"dry and windy\"",
		"like note:\"dry and windy\" or so":  "Like note:\"dry and windy\" or so.",
		"one of these:":                      "One of these:",
	} {
		if got := Sentence(text); got != want {
			t.Errorf("%q becomes %q, want %q", text, got, want)
		}
	}
}
