package intake

import (
	"fmt"
	"io"
	"strings"
	"testing"

	"swardbook/planner"
)

// The groups and what they mean are printed in the Federal Meteorological
// Handbook No. 1, chapter 12, and in the US military manual of 2019.
func TestMETARGroups(t *testing.T) {
	t.Parallel()
	for _, row := range []struct {
		groups string
		want   func(r report) bool
	}{
		{"03/M01", func(r report) bool { return r.hasBody && r.body == 3 }},
		{"M11/M15", func(r report) bool { return r.hasBody && r.body == -11 }},
		{"M00/M01", func(r report) bool { return r.hasBody && r.body == 0 }},
		{"24/", func(r report) bool { return r.hasBody && r.body == 24 }},
		{"24///", func(r report) bool { return r.hasBody && r.body == 24 }},
		{"/////", func(r report) bool { return !r.hasBody }},
		{"10/04 RMK 12/34", func(r report) bool { return r.body == 10 }},
		{"10SM 21007KT A2998", func(r report) bool { return !r.hasBody }},
		{"RMK T00261015", func(r report) bool { return r.hasTenths && r.tenths == 2.6 }},
		{"RMK T01831006", func(r report) bool { return r.hasTenths && r.tenths == 18.3 }},
		{"RMK T0026", func(r report) bool { return r.hasTenths && r.tenths == 2.6 }},
		{"RMK T10021014", func(r report) bool { return r.hasTenths && r.tenths == -0.2 }},
		{"T00261015", func(r report) bool { return !r.hasTenths }}, // not in the remarks
		{"RMK 10142 21001", func(r report) bool { return r.hasSix == [2]bool{true, true} && r.six == [2]float64{14.2, -0.1} }},
		{"RMK 11021 20012", func(r report) bool { return r.six == [2]float64{-2.1, 1.2} }},
		{"RMK 400461006", func(r report) bool { return r.hasDay && r.day == [2]float64{4.6, -0.6} }},
		{"RMK 58012 60000 70012", func(r report) bool { return !r.hasDay && r.hasSix == [2]bool{} }},
	} {
		r, ok := readReport([]byte("METAR KXXX 151753Z AUTO " + row.groups))
		if !ok || !row.want(r) {
			t.Errorf("%s: %+v", row.groups, r)
		}
	}
	for _, text := range []string{"", "METAR", "METAR KXXX", "151753Z", "METAR KXXX 321753Z", "METAR KXXX 152453Z", "METAR KXXX 151760Z", "METAR kxxx 151753Z", "x METAR KXXX 151753Z", "KXXX 15175Z"} {
		if r, ok := readReport([]byte(text)); ok {
			t.Errorf("%q is read as %+v", text, r)
		}
	}
}

func days(t *testing.T, site Site, how How, lines ...string) (out []planner.DailyReading) {
	t.Helper()
	file, err := Open(strings.NewReader(strings.Join(lines, "\n")), site, how)
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	for {
		row, err := file.Next()
		if err == io.EOF {
			return out
		}
		if err != nil {
			t.Fatal(err)
		}
		if row.Daily {
			out = append(out, row.Day)
		}
	}
}

// Four six-hour extremes are a day's where the site's midnight is the end of
// one, as six hours behind UTC; elsewhere they are not.
func TestSixHourExtremes(t *testing.T) {
	t.Parallel()
	at := func(day, hour int, highC, lowC float64) string {
		sign := func(c float64) string {
			if c < 0 {
				return fmt.Sprintf("1%03.0f", -c*10)
			}
			return fmt.Sprintf("0%03.0f", c*10)
		}
		return fmt.Sprintf("METAR KXXX %02d%02d53Z 10/05 RMK 1%s 2%s", day, hour, sign(highC), sign(lowC))
	}
	lines := []string{at(15, 5, 30, -9), at(15, 11, 8, -1.5), at(15, 17, 15, 2), at(15, 23, 20.5, 12), at(16, 5, 18, 6), at(16, 11, 9, 4)}
	central := Site{OffsetSeconds: -6 * 3600}
	want := planner.DailyReading{Day: planner.DayOf(2021, 7, 15), HighC: 20.5, LowC: -1.5}
	if got := days(t, central, How{Dates: "2021-07"}, lines...); len(got) != 1 || got[0] != want {
		t.Errorf("%+v, want %+v", got, want)
	}
	if got := days(t, central, How{Dates: "2021-07"}, lines[:4]...); len(got) != 0 {
		t.Errorf("three quarters of a day: %+v", got)
	}
	if got := days(t, Site{OffsetSeconds: -5 * 3600}, How{Dates: "2021-07"}, lines...); len(got) != 0 {
		t.Errorf("five hours behind: %+v", got)
	}
	// The 24-hour group counts before them.
	lines[4] += " 402100020"
	want.HighC, want.LowC = 21, 2
	if got := days(t, central, How{Dates: "2021-07"}, lines...); len(got) != 1 || got[0] != want {
		t.Errorf("%+v, want %+v", got, want)
	}
}

// Reports follow each other over the ends of months and years, either way.
func TestMETARMonths(t *testing.T) {
	t.Parallel()
	for _, row := range []struct {
		month string
		dates []int
		want  string
	}{
		{"2021-12", []int{30, 31, 1, 2}, "2021-12-30 2021-12-31 2022-01-01 2022-01-02"},
		{"2022-01", []int{2, 1, 31, 30}, "2022-01-02 2022-01-01 2021-12-31 2021-12-30"},
		{"2024-02", []int{28, 29, 1}, "2024-02-28 2024-02-29 2024-03-01"},
		{"2021-07", []int{1, 15, 31}, "2021-07-01 2021-07-15 2021-07-31"},
	} {
		var lines []string
		for _, date := range row.dates {
			lines = append(lines, fmt.Sprintf("METAR KXXX %02d1200Z 10/05", date))
		}
		file, err := Open(strings.NewReader(strings.Join(lines, "\n")), Site{}, How{Dates: row.month})
		if err != nil {
			t.Fatal(err)
		}
		var got []string
		for range row.dates {
			one, err := file.Next()
			if err != nil {
				t.Fatal(err)
			}
			got = append(got, planner.Day(one.Reading.At/secondsPerDay).String())
		}
		if strings.Join(got, " ") != row.want {
			t.Errorf("%v: %v, want %s", row.dates, got, row.want)
		}
		if err := file.Close(); err != nil {
			t.Error(err)
		}
	}
}
