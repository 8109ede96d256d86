package workbook_test

import (
	"fmt"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"swardbook/planner"
)

// standingPlan is an invented plan with a work in every standing that a date
// can have, one each by its id from 11 on.
func standingPlan() planner.Plan {
	plan := withRates(editedPlan())
	plan.Surfaces = append([]planner.Surface(nil), plan.Surfaces...)
	plan.Surfaces[0].Parts = []planner.Part{{ID: 1, Name: "front", Share: 0.6}, {ID: 2, Name: "back", Share: 0.4}}
	byDay := func(target float64, change func(*planner.WorkSettings)) planner.WorkSettings {
		settings := planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByDays}, Target: target}
		if change != nil {
			change(&settings)
		}
		return settings
	}
	_, month, day := (plan.AsOf + 5).Date()
	_, startMonth, startDay := (plan.AsOf - 60).Date()
	_, laterMonth, laterDay := (plan.AsOf + 20).Date()
	_, endMonth, endDay := (plan.AsOf + 90).Date()
	for i, work := range []struct {
		name     string
		settings planner.WorkSettings
		ago      planner.Day // 0: not started
		part     planner.PartID
	}{
		{"rests", byDay(20, func(s *planner.WorkSettings) { s.Season.Resting = true }), 4, 0},
		{"rests by date", byDay(20, func(s *planner.WorkSettings) {
			s.Season.From, s.Season.To = planner.MonthDay{Month: laterMonth, Day: laterDay}, planner.MonthDay{Month: endMonth, Day: endDay}
		}), 4, 0},
		{"new", byDay(20, nil), 0, 0},
		{"full", byDay(20, func(s *planner.WorkSettings) { s.Limits.MostTimes = 1 }), 4, 0},
		{"held", byDay(5, func(s *planner.WorkSettings) { s.Limits.LeastDays = 14 }), 10, 0},
		{"closed", byDay(15, nil), 10, 0},
		{"ends", byDay(20, func(s *planner.WorkSettings) {
			s.Season.From, s.Season.To = planner.MonthDay{Month: startMonth, Day: startDay}, planner.MonthDay{Month: month, Day: day}
		}), 4, 0},
		{"half", byDay(9, nil), 10, 0},
		{"ancient", byDay(20, nil), 500, 0},
		{"now", byDay(5, nil), 5, 0},
	} {
		id := planner.WorkID(11 + i)
		plan.Works = append(plan.Works, planner.Work{ID: id, Surface: 1, Name: work.name, Settings: planner.Always(work.settings)})
		if work.ago > 0 {
			plan = planWith(plan, planner.Entry{Day: plan.AsOf - work.ago, Passes: []planner.Pass{{Work: id, Part: work.part}}})
		}
	}
	plan = planWith(plan, planner.Entry{Day: plan.AsOf - 2, Passes: []planner.Pass{{Work: 18, Part: 2}}})
	plan.Closed = []planner.Closed{{ID: 1, Site: 1, Name: "match", Works: []planner.WorkID{16}, From: plan.AsOf + 4, To: plan.AsOf + 6}}
	return plan
}

// planWith is the plan with an entry in its place by day.
func planWith(plan planner.Plan, entry planner.Entry) planner.Plan {
	at := 0
	for at < len(plan.Log) && plan.Log[at].Day <= entry.Day {
		at++
	}
	plan.Log = append(append(append([]planner.Entry(nil), plan.Log[:at]...), entry), plan.Log[at:]...)
	return plan
}

// The due cell of each work is the date that Evaluate tells, or none where it
// tells none; the words beside it say why.
func TestHowWorksStand(t *testing.T) {
	plan := standingPlan()
	input := inputOf(t, plan, 1)
	file := open(t, build(t, plan))
	words := map[string]string{
		"rests": "resting", "rests by date": "resting; on again " + (plan.AsOf + 20).Short(), "new": "not started: log the last one",
		"full": "season's most reached", "held": "held by the 14 days between", "ends": "its season ends before",
		"closed": "closed then: match, open " + (plan.AsOf + 3).Short() + ", again from " + (plan.AsOf + 7).Short(),
		"half":   "not done yet: front", "ancient": "last done " + (plan.AsOf - 500).String() + ", before this sheet",
		"now": "due today",
	}
	dates := map[string]any{"full": "season's most reached", "held": plan.AsOf + 4, "closed": plan.AsOf + 5, "ends": plan.AsOf + 16, "half": plan.AsOf - 1, "ancient": plan.AsOf - 480, "now": plan.AsOf}
	seen := 0
	for i, state := range input.Evaluation.Works {
		row := 4 + i
		cells := rowOf(t, file, "week", row)
		said := strings.Join(cells, "|")
		facts, started := state.OwnFacts()
		want := ""
		if date := facts.Date(); started && date.Known {
			want = fmt.Sprint(int(date.Day) + 25569)
		}
		if told, ok := dates[state.Work.Name].(planner.Day); ok && want != fmt.Sprint(int(told)+25569) {
			t.Errorf("%s: Evaluate tells %s, by hand it is %s", state.Work.Name, want, told)
		}
		if told, ok := dates[state.Work.Name].(string); ok {
			want = told
		}
		if cells[1] != want {
			t.Errorf("%s: the due cell is %q, want %q", state.Work.Name, cells[1], want)
		}
		if early, late := cells[8], cells[9]; state.Work.Name == "full" && early+late != "" {
			t.Errorf("nothing more may be done, and it is likely from %s to %s", early, late)
		}
		if word, ok := words[state.Work.Name]; ok {
			seen++
			if !strings.Contains(said, word) {
				t.Errorf("%s: %q is not in %q", state.Work.Name, word, said)
			}
		}
	}
	if seen != len(words) {
		t.Errorf("%d works of %d", seen, len(words))
	}
	today := strings.Join(rowOf(t, file, "week", 4+len(input.Evaluation.Works)+2), "|")
	for _, name := range []string{"half", "ancient", "now"} {
		if !strings.Contains(today, name) {
			t.Errorf("%s is not due today in %q", name, today)
		}
	}
	if strings.Contains(today, "full") || strings.Contains(today, "rests") {
		t.Errorf("due today: %q", today)
	}
}

// rowOf are the cells of a row, as many as the key numbers have at least.
func rowOf(t *testing.T, file *excelize.File, sheet string, row int) []string {
	t.Helper()
	var cells []string
	for column := 1; column <= 14; column++ {
		cell, _ := excelize.CoordinatesToCellName(column, row)
		text, err := file.GetCellValue(sheet, cell, excelize.Options{RawCellValue: true})
		if err != nil {
			t.Fatal(err)
		}
		cells = append(cells, text)
	}
	return cells
}

// The product of a day that falls due is the whole surface's, at the last
// logged rate: 14 g/m² on 5520 m² is 77.28 kg, at 21 % 16.2288 kg N.
func TestProductOfTheWeek(t *testing.T) {
	plan := withRates(editedPlan())
	plan.Works[0].Settings = planner.Always(planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByDays}, Target: 27})
	row := func(plan planner.Plan) (key, day string) {
		file := open(t, build(t, plan))
		return strings.Join(rowOf(t, file, "week", 4), "|"), strings.Join(rowOf(t, file, "week", 6+len(plan.Works)+2), "|")
	}
	key, day := row(plan)
	if !strings.Contains(key, "77.28 kg at the last logged rate, 14 g/m² at 21 % N") || !strings.Contains(day, "|=greens work a 77.28 kg|") {
		t.Errorf("%q\n%q", key, day)
	}
	plan.Surfaces[0].AreaM2 = 0
	if key, day := row(plan); strings.Contains(key+day, "kg") || !strings.Contains(day, "|=greens work a|") {
		t.Errorf("without an area: %q\n%q", key, day)
	}
}
