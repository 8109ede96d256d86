package workbook_test

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"testing"

	"swardbook/planner"
	"swardbook/planner/workbook"
)

// openpyxl never recalculates. It must see, on the first sheet, cell by cell
// what LibreOffice shows after computing everything anew, and the key numbers
// and days that the plan's own figures give.
func TestReaderThatNeverRecalculates(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("reads with openpyxl with SWARDBOOK_SLOW=1")
	}
	t.Parallel()
	inputs := []workbook.Input{inputOf(t, edited(planner.Celsius, false), 2), inputOf(t, edited(planner.Fahrenheit, true), 1)}
	for number := range uint64(8) {
		inputs = append(inputs, randomInput(t, number))
	}
	dir := t.TempDir()
	var books [][]byte
	args := []string{"testdata/values.py"}
	for i, input := range inputs {
		books = append(books, written(t, input))
		args = append(args, filepath.Join(dir, fmt.Sprintf("book%d.xlsx", i)))
		if err := os.WriteFile(args[len(args)-1], books[i], 0o644); err != nil {
			t.Fatal(err)
		}
	}
	said, err := exec.Command("/usr/bin/python3", args...).Output()
	if err != nil {
		t.Fatalf("%v: %s", err, said)
	}
	var read []map[string]any
	if err := json.Unmarshal(said, &read); err != nil || len(read) != len(inputs) {
		t.Fatalf("%d books, %v", len(read), err)
	}
	for i, computed := range recalculated(t, books) {
		shown := gridOf(t, computed)
		sheet := shown.sheets[0]
		numbers := 0
		for _, name := range shown.order[sheet] {
			want, got := shown.at(sheet, name), read[i][name]
			if number, ok := want.number(); ok {
				numbers++
				if seen, ok := got.(float64); !ok || math.Abs(seen-number) > 1e-9*max(1, math.Abs(number)/1000) {
					t.Errorf("book %d: %s shows %s, the reader sees %v", i, name, want.text, got)
				}
			} else if want.kind != "" && fmt.Sprint(got) != want.text {
				t.Errorf("book %d: %s shows %q, the reader sees %v", i, name, want.text, got)
			}
			delete(read[i], name)
		}
		if numbers < 40 {
			t.Errorf("book %d shows %d numbers", i, numbers)
		}
		if len(read[i]) > 0 {
			t.Errorf("book %d: the reader sees more than is shown: %v", i, read[i])
		}
	}
}

// The first sheet holds what the plan's own figures give: read from the file as
// it stands, without any recalculation.
func TestFirstSheetHoldsTheFigures(t *testing.T) {
	for number := range uint64(10) {
		input := randomInput(t, number)
		g := gridOf(t, written(t, input))
		for _, work := range input.Data.Works {
			keyNumbers(t, g, input, work)
		}
		weekDays(t, g, input)
	}
}

// seen compares a cell with a number, nil for none.
func seen(t *testing.T, what string, got gridCell, want any) {
	t.Helper()
	number, ok := got.number()
	value, wanted := want.(float64)
	if ok != wanted || ok && math.Abs(number-value) > 1e-9*max(1, math.Abs(value)/1000) {
		t.Errorf("%s is %q, want %v", what, got.text, want)
	}
}

func keyNumbers(t *testing.T, g grid, input workbook.Input, work planner.SheetWork) {
	t.Helper()
	state := work.State
	row, heads := g.rowThat(t, "week", state.Surface.Name+" "+state.Work.Name), g.rowThat(t, "week", "work")
	for _, count := range work.Counts {
		due := count.Due
		if due.Basis != state.Own {
			continue
		}
		show := func(value float64) any { shown, _ := input.Plan.Site.Units.Show(value, state.Unit); return shown }
		day := func(at planner.Passage, told bool) any {
			if !at.Known || !told {
				return nil
			}
			return float64(serial(at.Day))
		}
		until := any(nil)
		if told := due.Date(); told.Known {
			until = float64(told.Day - input.Plan.AsOf)
		}
		wanted := map[string]any{"total": show(count.Through), "target": show(due.Target), "due": day(due.Date(), true), "days until": until,
			"early": day(due.Early, due.SpreadKnown), "late": day(due.Late, due.SpreadKnown)}
		if state.Status == planner.Full { // no date is told once the season's most is reached
			delete(wanted, "due")
			delete(wanted, "days until")
			wanted["early"], wanted["late"] = nil, nil
		}
		for head, want := range wanted {
			what := fmt.Sprintf("%s of %s %s", head, state.Surface.Name, state.Work.Name)
			seen(t, what, g.at("week", fmt.Sprintf("%s%d", g.headed(t, "week", heads, head), row)), want)
		}
	}
}

func weekDays(t *testing.T, g grid, input workbook.Input) {
	t.Helper()
	heads, units := g.rowThat(t, "week", "day"), input.Plan.Site.Units
	facts := map[planner.Day]planner.DayFacts{}
	for _, day := range input.Data.Days {
		facts[day.Facts.Day] = day.Facts
	}
	for i := range 7 * input.Weeks {
		day := input.Plan.AsOf + planner.Day(i)
		f, inside := facts[day]
		known := func(c float64, is bool) any {
			if !is {
				return nil
			}
			return units.Temperature(c)
		}
		midrangeC, hasMidrange := f.Mean(planner.Midrange)
		wanted := map[string]any{"day": float64(serial(day)), "high " + units.Degree(): known(f.HighC, f.HasExtremes), "low " + units.Degree(): known(f.LowC, f.HasExtremes),
			"24-hour mean": known(f.HourlyC, f.HasHourly), "high/low mean": known(midrangeC, hasMidrange)}
		for _, surface := range input.Plan.Surfaces[:min(3, len(input.Plan.Surfaces))] {
			wanted[surface.Name+" growth"] = nil
			meanC, has := midrangeC, hasMidrange
			if f.HasHourly && (input.Plan.Record.HasHourly() || !hasMidrange) {
				meanC, has = f.HourlyC, true
			}
			if potential, err := surface.Turf.On(day).Curve.Potential(meanC); inside && err == nil {
				wanted[surface.Name+" growth"] = potential
				if !has {
					wanted[surface.Name+" growth"] = 0.0
				}
			}
		}
		for head, want := range wanted {
			seen(t, fmt.Sprintf("%s on %s", head, day), g.at("week", fmt.Sprintf("%s%d", g.headed(t, "week", heads, head), heads+1+i)), want)
		}
	}
}
