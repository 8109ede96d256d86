package intake

import (
	"bytes"
	"fmt"
	"strings"

	"swardbook/calc"
	"swardbook/planner"
)

// The reasons for which a CSV row is refused.
const (
	brokenQuotes = "the quotes are broken: a quoted value ends with one quote before a comma or the end of the line"
	tooShort     = "the row has fewer values than the header"
	tooLong      = "the row has more values than the header: write 12.5, not 12,5"
	highBelowLow = "the high is below the low: swap them or correct one"
	meanOutside  = "the mean is outside the low and the high"
)

// csvFile is an open CSV file: its header understood, its rows to come.
type csvFile struct {
	*csvReader
	site         Site
	daily        bool
	time         timeColumns
	temperatures []valueColumn // the temperature; or high, low and, where there is one, mean
	order        dateOrder     // of dates in figures
	zones        zoneNames
	clocks       fileClock
	rain         *rainColumn // nil when the file has none that is kept
	sensor       *column     // the column that says which sensor a row is of
	wanted       string      // the sensor that counts
	lastRow      int         // the last line with a time: what stands below is no row
	below        int         // lines below it
}

// valueColumn is a column of temperatures with its reasons ready.
type valueColumn struct {
	index  int
	units  planner.Units
	notOne string
	absurd string
}

// openCSV finds the header and the columns, and goes through the whole file
// once or twice to tell what only all of its rows can: the order of its dates,
// its unit, its clock, its sensors.
func openCSV(src *spool, site Site, how How) (*File, error) {
	l, err := findLayout(src, how.Sensor)
	if err != nil {
		return nil, err
	}
	file := &csvFile{site: site, zones: namesOf(site.Zone)}
	columns, err := file.choose(src, l, how)
	if err != nil {
		return nil, err
	}
	said, err := unitsOf(columns, how.Units)
	if err != nil {
		return nil, err
	}
	found, err := file.survey(src, l, columns, how)
	if err != nil {
		return nil, err
	}
	units, guessed := said, false
	if units == "" {
		if units, err = found.values.guess(); err != nil {
			return nil, err
		}
		guessed = found.values.named == [2]int{}
	}
	rainNote := file.settleRain(l.head, found.rain, units)
	for _, c := range columns {
		file.temperatures = append(file.temperatures, newValueColumn(c, units))
	}
	if file.csvReader, err = openRows(src, l.sign, l.firstRow); err != nil {
		return nil, err
	}
	file.keep = len(l.head.columns)
	out := &File{Format: Readings, Units: units, rows: file, Sensor: file.sensorName(l, columns, how), Dates: found.saidOrder}
	if file.daily {
		out.Format = Daily
	}
	out.Notes = append(file.notes(l, guessed, units, found), rainNote...)
	if how.OnWallBefore && found.bare && !file.daily && file.clocks.kind == standardClock && !file.clocks.said && !found.notWall {
		out.Notes = append(out.Notes, "An earlier file of this station ran on the clock on the wall; this one does not show it. clock:wall reads it so.")
	}
	return out, nil
}

// sensorName is the sensor that was chosen among several; "" with one.
func (f *csvFile) sensorName(l layout, columns []column, how How) string {
	if f.sensor != nil {
		return f.wanted
	}
	if how.Sensor != "" || how.UsualSensor != "" && columns[0].name == how.UsualSensor && len(temperatureColumns(l.head)) > 1 {
		return columns[0].name
	}
	return ""
}

// notes says what was found and not kept, and what was taken for granted.
func (f *csvFile) notes(l layout, guessed bool, units planner.Units, found *survey) []string {
	var notes []string
	if guessed {
		notes = append(notes, fmt.Sprintf("The file does not say its unit: taken as %s.", degrees(units)))
	}
	if l.above > 0 {
		notes = append(notes, fmt.Sprintf("Left out above the header: %s.", countOf(l.above, "line")))
	}
	var also []string
	for _, role := range []role{humidityRole, rainSumRole} {
		if l.head.has(role) {
			also = append(also, role.word())
		}
	}
	if len(also) > 0 {
		notes = append(notes, fmt.Sprintf("In the file and not kept: %s.", strings.Join(also, ", ")))
	}
	if found.nonISO > 0 && !found.sameInAll {
		notes = append(notes, fmt.Sprintf("Dates read as %s.", found.order))
	}
	if f.clocks.kind == wallClock && !f.clocks.said {
		notes = append(notes, "The times skip and double an hour as the clock on the wall does. clock:standard reads them otherwise.")
	}
	return notes
}

func countOf(n int, word string) string {
	if n == 1 {
		return "1 " + word
	}
	return fmt.Sprintf("%d %ss", n, word)
}

// choose picks the columns to read and says whether the file is daily.
func (f *csvFile) choose(src *spool, l layout, how How) (columns []column, err error) {
	if f.time, err = chooseTime(src, l); err != nil {
		return nil, err
	}
	if clock, said, err := readClock(how.Clock, f.site); err != nil {
		return nil, err
	} else if f.clocks = clock; !said && f.time.date.hasZone {
		f.clocks.kind, f.clocks.offset, f.clocks.said = fixedClock, f.time.date.zone, true
	}
	if sensors := l.head.of(sensorRole); len(sensors) == 1 {
		f.sensor = &sensors[0]
	}
	f.daily = l.head.has(highRole) && l.head.has(lowRole)
	if f.daily && !f.time.bare && len(temperatureColumns(l.head)) > 0 {
		f.daily = false
	}
	if !f.daily && f.time.bare {
		return nil, planner.Problemf(planner.Refused, "the file has one temperature a day and no time of day").
			WithHint("A day needs its high and low (date,high_c,low_c); readings need a time of day (2013-07-01T05:00).")
	}
	if !f.daily {
		f.rain = pickRain(l.head)
		picked, err := f.pickTemperature(l.head, how)
		return []column{picked}, err
	}
	for _, role := range []role{highRole, lowRole, meanRole} {
		c, ok, err := l.head.pick(role, how.Units)
		if err != nil {
			return nil, err
		}
		if ok {
			columns = append(columns, c)
		}
	}
	return columns, nil
}

// temperatureColumns are the columns that could be the temperature.
func temperatureColumns(h header) []column {
	if exact := h.of(temperatureRole); len(exact) > 0 {
		return exact
	}
	return h.of(likelyRole)
}

// pickTemperature picks the one column of temperatures: the sensor named, the
// only one, the one the station took before; else it asks.
func (f *csvFile) pickTemperature(head header, how How) (column, error) {
	if how.Sensor != "" {
		if c, ok := head.named(how.Sensor); ok {
			c.role = temperatureRole
			return c, nil
		}
		if f.sensor == nil {
			return column{}, askSensor(planner.Problemf(planner.Refused, "the file has no column %q", cut([]byte(how.Sensor))),
				namesOfColumns(temperatureColumns(head)))
		}
	}
	for _, role := range []role{temperatureRole, likelyRole} {
		picked, ok, err := head.pick(role, how.Units)
		if usual, known := head.named(how.UsualSensor); err != nil && known && usual.role == role {
			picked, ok, err = usual, true, nil
		}
		if ok || err != nil {
			picked.role = temperatureRole
			return picked, err
		}
	}
	return column{}, notUnderstood(head, true)
}

// askSensor asks which of the sensors is meant.
func askSensor(problem *planner.Problem, names []string) error {
	const most = 6
	var choices []string
	for i, name := range names {
		if i == most {
			choices = append(choices, fmt.Sprintf("and %d more", len(names)-most))
			break
		}
		choices = append(choices, fmt.Sprintf("sensor:%q", name))
	}
	return problem.WithHint("Say which one counts, and send the file again: %s. It is remembered for the station.", strings.Join(choices, ", "))
}

func notUnderstood(head header, hasTime bool) error {
	missing := "a temperature, or a high and a low"
	if !hasTime {
		missing = "a time or a date"
	}
	return planner.Problemf(planner.Refused, "the header has no column for %s; its columns are %s", missing, quoteNames(head.columns)).
		WithHint("%s", headerHint)
}

func newValueColumn(c column, units planner.Units) valueColumn {
	word := c.role.word()
	return valueColumn{
		index:  c.index,
		notOne: fmt.Sprintf("the %s is not a number like 12.5", word),
		absurd: fmt.Sprintf("the %s is outside %g to %g °C, read as %s: check the value and its unit",
			word, planner.LowestC, planner.HighestC, degrees(units)),
		units: units,
	}
}

// read returns the temperature of the row in °C; known is false when the file
// says that it is missing. A unit behind the value counts before the column's.
func (v valueColumn) read(values [][]byte) (valueC float64, known bool, reason string) {
	text := bytes.TrimSpace(values[v.index])
	value, units, ok := parseMeasured(text)
	switch {
	case !ok && missingWord(text):
		return 0, false, ""
	case !ok:
		return 0, false, v.notOne
	case missingNumber(value):
		return 0, false, ""
	case units == "":
		units = v.units
	}
	if units == planner.Fahrenheit {
		value = calc.CelsiusFromFahrenheit(value)
	}
	if planner.CheckTemperature(value) != nil {
		return 0, false, v.absurd
	}
	return value, true, ""
}

func (f *csvFile) clock() string {
	if f.daily {
		return ClockDates
	}
	return f.clocks.words()
}

func (f *csvFile) next() (Row, error) {
	for {
		line, broken, err := f.read()
		if err != nil {
			return Row{}, err
		}
		if line > f.lastRow && belowRows(f.values) {
			f.below++
			continue
		}
		switch {
		case broken:
			return Row{}, refuse(line, f.values[0], brokenQuotes)
		case f.count < f.keep:
			return Row{}, refuse(line, bytes.Join(f.values, []byte{f.sign}), tooShort)
		case f.surplus:
			return Row{}, refuse(line, bytes.Join(f.values, []byte{f.sign}), tooLong)
		}
		if f.sensor != nil && f.wanted != "" && string(bytes.TrimSpace(f.values[f.sensor.index])) != f.wanted {
			continue
		}
		return f.row(line)
	}
}

// belowRows reports whether a row after the last one with a time is no row at
// all: "Average;17.8", "# end". It begins with no figure.
func belowRows(values [][]byte) bool {
	for _, value := range values {
		if value = bytes.TrimSpace(value); len(value) > 0 {
			return value[0] < '0' || value[0] > '9'
		}
	}
	return false
}

func (f *csvFile) row(line int) (Row, error) {
	m, written, reason := f.moment(f.values, f.order)
	if reason != "" {
		return Row{}, refuse(line, written, reason)
	}
	if f.daily {
		return f.dailyRow(line, written, m)
	}
	return f.readingRow(line, written, m)
}

// moment reads the time of a row, from one column or two.
func (f *csvFile) moment(values [][]byte, order dateOrder) (m moment, written []byte, reason string) {
	written = bytes.TrimSpace(values[f.time.date.index])
	if m, reason = parseAnyMoment(written, order, f.zones); reason != "" || f.time.clock < 0 {
		return m, written, reason
	}
	clock := bytes.TrimSpace(values[f.time.clock])
	both := func() []byte { return fmt.Appendf(nil, "%s %s", written, clock) }
	if len(clock) == 0 {
		return m, both(), noClock
	}
	if f.time.hourOnly {
		hour, ok := parseNumber(clock)
		if !ok || hour != float64(int(hour)) || hour < 0 || hour > 24 {
			return m, both(), notAClock
		}
		m.hasClock, m.second = true, int(hour)*secondsPerHour
		return m, nil, ""
	}
	if reason = m.anyClock(clock, f.zones); reason != "" {
		return m, both(), reason
	}
	return m, nil, ""
}

func (f *csvFile) readingRow(line int, written []byte, m moment) (Row, error) {
	if !m.hasClock {
		return Row{}, refuse(line, written, noClock)
	}
	at, reason := f.clocks.instant(m, f.site)
	if reason != "" {
		if f.time.clock >= 0 {
			written = fmt.Appendf(nil, "%s %s", f.values[f.time.date.index], f.values[f.time.clock])
		}
		return Row{}, refuse(line, written, reason)
	}
	temperatureC, known, reason := f.temperatures[0].read(f.values)
	if reason != "" {
		return Row{}, refuse(line, f.values[f.temperatures[0].index], reason)
	}
	row := Row{Line: line, Empty: !known, Reading: planner.Reading{At: at, C: temperatureC}}
	row.addRain(f.rain, f.values)
	return row, nil
}

// dailyRow needs both the high and the low: with one of them missing the row is
// empty. A mean that is missing is left out.
func (f *csvFile) dailyRow(line int, written []byte, m moment) (Row, error) {
	if m.hasOffset || m.second != 0 {
		return Row{}, refuse(line, written, clockInDay)
	}
	if !yearsOK(m.day) {
		return Row{}, refuse(line, written, yearsOff)
	}
	var valuesC [3]float64
	var known [3]bool
	for i, column := range f.temperatures {
		var reason string
		if valuesC[i], known[i], reason = column.read(f.values); reason != "" {
			return Row{}, refuse(line, f.values[column.index], reason)
		}
	}
	row := Row{Line: line, Daily: true, Day: planner.DailyReading{Day: m.day}}
	if row.Empty = !known[0] || !known[1]; row.Empty {
		return row, nil
	}
	row.Day.HighC, row.Day.LowC = valuesC[0], valuesC[1]
	if known[2] {
		row.Day.MeanC, row.Day.HasMean = valuesC[2], true
	}
	if row.Day.Check() == nil {
		return row, nil
	}
	if row.Day.HighC < row.Day.LowC {
		return Row{}, refuse(line, f.pair(0, 1), highBelowLow)
	}
	return Row{}, refuse(line, f.values[f.temperatures[2].index], meanOutside)
}

// pair writes two values as the file has them.
func (f *csvFile) pair(first, second int) []byte {
	a, b := f.values[f.temperatures[first].index], f.values[f.temperatures[second].index]
	return fmt.Appendf(nil, "%s, %s", bytes.TrimSpace(a), bytes.TrimSpace(b))
}

func refuse(line int, value []byte, reason string) error {
	return &RowError{planner.Refusal{Line: line, Value: cut(bytes.TrimSpace(value)), Reason: reason}}
}
