package command

import (
	"regexp"
	"strconv"
	"strings"
	"time"

	"swardbook/planner"
)

// dayWords is a day as typed; which one it is depends on today.
type dayWords struct {
	form    dayForm
	day     planner.Day      // of a fixed day
	offset  int              // of a day counted from today
	weekday time.Weekday     // of a day of the week
	month   planner.MonthDay // of a day and month without a year
}

type dayForm int

const (
	fixedDay dayForm = iota + 1
	countedDay
	weekDay
	yearlessDay
)

var (
	inDays       = regexp.MustCompile(`^in (\d{1,5}) (day|week)s?$`)
	daysAgo      = regexp.MustCompile(`^(\d{1,5}) (day|week)s? ago$`)
	dayThenMonth = regexp.MustCompile(`^(\d{1,2}) ([a-z]{3,9})(?: (\d{4}))?$`)
	monthThenDay = regexp.MustCompile(`^([a-z]{3,9}) (\d{1,2})(?: (\d{4}))?$`)
)

// readDay reads a day as typed: 2013-06-20, today, yesterday, tomorrow, in 3
// days, 3 days ago (weeks too), a weekday (mon, monday), 4 jun, jun 4, 4 jun
// 2013. Case and spare spaces do not matter.
func readDay(text string) (dayWords, bool) {
	text = strings.Join(strings.Fields(strings.ToLower(text)), " ")
	switch text {
	case "today":
		return dayWords{form: countedDay}, true
	case "yesterday":
		return dayWords{form: countedDay, offset: -1}, true
	case "tomorrow":
		return dayWords{form: countedDay, offset: 1}, true
	}
	if match := inDays.FindStringSubmatch(text); match != nil {
		return dayWords{form: countedDay, offset: dayCount(match[1], match[2])}, true
	}
	if match := daysAgo.FindStringSubmatch(text); match != nil {
		return dayWords{form: countedDay, offset: -dayCount(match[1], match[2])}, true
	}
	for weekday := time.Sunday; weekday <= time.Saturday; weekday++ {
		if len(text) >= 3 && strings.HasPrefix(strings.ToLower(weekday.String()), text) {
			return dayWords{form: weekDay, weekday: weekday}, true
		}
	}
	if day, err := planner.ParseDay(text); err == nil {
		return dayWords{form: fixedDay, day: day}, true
	}
	if match := dayThenMonth.FindStringSubmatch(text); match != nil {
		return calendarDay(match[1], match[2], match[3])
	}
	if match := monthThenDay.FindStringSubmatch(text); match != nil {
		return calendarDay(match[2], match[1], match[3])
	}
	return dayWords{}, false
}

var clockBehind = regexp.MustCompile(`^(.*)[ t]([01]?\d|2[0-3]):([0-5]\d)$`)

// cutClock takes a time like 06:10 off the end of a day as typed. A time alone
// is today's.
func cutClock(text string) (day, clock string) {
	match := clockBehind.FindStringSubmatch(" " + strings.ToLower(strings.TrimSpace(text)))
	if match == nil {
		return text, ""
	}
	if day = strings.TrimSpace(match[1]); day == "" {
		day = "today"
	}
	return day, ("0" + match[2])[len(match[2])-1:] + ":" + match[3]
}

// dayCount is a number of days; its text has at most five digits.
func dayCount(number, unit string) int {
	n, _ := strconv.Atoi(number)
	if unit == "week" {
		n *= 7
	}
	return n
}

// calendarDay reads the parts of "4 jun 2013"; the year may be empty.
func calendarDay(day, month, year string) (dayWords, bool) {
	md, ok := monthDayOf(day, month)
	if !ok {
		return dayWords{}, false
	}
	if year == "" {
		return dayWords{form: yearlessDay, month: md}, true
	}
	y, _ := strconv.Atoi(year)
	fixed, ok := exactly(md, y)
	return dayWords{form: fixedDay, day: fixed}, ok
}

// monthDayOf reads the parts of "4 jun".
func monthDayOf(day, month string) (planner.MonthDay, bool) {
	for m := time.January; m <= time.December; m++ {
		if strings.HasPrefix(strings.ToLower(m.String()), month) {
			d, _ := strconv.Atoi(day)
			md := planner.MonthDay{Month: m, Day: d}
			_, ok := exactly(md, 2000) // a leap year: 29 feb is a day
			return md, ok
		}
	}
	return planner.MonthDay{}, false
}

// readMonthDay reads a day of every year: 03-01, 1 mar or mar 1.
func readMonthDay(text string) (planner.MonthDay, bool) {
	if md, err := planner.ParseMonthDay(text); err == nil {
		return md, true
	}
	words, ok := readDay(text)
	return words.month, ok && words.form == yearlessDay
}

// exactly is the day in the year, when that year has it and it can be kept.
func exactly(md planner.MonthDay, year int) (planner.Day, bool) {
	day := planner.DayOf(year, md.Month, md.Day)
	_, month, dayOfMonth := day.Date()
	return day, month == md.Month && dayOfMonth == md.Day && keepable(day)
}

func keepable(day planner.Day) bool { return day >= planner.DayMin && day <= planner.DayMax }

// yearsToLeap is the most years between two 29 Februaries (1896 to 1904).
const yearsToLeap = 8

// on gives the day that is meant today. A weekday or a day without a year is
// the nearest one, today included: looking back when past, else ahead. It is
// not ok outside the days that can be kept.
func (w dayWords) on(today planner.Day, past bool) (planner.Day, bool) {
	toward := 1
	if past {
		toward = -1
	}
	day := w.day
	switch w.form {
	case countedDay:
		day = today + planner.Day(w.offset)
	case weekDay:
		for day = today; day.Weekday() != w.weekday; {
			day += planner.Day(toward)
		}
	case yearlessDay:
		return nearestYear(w.month, today, toward)
	}
	return day, keepable(day)
}

// nearestYear looks for the day in this year and those after or before it.
func nearestYear(md planner.MonthDay, today planner.Day, toward int) (planner.Day, bool) {
	for i := 0; i <= yearsToLeap; i++ {
		day, ok := exactly(md, today.Year()+i*toward)
		if ok && int(day-today)*toward >= 0 {
			return day, true
		}
	}
	return 0, false
}
