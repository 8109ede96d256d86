package intake

import (
	"bytes"
	"fmt"
	"math"

	"swardbook/calc"
	"swardbook/planner"
)

// rainColumn is the column of what a rain gauge caught since the row before.
type rainColumn struct {
	index int
	mm    float64 // of one of its unit; 0 when the name has none
}

// pickRain returns the one column of rain; of several none, as it is not known
// which is the gauge's own.
func pickRain(head header) *rainColumn {
	if all := head.of(rainRole); len(all) == 1 {
		return &rainColumn{all[0].index, all[0].rainMM}
	}
	return nil
}

// traceWords stand for rain too little to be measured.
var traceWords = [...]string{"t", "tr", "trace"}

// rainNumber reads a value of rain in its own unit. known is false when the
// file says that it is missing; sound is false when it is no amount of rain.
func rainNumber(text []byte) (value float64, known, sound bool) {
	for _, word := range traceWords {
		if bytes.EqualFold(text, []byte(word)) {
			return 0, true, true
		}
	}
	value, ok := parseNumber(text)
	switch {
	case !ok:
		return 0, false, missingWord(text)
	case missingNumber(value):
		return 0, false, true
	}
	return value, value >= 0, value >= 0
}

// rainCount is how the values of a rain column go.
type rainCount struct {
	unsound      int // that are no amount of rain
	known        int
	rises, falls int // from one row to the next
	last, most   float64
}

func (r *rainCount) add(text []byte) {
	value, known, sound := rainNumber(text)
	switch {
	case !sound:
		r.unsound++
	case known:
		if r.known > 0 && value > r.last {
			r.rises++
		}
		if r.known > 0 && value < r.last {
			r.falls++
		}
		r.known, r.last, r.most = r.known+1, value, max(r.most, value)
	}
}

// runs reports whether the column is a running total (of the day, of the year),
// which nearly always goes one way. What fell since the row before goes up and
// down alike.
func (r rainCount) runs() bool {
	const least, times = 6, 4
	return max(r.rises, r.falls) >= least && max(r.rises, r.falls) > times*min(r.rises, r.falls)
}

// settleRain decides whether the rain is kept, and in which unit, and says what
// was taken for granted or left out. A file that names no unit is in mm, one in
// °F in inches.
func (f *csvFile) settleRain(head header, found rainCount, units planner.Units) (notes []string) {
	switch {
	case f.rain == nil && head.has(rainRole) && !f.daily:
		return []string{"Rain is not kept: the file has several columns of it."}
	case f.rain == nil && head.has(rainRole):
		return []string{"Rain of whole days is not kept: it does not say at what hour it fell."}
	case f.rain == nil:
		return nil
	case found.runs():
		f.rain = nil
		return []string{"Rain is not kept: the column is a running total, not what fell since the row before."}
	}
	if f.rain.mm == 0 {
		unit := "mm"
		if f.rain.mm = 1; units == planner.Fahrenheit {
			f.rain.mm, unit = calc.MMPerInch, "inches"
		}
		notes = append(notes, fmt.Sprintf("The file does not say the unit of its rain: taken as %s.", unit))
	}
	if found.most*f.rain.mm > planner.MostRainMM {
		notes = append(notes, fmt.Sprintf("Rain over %g mm in one row is left out.", planner.MostRainMM))
	}
	if found.unsound > 0 {
		notes = append(notes, fmt.Sprintf("Rain left out on %s: no number from 0 up.", countOf(found.unsound, "row")))
	}
	return notes
}

// addRain adds the row's rain; what is no rain is left out, for the row is of
// use without it.
func (row *Row) addRain(column *rainColumn, values [][]byte) {
	if column == nil {
		return
	}
	value, known, sound := rainNumber(bytes.TrimSpace(values[column.index]))
	if known && sound {
		row.setRain(value * column.mm)
	}
}

// setRain gives the row an amount of rain that a gauge can catch, in whole
// thousandths of a mm: a hundredth of an inch is 0.254 mm.
func (row *Row) setRain(mm float64) {
	mm = math.Round(1000*mm) / 1000
	if planner.CheckRain(mm) == nil {
		row.HasRain, row.Rain = true, planner.Rain{At: row.Reading.At, MM: mm}
	}
}
