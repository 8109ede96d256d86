package planner

import (
	"fmt"
	"strings"
	"time"
)

// Day is one calendar day of a site, counted from 1 January 1970 (day 0). It
// is a date, not an instant: which instants it holds is the site's DayRule.
type Day int32

const (
	// DayMin and DayMax bound every day that is read or kept: 1 January 1700
	// (older than any instrument record) to 31 December 2299.
	DayMin Day = -98615
	DayMax Day = 120529

	dayLayout = "2006-01-02"
)

// DayOf gives the Day of a calendar date. A day or month outside the calendar
// is carried over as time.Date does (31 April is 1 May).
func DayOf(year int, month time.Month, day int) Day {
	return Day(floorDiv(time.Date(year, month, day, 0, 0, 0, 0, time.UTC).Unix(), secondsPerDay))
}

// ParseDay reads a date written YYYY-MM-DD. Any other form, a date that is not
// in the calendar (2023-02-29) and a year outside 1700 to 2299 are errors.
func ParseDay(text string) (Day, error) {
	at, err := time.Parse(dayLayout, text)
	if err != nil {
		return 0, fmt.Errorf("%q is not a date: write year-month-day, like 2024-05-31", text)
	}
	day := Day(floorDiv(at.Unix(), secondsPerDay))
	if day < DayMin || day > DayMax {
		return 0, fmt.Errorf("%q is outside the years 1700 to 2299", text)
	}
	return day, nil
}

// DayIn gives the calendar day that a clock in zone shows at the instant.
func DayIn(at time.Time, zone *time.Location) Day {
	year, month, day := at.In(zone).Date()
	return DayOf(year, month, day)
}

const secondsPerDay = 24 * 60 * 60

func floorDiv(a, b int64) int64 {
	q := a / b
	if a%b < 0 {
		q--
	}
	return q
}

// utc is the day's own midnight in UTC, used only for calendar arithmetic.
func (d Day) utc() time.Time { return time.Unix(int64(d)*secondsPerDay, 0).UTC() }

// Date returns the calendar date of the day.
func (d Day) Date() (year int, month time.Month, day int) { return d.utc().Date() }

// Year returns the calendar year of the day.
func (d Day) Year() int { return d.utc().Year() }

// Weekday returns the day of the week.
func (d Day) Weekday() time.Weekday { return d.utc().Weekday() }

// String writes the day as YYYY-MM-DD.
func (d Day) String() string { return d.utc().Format(dayLayout) }

// Short writes the day as a crew reads it: "Tue 4 Jun".
func (d Day) Short() string { return d.utc().Format("Mon 2 Jan") }

// DaysInMonth returns the number of days of the day's month, 28 to 31.
func (d Day) DaysInMonth() int {
	year, month, _ := d.Date()
	return time.Date(year, month+1, 0, 0, 0, 0, 0, time.UTC).Day()
}

// InYear moves the day to the same month and day of another year; 29 February
// becomes 28 February where the year has none.
func (d Day) InYear(year int) Day {
	_, month, day := d.Date()
	return MonthDay{Month: month, Day: day}.In(year)
}

// MonthDay is a day of every year, such as a season's start.
type MonthDay struct {
	Month time.Month `json:"month"`
	Day   int        `json:"day"`
}

// ParseMonthDay reads MM-DD ("03-01"). 02-29 is allowed; see In.
func ParseMonthDay(text string) (MonthDay, error) {
	at, err := time.Parse(dayLayout, "2000-"+strings.TrimSpace(text))
	if err != nil {
		return MonthDay{}, fmt.Errorf("%q is not a month and day: write MM-DD, like 03-01", text)
	}
	return MonthDay{Month: at.Month(), Day: at.Day()}, nil
}

// In returns the day in the given year; 29 February becomes 28 February where
// the year has none.
func (m MonthDay) In(year int) Day {
	day := m.Day
	if last := time.Date(year, m.Month+1, 0, 0, 0, 0, 0, time.UTC).Day(); day > last {
		day = last
	}
	return DayOf(year, m.Month, day)
}

// OnOrBefore returns the newest occurrence that is not after the day.
func (m MonthDay) OnOrBefore(day Day) Day {
	start := m.In(day.Year())
	if start > day {
		start = m.In(day.Year() - 1)
	}
	return start
}

// ofYear reports whether some year has the month and day.
func (m MonthDay) ofYear() bool {
	const leapYear = 2000
	return m.Month >= time.January && m.Month <= time.December && m.Day >= 1 && m.Day <= DayOf(leapYear, m.Month, 1).DaysInMonth()
}

// String writes the month and day as MM-DD.
func (m MonthDay) String() string { return fmt.Sprintf("%02d-%02d", int(m.Month), m.Day) }
