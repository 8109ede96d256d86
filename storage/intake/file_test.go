package intake_test

import (
	"bytes"
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"

	"swardbook/planner"
	"swardbook/storage/intake"
)

var update = flag.Bool("update", false, "write the golden rows anew")

const folder = "../../testdata/intake"

// site is in the standard time of New York; all files are invented.
var site = intake.Site{OffsetSeconds: -5 * 3600}

// files says of every file in testdata/intake what becomes of it, counted by
// hand. Its rows are in the golden file beside it.
var files = []struct {
	name                  string
	format                string
	units                 planner.Units
	clock                 string
	taken, empty, refused int
	problem               string // part of the message of a file refused on opening
}{
	{name: "readings_offset", format: "readings", units: "c", clock: "offset in the file", taken: 3},
	{name: "readings_utc_seconds_fraction", format: "readings", units: "c", clock: "offset in the file", taken: 3},
	{name: "readings_site_time_space", format: "readings", units: "c", clock: "site standard time", taken: 2},
	{name: "readings_mixed_offsets", format: "readings", units: "c", clock: intake.ClockMixed, taken: 5},
	{name: "readings_hour_24", format: "readings", units: "c", clock: intake.ClockMixed, taken: 3},
	{name: "readings_fahrenheit_header", format: "readings", units: "f", clock: "offset in the file", taken: 3},
	{name: "readings_fahrenheit_latin1_header", format: "readings", units: "f", clock: "offset in the file", taken: 1},
	{name: "readings_both_units", format: "readings", units: "c", clock: "offset in the file", taken: 2},
	{name: "readings_bom_crlf", format: "readings", units: "c", clock: "offset in the file", taken: 2},
	{name: "readings_no_last_newline", format: "readings", units: "c", clock: "offset in the file", taken: 2},
	{name: "readings_quoted", format: "readings", units: "c", clock: "offset in the file", taken: 3},
	{name: "readings_missing_values", format: "readings", units: "c", clock: "offset in the file", taken: 1, empty: 13},
	{name: "readings_date_column_with_clock", format: "readings", units: "c", clock: "site standard time", taken: 2},
	{name: "readings_beside_high_low", format: "readings", units: "c", clock: "offset in the file", taken: 2},
	{name: "readings_trailing_commas", format: "readings", units: "c", clock: "offset in the file", taken: 3},
	{name: "readings_repeats", format: "readings", units: "c", clock: "offset in the file", taken: 26},
	{name: "daily", format: "daily", units: "c", clock: "dates only", taken: 2},
	{name: "daily_with_mean", format: "daily", units: "c", clock: "dates only", taken: 3},
	{name: "daily_fahrenheit", format: "daily", units: "f", clock: "dates only", taken: 2},
	{name: "daily_midnight_clock", format: "daily", units: "c", clock: "dates only", taken: 2},
	{name: "daily_beside_temperature", format: "daily", units: "c", clock: "dates only", taken: 2},
	{name: "daily_missing_values", format: "daily", units: "c", clock: "dates only", taken: 1, empty: 3},
	{name: "daily_leap_days", format: "daily", units: "c", clock: "dates only", taken: 4},

	{name: "fault_not_a_number", format: "readings", units: "c", clock: "offset in the file", taken: 2, refused: 7},
	{name: "fault_impossible_temperature", format: "readings", units: "c", clock: "offset in the file", taken: 2, refused: 3},
	{name: "fault_other_date_styles", format: "readings", units: "c", clock: "offset in the file", taken: 1, refused: 9},
	{name: "fault_no_such_time", format: "readings", units: "c", clock: "offset in the file", taken: 1, refused: 13},
	{name: "fault_years", format: "readings", units: "c", clock: "offset in the file", taken: 2, refused: 5},
	{name: "fault_missing_time", format: "readings", units: "c", clock: "offset in the file", taken: 1, refused: 2},
	{name: "fault_row_lengths", format: "readings", units: "c", clock: "offset in the file", taken: 2, refused: 3},
	{name: "fault_broken_quotes", format: "readings", units: "c", clock: "offset in the file", taken: 3, refused: 4},
	{name: "fault_high_below_low", format: "daily", units: "c", clock: "dates only", taken: 2, refused: 9},
	{name: "fault_control_characters", format: "readings", units: "c", clock: "offset in the file", taken: 1, refused: 3},

	{name: "refused_empty", problem: "the file is empty"},
	{name: "refused_blank_lines", problem: "the file is empty"},
	{name: "refused_header_unknown", problem: `"rh,wind,pressure" is not a header`},
	{name: "refused_header_missing", problem: `"2013-07-01T05:00Z,17.8" is not a header`},
	{name: "refused_no_temperature", problem: `no column for a temperature, or a high and a low; its columns are "time", "rh", "wind"`},
	{name: "refused_no_time", problem: `no column for a time or a date; its columns are "hour", "temp_c"`},
	{name: "refused_high_without_low", problem: "no column for a temperature, or a high and a low"},
	{name: "refused_semicolons", problem: `"time;temp_c" is not a header`},
	{name: "refused_temperature_a_day", problem: "one temperature a day"},
	{name: "refused_mixed_units", problem: `"high_f", "low_c" are in different units`},
	{name: "refused_date_and_time_columns", problem: `"date", "time" could each be the time`},
	{name: "refused_two_temperatures", problem: `"temp", "air_temp" could each be the temperature`},
	{name: "refused_time_in_utc_by_name", problem: `no column for a time or a date; its columns are "time (UTC)"`},
	{name: "refused_broken_header_quotes", problem: "the header has broken quotes"},
	{name: "refused_utf16", problem: "not a text file"},
}

func TestFiles(t *testing.T) {
	t.Parallel()
	listed := map[string]bool{}
	for _, want := range files {
		listed[want.name] = true
		t.Run(want.name, func(t *testing.T) {
			t.Parallel()
			content, err := os.ReadFile(filepath.Join(folder, want.name+".csv"))
			if err != nil {
				t.Fatal(err)
			}
			got := read(bytes.NewReader(content), site, "")
			compareGolden(t, want.name, got.text())
			if want.problem != "" {
				wantProblem(t, got.err, want.problem)
				return
			}
			if got.err != nil {
				t.Fatalf("error %v", got.err)
			}
			type outcome struct {
				Format                string
				Units                 planner.Units
				Clock                 string
				Taken, Empty, Refused int
			}
			if diff := cmp.Diff(
				outcome{want.format, want.units, want.clock, want.taken, want.empty, want.refused},
				outcome{got.format, got.units, got.clock, got.taken, got.empty, len(got.refusals)}); diff != "" {
				t.Error(diff)
			}
		})
	}
	found, err := filepath.Glob(filepath.Join(folder, "*.csv"))
	if err != nil || len(found) != len(files) {
		t.Errorf("%d files in %s (%v), %d in the table", len(found), folder, err, len(files))
	}
	for _, path := range found {
		if name := strings.TrimSuffix(filepath.Base(path), ".csv"); !listed[name] {
			t.Errorf("%s is not in the table", name)
		}
	}
}

// outcome is a file read to its end.
type outcome struct {
	format       string
	units        planner.Units
	clock        string
	rows         []intake.Row
	taken, empty int
	refusals     []planner.Refusal
	lines        []string // rows and refusals as text, in order
	err          error
}

func read(content io.Reader, site intake.Site, units planner.Units) (out outcome) {
	file, err := intake.Open(content, site, units)
	if err != nil {
		out.err = err
		return out
	}
	out.format, out.units = file.Format, file.Units
	for {
		row, err := file.Next()
		out.clock = file.Clock()
		if errors.Is(err, io.EOF) {
			return out
		}
		if refused, ok := intake.IsRowError(err); ok {
			out.refusals = append(out.refusals, refused.Refusal)
			out.lines = append(out.lines, refused.Error())
			continue
		}
		if err != nil {
			out.err = err
			return out
		}
		out.rows = append(out.rows, row)
		out.lines = append(out.lines, rowText(row))
		if row.Empty {
			out.empty++
		} else {
			out.taken++
		}
	}
}

func rowText(row intake.Row) string {
	switch day := row.Day; {
	case row.Daily && row.Empty:
		return fmt.Sprintf("line %d: %s empty", row.Line, day.Day)
	case row.Daily && day.HasMean:
		return fmt.Sprintf("line %d: %s high %.6g low %.6g mean %.6g", row.Line, day.Day, day.HighC, day.LowC, day.MeanC)
	case row.Daily:
		return fmt.Sprintf("line %d: %s high %.6g low %.6g", row.Line, day.Day, day.HighC, day.LowC)
	case row.Empty:
		return fmt.Sprintf("line %d: %s empty", row.Line, utc(row.Reading.At))
	}
	return fmt.Sprintf("line %d: %s %.6g", row.Line, utc(row.Reading.At), row.Reading.C)
}

func utc(at int64) string { return time.Unix(at, 0).UTC().Format(time.RFC3339) }

func (o outcome) text() string {
	var b strings.Builder
	var problem *planner.Problem
	if errors.As(o.err, &problem) {
		fmt.Fprintf(&b, "%s: %s\n%s\n", problem.Kind, problem.Message, problem.Hint)
		return b.String()
	}
	fmt.Fprintf(&b, "%s, %s, %s\n", o.format, o.units, o.clock)
	for _, line := range o.lines {
		fmt.Fprintln(&b, line)
	}
	return b.String()
}

func compareGolden(t *testing.T, name, got string) {
	t.Helper()
	path := filepath.Join(folder, name+".golden")
	if *update {
		if err := os.WriteFile(path, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(string(want), got); diff != "" {
		t.Error(diff)
	}
}

func wantProblem(t *testing.T, err error, part string) {
	t.Helper()
	var problem *planner.Problem
	if !errors.As(err, &problem) {
		t.Fatalf("error %v, want a problem with %q", err, part)
	}
	if problem.Kind != planner.Refused || !strings.Contains(problem.Message, part) || problem.Hint == "" {
		t.Errorf("%s problem %q, hint %q; want a refused one with %q and a hint", problem.Kind, problem.Message, problem.Hint, part)
	}
}
