package planner_test

import (
	"encoding/json"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"

	"swardbook/planner"
)

// An outlook as issued holds its path to the last bit, and what it stands on.
func TestOutlookIsIssued(t *testing.T) {
	plan := planOf(date("2024-06-11"), times(20, 12), times(9, 61.0/7), times(9, 12))
	plan.Outlook.Typed, plan.Outlook.Years, plan.Outlook.Engine = 2, 9, 1
	at := time.Date(2024, time.June, 11, 4, 30, 0, 0, time.UTC)
	issued, err := plan.Outlook.Issue(at, 41, "9 past years")
	if err != nil {
		t.Fatal(err)
	}
	var path []planner.DayFacts
	if err := json.Unmarshal(issued.Path, &path); err != nil || !cmp.Equal(path, plan.Outlook.Path) {
		t.Errorf("%v\n%s", err, cmp.Diff(plan.Outlook.Path, path))
	}
	issued.Path = nil
	want := planner.IssuedOutlook{AsOf: plan.AsOf, Issued: at, Revision: 41, Sources: "9 past years", Typed: 2, Years: 9, Engine: 1, Start: plan.Outlook.Start}
	if !cmp.Equal(issued, want) {
		t.Error(cmp.Diff(want, issued))
	}
}

// Of differences equal by size the earliest is told, whatever the last bit of
// the sums says: 1.2 and 0.2, 7.3 and 6.3 are all one degree apart.
func TestLargestOfEqualDifferences(t *testing.T) {
	first := date("2024-06-01")
	var record planner.Record
	for i, means := range [][2]float64{{5.3, 5.1}, {0.2, 1.2}, {7.3, 6.3}, {1.2, 0.2}} {
		record.Facts = append(record.Facts, planner.DayFacts{Day: first + planner.Day(i), HasExtremes: true, HighC: means[0], LowC: means[0], HasHourly: true, HourlyC: means[1]})
	}
	means := planner.CompareMeans(record, first, first+3)
	if means.LargestDay != first+1 || !within(means.LargestC, -1, 1e-9) {
		t.Errorf("largest %g on %s, want -1 on %s", means.LargestC, means.LargestDay, first+1)
	}
}
