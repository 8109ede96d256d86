package workbook_test

import (
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"
)

// Every cell that is not locked says what it takes, and refuses the rest.
func TestEveryInputHasARule(t *testing.T) {
	for _, number := range []uint64{2, 3, 5} {
		file := open(t, build(t, withRates(randomPlan(number))))
		inputs := 0
		for _, sheet := range file.GetSheetList() {
			rules, err := file.GetDataValidations(sheet)
			if err != nil {
				t.Fatal(err)
			}
			for _, rule := range rules {
				if rule.Prompt == nil || *rule.Prompt == "" || len(*rule.Prompt) > 255 || rule.Error == nil || len(*rule.Error) > 224 || !rule.ShowErrorMessage || !rule.ShowInputMessage {
					t.Errorf("%s!%s: a rule without its words: %+v", sheet, rule.Sqref, rule)
				}
			}
			inputs += unlocked(t, file, sheet, func(cell string) {
				if !ruled(t, rules, cell) {
					t.Errorf("plan %d: %s!%s is an input without a rule", number, sheet, cell)
				}
			})
		}
		if inputs < 300 {
			t.Errorf("plan %d: only %d inputs", number, inputs)
		}
	}
}

// unlocked calls do for every cell that is not locked, and counts them.
func unlocked(t *testing.T, file *excelize.File, sheet string, do func(cell string)) (count int) {
	t.Helper()
	dimension, err := file.GetSheetDimension(sheet)
	if err != nil {
		t.Fatal(err)
	}
	_, last, _ := strings.Cut(dimension, ":")
	columns, rows, err := excelize.CellNameToCoordinates(last)
	if err != nil {
		t.Fatal(err)
	}
	open := map[int]bool{}
	for row := 1; row <= rows; row++ {
		for column := 1; column <= columns; column++ {
			cell, _ := excelize.CoordinatesToCellName(column, row)
			id, err := file.GetCellStyle(sheet, cell)
			if err != nil {
				t.Fatal(err)
			}
			if _, seen := open[id]; !seen {
				style, err := file.GetStyle(id)
				if err != nil {
					t.Fatal(err)
				}
				open[id] = style.Protection != nil && !style.Protection.Locked
			}
			if open[id] {
				count++
				do(cell)
			}
		}
	}
	return count
}

// ruled reports whether a rule covers the cell.
func ruled(t *testing.T, rules []*excelize.DataValidation, cell string) bool {
	t.Helper()
	column, row, err := excelize.CellNameToCoordinates(cell)
	if err != nil {
		t.Fatal(err)
	}
	for _, rule := range rules {
		first, last, _ := strings.Cut(rule.Sqref, ":")
		left, top, err := excelize.CellNameToCoordinates(first)
		if err != nil {
			t.Fatal(err)
		}
		right, bottom, err := excelize.CellNameToCoordinates(last)
		if err != nil {
			t.Fatal(err)
		}
		if column >= left && column <= right && row >= top && row <= bottom {
			return true
		}
	}
	return false
}

// Dates take the years 2000 to 2100: 36526 is 1 January 2000 and 73415 is 31
// December 2100 by the count of days that spreadsheets share (from memory; ECMA-376
// part 1 has it).
func TestDatesOfTheFeedsAreBounded(t *testing.T) {
	file := open(t, build(t, editedPlan()))
	rules, err := file.GetDataValidations("works and log")
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"log_date", "in_w1_last"} {
		_, cell := cellOf(t, file, name, 0)
		found := false
		for _, rule := range rules {
			if ruled(t, []*excelize.DataValidation{rule}, cell) {
				found = true
				if rule.Type != "date" || rule.Formula1 != "36526" || rule.Formula2 != "73415" {
					t.Errorf("%s takes %s from %s to %s", name, rule.Type, rule.Formula1, rule.Formula2)
				}
			}
		}
		if !found {
			t.Errorf("%s takes anything", name)
		}
	}
}
