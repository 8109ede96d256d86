package intake

import (
	"bytes"
	"errors"
	"io"

	"swardbook/planner"
)

const (
	// mostPreamble is how many rows above the header are looked through.
	mostPreamble = 100
	// sampleRows is how many rows show which columns hold dates and clocks.
	sampleRows = 50
)

// layout is how a CSV file is laid out: the sign between values, the header
// and where the rows begin.
type layout struct {
	sign     byte
	head     header
	firstRow int // the line after which the rows begin
	above    int // rows above the header
}

// findLayout looks for the header: the first row that names a time and a
// temperature, or a high and a low, whatever stands between the names. sensor
// may name a column that counts as a temperature.
func findLayout(src *spool, sensor string) (layout, error) {
	var best, partial layout
	var broken []byte
	partialRoles := 0
	for _, sign := range separators {
		found, roles, firstBroken, err := findHeader(src, sign, sensor)
		if err != nil {
			return layout{}, err
		}
		if broken == nil {
			broken = firstBroken
		}
		switch {
		case !found.usable(sensor):
			if roles > partialRoles {
				partial, partialRoles = found, roles
			}
		case best.head.columns == nil || found.firstRow < best.firstRow,
			found.firstRow == best.firstRow && len(found.head.columns) > len(best.head.columns):
			best = found
		}
	}
	switch {
	case best.head.columns != nil:
		return best, best.readUnits(src)
	case partialRoles > 0:
		return layout{}, notUnderstood(partial.head, partial.head.has(timeRole))
	case broken != nil:
		return layout{}, planner.Problemf(planner.Refused, "the header has broken quotes: %q", cut(broken)).WithHint("%s", headerHint)
	}
	_, head, err := src.lines()
	if err != nil {
		return layout{}, err
	}
	return layout{}, planner.Problemf(planner.Refused, "the first line %q is not a header that can be read", cut(firstLine(head))).
		WithHint("%s", headerHint)
}

// usable reports whether the header has what is needed.
func (l layout) usable(sensor string) bool {
	h := l.head
	_, named := h.named(sensor)
	return h.has(timeRole) && (h.has(temperatureRole) || h.has(likelyRole) || h.has(highRole) && h.has(lowRole) || sensor != "" && named)
}

// findHeader looks for the header with one sign between values: the first
// usable row, else the one with most names that are known, roles of them.
func findHeader(src *spool, sign byte, sensor string) (found layout, roles int, broken []byte, err error) {
	reader, err := openRows(src, sign, 0)
	if err != nil {
		return layout{}, 0, nil, err
	}
	for above := 0; above <= mostPreamble; above++ {
		line, isBroken, err := reader.read()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			return layout{}, 0, nil, err
		}
		if isBroken {
			if above == 0 {
				broken = bytes.Clone(reader.values[0])
			}
			continue
		}
		here := layout{sign: sign, head: readHeader(reader.values), firstRow: reader.lines.line - 1, above: above}
		known := here.head.known()
		if known > 0 && reader.count > mostColumns {
			return layout{}, 0, nil, planner.Problemf(planner.Refused, "the header in line %d has %d columns", line, reader.count).
				WithHint("%s", headerHint)
		}
		if here.usable(sensor) {
			return here, known, nil, nil
		}
		if known > roles {
			found, roles = here, known
		}
	}
	return found, roles, broken, nil
}

// known counts the columns that a file cannot do without.
func (h header) known() (n int) {
	for _, c := range h.columns {
		if c.role != noRole && c.role != humidityRole && c.role != rainRole && c.role != rainSumRole && c.role != sensorRole {
			n++
		}
	}
	return n
}

// readHeader reads the names of the columns.
func readHeader(names [][]byte) header {
	var head header
	for i, name := range names {
		head.columns = append(head.columns, readColumn(i, name))
	}
	// A separator at the end of the header names no column.
	for len(head.columns) > 1 && head.columns[len(head.columns)-1].name == "" {
		head.columns = head.columns[:len(head.columns)-1]
	}
	return head
}

// openRows reads the rows after the line.
func openRows(src *spool, sign byte, after int) (*csvReader, error) {
	lines, _, err := src.lines()
	if err != nil {
		return nil, err
	}
	reader := &csvReader{lines: lines, sign: sign, keep: mostColumns}
	for lines.line <= after {
		_, next, err := lines.lineEnd(0)
		if err != nil {
			return nil, lines.problem(err)
		}
		lines.consume(next, 1)
	}
	return reader, nil
}

// readUnits takes a row of units below the header: "", "°C", "%".
func (l *layout) readUnits(src *spool) error {
	reader, err := openRows(src, l.sign, l.firstRow)
	if err != nil {
		return err
	}
	_, broken, err := reader.read()
	if errors.Is(err, io.EOF) || broken {
		return nil
	}
	if err != nil {
		return err
	}
	found := false
	for i := range l.head.columns {
		c := &l.head.columns[i]
		if i >= len(reader.values) || c.units != "" || len(reader.values[i]) > longestValue {
			continue
		}
		plain := " " + plainName(headerText(reader.values[i]))
		for _, unit := range unitEndings {
			if plain == unit.ending {
				c.units, found = unit.units, true
			}
		}
	}
	if found {
		l.firstRow = reader.lines.line - 1
	}
	return nil
}

// timeClass is what the values of a column of times are.
type timeClass int

const (
	noTimes   timeClass = iota
	dateTimes           // a date and a clock
	midnights           // a date, and a clock that always shows 00:00
	dates
	clocks
)

// timeColumns is where a row's time stands.
type timeColumns struct {
	date     column
	clock    int // the column of the clock, -1 when it stands with the date
	hourOnly bool
	bare     bool // the file has dates alone
}

// classify looks at the first rows' values of the columns.
func classify(src *spool, l layout, columns []column) ([]timeClass, []bool, error) {
	reader, err := openRows(src, l.sign, l.firstRow)
	if err != nil {
		return nil, nil, err
	}
	counts := make([][clocks + 1]int, len(columns))
	offsets := make([]bool, len(columns))
	for range sampleRows {
		_, broken, err := reader.read()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			return nil, nil, err
		}
		for i, c := range columns {
			if broken || c.index >= len(reader.values) {
				continue
			}
			class, offset := classOf(bytes.TrimSpace(reader.values[c.index]))
			counts[i][class]++
			offsets[i] = offsets[i] || offset
		}
	}
	classes := make([]timeClass, len(columns))
	for i, count := range counts {
		if count[dateTimes] > 0 { // midnights among other times
			count[dateTimes] += count[midnights]
			count[midnights] = 0
		}
		for class := dateTimes; class <= clocks; class++ {
			if count[class] > 0 && (classes[i] == noTimes || count[class] > count[classes[i]]) {
				classes[i] = class
			}
		}
	}
	return classes, offsets, nil
}

func classOf(text []byte) (class timeClass, hasOffset bool) {
	for _, order := range dateOrders {
		m, reason := parseAnyMoment(text, order, nil)
		switch {
		case reason == notACalendar:
			continue
		case reason == notAnOffset:
			return dateTimes, true
		case reason != "":
		case !m.hasClock:
			return dates, false
		case m.second == 0 && !m.hasOffset:
			return midnights, false
		default:
			return dateTimes, m.hasOffset
		}
	}
	var m moment
	if reason := m.anyClock(text, nil); len(text) > 0 && (reason == "" || reason == notAnOffset) {
		return clocks, false
	}
	return noTimes, false
}

// chooseTime picks the columns of the time: one with date and clock, or two.
func chooseTime(src *spool, l layout) (timeColumns, error) {
	columns := l.head.of(timeRole)
	classes, offsets, err := classify(src, l, columns)
	if err != nil {
		return timeColumns{}, err
	}
	byClass := func(class timeClass) (found []column) {
		for i, c := range columns {
			if classes[i] == class {
				found = append(found, c)
			}
		}
		return found
	}
	full, dated, clocked := byClass(dateTimes), append(byClass(dates), byClass(midnights)...), byClass(clocks)
	hours := l.head.of(hourRole)
	if len(full) > 1 { // of "local time" and "time (UTC)" the one that says its zone
		var said []column
		for i, c := range columns {
			if classes[i] == dateTimes && (c.hasZone || offsets[i]) {
				said = append(said, c)
			}
		}
		if len(said) > 0 {
			full = said
		}
	}
	switch {
	case len(full) == 1:
		return timeColumns{date: full[0], clock: -1}, nil
	case len(full) == 0 && len(dated) == 1 && len(clocked) == 1:
		return withClock(dated[0], clocked[0]), nil
	case len(full) == 0 && len(dated) == 1 && len(clocked) == 0 && len(hours) == 1:
		at := withClock(dated[0], hours[0])
		at.hourOnly = true
		return at, nil
	case len(full) == 0 && len(dated) == 1 && len(clocked) == 0:
		return timeColumns{date: dated[0], clock: -1, bare: len(byClass(dates)) == 1}, nil
	case len(columns) == 1:
		return timeColumns{date: columns[0], clock: -1}, nil
	}
	return timeColumns{}, planner.Problemf(planner.Refused, "the columns %s could each be the time", quoteNames(columns)).
		WithHint("Keep one column of dates and one of clocks, or one with both: 2013-07-01 05:00.")
}

func withClock(date, clock column) timeColumns {
	if clock.hasZone {
		date.zone, date.hasZone = clock.zone, true
	}
	return timeColumns{date: date, clock: clock.index}
}
