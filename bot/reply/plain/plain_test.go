package plain

import (
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"swardbook/bot/reply"
)

var update = flag.Bool("update", false, "write the golden files anew")

// golden compares with a file under testdata.
func golden(t *testing.T, name, got string) {
	t.Helper()
	path := filepath.Join("testdata", name)
	if *update {
		if err := os.WriteFile(path, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if got != string(want) {
		t.Errorf("%s: got\n%s\nwant\n%s", path, got, want)
	}
}

// samples are replies that hold every kind of block, and a question.
func samples() map[string]reply.Reply {
	wide := reply.Table{
		Title:   "How past intervals ran, on both means, since the first of April",
		Columns: []reply.Column{reply.Left("work"), reply.Right("days"), reply.Right("24-hour mean"), reply.Right("high/low mean"), reply.Left("note")},
		Rows: [][]string{
			{"greens regulator", "23", "236 °C-days", "241 °C-days", ""},
			{"greens feed", "9", "101 °C-days", "98 °C-days", "cut short by a tournament on the second weekend"},
		},
	}
	return map[string]reply.Reply{
		"text": reply.Of(
			reply.Heading("Thu 20 Jun"),
			reply.Text("Greens regulator: due in about 4 days, Mon 24 Jun.\n  Likely Sun 23 to Wed 26.\nTwo lines and one-very-long-word-that-does-not-fit-anywhere-at-all."),
			reply.Text("Growth potential knows temperature only."),
		),
		"table": reply.Of(reply.Table{
			Title:   "Degree days",
			Columns: []reply.Column{reply.Left("day"), reply.Right("mean"), reply.Right("total")},
			Rows:    [][]string{{"Tue 18", "19.5 °C", "8"}, {"Wed 19", "9 °C", "128"}},
		}),
		"wide": reply.Of(wide, reply.Table{Title: "Nothing wide", Columns: wide.Columns}, reply.Table{Columns: []reply.Column{reply.Left("day")}}),
		"fields": reply.Of(
			reply.Fields{{Name: "due", Value: "Mon 24 Jun, and it may be Tue 25"}, {Name: "total", Value: "188 °C-days base 0"}},
			reply.Fields{{Name: "due", Value: "Mon 24 Jun"}, {Name: "least days between two", Value: "14, as the lead typed it in April"}},
		),
		"files": reply.Of(
			reply.Text("The sheet."),
			reply.File{Name: "week-2013-06-24-greens-and-tees.xlsx", Content: []byte("x")},
			reply.Picture{Name: "due.png", Alt: "A line that rises from 0 to 188 and meets 200 on Mon 24 Jun.", PNG: []byte("x")},
		),
		"confirm": {
			Blocks: []reply.Block{
				reply.Text("Greens regulator today, Thu 20 Jun."),
				reply.Actions{{Label: "Undo", Line: "/log undo entry:7"}, {Label: "Tees too", Line: "/done surfaces:greens,tees works:regulator"}},
			},
			Confirm: &reply.Confirm{Question: "Log this?", Line: "/done surfaces:greens works:regulator when:2013-06-20", Code: "AB2C"},
		},
	}
}

func TestRender(t *testing.T) {
	for name, sample := range samples() {
		if err := sample.Check(); err != nil {
			t.Errorf("%s: %v", name, err)
		}
		golden(t, name+".txt", Text(sample, 0))
		for width := leastWidth; width <= 120; width++ {
			checkLines(t, name, Text(sample, width), width)
		}
	}
}

func checkLines(t interface{ Errorf(string, ...any) }, name, text string, width int) {
	for _, line := range strings.Split(text, "\n") {
		if widthOf(line) > width {
			t.Errorf("%s at %d columns: %q has %d", name, width, line, widthOf(line))
		}
		if strings.TrimRight(line, " ") != line {
			t.Errorf("%s at %d columns: %q ends in a space", name, width, line)
		}
	}
}

func TestRenderNothing(t *testing.T) {
	if got := Text(reply.Of(), 34); got != "" {
		t.Errorf("nothing is rendered as %q", got)
	}
	question := reply.Reply{Confirm: &reply.Confirm{Question: "Log this?"}}
	if got := Text(question, 34); got != "Log this?\n" {
		t.Errorf("a question to be answered by y or n is rendered as %q", got)
	}
	if got, want := Text(reply.Of(reply.Text("a b")), 1), Text(reply.Of(reply.Text("a b")), leastWidth); got != want {
		t.Errorf("at 1 column %q, want %q", got, want)
	}
}

// Whatever is wrapped, no letter is lost and no line is too wide.
func TestWrapLosesNothing(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.StringOf(rapid.SampledFrom([]rune("ab°é—世 \n"))).Draw(t, "text")
		width := rapid.IntRange(leastWidth, 40).Draw(t, "width")
		hang := rapid.IntRange(0, 4).Draw(t, "hang")
		lines := wrap(text, width, hang)
		squeeze := func(text string) string { return strings.Join(strings.Fields(text), "") }
		if got, want := squeeze(strings.Join(lines, "\n")), squeeze(text); got != want {
			t.Fatalf("wrapped %q, want %q", got, want)
		}
		checkLines(t, "wrap", strings.Join(lines, "\n"), width)
	})
}

func TestTableStandsInColumnsWhenItJustFits(t *testing.T) {
	table := reply.Of(reply.Table{Columns: []reply.Column{reply.Left("day"), reply.Right("°C")}, Rows: [][]string{{"Monday", "−1.5"}, {"Tue", "12.25"}}})
	if got, want := Text(table, 13), "day        °C\nMonday   −1.5\nTue     12.25\n"; got != want {
		t.Errorf("at 13 columns:\n%swant\n%s", got, want)
	}
	if got, want := Text(table, 12), "Monday\n  °C: −1.5\nTue\n  °C: 12.25\n"; got != want {
		t.Errorf("at 12 columns:\n%swant\n%s", got, want)
	}
}
