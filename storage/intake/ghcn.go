package intake

import (
	"bytes"
	"errors"
	"io"

	"swardbook/planner"
)

// GHCN-Daily, the archive of daily station records (file layouts: the
// archive's readme 3.00). Temperatures are tenths of °C, -9999 is missing, and
// a quality flag that is not blank says that the value failed a check.
const (
	idLength      = 11
	dlyHead       = 21 // station, year, month, element
	dlyDay        = 8  // value and three flags
	ghcnMissing   = -9999
	fromHoursFlag = 'H' // TAVG is the mean of hourly values
)

// ghcnFile reads all lines, then gives the days.
type ghcnFile struct {
	lines  *lineReader
	take   func(f *ghcnFile, line int, text []byte) error
	wanted string // the station that counts; "" with one
	done   bool
	parts  dayParts
}

func (*ghcnFile) clock() string { return ClockDates }

func (f *ghcnFile) next() (Row, error) {
	for !f.done {
		length, next, err := f.lines.lineEnd(0)
		if errors.Is(err, io.EOF) {
			f.done = true
			break
		}
		if err != nil {
			return Row{}, f.lines.problem(err)
		}
		line := f.lines.line
		text := bytes.TrimRight(f.lines.text(length), " \t")
		f.lines.consume(next, 1)
		if len(text) == 0 || f.wanted != "" && !bytes.HasPrefix(text, []byte(f.wanted)) {
			continue
		}
		if err := f.take(f, line, text); err != nil {
			return Row{}, err
		}
	}
	return f.parts.next()
}

// openGHCN looks which stations are in the file, and opens it.
func openGHCN(src *spool, how How, is func(line []byte) bool, take func(*ghcnFile, int, []byte) error) (*File, error) {
	names := map[string]bool{}
	err := eachLine(src, func(text []byte) {
		if is(text) && len(names) < mostSensors && !names[string(text[:idLength])] {
			names[string(text[:idLength])] = true
		}
	})
	if err != nil {
		return nil, err
	}
	wanted, said, err := oneStation(names, how)
	if err != nil {
		return nil, err
	}
	lines, _, err := src.lines()
	if err != nil {
		return nil, err
	}
	return &File{Format: Daily, Units: planner.Celsius, Sensor: said, rows: &ghcnFile{lines: lines, take: take, wanted: wanted}}, nil
}

// eachLine calls do with every line.
func eachLine(src *spool, do func(text []byte)) error {
	lines, _, err := src.lines()
	if err != nil {
		return err
	}
	for {
		length, next, err := lines.lineEnd(0)
		if errors.Is(err, io.EOF) {
			return nil
		}
		if err != nil {
			return lines.problem(err)
		}
		do(lines.text(length))
		lines.consume(next, 1)
	}
}

// partOf is the place of an element that is read; ok is false for others.
func partOf(element []byte) (place int, ok bool) {
	switch string(element) {
	case "TMAX":
		return highPart, true
	case "TMIN":
		return lowPart, true
	case "TAVG":
		return meanPart, true
	}
	return 0, false
}

// addGHCN puts one value in its day. A mean counts when it is one of hours.
func (f *ghcnFile) addGHCN(line int, day planner.Day, place, tenths int, measured, quality byte, text []byte) error {
	if place == meanPart && measured != fromHoursFlag {
		return nil
	}
	if quality == ' ' {
		quality = 0
	}
	switch {
	case tenths == ghcnMissing:
		f.parts.at(day, line)
	case quality == 0 && planner.CheckTemperature(float64(tenths)/10) != nil:
		return refuse(line, text, absurdValue)
	case f.parts.at(day, line).add(line, place, tenths, quality):
		return refuse(line, text, twoValues)
	}
	return nil
}

// --- a month of one element a line, 269 characters ---

func recogniseDly(head []byte) bool { return isDly(firstLine(head)) }

// isDly knows the line by its station, date and element, and by its length:
// 28 days at least, trailing blanks cut or not.
func isDly(text []byte) bool {
	if len(text) < dlyHead+28*dlyDay-3 || bytes.ContainsAny(text[:dlyHead], ",;\t ") {
		return false
	}
	_, yearOK := digits(text[11:15])
	month, monthOK := digits(text[15:17])
	return yearOK && monthOK && month >= 1 && month <= 12 && upper(text[17:dlyHead])
}

// upper reports whether the text is upper-case letters and digits.
func upper(text []byte) bool {
	for _, c := range text {
		if (c < 'A' || c > 'Z') && (c < '0' || c > '9') {
			return false
		}
	}
	return true
}

func openDly(src *spool, _ Site, how How) (*File, error) { return openGHCN(src, how, isDly, takeDly) }

const notDly = "the line is not one of this format: 269 characters, a month of one element"

func takeDly(f *ghcnFile, line int, text []byte) error {
	if !isDly(text) {
		return refuse(line, text, notDly)
	}
	place, ok := partOf(text[17:dlyHead])
	if !ok {
		return nil
	}
	year, _ := digits(text[11:15])
	month, _ := digits(text[15:17])
	first := dayNumber(year, month, 1)
	if !yearsOK(first) {
		return refuse(line, text[:dlyHead], yearsOff)
	}
	var problem error
	for date := 1; date <= daysIn(year, month); date++ {
		value := text[min(len(text), dlyHead+(date-1)*dlyDay):min(len(text), dlyHead+date*dlyDay)]
		tenths, ok := wholeNumber(value[:min(5, len(value))])
		if !ok {
			problem = refuse(line, value, notAFigure)
			continue
		}
		flags := [2]byte{' ', ' '}
		copy(flags[:], value[min(5, len(value)):])
		if err := f.addGHCN(line, first+planner.Day(date-1), place, tenths, flags[0], flags[1], value); err != nil {
			problem = err
		}
	}
	return problem
}

// wholeNumber reads a number in a field padded with blanks.
func wholeNumber(text []byte) (value int, ok bool) {
	text = bytes.TrimSpace(text)
	rest, negative := bytes.CutPrefix(text, []byte("-"))
	if len(rest) == 0 || len(rest) > 5 {
		return 0, false
	}
	if value, ok = digits(rest); negative {
		value = -value
	}
	return value, ok && value > -32768 && value < 32767
}

// --- one value a line, eight fields ---

func recogniseByStation(head []byte) bool {
	line := firstLine(head)
	return isByStation(line) || bytes.HasPrefix(bytes.ToUpper(line), []byte("ID,DATE,ELEMENT,"))
}

func isByStation(text []byte) bool {
	fields := bytes.Split(text[:min(len(text), 200)], []byte{comma})
	if len(fields) < 7 || len(fields) > 8 || len(fields[0]) != idLength || len(fields[1]) != 8 || len(fields[2]) != 4 {
		return false
	}
	_, ok := digits(fields[1])
	return ok && upper(fields[2])
}

func openByStation(src *spool, _ Site, how How) (*File, error) {
	return openGHCN(src, how, isByStation, takeByStation)
}

const notByStation = "the line is not one of this format: station, date, element, value and four flags"

func takeByStation(f *ghcnFile, line int, text []byte) error {
	if !isByStation(text) {
		if line == 1 {
			return nil // the names of the columns
		}
		return refuse(line, text, notByStation)
	}
	fields := bytes.Split(text, []byte{comma})
	place, ok := partOf(fields[2])
	if !ok {
		return nil
	}
	date, _ := digits(fields[1])
	year, month, date := date/10_000, date/100%100, date%100
	if month < 1 || month > 12 || date < 1 || date > daysIn(year, month) {
		return refuse(line, fields[1], notACalendar)
	}
	day := dayNumber(year, month, date)
	if !yearsOK(day) {
		return refuse(line, fields[1], yearsOff)
	}
	tenths, ok := wholeNumber(fields[3])
	if !ok {
		return refuse(line, fields[3], notAFigure)
	}
	flag := func(i int) byte {
		if len(fields[i]) == 0 {
			return ' '
		}
		return fields[i][0]
	}
	return f.addGHCN(line, day, place, tenths, flag(4), flag(5), text)
}
