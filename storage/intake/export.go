package intake

import (
	"bytes"

	"swardbook/planner"
)

// ExportHeader is the first line of this program's own export of a station:
// comma-separated, readings and daily readings in one file, times in UTC,
// values in °C in as many digits as they have.
//
//	2013-07-01T05:00:00Z,17.8,,,,0.2  a reading, and the rain that came with it
//	2013-07-01,,24.5,13.5,19.02,      a day's high, low and the publisher's mean
const ExportHeader = "time,temp_c,day_high_c,day_low_c,day_mean_c,rain_mm"

const notExport = "the row is neither a reading (time and temp_c or rain_mm) nor a day (date, day_high_c and day_low_c)"

func recogniseExport(head []byte) bool { return string(firstLine(head)) == ExportHeader }

func openExport(src *spool, site Site, _ How) (*File, error) {
	reader, err := openRows(src, comma, 0)
	if err != nil {
		return nil, err
	}
	if _, _, err := reader.read(); err != nil {
		return nil, err
	}
	reader.keep = exportColumns
	file := &exportFile{csvReader: reader, site: site}
	for i, r := range [4]role{temperatureRole, highRole, lowRole, meanRole} {
		file.columns[i] = newValueColumn(column{index: i + 1, role: r}, planner.Celsius)
	}
	return &File{Format: Readings, Units: planner.Celsius, rows: file}, nil
}

const exportColumns = 6

type exportFile struct {
	*csvReader
	site    Site
	columns [4]valueColumn
}

func (*exportFile) clock() string { return ClockOffset }

func (f *exportFile) next() (Row, error) {
	line, broken, err := f.read()
	if err != nil {
		return Row{}, err
	}
	if broken || f.count != f.keep {
		return Row{}, refuse(line, bytes.Join(f.values, []byte{comma}), notExport)
	}
	m, reason := parseMoment(f.values[0])
	if reason != "" {
		return Row{}, refuse(line, f.values[0], reason)
	}
	var valuesC [4]float64
	var known [4]bool
	for i, column := range f.columns {
		if valuesC[i], known[i], reason = column.read(f.values); reason != "" {
			return Row{}, refuse(line, f.values[i+1], reason)
		}
	}
	switch {
	case m.hasOffset && (known[0] || len(bytes.TrimSpace(f.values[exportColumns-1])) > 0):
		at, reason := m.instantAt(m.offset, f.site)
		if reason != "" {
			return Row{}, refuse(line, f.values[0], reason)
		}
		row := Row{Line: line, Empty: !known[0], Reading: planner.Reading{At: at, C: valuesC[0]}}
		row.addRain(&rainColumn{exportColumns - 1, 1}, f.values)
		return row, nil
	case !m.hasClock && known[1] && known[2] && yearsOK(m.day):
		row := Row{Line: line, Daily: true, Day: planner.DailyReading{Day: m.day, HighC: valuesC[1], LowC: valuesC[2], MeanC: valuesC[3], HasMean: known[3]}}
		if row.Day.Check() == nil {
			return row, nil
		}
	}
	return Row{}, refuse(line, bytes.Join(f.values, []byte{comma}), notExport)
}
