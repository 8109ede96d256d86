package intake

import (
	"fmt"
	"io"
	"slices"

	"swardbook/planner"
)

// The reasons for which a value of a day is refused.
const (
	flagged     = "flagged as doubtful by its publisher"
	twoValues   = "the day has another value on an earlier line"
	notAFigure  = "the value is not a number"
	absurdValue = "the temperature is outside what has been measured on earth"
)

// dayParts collects the values of days that stand on lines of their own, in
// any order, in 40 bytes a day; there are 600 years of days at most.
type dayParts struct {
	days  map[planner.Day]*dayPart
	order []planner.Day // set once all lines are read
}

// dayPart is what is known of one day so far.
type dayPart struct {
	line                   int
	known                  [3]bool // high, low, mean
	tenths                 [3]int16
	refused                bool // a high or a low must not be used
	refusedLine            int
	refusedTenths          int16
	refusedRole, refusedBy byte // the element's place, and the flag or 0
}

// The places of the values of a day.
const (
	highPart = iota
	lowPart
	meanPart
)

var partNames = [3]string{"TMAX", "TMIN", "TAVG"}

func (d *dayParts) at(day planner.Day, line int) *dayPart {
	if d.days == nil {
		d.days = map[planner.Day]*dayPart{}
	}
	part := d.days[day]
	if part == nil {
		part = &dayPart{line: line}
		d.days[day] = part
	}
	return part
}

// add takes one value; flag is the publisher's, 0 for none. It reports whether
// an earlier line gave another value, which stands.
func (p *dayPart) add(line, place, tenths int, flag byte) (contradicts bool) {
	if flag != 0 {
		if place != meanPart {
			p.refused, p.refusedLine, p.refusedTenths = true, line, int16(tenths)
			p.refusedRole, p.refusedBy = byte(place), flag
		}
		return false
	}
	if p.known[place] {
		return int(p.tenths[place]) != tenths
	}
	p.known[place], p.tenths[place] = true, int16(tenths)
	return false
}

// next returns the rows in order of the days, once all lines are in.
func (d *dayParts) next() (Row, error) {
	if d.order == nil {
		d.order = make([]planner.Day, 0, len(d.days))
		for day := range d.days {
			d.order = append(d.order, day)
		}
		slices.Sort(d.order)
	}
	if len(d.order) == 0 {
		return Row{}, io.EOF
	}
	day := d.order[0]
	d.order = d.order[1:]
	return d.days[day].row(day)
}

func (p *dayPart) row(day planner.Day) (Row, error) {
	if p.refused {
		value := fmt.Sprintf("%s %s %.1f (%c)", day, partNames[p.refusedRole], float64(p.refusedTenths)/10, p.refusedBy)
		return Row{}, refuse(p.refusedLine, []byte(value), flagged)
	}
	row := Row{Line: p.line, Daily: true, Day: planner.DailyReading{Day: day}}
	if row.Empty = !p.known[highPart] || !p.known[lowPart]; row.Empty {
		return row, nil
	}
	row.Day.HighC, row.Day.LowC = float64(p.tenths[highPart])/10, float64(p.tenths[lowPart])/10
	if row.Day.HighC < row.Day.LowC {
		return Row{}, refuse(p.line, fmt.Appendf(nil, "%s %.1f, %.1f", day, row.Day.HighC, row.Day.LowC), highBelowLow)
	}
	row.Day.MeanC, row.Day.HasMean = float64(p.tenths[meanPart])/10, p.known[meanPart]
	if row.Day.Check() != nil { // the mean is of other hours than the extremes
		row.Day.MeanC, row.Day.HasMean = 0, false
	}
	return row, nil
}

// oneStation settles which of the stations in a file counts.
func oneStation(names map[string]bool, how How) (wanted, said string, err error) {
	if len(names) == 1 {
		return "", "", nil
	}
	for _, name := range []string{how.Sensor, how.UsualSensor} {
		if name == "" {
			continue
		}
		if names[name] {
			return name, name, nil
		}
		if name == how.Sensor {
			break
		}
	}
	s := survey{sensors: names}
	return "", "", askSensor(planner.Problemf(planner.Refused, "the file has %d stations", len(names)), s.sensorNames())
}
