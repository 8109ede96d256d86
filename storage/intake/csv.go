package intake

import (
	"bytes"
	"errors"
	"fmt"
	"io"

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

// recogniseCSV takes a file whose first line has a column name that is known.
// Quotes that do not close may do so on the next line: openCSV judges them.
func recogniseCSV(head []byte) bool {
	reader := csvReader{keep: mostColumns}
	reader.split(firstLine(head))
	for i, name := range reader.values {
		if readColumn(i, name).role != noRole {
			return true
		}
	}
	return false
}

// csvFile is an open CSV file: its header understood, its rows to come.
type csvFile struct {
	csvReader
	site         Site
	daily        bool
	time         int           // column of the time or date
	temperatures []valueColumn // the temperature; or high, low and, where there is one, mean
	offsets      bool          // a time had an offset
	noOffsets    bool          // a time had none
}

// valueColumn is a column of temperatures with its reasons ready.
type valueColumn struct {
	index  int
	units  planner.Units
	notOne string
	absurd string
}

// openCSV reads the header, and looks at the first data row to tell readings
// from daily rows where the header leaves it open.
func openCSV(lines *lineReader, site Site, units planner.Units) (*File, error) {
	file := &csvFile{csvReader: csvReader{lines: lines, keep: mostColumns}, site: site}
	head, err := file.readHeader()
	if err != nil {
		return nil, err
	}
	columns, err := file.choose(head, units)
	if err != nil {
		return nil, err
	}
	if units, err = unitsOf(columns, units); err != nil {
		return nil, err
	}
	for _, c := range columns {
		file.temperatures = append(file.temperatures, newValueColumn(c, units))
	}
	kind := Readings
	if file.daily {
		kind = Daily
	}
	return &File{Format: kind, Units: units, rows: file}, nil
}

func (f *csvFile) readHeader() (header, error) {
	_, broken, err := f.read()
	switch {
	case errors.Is(err, io.EOF):
		return header{}, planner.Problemf(planner.Refused, "the file is empty").WithHint("%s", headerHint)
	case err != nil:
		return header{}, err
	case broken:
		return header{}, planner.Problemf(planner.Refused, "the header has broken quotes: %q", cut(f.values[0])).
			WithHint("%s", headerHint)
	case f.count > mostColumns:
		return header{}, planner.Problemf(planner.Refused, "the header has %d columns", f.count).WithHint("%s", headerHint)
	}
	var head header
	for i, name := range f.values {
		head.columns = append(head.columns, readColumn(i, name))
	}
	// A comma at the end of the header names no column.
	for len(head.columns) > 1 && head.columns[len(head.columns)-1].name == "" {
		head.columns = head.columns[:len(head.columns)-1]
	}
	f.keep = len(head.columns)
	return head, nil
}

// choose picks the columns to read and says whether the file is daily.
func (f *csvFile) choose(head header, units planner.Units) ([]column, error) {
	at, ok, err := head.pick(timeRole, "")
	if err != nil {
		return nil, err
	}
	pair := head.has(highRole) && head.has(lowRole)
	if !ok || !pair && !head.has(temperatureRole) {
		return nil, notUnderstood(head, ok)
	}
	f.time = at.index
	f.daily = pair
	if head.has(temperatureRole) {
		bare, err := f.firstTimeIsBare()
		if err != nil {
			return nil, err
		}
		if bare && !pair {
			return nil, planner.Problemf(planner.Refused, "the file has one temperature a day and no time of day").
				WithHint("A day needs its high and low (date,high_c,low_c); readings need a time of day (2013-07-01T05:00).")
		}
		f.daily = bare && pair
	}
	wanted := []role{temperatureRole}
	if f.daily {
		wanted = []role{highRole, lowRole, meanRole}
	}
	var columns []column
	for _, role := range wanted {
		c, ok, err := head.pick(role, units)
		if err != nil {
			return nil, err
		}
		if ok {
			columns = append(columns, c)
		}
	}
	return columns, nil
}

func notUnderstood(head header, hasTime bool) error {
	missing := "a temperature, or a high and a low"
	if !hasTime {
		missing = "a time or a date"
	}
	return planner.Problemf(planner.Refused, "the header has no column for %s; its columns are %s", missing, quoteNames(head.columns)).
		WithHint("%s", headerHint)
}

// firstTimeIsBare looks, without reading on, whether the first data row has a
// date without a time of day.
func (f *csvFile) firstTimeIsBare() (bool, error) {
	for {
		length, next, lines, broken, err := f.extent()
		if errors.Is(err, io.EOF) {
			return false, nil
		}
		if err != nil {
			return false, f.lines.problem(err)
		}
		if broken || !f.split(f.lines.text(length)) || f.count <= f.time {
			return false, nil
		}
		if f.blank() {
			f.lines.consume(next, lines)
			continue
		}
		m, reason := parseMoment(bytes.TrimSpace(f.values[f.time]))
		return reason == "" && !m.hasClock, nil
	}
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
// says that it is missing.
func (v valueColumn) read(values [][]byte) (valueC float64, known bool, reason string) {
	text := bytes.TrimSpace(values[v.index])
	value, ok := parseNumber(text)
	switch {
	case !ok && missingWord(text):
		return 0, false, ""
	case !ok:
		return 0, false, v.notOne
	case missingNumber(value):
		return 0, false, ""
	}
	if v.units == planner.Fahrenheit {
		value = calc.CelsiusFromFahrenheit(value)
	}
	if planner.CheckTemperature(value) != nil {
		return 0, false, v.absurd
	}
	return value, true, ""
}

func (f *csvFile) clock() string {
	switch {
	case f.daily:
		return ClockDates
	case f.offsets && f.noOffsets:
		return ClockMixed
	case f.offsets:
		return ClockOffset
	case f.noOffsets:
		return ClockSite
	}
	return ""
}

func (f *csvFile) next() (Row, error) {
	line, broken, err := f.read()
	if err != nil {
		return Row{}, err
	}
	switch {
	case broken:
		return Row{}, refuse(line, f.values[0], brokenQuotes)
	case f.count < f.keep:
		return Row{}, refuse(line, bytes.Join(f.values, []byte{comma}), tooShort)
	case f.surplus:
		return Row{}, refuse(line, bytes.Join(f.values, []byte{comma}), tooLong)
	}
	written := bytes.TrimSpace(f.values[f.time])
	m, reason := parseMoment(written)
	if reason != "" {
		return Row{}, refuse(line, written, reason)
	}
	if f.daily {
		return f.dailyRow(line, written, m)
	}
	return f.readingRow(line, written, m)
}

func (f *csvFile) readingRow(line int, written []byte, m moment) (Row, error) {
	if !m.hasClock {
		return Row{}, refuse(line, written, noClock)
	}
	at, reason := m.instant(f.site)
	if reason != "" {
		return Row{}, refuse(line, written, reason)
	}
	temperatureC, known, reason := f.temperatures[0].read(f.values)
	if reason != "" {
		return Row{}, refuse(line, f.values[f.temperatures[0].index], reason)
	}
	f.offsets = f.offsets || m.hasOffset
	f.noOffsets = f.noOffsets || !m.hasOffset
	return Row{Line: line, Empty: !known, Reading: planner.Reading{At: at, C: temperatureC}}, nil
}

// dailyRow needs both the high and the low: with one of them missing the row is
// empty. A mean that is missing is left out.
func (f *csvFile) dailyRow(line int, written []byte, m moment) (Row, error) {
	if m.hasOffset || m.second != 0 {
		return Row{}, refuse(line, written, clockInDay)
	}
	if m.day < planner.DayMin || m.day > planner.DayMax {
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
