package intake

import (
	"time"

	"swardbook/planner"
)

const (
	secondsPerMinute = 60
	secondsPerHour   = 60 * secondsPerMinute
	secondsPerDay    = 24 * secondsPerHour
	// maxOffsetSeconds is the farthest that a clock is taken to stand from UTC.
	// The zones of the world reach from -12 to +14 hours, in the past to a
	// little over 15.
	maxOffsetSeconds = 15 * secondsPerHour
)

// The reasons for which a time is refused.
const (
	noTime       = "the time is missing"
	notISO       = "write dates as 2013-07-01, times as 2013-07-01T05:00"
	notACalendar = "there is no such date in the calendar"
	notAClock    = "there is no such time: hours are 00 to 23 (24:00 ends a day), minutes and seconds 00 to 59"
	notAnOffset  = "the offset from UTC is not one: write Z or -15:00 to +15:00"
	yearsOff     = "the date is outside the years 1700 to 2299"
	noClock      = "a date without a time of day: readings need both, like 2013-07-01T05:00"
	clockInDay   = "a day's high and low need a date alone, not a time of day"
)

// moment is a date as written, with the clock and the offset where there are.
type moment struct {
	day       planner.Day
	second    int // of the day; 86400 for 24:00
	offset    int // seconds east of UTC
	hasClock  bool
	hasOffset bool
}

// parseMoment reads
//
//	YYYY-MM-DD
//	YYYY-MM-DD(T or space)HH:MM[:SS[.fraction]][[space](Z, ±HH:MM, ±HHMM or ±HH)]
//
// A fraction of a second is dropped. A reason comes back when it is none of
// these, "" when it is.
func parseMoment(text []byte) (m moment, reason string) {
	if len(text) == 0 {
		return m, noTime
	}
	if len(text) < 10 || text[4] != '-' || text[7] != '-' {
		return m, notISO
	}
	year, ok1 := digits(text[0:4])
	month, ok2 := digits(text[5:7])
	date, ok3 := digits(text[8:10])
	if !ok1 || !ok2 || !ok3 {
		return m, notISO
	}
	if month < 1 || month > 12 || date < 1 || date > daysIn(year, month) {
		return m, notACalendar
	}
	m.day = dayNumber(year, month, date)
	rest := text[10:]
	if len(rest) == 0 {
		return m, ""
	}
	if rest[0] != 'T' && rest[0] != ' ' {
		return m, notISO
	}
	m.hasClock = true
	if rest, reason = m.parseClock(rest[1:]); reason != "" {
		return m, reason
	}
	if len(rest) == 0 {
		return m, ""
	}
	m.hasOffset = true
	return m, m.parseOffset(rest)
}

// parseClock reads HH:MM[:SS[.fraction]] and returns what follows it.
func (m *moment) parseClock(text []byte) (rest []byte, reason string) {
	if len(text) < 5 || text[2] != ':' {
		return nil, notISO
	}
	hour, ok1 := digits(text[0:2])
	minute, ok2 := digits(text[3:5])
	if !ok1 || !ok2 {
		return nil, notISO
	}
	second, fraction := 0, false
	rest = text[5:]
	if len(rest) > 0 && rest[0] == ':' {
		var ok bool
		if len(rest) < 3 {
			return nil, notISO
		}
		if second, ok = digits(rest[1:3]); !ok {
			return nil, notISO
		}
		rest = rest[3:]
		if len(rest) > 0 && rest[0] == '.' {
			if rest, fraction, ok = skipFraction(rest[1:]); !ok {
				return nil, notISO
			}
		}
	}
	m.second = hour*secondsPerHour + minute*secondsPerMinute + second
	endOfDay := m.second == secondsPerDay && hour == 24 && !fraction
	if minute > 59 || second > 59 || hour > 23 && !endOfDay {
		return nil, notAClock
	}
	return rest, ""
}

// skipFraction steps over the digits of a fraction and reports whether it is
// more than nothing.
func skipFraction(text []byte) (rest []byte, some, ok bool) {
	i := 0
	for i < len(text) && text[i] >= '0' && text[i] <= '9' {
		some = some || text[i] != '0'
		i++
	}
	return text[i:], some, i > 0
}

// parseOffset reads Z, ±HH:MM, ±HHMM or ±HH, after a space or none.
func (m *moment) parseOffset(text []byte) (reason string) {
	if text[0] == ' ' {
		text = text[1:]
	}
	if len(text) == 1 && text[0] == 'Z' {
		return ""
	}
	if len(text) < 3 || text[0] != '+' && text[0] != '-' {
		return notISO
	}
	hours, minutes, ok1, ok2 := 0, 0, false, true
	hours, ok1 = digits(text[1:3])
	switch rest := text[3:]; {
	case len(rest) == 0:
	case len(rest) == 2:
		minutes, ok2 = digits(rest)
	case len(rest) == 3 && rest[0] == ':':
		minutes, ok2 = digits(rest[1:])
	default:
		return notISO
	}
	if !ok1 || !ok2 {
		return notISO
	}
	m.offset = hours*secondsPerHour + minutes*secondsPerMinute
	if minutes > 59 || m.offset > maxOffsetSeconds {
		return notAnOffset
	}
	if text[0] == '-' {
		m.offset = -m.offset
	}
	return ""
}

// instantAt returns the moment in UTC seconds, on a clock so many seconds east
// of UTC. The day, at the site and in UTC, must be in the years 1700 to 2299.
func (m moment) instantAt(offset int, site Site) (at int64, reason string) {
	at = int64(m.day)*secondsPerDay + int64(m.second-offset)
	local := at + int64(site.OffsetSeconds)
	if min(at, local) < int64(planner.DayMin)*secondsPerDay || max(at, local) >= int64(planner.DayMax+1)*secondsPerDay {
		return 0, yearsOff
	}
	return at, ""
}

// digits reads two or four ASCII digits.
func digits(text []byte) (value int, ok bool) {
	for _, c := range text {
		if c < '0' || c > '9' {
			return 0, false
		}
		value = value*10 + int(c-'0')
	}
	return value, true
}

// daysIn is the number of days of a month of the Gregorian calendar.
func daysIn(year, month int) int {
	switch month {
	case 2:
		if year%4 == 0 && (year%100 != 0 || year%400 == 0) {
			return 29
		}
		return 28
	case 4, 6, 9, 11:
		return 30
	}
	return 31
}

// dayNumber is planner.DayOf for a date that is in the calendar, without the
// cost of a time.Time a row. Years are counted from March, so that the leap day
// is the last of its year and the days before a month are a straight line:
//
//	days before month m (March = 0) = (153·m + 2) / 5
func dayNumber(year, month, date int) planner.Day {
	if month <= 2 {
		year--
		month += 12
	}
	if year < 0 {
		return planner.DayOf(year+1, time.Month(month-12), date)
	}
	days := 365*year + year/4 - year/100 + year/400 + (153*(month-3)+2)/5 + date - 1
	const daysTo1970 = 719468 // from 1 March of year 0 to 1 January 1970
	return planner.Day(days - daysTo1970)
}
