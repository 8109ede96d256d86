package intake

import (
	"bytes"
	"strings"
	"unicode/utf8"

	"swardbook/planner"
)

// dateOrder is the order in which a file writes day, month and year in figures.
type dateOrder string

// The orders, as dates: names them.
const (
	dayFirst   dateOrder = "d/m/y"
	monthFirst dateOrder = "m/d/y"
	yearFirst  dateOrder = "y/m/d"
)

// dateOrders is every order, the commonest first.
var dateOrders = [...]dateOrder{dayFirst, monthFirst, yearFirst}

// monthNames are the beginnings of the months' names in the languages that
// columnNames knows, accents taken off, longer ones before their beginnings.
var monthNames = []struct {
	month int
	names []string
}{
	{1, []string{"jan", "ene", "gen", "sty"}},
	{2, []string{"feb", "fev", "lut"}},
	{3, []string{"mar", "mrt", "maart"}},
	{4, []string{"apr", "avr", "abr", "kwi"}},
	{5, []string{"may", "mai", "maj", "mei", "mag"}},
	{6, []string{"jun", "juin", "giu", "cze"}},
	{7, []string{"jul", "juil", "lug", "lip"}},
	{8, []string{"aug", "aou", "ago", "sie"}},
	{9, []string{"sep", "set", "wrz"}},
	{10, []string{"oct", "okt", "out", "ott", "paz"}},
	{11, []string{"nov", "lis"}},
	{12, []string{"dec", "dez", "dic", "des", "gru"}},
}

// monthNamed is the month whose name the word begins with; 0 for none.
func monthNamed(word string) int {
	month, longest := 0, 0
	for _, known := range monthNames {
		for _, name := range known.names {
			if strings.HasPrefix(word, name) && len(name) > longest {
				month, longest = known.month, len(name)
			}
		}
	}
	return month
}

// dateScanner steps through a date and its clock.
type dateScanner struct{ rest []byte }

func (s *dateScanner) skip(set string) { s.rest = bytes.TrimLeft(s.rest, set) }

// figures takes a run of digits, at most 14.
func (s *dateScanner) figures() (value, length int) {
	for length < len(s.rest) && length < 14 && s.rest[length] >= '0' && s.rest[length] <= '9' {
		value = value*10 + int(s.rest[length]-'0')
		length++
	}
	s.rest = s.rest[length:]
	return value, length
}

// word takes a run of letters, in lower case and without accents.
func (s *dateScanner) word() string {
	i := 0
	for i < len(s.rest) {
		c := s.rest[i]
		if c|0x20 >= 'a' && c|0x20 <= 'z' || c >= utf8.RuneSelf {
			i++
			continue
		}
		break
	}
	word := plainName(headerText(s.rest[:i]))
	s.rest = s.rest[i:]
	return word
}

// figure is one part of a date in figures.
type figure struct{ value, length int }

// parseAnyMoment reads a date in figures, or with the month's name, in the
// order given, and a clock of 24 or 12 hours after it:
//
//	1/7/2013 5:00   07/01/13 5:00:00 AM   1.7.2013 05:00   2013/07/01 05.00
//	20130701 0500   1 Jul 2013 05:00      Jul 1, 2013 5 pm   01-Jul-13
//
// Years of two digits are 1970 to 2069. zones knows names like EST; nil knows
// UTC alone.
func parseAnyMoment(text []byte, order dateOrder, zones zoneNames) (m moment, reason string) {
	if m, reason = parseMoment(text); reason != notISO {
		return m, reason
	}
	s := dateScanner{rest: text}
	year, month, date, ok := s.date(order)
	if !ok {
		return moment{}, notADate
	}
	if month < 1 || month > 12 || date < 1 || year < 1 || date > daysIn(year, month) {
		return moment{}, notACalendar
	}
	m = moment{day: dayNumber(year, month, date)}
	s.skip(" ,_")
	if len(s.rest) > 1 && (s.rest[0] == 'T' || s.rest[0] == 't') && s.rest[1] >= '0' && s.rest[1] <= '9' {
		s.rest = s.rest[1:]
	}
	if len(s.rest) == 0 {
		return m, ""
	}
	return m, m.anyClock(s.rest, zones)
}

// date reads the date at the beginning.
func (s *dateScanner) date(order dateOrder) (year, month, date int, ok bool) {
	var parts []figure
	named, namedAt := 0, 0
	for len(parts)+min(named, 1) < 3 {
		s.skip(" ,")
		if len(s.rest) == 0 {
			return 0, 0, 0, false
		}
		if c := s.rest[0]; c < '0' || c > '9' {
			word := s.word()
			s.skip(".")
			switch month := monthNamed(word); {
			case word == "":
				return 0, 0, 0, false
			case month != 0 && named == 0 && !(len(parts) == 0 && isWeekday(word)):
				named, namedAt = month, len(parts)
			case len(parts) > 0 || !isWeekday(word):
				return 0, 0, 0, false
			}
		} else {
			value, length := s.figures()
			if len(parts) == 0 && named == 0 && length >= 8 {
				return s.compact(value, length)
			}
			if length != 4 && length > 2 {
				return 0, 0, 0, false
			}
			parts = append(parts, figure{value, length})
		}
		if len(parts)+min(named, 1) < 3 {
			s.skip("/-.")
		}
	}
	if named != 0 {
		return namedDate(parts, named, namedAt)
	}
	return orderedDate(parts, order)
}

// isWeekday reports whether the word is a day of the week, in English.
func isWeekday(word string) bool {
	if len(word) < 3 {
		return false
	}
	switch word[:3] {
	case "mon", "tue", "wed", "thu", "fri", "sat", "sun":
		return true
	}
	return false
}

// compact reads YYYYMMDD, and leaves HHMM or HHMMSS that follow at once.
func (s *dateScanner) compact(value, length int) (year, month, date int, ok bool) {
	switch length {
	case 8:
	case 12, 14:
		clock := value % 10_000
		if value /= 10_000; length == 14 {
			clock += value % 100 * 10_000
			value /= 100
		}
		s.rest = append(clockText(clock, length-8), s.rest...)
	default:
		return 0, 0, 0, false
	}
	return value / 10_000, value / 100 % 100, value % 100, true
}

// clockText writes HHMM or HHMMSS as a clock.
func clockText(value, length int) []byte {
	out := make([]byte, 0, 8)
	for at := length - 2; at >= 0; at -= 2 {
		pair := value
		for range at {
			pair /= 10
		}
		out = append(out, byte('0'+pair/10%10), byte('0'+pair%10))
		if at > 0 {
			out = append(out, ':')
		}
	}
	return out
}

// namedDate is a date whose month is a word: the year is the part of four
// digits, else the last.
func namedDate(parts []figure, month, namedAt int) (year, monthOut, date int, ok bool) {
	if parts[0].length == 4 {
		return parts[0].value, month, parts[1].value, parts[1].length <= 2
	}
	if namedAt == 2 || parts[0].length > 2 {
		return 0, 0, 0, false
	}
	return fullYear(parts[1]), month, parts[0].value, true
}

// orderedDate is a date in figures. A first part of four digits is a year
// whatever the order.
func orderedDate(parts []figure, order dateOrder) (year, month, date int, ok bool) {
	if parts[1].length > 2 {
		return 0, 0, 0, false
	}
	if parts[0].length == 4 {
		return parts[0].value, parts[1].value, parts[2].value, parts[2].length <= 2
	}
	switch {
	case order == dayFirst:
		return fullYear(parts[2]), parts[1].value, parts[0].value, true
	case order == monthFirst:
		return fullYear(parts[2]), parts[0].value, parts[1].value, true
	}
	return fullYear(parts[0]), parts[1].value, parts[2].value, parts[2].length <= 2
}

// fullYear widens a year of two digits.
func fullYear(part figure) int {
	switch {
	case part.length == 4:
		return part.value
	case part.value >= 70:
		return 1900 + part.value
	}
	return 2000 + part.value
}

// anyClock reads H:MM[:SS[.fraction]], H.MM, HhMM, HHMM or, of 12 hours, H too,
// am or pm, and an offset or a zone's name.
func (m *moment) anyClock(text []byte, zones zoneNames) (reason string) {
	s := dateScanner{rest: text}
	hour, length := s.figures()
	minute, second, exact, alone := 0, 0, true, false
	switch {
	case length == 4 || length == 3:
		hour, minute = hour/100, hour%100
	case length == 6:
		hour, minute, second = hour/10_000, hour/100%100, hour%100
	case length < 1 || length > 2:
		return notAClockForm
	case len(s.rest) > 1 && strings.IndexByte(":.hH", s.rest[0]) >= 0 && s.rest[1] >= '0' && s.rest[1] <= '9':
		s.rest = s.rest[1:]
		if minute, length = s.figures(); length != 2 {
			return notAClockForm
		}
		if second, exact, length = s.seconds(); length < 0 {
			return notAClockForm
		}
	case len(s.rest) > 0 && (s.rest[0] == 'h' || s.rest[0] == 'H'):
		s.rest = s.rest[1:]
	default:
		alone = true // an hour: only with am or pm
	}
	half := s.half()
	if half < 0 && alone {
		return notAClockForm
	}
	if half >= 0 {
		if hour < 1 || hour > 12 {
			return notAClock
		}
		hour = hour%12 + 12*half
	}
	m.hasClock = true
	m.second = hour*secondsPerHour + minute*secondsPerMinute + second
	if minute > 59 || second > 59 || hour > 23 && !(hour == 24 && m.second == secondsPerDay && exact) {
		return notAClock
	}
	return m.anyOffset(s.rest, zones)
}

// seconds reads :SS[.fraction]; exact is false when the fraction is more than
// nothing, length -1 when it is no seconds.
func (s *dateScanner) seconds() (second int, exact bool, length int) {
	if len(s.rest) < 2 || s.rest[0] != ':' && s.rest[0] != '.' || s.rest[1] < '0' || s.rest[1] > '9' {
		return 0, true, 0
	}
	s.rest = s.rest[1:]
	if second, length = s.figures(); length != 2 {
		return 0, true, -1
	}
	exact = true
	if len(s.rest) > 1 && (s.rest[0] == '.' || s.rest[0] == ',') {
		rest, some, ok := skipFraction(s.rest[1:])
		if !ok {
			return 0, true, -1
		}
		s.rest, exact = rest, !some
	}
	return second, exact, length
}

// half reads am or pm: 0 or 1; -1 for neither.
func (s *dateScanner) half() int {
	rest := bytes.TrimLeft(s.rest, " \u00a0")
	if len(rest) == 0 {
		return -1
	}
	half := strings.IndexByte("ap", rest[0]|0x20)
	if half < 0 {
		return -1
	}
	// "a.m.", "a. m.", "AM"
	rest = bytes.TrimLeft(rest[1:], ". \u00a0")
	if len(rest) == 0 || rest[0]|0x20 != 'm' {
		return -1
	}
	rest = rest[1:]
	if len(rest) > 0 && rest[0]|0x20 >= 'a' && rest[0]|0x20 <= 'z' {
		return -1
	}
	s.rest = bytes.TrimPrefix(rest, []byte("."))
	return half
}

// anyOffset reads what parseOffset does, UTC, GMT, either with an offset, and
// the zone names of the site.
func (m *moment) anyOffset(text []byte, zones zoneNames) (reason string) {
	text = bytes.TrimSpace(text)
	if len(text) == 0 {
		return ""
	}
	if len(text) > 40 {
		return notAnOffset
	}
	offset, ok := zones.offset(string(text))
	if !ok {
		return notAnOffset
	}
	m.offset, m.hasOffset = offset, true
	if offset > maxOffsetSeconds || offset < -maxOffsetSeconds {
		return notAnOffset
	}
	return ""
}

// The reasons for which a date in another form than ISO is refused.
const (
	notADate      = "the date cannot be read: write it as 2013-07-01 05:00"
	notAClockForm = "the time of day cannot be read: write it as 05:00"
	skippedClock  = "the clock on the wall left this time out when it went forward"
)

// yearsOK reports whether the day is one that can be kept.
func yearsOK(day planner.Day) bool { return day >= planner.DayMin && day <= planner.DayMax }
