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
	weekday time.Weekday     // of a day of the week, and of a date that names it
	named   bool             // the date names its weekday, which must fit
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
	dayThenMonth = regexp.MustCompile(`^(\d{1,2})(?:st|nd|rd|th)?(?: of)? ([a-z]{3,9})(?:,? (\d{4}))?$`)
	monthThenDay = regexp.MustCompile(`^([a-z]{3,9}) (\d{1,2})(?:st|nd|rd|th)?(?:,? (\d{4}))?$`)
	yearFirst    = regexp.MustCompile(`^(\d{4})[-/.](\d{1,2})[-/.](\d{1,2})$`)
	dotted       = regexp.MustCompile(`^(\d{1,2})\.(\d{1,2})\.(\d{4})?$`)
	weekdayFirst = regexp.MustCompile(`^([a-z]{3,9}),? (.*\d.*)$`)
)

// readDay reads a day as typed: 2013-06-20, today, yesterday, tomorrow, in 3
// days, 3 days ago (weeks too), a weekday (mon, monday), 4 jun, jun 4, 4 jun
// 2013, 4.6. and 4.6.2013 (the day first), 2013-6-4; a date also behind its
// weekday, as replies print it: Tue 4 Jun. Case and spare spaces do not matter.
// Of 4/6 nobody knows which is the month: it is not read, see inNumbers.
func readDay(text string) (dayWords, bool) {
	text = squeezed(text)
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
	if weekday, ok := readWeekday(text); ok {
		return dayWords{form: weekDay, weekday: weekday}, true
	}
	if match := weekdayFirst.FindStringSubmatch(text); match != nil {
		if weekday, ok := readWeekday(match[1]); ok {
			words, ok := readDate(match[2])
			words.weekday, words.named = weekday, true
			return words, ok
		}
	}
	return readDate(text)
}

// squeezed is the text in lower case without spare spaces.
func squeezed(text string) string { return strings.Join(strings.Fields(strings.ToLower(text)), " ") }

// readWeekday reads the first three letters of a day of the week, or more.
func readWeekday(text string) (time.Weekday, bool) {
	for weekday := time.Sunday; weekday <= time.Saturday; weekday++ {
		if len(text) >= 3 && strings.HasPrefix(strings.ToLower(weekday.String()), text) {
			return weekday, true
		}
	}
	return 0, false
}

// readDate reads a day of the calendar, with or without its year.
func readDate(text string) (dayWords, bool) {
	if match := yearFirst.FindStringSubmatch(text); match != nil {
		day, ok := numbered(match[3], match[2], match[1])
		return dayWords{form: fixedDay, day: day}, ok
	}
	if match := dotted.FindStringSubmatch(text); match != nil {
		month, _ := strconv.Atoi(match[2])
		return calendarDay(match[1], time.Month(month), match[3])
	}
	day, month, year := "", "", ""
	if match := dayThenMonth.FindStringSubmatch(text); match != nil {
		day, month, year = match[1], match[2], match[3]
	} else if match := monthThenDay.FindStringSubmatch(text); match != nil {
		day, month, year = match[2], match[1], match[3]
	} else {
		return dayWords{}, false
	}
	for m := time.January; m <= time.December; m++ {
		if strings.HasPrefix(strings.ToLower(m.String()), month) {
			return calendarDay(day, m, year)
		}
	}
	return dayWords{}, false
}

// dayCount is a number of days; its text has at most five digits.
func dayCount(number, unit string) int {
	n, _ := strconv.Atoi(number)
	if unit == "week" {
		n *= 7
	}
	return n
}

// calendarDay reads the parts of a date; the year may be empty.
func calendarDay(day string, month time.Month, year string) (dayWords, bool) {
	if year != "" {
		fixed, ok := numbered(day, strconv.Itoa(int(month)), year)
		return dayWords{form: fixedDay, day: fixed}, ok
	}
	d, _ := strconv.Atoi(day)
	md := planner.MonthDay{Month: month, Day: d}
	_, ok := exactly(md, leapYear)
	return dayWords{form: yearlessDay, month: md}, ok
}

// leapYear is a year in which 29 February is a day.
const leapYear = 2000

// numbered reads the numbers of a date.
func numbered(day, month, year string) (planner.Day, bool) {
	d, _ := strconv.Atoi(day)
	m, _ := strconv.Atoi(month)
	y, _ := strconv.Atoi(year)
	return exactly(planner.MonthDay{Month: time.Month(m), Day: d}, y)
}

// inNumbersPattern is a date in numbers that is not sure to be one, or whose
// order its writer's country decides.
var inNumbersPattern = regexp.MustCompile(`(?:^| )((\d{1,2})([/.])(\d{1,2})(?:/(\d{4}))?)(?: |$)`)

// inNumbers gives a date like 1/7, and what it could be: "1 Jul", "7 Jan", or
// one of them; none when the text holds no such date. Before a dot stands the
// day, but 1.7 can be something else.
func inNumbers(text string) (date string, readings []string) {
	match := inNumbersPattern.FindStringSubmatch(squeezed(text))
	if match == nil {
		return "", nil
	}
	first, second, year := match[2], match[4], match[5]
	orders := [][2]string{{first, second}, {second, first}}
	if match[3] == "." {
		orders = orders[:1]
	}
	for _, order := range orders {
		month, _ := strconv.Atoi(order[1])
		if _, ok := calendarDay(order[0], time.Month(month), year); !ok {
			continue
		}
		day, _ := strconv.Atoi(order[0])
		reading := strings.TrimSpace(strconv.Itoa(day) + " " + time.Month(month).String()[:3] + " " + year)
		if len(readings) == 0 || readings[0] != reading { // 4/4 is one day
			readings = append(readings, reading)
		}
	}
	return match[1], readings
}

// readMonthDay reads a day of every year: 03-01, 1 mar, mar 1 or 1.3.
func readMonthDay(text string) (planner.MonthDay, bool) {
	if md, err := planner.ParseMonthDay(text); err == nil {
		return md, true
	}
	words, ok := readDay(text)
	return words.month, ok && words.form == yearlessDay && !words.named
}

// exactly is the day in the year, when that year has it and it can be kept.
func exactly(md planner.MonthDay, year int) (planner.Day, bool) {
	day := planner.DayOf(year, md.Month, md.Day)
	_, month, dayOfMonth := day.Date()
	return day, month == md.Month && dayOfMonth == md.Day && day.Year() == year && keepable(day)
}

func keepable(day planner.Day) bool { return day >= planner.DayMin && day <= planner.DayMax }

// yearsToLeap is the most years between two 29 Februaries (1896 to 1904).
const yearsToLeap = 8

// on gives the day that is meant today. A weekday is the nearest one, today
// included: looking back when past, else ahead. A day without a year is the
// nearest such day, ahead or back, so that nobody means last year's 2 July by
// tomorrow's; of two equally near (half a year) the one back when past, else
// ahead. It is not ok outside the days that can be kept.
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

// nearestYear looks for the day in this year and those around it.
func nearestYear(md planner.MonthDay, today planner.Day, toward int) (nearest planner.Day, found bool) {
	for year := today.Year() - yearsToLeap; year <= today.Year()+yearsToLeap; year++ {
		day, ok := exactly(md, year)
		if !ok {
			continue
		}
		away, least := distanceOf(day, today), distanceOf(nearest, today)
		if !found || away < least || away == least && int(day-today)*toward > 0 {
			nearest, found = day, true
		}
	}
	return nearest, found
}

// distanceOf is the number of days between two days.
func distanceOf(a, b planner.Day) planner.Day { return max(a-b, b-a) }

// misfit says that a date does not fall on the weekday it names; nil when it does.
func (w dayWords) misfit(day planner.Day) error {
	if !w.named || day.Weekday() == w.weekday {
		return nil
	}
	_, date, _ := strings.Cut(day.Short(), " ")
	return planner.Problemf(planner.Invalid, "%s %d is a %s, not a %s", date, day.Year(), day.Weekday(), w.weekday).
		WithHint("Correct the one or the other, or write the year too.")
}

// shortOn writes a day as replies that say back what was typed do: "Tue 4
// Jun", and with its year where that is not today's.
func shortOn(day, today planner.Day) string {
	if day.Year() == today.Year() {
		return day.Short()
	}
	return day.Short() + " " + strconv.Itoa(day.Year())
}
