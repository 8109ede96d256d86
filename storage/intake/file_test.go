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
	_ "time/tzdata" // a fresh machine may have no time zones

	"github.com/google/go-cmp/cmp"

	"swardbook/planner"
	"swardbook/storage/intake"
)

var update = flag.Bool("update", false, "write the golden rows anew")

const folder = "../../testdata/intake"

// site is in the standard time of New York; all files are invented.
var site = intake.Site{OffsetSeconds: -5 * 3600, Zone: zone("America/New_York")}

func zone(name string) *time.Location {
	zone, err := time.LoadLocation(name)
	if err != nil {
		panic(err)
	}
	return zone
}

// files says of every file in testdata/intake what becomes of it, counted by
// hand. Its rows are in the golden file beside it.
var files = []struct {
	name                  string // with its ending, .csv when it has none
	how                   intake.How
	format                string
	units                 planner.Units
	clock                 string
	taken, empty, refused int
	problem               string // part of the message of a file refused on opening
}{
	{name: "readings_date_and_time_columns", format: "readings", units: "c", clock: "site standard time", taken: 1},
	{name: "readings_semicolons_decimal_comma", format: "readings", units: "c", clock: "offset in the file", taken: 1},
	{name: "readings_utc_in_header", format: "readings", units: "c", clock: "UTC", taken: 1},
	{name: "readings_utf16_le_mark", format: "readings", units: "c", clock: "offset in the file", taken: 1},
	{name: "readings_german_windows_1252", format: "readings", units: "c", clock: "site standard time", taken: 3},
	{name: "readings_french_tabs", format: "readings", units: "c", clock: "site standard time", taken: 3},
	{name: "readings_pipes", format: "readings", units: "f", clock: "site standard time", taken: 2},
	{name: "readings_utf16_be_no_mark", format: "readings", units: "c", clock: "offset in the file", taken: 2},
	{name: "readings_utf16_le_no_mark", format: "readings", units: "c", clock: "offset in the file", taken: 1},
	{name: "readings_cr_line_ends", format: "readings", units: "c", clock: "offset in the file", taken: 2},
	{name: "readings_month_first_by_the_file", format: "readings", units: "c", clock: "site standard time", taken: 3},
	{name: "readings_day_first_by_the_file", format: "readings", units: "c", clock: "site standard time", taken: 3},
	{name: "readings_day_first_by_following_days", format: "readings", units: "c", clock: "site standard time", taken: 5},
	{name: "readings_year_first_two_digits", format: "readings", units: "c", clock: "site standard time", taken: 4},
	{name: "readings_12_hour_clock", format: "readings", units: "f", clock: "site standard time", taken: 5, refused: 1},
	{name: "readings_hour_column", format: "readings", units: "c", clock: "site standard time", taken: 3, refused: 1},
	{name: "readings_offset_in_header", format: "readings", units: "f", clock: "UTC-04:00", taken: 2},
	{name: "readings_wall_clock", format: "readings", units: "c", clock: intake.ClockWall, taken: 9},
	{name: "readings_wall_clock_newest_first", format: "readings", units: "c", clock: intake.ClockWall, taken: 9},
	{name: "readings_standard_time_through_changes", format: "readings", units: "c", clock: "site standard time", taken: 9},
	{name: "readings_preamble_and_summary", format: "readings", units: "c", clock: "site standard time", taken: 2},
	{name: "readings_units_row", format: "readings", units: "f", clock: "site standard time", taken: 2},
	{name: "readings_units_behind_values", format: "readings", units: "f", clock: "site standard time", taken: 3},
	{name: "readings_fahrenheit_by_values", format: "readings", units: "f", clock: "site standard time", taken: 3},
	{name: "readings_sensor_chosen_in_columns", how: intake.How{Sensor: "green 12 temp (°C)"}, format: "readings", units: "c", clock: "site standard time", taken: 1},
	{name: "readings_sensor_chosen_in_rows", how: intake.How{UsualSensor: "green 12"}, format: "readings", units: "c", clock: "site standard time", taken: 2},
	{name: "readings_month_names", format: "readings", units: "c", clock: "site standard time", taken: 6, refused: 1},
	{name: "readings_compact_dates", format: "readings", units: "c", clock: intake.ClockMixed, taken: 4},
	{name: "readings_zone_names", format: "readings", units: "c", clock: "offset in the file", taken: 4, refused: 1},
	{name: "readings_more_missing_values", format: "readings", units: "c", clock: "offset in the file", taken: 1, empty: 7},
	{name: "readings_stated_clock_utc", how: intake.How{Clock: "utc"}, format: "readings", units: "c", clock: "UTC", taken: 2},
	{name: "readings_stated_clock_wall", how: intake.How{Clock: "wall"}, format: "readings", units: "c", clock: intake.ClockWall, taken: 2, refused: 1},
	{name: "readings_stated_month_first", how: intake.How{Dates: "m/d/y"}, format: "readings", units: "c", clock: "site standard time", taken: 1},
	{name: "readings_italian", format: "readings", units: "c", clock: "site standard time", taken: 2},
	{name: "readings_quoted_decimal_comma", format: "readings", units: "c", clock: "site standard time", taken: 2},
	{name: "readings_packed.csv.gz", format: "readings", units: "c", clock: "offset in the file", taken: 2},
	{name: "readings_packed.zip", format: "readings", units: "c", clock: "offset in the file", taken: 2},
	{name: "daily_spanish", format: "daily", units: "c", clock: "dates only", taken: 2},
	{name: "daily_polish", format: "daily", units: "c", clock: "dates only", taken: 1},
	{name: "daily_month_first_fahrenheit", format: "daily", units: "f", clock: "dates only", taken: 2},
	{name: "ghcn_daily_months.dly", format: "daily", units: "c", clock: "dates only", taken: 28, empty: 29, refused: 1},
	{name: "ghcn_daily_by_station", format: "daily", units: "c", clock: "dates only", taken: 3, refused: 1},
	{name: "fault_ghcn_daily_by_station", format: "daily", units: "c", clock: "dates only", taken: 1, refused: 7},
	{name: "isd_lite.txt", format: "readings", units: "c", clock: "UTC", taken: 3, empty: 1},
	{name: "fault_isd_lite.txt", format: "readings", units: "c", clock: "UTC", taken: 1, refused: 4},
	{name: "metar_month_stated.txt", how: intake.How{Dates: "2021-07"}, format: "readings", units: "c", clock: "UTC", taken: 6},
	{name: "metar_dated.txt", format: "readings", units: "c", clock: "UTC", taken: 5, empty: 1, refused: 2},
	{name: "observations_lines.json", format: "readings", units: "c", clock: "offset in the file", taken: 1, empty: 1},
	{name: "observations_collection.json", format: "readings", units: "c", clock: "offset in the file", taken: 2, empty: 1},
	{name: "fault_observations.json", format: "readings", units: "c", clock: "offset in the file", taken: 1, refused: 5},
	{name: "own_export", format: "readings", units: "c", clock: "offset in the file", taken: 4, empty: 1, refused: 1},
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
	{name: "readings_rain_inches", format: "readings", units: "f", clock: "offset in the file", taken: 8, empty: 1},
	{name: "readings_rain_running_total", format: "readings", units: "c", clock: "offset in the file", taken: 13},
	{name: "readings_rain_two_gauges", format: "readings", units: "c", clock: "offset in the file", taken: 2},
	{name: "metar_rain.txt", format: "readings", units: "c", clock: intake.ClockUTC, taken: 5},
	{name: "readings_repeats", format: "readings", units: "c", clock: "offset in the file", taken: 26},
	{name: "daily", format: "daily", units: "c", clock: "dates only", taken: 2},
	{name: "daily_with_mean", format: "daily", units: "c", clock: "dates only", taken: 3},
	{name: "daily_fahrenheit", format: "daily", units: "f", clock: "dates only", taken: 2},
	{name: "daily_midnight_clock", format: "daily", units: "c", clock: "dates only", taken: 2},
	{name: "daily_beside_temperature", format: "daily", units: "c", clock: "dates only", taken: 2},
	{name: "daily_missing_values", format: "daily", units: "c", clock: "dates only", taken: 1, empty: 3},
	{name: "daily_leap_days", format: "daily", units: "c", clock: "dates only", taken: 4},

	{name: "fault_not_a_number", format: "readings", units: "c", clock: "offset in the file", taken: 4, refused: 5},
	{name: "fault_impossible_temperature", format: "readings", units: "c", clock: "offset in the file", taken: 2, refused: 3},
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
	{name: "refused_temperature_a_day", problem: "one temperature a day"},
	{name: "refused_mixed_units", problem: `"high_f", "low_c" are in different units`},
	{name: "refused_two_temperatures", problem: `"temp", "air_temp" could each be the temperature`},
	{name: "refused_broken_header_quotes", problem: "the header has broken quotes"},
	{name: "refused_binary", problem: "not a text file"},
	{name: "refused_dates_in_many_styles", problem: "the dates could be in more than one order"},
	{name: "refused_dates_ambiguous", problem: `the dates could be in more than one order: "01/07/2013 05:00"`},
	{name: "refused_wall_clock_unsure", problem: "do not double one in autumn"},
	{name: "refused_units_unclear", problem: "could be °C or °F"},
	{name: "refused_sensors_in_columns", problem: `"Green 7 temp (°C)", "Green 12 temp (°C)" could each be the temperature`},
	{name: "refused_sensors_in_rows", problem: "the file has 2 sensors"},
	{name: "refused_ghcn_daily_two_stations", problem: "the file has 2 stations"},
	{name: "refused_metar_without_month.txt", problem: "the day of the month and not the month"},
	{name: "refused_observations_cut_off.json", problem: "observation 2 cannot be read"},
	{name: "refused_observations_two_stations.json", problem: "the file has 2 stations"},
	{name: "refused_zip_of_two.zip", problem: "the zip holds 2 files"},
	{name: "refused_zip_cut_off.zip", problem: "the zip file is broken"},
	{name: "refused_gzip_cut_off.csv.gz", problem: "the gzip file is broken"},
}

func TestFiles(t *testing.T) {
	t.Parallel()
	listed := map[string]bool{}
	for _, want := range files {
		listed[want.name] = true
		t.Run(want.name, func(t *testing.T) {
			t.Parallel()
			content, err := os.ReadFile(filepath.Join(folder, fileName(want.name)))
			if err != nil {
				t.Fatal(err)
			}
			got := readHow(bytes.NewReader(content), site, want.how)
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
	found, err := corpus()
	if err != nil || len(found) != len(files) {
		t.Errorf("%d files in %s (%v), %d in the table", len(found), folder, err, len(files))
	}
	for _, path := range found {
		if name := strings.TrimSuffix(filepath.Base(path), ".csv"); !listed[name] {
			t.Errorf("%s is not in the table", name)
		}
	}
}

func fileName(name string) string {
	if filepath.Ext(name) == "" {
		return name + ".csv"
	}
	return name
}

// corpus returns the path of every file in testdata/intake.
func corpus() (paths []string, err error) {
	all, err := filepath.Glob(filepath.Join(folder, "*.*"))
	for _, path := range all {
		if ext := filepath.Ext(path); ext != ".golden" && ext != ".md" {
			paths = append(paths, path)
		}
	}
	return paths, err
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
	sensor       string
	dates        string
	notes        []string
	err          error
}

func read(content io.Reader, site intake.Site, units planner.Units) (out outcome) {
	return readHow(content, site, intake.How{Units: units})
}

func readHow(content io.Reader, site intake.Site, how intake.How) (out outcome) {
	file, err := intake.Open(content, site, how)
	if err != nil {
		out.err = err
		return out
	}
	defer func() { out.err = errors.Join(out.err, file.Close()) }()
	out.sensor, out.dates, out.notes = file.Sensor, file.Dates, file.Notes
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
	if row.HasRain {
		return fmt.Sprintf("%s, rain %.6g mm", temperatureText(row), row.Rain.MM)
	}
	return temperatureText(row)
}

func temperatureText(row intake.Row) string {
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
	for _, note := range o.notes {
		fmt.Fprintln(&b, note)
	}
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
