package terminal

import (
	"bytes"
	"encoding/json"
	"errors"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"swardbook/bot/reply"
	"swardbook/planner"
)

// question is a reply that asks before it acts.
var question = reply.Reply{
	Blocks:  []reply.Block{reply.Text("Greens regulator today, Thu 20 Jun."), reply.Actions{{Label: "Undo", Line: "/log undo entry:7"}}},
	Confirm: &reply.Confirm{Question: "Log this?", Line: "/done surfaces:greens works:regulator when:2013-06-20", Code: "AB2C"},
}

func sampleTable() reply.Table {
	return reply.Table{
		Title:   "Degree days",
		Columns: []reply.Column{reply.Left("day"), reply.Right("mean")},
		Rows:    [][]string{{"Tue 18", "19.5 °C"}, {"Wed 19", "9 °C"}},
	}
}

var update = flag.Bool("update", false, "write the golden file anew")

func TestJSON(t *testing.T) {
	day := planner.DayOf(2013, 6, 24)
	good := reply.Of(reply.Text("Due <Mon 24 Jun> & \"sure\"."), sampleTable(), reply.File{Name: "week.xlsx"})
	good.Figures = planner.Figures{
		{Key: "due.greens.regulator.hourly.total", Value: 188.12345678901234, Unit: planner.DegreeDays},
		{Key: "due.greens.regulator.date", Value: float64(day), Unit: planner.Date},
		{Key: "a.first", Value: 1e-7, Unit: planner.Share},
		{Key: "not.a.number", Value: math.NaN()},
		{Key: "endless", Value: math.Inf(-1), Unit: planner.Date},
		{Key: "no.day", Value: 1e9, Unit: planner.Date},
		{Key: "a.first", Value: 2},
		{Key: "minus", Value: -0.5, Unit: planner.DifferenceC},
	}
	var out bytes.Buffer
	for _, result := range []Result{
		{Line: `/due surface:"front nine"`, Reply: good, Files: []Saved{{Name: "week.xlsx", Path: "out/week.xlsx"}}},
		{Line: "/due", Reply: question},
		{Line: "/help"},
		{Line: "/due x", Err: planner.Problemf(planner.NotFound, "no surface %q", "x").WithHint("there is greens")},
		{Line: "/due", Err: fmt.Errorf("sql: %w", errors.New("0x7f"))},
	} {
		if err := JSON(&out, result); err != nil {
			t.Fatal(err)
		}
	}
	path := filepath.Join("testdata", "results.jsonl")
	if *update {
		if err := os.WriteFile(path, out.Bytes(), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(out.Bytes(), want) {
		t.Errorf("%s: got\n%s\nwant\n%s", path, out.Bytes(), want)
	}
	for _, line := range strings.Split(strings.TrimSpace(out.String()), "\n") {
		if got, want := keysInOrder(t, line), []string{"command", "ok", "text", "tables", "figures", "files", "error"}; !slices.Equal(got, want) {
			t.Errorf("keys %v, want %v", got, want)
		}
	}
}

// keysInOrder are the object's own keys.
func keysInOrder(t *testing.T, object string) (keys []string) {
	decoder := json.NewDecoder(strings.NewReader(object))
	if _, err := decoder.Token(); err != nil {
		t.Fatal(err)
	}
	for decoder.More() {
		key, err := decoder.Token()
		if err != nil {
			t.Fatal(err)
		}
		keys = append(keys, key.(string))
		var value json.RawMessage
		if err := decoder.Decode(&value); err != nil {
			t.Fatal(err)
		}
	}
	return keys
}

func TestFiguresKeepOrderAndPrecision(t *testing.T) {
	numbers := []float64{0, -0.5, 1.0 / 3, 188.12345678901234, 1e21, 5e-324, math.MaxFloat64}
	var list planner.Figures
	for i, number := range numbers {
		list = append(list, planner.Figure{Key: fmt.Sprintf("z%d", len(numbers)-i), Value: number})
	}
	text, err := json.Marshal(figures(list))
	if err != nil {
		t.Fatal(err)
	}
	var back map[string]float64
	if err := json.Unmarshal(text, &back); err != nil {
		t.Fatal(err)
	}
	for i, figure := range list {
		if back[figure.Key] != numbers[i] {
			t.Errorf("%s is %v, want %v", figure.Key, back[figure.Key], numbers[i])
		}
	}
	if got := keysInOrder(t, string(text)); !slices.IsSortedFunc(got, func(a, b string) int { return strings.Compare(b, a) }) || len(got) != len(list) {
		t.Errorf("order %v", got)
	}
}

func TestNoFigureIsNoNumber(t *testing.T) {
	for _, value := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
		for _, unit := range []planner.Unit{planner.DegreesC, planner.Date} {
			text, err := json.Marshal(figures{{Key: "x", Value: value, Unit: unit}})
			if err != nil || string(text) != "{}" {
				t.Errorf("%v %s is written as %s (%v)", value, unit, text, err)
			}
		}
	}
}

type brokenPipe struct{}

func (brokenPipe) Write([]byte) (int, error) { return 0, errors.New("broken pipe") }

func TestWriteErrorsAreTold(t *testing.T) {
	if err := JSON(brokenPipe{}, Result{}); err == nil {
		t.Error("JSON to a broken pipe gives no error")
	}
	session := Session{Out: brokenPipe{}}
	if err := session.show(Result{Reply: reply.Of(reply.Text("a"))}); err == nil {
		t.Error("text to a broken pipe gives no error")
	}
}
