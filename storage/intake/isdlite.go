package intake

import (
	"bytes"
	"errors"
	"io"

	"swardbook/planner"
)

// ISD-Lite, hourly observations in lines of 61 characters, times in UTC
// (layout: the archive's format note of 2006). The air temperature, in tenths
// of °C, stands in characters 14 to 19, -9999 is missing. A report of the ten
// minutes before the hour carries the hour. Characters 50 to 55 are the rain of
// that hour in tenths of mm, -1 for a trace.
const (
	isdLength  = 61
	isdMissing = -9999
	isdTrace   = -1
)

const notISDLite = "the line is not one of this format: 61 characters, year, month, day, hour, then eight values"

func recogniseISDLite(head []byte) bool {
	_, ok := isdMoment(firstLine(head))
	return ok
}

// isdMoment reads the time of a line, which may be out of the calendar.
func isdMoment(text []byte) (parts [4]int, ok bool) {
	if len(text) != isdLength || text[4] != ' ' || text[7] != ' ' || text[10] != ' ' {
		return parts, false
	}
	for i, at := range [4][2]int{{0, 4}, {5, 7}, {8, 10}, {11, 13}} {
		if parts[i], ok = digits(bytes.ReplaceAll(text[at[0]:at[1]], []byte(" "), []byte("0"))); !ok {
			return parts, false
		}
	}
	for at := 13; at < isdLength; at += 6 {
		if _, ok := wholeNumber(text[at : at+6]); !ok {
			return parts, false
		}
	}
	return parts, true
}

func openISDLite(src *spool, site Site, _ How) (*File, error) {
	lines, _, err := src.lines()
	if err != nil {
		return nil, err
	}
	return &File{Format: Readings, Units: planner.Celsius, rows: &isdFile{lines: lines, site: site}}, nil
}

type isdFile struct {
	lines *lineReader
	site  Site
}

func (*isdFile) clock() string { return ClockUTC }

func (f *isdFile) next() (Row, error) {
	for {
		length, next, err := f.lines.lineEnd(0)
		if errors.Is(err, io.EOF) {
			return Row{}, io.EOF
		}
		if err != nil {
			return Row{}, f.lines.problem(err)
		}
		line, text := f.lines.line, f.lines.text(length)
		f.lines.consume(next, 1)
		if len(bytes.TrimSpace(text)) > 0 {
			return f.row(line, text)
		}
	}
}

func (f *isdFile) row(line int, text []byte) (Row, error) {
	parts, ok := isdMoment(text)
	if !ok {
		return Row{}, refuse(line, text, notISDLite)
	}
	year, month, date, hour := parts[0], parts[1], parts[2], parts[3]
	switch {
	case month < 1 || month > 12 || date < 1 || date > daysIn(year, month):
		return Row{}, refuse(line, text[:13], notACalendar)
	case hour > 23:
		return Row{}, refuse(line, text[:13], notAClock)
	}
	m := moment{day: dayNumber(year, month, date), second: hour * secondsPerHour}
	at, reason := m.instantAt(0, f.site)
	if reason != "" {
		return Row{}, refuse(line, text[:13], reason)
	}
	row := Row{Line: line, Reading: planner.Reading{At: at}}
	if rain, _ := wholeNumber(text[49:55]); rain == isdTrace {
		row.setRain(0)
	} else if rain != isdMissing {
		row.setRain(float64(rain) / 10)
	}
	tenths, _ := wholeNumber(text[13:19])
	if row.Empty = tenths == isdMissing; row.Empty {
		return row, nil
	}
	if row.Reading.C = float64(tenths) / 10; planner.CheckTemperature(row.Reading.C) != nil {
		return Row{}, refuse(line, text[13:19], absurdValue)
	}
	return row, nil
}
