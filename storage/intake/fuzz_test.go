package intake_test

import (
	"bytes"
	"errors"
	"io"
	"os"
	"testing"

	"swardbook/planner"
	"swardbook/storage/intake"
)

// FuzzFile holds that whatever comes, reading ends without a panic, rows are
// valid by planner's own checks and have a line, and refused rows give a
// reason and a value fit to be shown.
func FuzzFile(f *testing.F) {
	paths, err := corpus()
	if err != nil || len(paths) == 0 {
		f.Fatalf("no seeds in %s: %v", folder, err)
	}
	for _, path := range paths {
		content, err := os.ReadFile(path)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(content, -5, "")
		f.Add(content, 10, "f")
	}
	f.Add([]byte("time,temp_c\n\"\"\"\n\"\n,\"\"\"\"\n"), 0, "c")
	f.Fuzz(func(t *testing.T, content []byte, hours int, units string) {
		site := intake.Site{OffsetSeconds: hours % 15 * 3600}
		file, err := intake.Open(bytes.NewReader(content), site, intake.How{Units: planner.Units(units)})
		if err != nil {
			checkProblem(t, err)
			return
		}
		defer file.Close()
		for {
			row, err := file.Next()
			if errors.Is(err, io.EOF) {
				return
			}
			refused, isRow := intake.IsRowError(err)
			switch {
			case isRow:
				row.Line = refused.Line
				if refused.Reason == "" || len([]rune(refused.Value)) > 60 {
					t.Fatalf("refused with %+v", refused)
				}
			case err != nil:
				checkProblem(t, err)
				return
			default:
				checkRow(t, row, site)
			}
			if row.Line < 1 {
				t.Fatalf("line %d", row.Line)
			}
		}
	})
}

func checkProblem(t *testing.T, err error) {
	t.Helper()
	var problem *planner.Problem
	if !errors.As(err, &problem) || problem.Message == "" {
		t.Fatalf("error %v is no problem with a message", err)
	}
}

func checkRow(t *testing.T, row intake.Row, site intake.Site) {
	t.Helper()
	day := row.Day.Day
	if !row.Daily {
		rule := planner.DayRule{OffsetSeconds: site.OffsetSeconds, Boundary: planner.StandardMidnight}
		day = rule.DayOf(nil, row.Reading.At)
	}
	if day < planner.DayMin || day > planner.DayMax {
		t.Fatalf("%+v is outside the years", row)
	}
	if row.Empty {
		return
	}
	err := planner.CheckTemperature(row.Reading.C)
	if row.Daily {
		err = row.Day.Check()
	}
	if err != nil {
		t.Fatalf("%+v: %v", row, err)
	}
}
