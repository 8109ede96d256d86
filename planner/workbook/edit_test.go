package workbook_test

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"testing"

	"github.com/xuri/excelize/v2"

	"swardbook/planner"
)

// typed types the edits into the workbook through LibreOffice.
func typed(t *testing.T, book []byte, edits []map[string]any) *excelize.File {
	t.Helper()
	dir := t.TempDir()
	in, out := filepath.Join(dir, "in.xlsx"), filepath.Join(dir, "out.xlsx")
	if err := os.WriteFile(in, book, 0o644); err != nil {
		t.Fatal(err)
	}
	text, err := json.Marshal(edits)
	if err != nil {
		t.Fatal(err)
	}
	if said, err := exec.Command("/usr/bin/python3", "testdata/edit.py", in, out, string(text)).CombinedOutput(); err != nil {
		t.Fatalf("%v: %s", err, said)
	}
	content, err := os.ReadFile(out)
	if err != nil {
		t.Fatal(err)
	}
	return open(t, content)
}

// held compares the row of a work's count with the figures.
func held(t *testing.T, name string, file *excelize.File, row int, due planner.DueFacts, total float64, spread bool) {
	t.Helper()
	read := func(col string) string {
		text, err := file.GetCellValue("works and log", fmt.Sprintf("%s%d", col, row), excelize.Options{RawCellValue: true})
		if err != nil {
			t.Fatal(err)
		}
		return text
	}
	if got, err := strconv.ParseFloat(read("K"), 64); err != nil || math.Abs(got-total) > 1e-9 {
		t.Errorf("%s: total %s, want %.12g", name, read("K"), total)
	}
	dates := map[string]planner.Passage{"M": due.Path}
	if spread {
		dates["N"], dates["O"], dates["P"] = due.Early, due.Middle, due.Late
	}
	for col, want := range dates {
		text := "beyond this sheet"
		if want.Known {
			text = fmt.Sprint(int(want.Day) + 25569)
		}
		if got := read(col); got != text {
			t.Errorf("%s: %s%d is %s, want %s", name, col, row, got, text)
		}
	}
	if !spread && read("O") != "ask the bot" {
		t.Errorf("%s: the middle date is %s, want to be told to ask", name, read("O"))
	}
}

// After edits typed through LibreOffice the figures are those of Evaluate with
// the same edits.
func TestEditsInLibreOffice(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("types edits in LibreOffice with SWARDBOOK_SLOW=1")
	}
	plan := randomPlan(8) // °C, ten members or less, no long gap
	for number := uint64(8); len(plan.Outlook.Members) < 2; number += 4 {
		plan = randomPlan(number)
	}
	plan.Works, plan.Closed = plan.Works[3:5], nil
	last := plan.AsOf - 25
	for i := range plan.Works {
		plan.Works[i].Settings[0].Value.Target = 120
		plan.Works[i].Settings[0].Value.Limits = planner.Limits{}
	}
	plan.Log = []planner.Entry{{Day: last, Passes: []planner.Pass{{Work: plan.Works[0].ID}, {Work: plan.Works[1].ID}}}}
	input := inputOf(t, plan, 1)
	book := build(t, plan)
	first := input.Data.Days[0].Facts.Day
	row := func(day planner.Day) int { return int(day-first) + 3 }
	id := plan.Works[0].ID
	moved := plan
	moved.Log = []planner.Entry{{Day: last + 6, Passes: []planner.Pass{{Work: id}}}}
	warm := planner.SetDay{Day: plan.AsOf + 2, HighC: 33.5, LowC: 21}
	target := planner.SetTarget{Work: id, Target: 400, Unit: planner.DegreeDays}
	for _, trial := range []struct {
		name   string
		typed  []map[string]any
		plan   planner.Plan
		edits  []planner.Edit
		spread bool
	}{
		{"another target", []map[string]any{{"name": fmt.Sprintf("in_w%d_target", id), "value": 400}}, plan, []planner.Edit{target}, true},
		{"another last date", []map[string]any{{"name": fmt.Sprintf("in_w%d_last", id), "value": int(last+6) + 25569}}, moved, nil, true},
		{"a warm day ahead", []map[string]any{
			{"sheet": "days", "cell": fmt.Sprintf("B%d", row(warm.Day)), "value": 33.5},
			{"sheet": "days", "cell": fmt.Sprintf("C%d", row(warm.Day)), "value": 21},
			{"sheet": "days", "cell": fmt.Sprintf("D%d", row(warm.Day)), "value": nil},
		}, plan, []planner.Edit{warm}, false},
		{"a row put in, another target", []map[string]any{
			{"sheet": "days", "insert": row(plan.AsOf)},
			{"name": fmt.Sprintf("in_w%d_target", id), "value": 400},
		}, plan, []planner.Edit{target}, true},
	} {
		changed, refused := planner.Apply(trial.plan, trial.edits...)
		if len(refused) > 0 {
			t.Fatal(refused)
		}
		want := inputOf(t, changed, 1).Data.Works[0].Counts[0]
		held(t, trial.name, typed(t, book, trial.typed), 5, want.Due, want.Through, trial.spread)
	}
}
