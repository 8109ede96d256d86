package planner_test

import (
	"testing"
	"time"

	"pgregory.net/rapid"

	"swardbook/planner"
)

// Numbers of days by the proleptic Gregorian calendar; 1 January 1970 is day 0
// by definition, the rest counted by hand from the lengths of the years.
func TestParseDay(t *testing.T) {
	for _, row := range []struct {
		text string
		want planner.Day
	}{
		{"1970-01-01", 0},
		{"1969-12-31", -1},
		{"1970-12-31", 364},
		{"1972-02-29", 2*365 + 59},
		{"1972-03-01", 2*365 + 60},
		{"2000-02-29", 30*365 + 7 + 59},
		{"2024-02-29", 54*365 + 13 + 59},
		{"1900-02-28", -(70*365 + 17) + 58},
		{"1900-03-01", -(70*365 + 17) + 59}, // 1900 has no 29 February
		{"1700-01-01", planner.DayMin},
		{"2299-12-31", planner.DayMax},
	} {
		got, err := planner.ParseDay(row.text)
		if err != nil || got != row.want || got.String() != row.text {
			t.Errorf("%s: day %d (%s), %v; want day %d", row.text, got, got, err, row.want)
		}
	}
}

func TestParseDayRefuses(t *testing.T) {
	for _, text := range []string{
		"", " ", "today", "2023-02-29", "1900-02-29", "2100-02-29", "2024-04-31", "2024-13-01", "2024-00-10", "2024-01-00",
		"2024-1-1", "24-01-01", "2024/01/01", "01-02-2024", "20240101", " 2024-01-01", "2024-01-01 ", "2024-01-01T00:00",
		"+024-01-01", "-024-01-01", "2024-01-01.5", "1699-12-31", "2300-01-01", "0000-01-01", "12024-01-01", "２０２４-01-01",
	} {
		if day, err := planner.ParseDay(text); err == nil {
			t.Errorf("%q was read as %s", text, day)
		}
	}
}

// fromDays is the calendar date of a day number by integer arithmetic on eras of
// 400 years, after H. Hinnant, "chrono-compatible low-level date algorithms"
// (from memory): a second route that shares nothing with package time.
func fromDays(n int) (year, month, day int) {
	z := n + 719468 // days since 1 March of year 0
	era := (z + 400*146097) / 146097
	era -= 400
	dayOfEra := z - era*146097
	yearOfEra := (dayOfEra - dayOfEra/1460 + dayOfEra/36524 - dayOfEra/146096) / 365
	dayOfYear := dayOfEra - (365*yearOfEra + yearOfEra/4 - yearOfEra/100)
	shifted := (5*dayOfYear + 2) / 153
	day = dayOfYear - (153*shifted+2)/5 + 1
	month = (shifted+2)%12 + 1
	year = yearOfEra + era*400
	if month <= 2 {
		year++
	}
	return year, month, day
}

func TestDayRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := planner.Day(rapid.IntRange(int(planner.DayMin), int(planner.DayMax)).Draw(t, "day"))
		if back, err := planner.ParseDay(d.String()); err != nil || back != d {
			t.Fatalf("%d is written %s and read as %d, %v", d, d, back, err)
		}
		year, month, day := d.Date()
		if planner.DayOf(year, month, day) != d || d.Year() != year {
			t.Fatalf("%d is %d-%d-%d, which is %d", d, year, month, day, planner.DayOf(year, month, day))
		}
		if y, m, n := fromDays(int(d)); y != year || m != int(month) || n != day {
			t.Fatalf("%d is %s, counted %d-%d-%d", d, d, y, m, n)
		}
		if want := time.Weekday(((int(d)+4)%7 + 7) % 7); d.Weekday() != want { // day 0 was a Thursday
			t.Fatalf("%s is a %s, counted %s", d, d.Weekday(), want)
		}
		if _, _, next := (d + 1).Date(); next == 1 && d.DaysInMonth() != day {
			t.Fatalf("%s is the last of its month, which has %d days", d, d.DaysInMonth())
		}
	})
}

func TestDayWords(t *testing.T) {
	d := date("2024-06-04")
	if d.Short() != "Tue 4 Jun" {
		t.Errorf("short form is %q", d.Short())
	}
	for text, want := range map[string]int{
		"1900-02-10": 28, "2000-02-10": 29, "2023-02-01": 28, "2024-02-29": 29, "2024-04-30": 30, "2024-12-31": 31, "1969-11-30": 30,
	} {
		if got := date(text).DaysInMonth(); got != want {
			t.Errorf("the month of %s has %d days, want %d", text, got, want)
		}
	}
}

func TestDayOfCarriesOver(t *testing.T) {
	for _, row := range []struct {
		year, month, day int
		want             string
	}{{2024, 4, 31, "2024-05-01"}, {2023, 2, 29, "2023-03-01"}, {2024, 13, 1, "2025-01-01"}, {2024, 1, 0, "2023-12-31"}} {
		if got := planner.DayOf(row.year, time.Month(row.month), row.day); got != date(row.want) {
			t.Errorf("%d-%d-%d is %s, want %s", row.year, row.month, row.day, got, row.want)
		}
	}
}

func TestDayIn(t *testing.T) {
	for _, row := range []struct{ at, zone, want string }{
		{"2024-06-04T03:59:59Z", "America/New_York", "2024-06-03"},
		{"2024-06-04T04:00:00Z", "America/New_York", "2024-06-04"}, // the clock on the wall, not standard time
		{"1969-12-31T23:30:00Z", "UTC", "1969-12-31"},
		{"1969-12-31T23:30:00Z", "Asia/Kolkata", "1970-01-01"},
		{"1776-07-04T12:00:00Z", "UTC", "1776-07-04"},
	} {
		at, _ := time.Parse(time.RFC3339, row.at)
		if got := planner.DayIn(at, zone(t, row.zone)); got != date(row.want) {
			t.Errorf("%s in %s is %s, want %s", row.at, row.zone, got, row.want)
		}
	}
}

func TestInYear(t *testing.T) {
	for _, row := range []struct {
		day  string
		year int
		want string
	}{
		{"2024-02-29", 2023, "2023-02-28"},
		{"2024-02-29", 2028, "2028-02-29"},
		{"2024-02-29", 1900, "1900-02-28"},
		{"2023-02-28", 2024, "2024-02-28"},
		{"2024-03-01", 2023, "2023-03-01"},
		{"2024-12-31", 1969, "1969-12-31"},
		{"1969-07-20", 2069, "2069-07-20"},
	} {
		if got := date(row.day).InYear(row.year); got != date(row.want) {
			t.Errorf("%s in %d is %s, want %s", row.day, row.year, got, row.want)
		}
	}
}

func TestParseMonthDay(t *testing.T) {
	for text, want := range map[string]planner.MonthDay{
		"03-01": {Month: time.March, Day: 1}, "02-29": {Month: time.February, Day: 29}, "12-31": {Month: time.December, Day: 31},
		" 07-04 ": {Month: time.July, Day: 4},
	} {
		if got, err := planner.ParseMonthDay(text); err != nil || got != want {
			t.Errorf("%q is %v, %v; want %v", text, got, err, want)
		}
	}
	for _, text := range []string{"", "3-1", "02-30", "04-31", "13-01", "00-01", "01-00", "1 March", "03-01-2024", "2024-03-01", "03/01", "-3-01"} {
		if got, err := planner.ParseMonthDay(text); err == nil {
			t.Errorf("%q was read as %s", text, got)
		}
	}
}

func TestOnOrBefore(t *testing.T) {
	for _, row := range []struct{ start, day, want string }{
		{"03-01", "2024-03-01", "2024-03-01"}, // today itself
		{"03-01", "2024-02-29", "2023-03-01"},
		{"03-01", "2024-03-02", "2024-03-01"},
		{"01-01", "2024-12-31", "2024-01-01"},
		{"07-01", "2024-06-30", "2023-07-01"},
		{"12-31", "2024-01-01", "2023-12-31"},
		{"02-29", "2024-02-29", "2024-02-29"},
		{"02-29", "2024-02-28", "2023-02-28"},
		{"02-29", "2023-02-28", "2023-02-28"},
		{"02-29", "2023-02-27", "2022-02-28"},
		{"02-29", "2025-01-01", "2024-02-29"},
		{"06-15", "1969-06-14", "1968-06-15"},
	} {
		start, err := planner.ParseMonthDay(row.start)
		if err != nil {
			t.Fatal(err)
		}
		if got := start.OnOrBefore(date(row.day)); got != date(row.want) {
			t.Errorf("%s on or before %s is %s, want %s", row.start, row.day, got, row.want)
		}
	}
}

func TestOnOrBeforeIsNewest(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := planner.Day(rapid.IntRange(int(planner.DayMin)+800, int(planner.DayMax)).Draw(t, "day"))
		_, month, day := planner.Day(rapid.IntRange(0, 20000).Draw(t, "start")).Date()
		start := planner.MonthDay{Month: month, Day: day}
		got := start.OnOrBefore(d)
		if got > d || start.In(got.Year()) != got || start.In(got.Year()+1) <= d {
			t.Fatalf("%s on or before %s is %s", start, d, got)
		}
		if back, err := planner.ParseMonthDay(start.String()); err != nil || back != start {
			t.Fatalf("%v is written %s and read as %v, %v", start, start, back, err)
		}
	})
}

func FuzzParseDay(f *testing.F) {
	for _, text := range []string{"2024-02-29", "1700-01-01", "2299-12-31", "2023-02-29", "02-29", "2024-1-1", "", "-001-01-01"} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		day, err := planner.ParseDay(text)
		if err == nil && (day.String() != text || day < planner.DayMin || day > planner.DayMax) {
			t.Errorf("%q was read as %s", text, day)
		}
		if err != nil && (day != 0 || err.Error() == "") {
			t.Errorf("%q: day %d beside %v", text, day, err)
		}
	})
}

func FuzzParseMonthDay(f *testing.F) {
	for _, text := range []string{"02-29", "12-31", "2-9", "02-30", " 07-01", "", "00-00"} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		start, err := planner.ParseMonthDay(text)
		if err != nil {
			return
		}
		again, err := planner.ParseMonthDay(start.String())
		if err != nil || again != start {
			t.Errorf("%q is %s, which is read as %s, %v", text, start, again, err)
		}
		if day := start.In(2024); day.Year() != 2024 || day.String()[5:] != start.String() {
			t.Errorf("%q in 2024 is %s", text, day)
		}
	})
}
