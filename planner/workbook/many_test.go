package workbook_test

import (
	"fmt"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"swardbook/planner"
)

// A spreadsheet program takes 8192 letters as one formula (Microsoft, "Excel
// specifications and limits", from memory): no number of works makes a longer
// one, and each is told on the day it falls due.
func TestManyWorks(t *testing.T) {
	plan := withRates(editedPlan())
	settings := planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByDays}, Target: 27}
	for id := planner.WorkID(100); id < 260; id++ {
		plan.Works = append(plan.Works, planner.Work{ID: id, Surface: 1, Name: fmt.Sprintf("cut %d", id), Settings: planner.Always(settings)})
		plan = planWith(plan, planner.Entry{Day: plan.AsOf - 25, Passes: []planner.Pass{{Work: id}}})
	}
	file := open(t, build(t, plan))
	for _, sheet := range []string{"week", "works and log", "nitrogen", "means compared"} {
		rows, err := file.GetRows(sheet)
		if err != nil {
			t.Fatal(err)
		}
		for r := range rows {
			for c := range rows[r] {
				cell, _ := excelize.CoordinatesToCellName(c+1, r+1)
				if formula, err := file.GetCellFormula(sheet, cell); err != nil || len(formula) > 8192 {
					t.Errorf("%s!%s: %d letters, %v", sheet, cell, len(formula), err)
				}
			}
		}
	}
	due := strings.Join(rowOf(t, file, "week", 6+len(plan.Works)+2), "|")
	for id := 100; id < 260; id++ {
		if !strings.Contains(due, fmt.Sprintf("=greens cut %d", id)) {
			t.Errorf("cut %d is not among what falls due", id)
		}
	}
}

// LibreOffice finds the largest difference of the means as planner does, also
// where several are one degree apart, above and below.
func TestLargestDifferenceInLibreOffice(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("recalculates in LibreOffice with SWARDBOOK_SLOW=1")
	}
	t.Parallel()
	var books [][]byte
	for _, means := range [][][2]float64{
		{{0.2, 1.2}, {7.3, 6.3}, {1.2, 0.2}, {5.3, 5.1}},
		{{5.3, 5.1}, {7.3, 6.3}, {0.2, 1.2}, {1.2, 0.2}},
		{{5.3, 5.1}, {5.1, 5.3}},
		{{0.3, 0.1}, {0.1, 4.1}, {7.3, 6.3}},
		{{3, 3}},
	} {
		for _, units := range []planner.Units{planner.Celsius, planner.Fahrenheit} {
			plan := editedPlan()
			plan.Site.Units = units
			for i := range plan.Record.Facts {
				facts := &plan.Record.Facts[i]
				facts.HasHourly = false
				if at := int(facts.Day - (plan.AsOf - 10)); at >= 0 && at < len(means) {
					facts.HasExtremes, facts.HighC, facts.LowC = true, means[at][0], means[at][0]
					facts.HasHourly, facts.HourlyC = true, means[at][1]
				}
			}
			books = append(books, build(t, plan))
		}
	}
	for i, computed := range recalculated(t, books) {
		faults, _ := differences(t, books[i], computed)
		for _, fault := range faults {
			t.Errorf("book %d: %s", i, fault)
		}
	}
}
