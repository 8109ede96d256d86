package intake

import (
	"bytes"
	"errors"
	"io"
	"regexp"
	"slices"
	"strconv"

	"swardbook/calc"
	"swardbook/planner"
)

// METAR, the hourly reports of aerodromes (groups: Federal Meteorological
// Handbook No. 1, chapter 12, as the US military manual of 2019 has them too):
//
//	body TT/DD        whole °C, M below zero
//	T s TTT s DDD     tenths of °C, s = 1 below zero
//	1 s TTT, 2 s TTT  highest and lowest of the last six hours, at 00, 06, 12 and 18 UTC
//	4 s TTT s TTT     highest and lowest of the 24 hours to midnight, local standard time
//	P rrrr            rain of the last hour in hundredths of an inch (from memory)
//
// A report says the day of the month, not the month: a date in front of it
// does, or dates: the month of the first.
var (
	metarTime  = regexp.MustCompile(`^\d{6}Z$`)
	metarPlace = regexp.MustCompile(`^[A-Z][A-Z0-9]{3}$`)
	metarBody  = regexp.MustCompile(`^(M?\d{2}|//)/(M?\d{2}|//)?$`)
	metarTenth = regexp.MustCompile(`^T([01]\d{3})([01]\d{3})?$`)
	metarSix   = regexp.MustCompile(`^([12])([01]\d{3})$`)
	metarRain  = regexp.MustCompile(`^P(\d{4})$`)
	metarDay   = regexp.MustCompile(`^4([01]\d{3})([01]\d{3})$`)
)

const (
	notMETAR   = "the line is no METAR report: METAR KXXX 151753Z …"
	noMonth    = "the report's day is not in the month that it follows in"
	sixHours   = 6 * secondsPerHour
	quarters   = secondsPerDay / sixHours
	mostGroups = 200 // a report has some twenty
)

// report is one line taken apart, not yet dated.
type report struct {
	place              string
	date, hour, minute int
	prefix             moment // the date in front of it
	hasPrefix          bool
	body, tenths       float64
	hasBody, hasTenths bool
	six                [2]float64 // high, low
	hasSix             [2]bool
	day                [2]float64
	hasDay             bool
	// special is a report between the hours, which says again what fell since
	// the last hourly one.
	special bool
	rainMM  float64
	hasRain bool
}

func recogniseMETAR(head []byte) bool {
	_, ok := readReport(firstLine(head))
	return ok
}

// readReport takes a line apart.
func readReport(text []byte) (r report, ok bool) {
	groups := bytes.Fields(text)
	if len(groups) > mostGroups {
		return r, false
	}
	at := slices.IndexFunc(groups, func(g []byte) bool { return metarTime.Match(g) })
	if at < 1 || at > 6 || !metarPlace.Match(groups[at-1]) {
		return r, false
	}
	r.place = string(groups[at-1])
	figures, _ := digits(groups[at][:6])
	r.date, r.hour, r.minute = figures/10_000, figures/100%100, figures%100
	if r.date < 1 || r.date > 31 || r.hour > 23 || r.minute > 59 {
		return r, false
	}
	before := slices.DeleteFunc(slices.Clone(groups[:at-1]), func(g []byte) bool {
		switch string(g) {
		case "METAR", "SPECI", "COR":
			r.special = r.special || string(g) == "SPECI"
			return true
		}
		return false
	})
	if len(before) > 0 {
		m, reason := parseAnyMoment(bytes.Join(before, []byte(" ")), yearFirst, nil)
		if r.prefix, r.hasPrefix = m, reason == ""; !r.hasPrefix {
			return r, false
		}
	}
	r.groups(groups[at+1:])
	return r, true
}

// groups reads the temperatures: TT/DD in the body, all others in the remarks.
func (r *report) groups(groups [][]byte) {
	remarks := false
	for _, g := range groups {
		text := string(g)
		switch {
		case text == "RMK":
			remarks = true
		case !remarks && !r.hasBody && metarBody.MatchString(text):
			r.body, r.hasBody = bodyC(text)
		case !remarks:
		case metarTenth.MatchString(text):
			r.tenths, r.hasTenths = signedC(text[1:5]), true
		case metarDay.MatchString(text):
			r.day, r.hasDay = [2]float64{signedC(text[1:5]), signedC(text[5:9])}, true
		case metarRain.MatchString(text):
			hundredths, _ := strconv.Atoi(text[1:])
			r.rainMM, r.hasRain = float64(hundredths)/100*calc.MMPerInch, true
		case metarSix.MatchString(text):
			place := int(text[0] - '1')
			r.six[place], r.hasSix[place] = signedC(text[1:5]), true
		}
	}
}

// signedC reads sTTT, tenths with a sign in front.
func signedC(text string) float64 {
	value, _ := strconv.Atoi(text[1:]) // digits, as the pattern says
	if text[0] == '1' {
		value = -value
	}
	return float64(value) / 10
}

// bodyC reads TT or MTT before the stroke.
func bodyC(text string) (valueC float64, known bool) {
	negative := text[0] == 'M'
	if negative {
		text = text[1:]
	}
	value, err := strconv.Atoi(text[:2])
	if negative {
		value = -value
	}
	return float64(value), err == nil
}

func openMETAR(src *spool, site Site, how How) (*File, error) {
	names := map[string]bool{}
	undated := false
	err := eachLine(src, func(text []byte) {
		if r, ok := readReport(text); ok {
			undated = undated || !r.hasPrefix
			if len(names) < mostSensors {
				names[r.place] = true
			}
		}
	})
	if err != nil {
		return nil, err
	}
	wanted, said, err := oneStation(names, how)
	if err != nil {
		return nil, err
	}
	file := &metarFile{site: site, wanted: wanted, six: map[planner.Day]*sixParts{}, days: map[planner.Day]planner.DailyReading{}}
	if undated {
		m, reason := parseMoment([]byte(how.Dates + "-01"))
		if how.Dates == "" || reason != "" || !yearsOK(m.day) {
			return nil, planner.Problemf(planner.Refused, "the reports say the day of the month and not the month").
				WithHint("Say the month of the first one, and send the file again: dates:2021-07.")
		}
		file.last = m.day
	}
	if file.lines, _, err = src.lines(); err != nil {
		return nil, err
	}
	return &File{Format: Readings, Units: planner.Celsius, Sensor: said, rows: file}, nil
}

// metarFile gives a reading a line, then the days whose extremes are known.
type metarFile struct {
	lines  *lineReader
	site   Site
	wanted string
	last   planner.Day // UTC day of the report before; the first of the month before one
	begun  bool

	done  bool
	six   map[planner.Day]*sixParts
	days  map[planner.Day]planner.DailyReading
	order []planner.Day
	final int // the last line
}

// sixParts are the four six-hour extremes that make up a day.
type sixParts struct {
	highC, lowC float64
	seen        [quarters]bool
}

func (*metarFile) clock() string { return ClockUTC }

func (f *metarFile) next() (Row, error) {
	for !f.done {
		length, next, err := f.lines.lineEnd(0)
		if errors.Is(err, io.EOF) {
			f.finish()
			break
		}
		if err != nil {
			return Row{}, f.lines.problem(err)
		}
		line, text := f.lines.line, bytes.TrimSpace(f.lines.text(length))
		f.lines.consume(next, 1)
		if len(text) == 0 {
			continue
		}
		f.final = line
		r, ok := readReport(text)
		if !ok {
			return Row{}, refuse(line, text, notMETAR)
		}
		if f.wanted == "" || r.place == f.wanted {
			return f.row(line, text, r)
		}
	}
	if len(f.order) == 0 {
		return Row{}, io.EOF
	}
	day := f.order[0]
	f.order = f.order[1:]
	return Row{Line: f.final, Daily: true, Day: f.days[day]}, nil
}

func (f *metarFile) row(line int, text []byte, r report) (Row, error) {
	day, ok := f.date(r)
	if !ok {
		return Row{}, refuse(line, text, noMonth)
	}
	m := moment{day: day, second: r.hour*secondsPerHour + r.minute*secondsPerMinute}
	at, reason := m.instantAt(0, f.site)
	if reason != "" {
		return Row{}, refuse(line, text, reason)
	}
	f.last, f.begun = day, true
	f.extremes(at, r)
	row := Row{Line: line, Reading: planner.Reading{At: at, C: r.body}}
	if r.hasTenths {
		row.Reading.C = r.tenths
	}
	if r.hasRain && !r.special {
		row.setRain(r.rainMM)
	}
	if row.Empty = !r.hasTenths && !r.hasBody; row.Empty {
		return row, nil
	}
	if planner.CheckTemperature(row.Reading.C) != nil {
		return Row{}, refuse(line, text, absurdValue)
	}
	return row, nil
}

// date finds the day of a report: the one with its day of the month nearest to
// the date in front of it or, without one, to the report before.
func (f *metarFile) date(r report) (planner.Day, bool) {
	near, within := f.last, planner.Day(31)
	if r.hasPrefix {
		near, within = r.prefix.day, 1
	}
	first := !r.hasPrefix && !f.begun
	for away := planner.Day(0); away <= within; away++ {
		for _, day := range [2]planner.Day{near + away, near - away} {
			if yearsOK(day) && dateOfMonth(day) == r.date && !(first && day < near) {
				return day, true
			}
		}
	}
	return 0, false
}

func dateOfMonth(day planner.Day) int {
	_, _, date := day.Date()
	return date
}

// extremes keeps the extremes of a report for its day. Those of six hours make
// up a day only where the site's midnight is one of their ends.
func (f *metarFile) extremes(at int64, r report) {
	if r.hasDay {
		// Sent about midnight, of the day that has just ended or is about to.
		local := at + int64(f.site.OffsetSeconds) - secondsPerDay/2
		reading := planner.DailyReading{Day: planner.Day(floorDay(local)), HighC: r.day[0], LowC: r.day[1]}
		if reading.Check() == nil && yearsOK(reading.Day) {
			f.days[reading.Day] = reading
		}
	}
	if !r.hasSix[0] || !r.hasSix[1] || f.site.OffsetSeconds%sixHours != 0 {
		return
	}
	const late = 30 * secondsPerMinute // a report stands for the hour nearest to it
	end := (at + late) / sixHours * sixHours
	if end < at-late {
		return
	}
	local := end + int64(f.site.OffsetSeconds) - sixHours
	day := planner.Day(floorDay(local))
	part := f.six[day]
	if part == nil {
		part = &sixParts{highC: r.six[0], lowC: r.six[1]}
		f.six[day] = part
	}
	part.highC, part.lowC = max(part.highC, r.six[0]), min(part.lowC, r.six[1])
	part.seen[(local-floorDay(local)*secondsPerDay)/sixHours] = true
}

func floorDay(seconds int64) int64 {
	day := seconds / secondsPerDay
	if seconds%secondsPerDay < 0 {
		day--
	}
	return day
}

// finish adds the days of which all four quarters are known.
func (f *metarFile) finish() {
	f.done = true
	for day, part := range f.six {
		reading := planner.DailyReading{Day: day, HighC: part.highC, LowC: part.lowC}
		whole := part.seen == [quarters]bool{true, true, true, true}
		if _, given := f.days[day]; whole && !given && yearsOK(day) && reading.Check() == nil {
			f.days[day] = reading
		}
	}
	for day := range f.days {
		f.order = append(f.order, day)
	}
	slices.Sort(f.order)
}
