package intake

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"

	"swardbook/planner"
)

// mostSensors bounds how many names of sensors are looked at.
const mostSensors = 100

// survey is what the rows of a file tell together.
type survey struct {
	rows      int
	nonISO    int // rows whose date is in another form than ISO
	counts    [len(dateOrders)]orderCount
	sameInAll bool // every date is the same day in each order that fits best
	order     dateOrder
	saidOrder string // the order, when it was stated or remembered
	example   string // a date that the orders read differently
	bare      bool   // a row without an offset
	notWall   bool   // a row at a time that the clock on the wall leaves out
	lastRow   int
	values    valueCount
	rain      rainCount
	sensors   map[string]bool
}

// orderCount is how well one order of day, month and year fits the file.
type orderCount struct {
	read  int // dates that are in the calendar
	last  planner.Day
	begun bool
	steps int // from one day to the next one or back
	jumps int // over more than a day
	// travel is how many days the rows go forth and back in all.
	travel int64
}

func (c *orderCount) add(day planner.Day) {
	if c.begun {
		apart := max(day-c.last, c.last-day)
		c.travel += int64(apart)
		switch {
		case apart == 1:
			c.steps++
		case apart > 1:
			c.jumps++
		}
	}
	c.read, c.last, c.begun = c.read+1, day, true
}

// survey goes through all rows, and once more for the clock, and settles the
// order of dates, the clock and the sensor.
func (f *csvFile) survey(src *spool, l layout, columns []column, how How) (*survey, error) {
	s := &survey{sensors: map[string]bool{}, sameInAll: true}
	err := f.eachRow(src, l, func(line int, values [][]byte) { s.add(f, line, values, columns) })
	if err != nil {
		return nil, err
	}
	f.lastRow = s.lastRow
	if err := s.settleOrder(how); err != nil {
		return nil, err
	}
	f.order = s.order
	if err := f.settleSensor(s, how); err != nil {
		return nil, err
	}
	if f.daily || !s.bare {
		return s, nil
	}
	return s, f.settleClock(src, l, s)
}

// eachRow calls do with every row that is long enough.
func (f *csvFile) eachRow(src *spool, l layout, do func(line int, values [][]byte)) error {
	reader, err := openRows(src, l.sign, l.firstRow)
	if err != nil {
		return err
	}
	reader.keep = len(l.head.columns)
	for {
		line, broken, err := reader.read()
		switch {
		case errors.Is(err, io.EOF):
			return nil
		case err != nil:
			return err
		case !broken && reader.count >= reader.keep:
			do(line, reader.values)
		}
	}
}

// add takes one row.
func (s *survey) add(f *csvFile, line int, values [][]byte, columns []column) {
	s.rows++
	if s.addTime(f, values) {
		s.lastRow = line
	}
	for _, c := range columns {
		s.values.add(bytes.TrimSpace(values[c.index]))
	}
	if f.rain != nil {
		s.rain.add(bytes.TrimSpace(values[f.rain.index]))
	}
	if f.sensor != nil && len(s.sensors) < mostSensors {
		if name := bytes.TrimSpace(values[f.sensor.index]); len(name) > 0 && !s.sensors[string(name)] {
			s.sensors[string(name)] = true
		}
	}
}

// addTime looks at the time of a row and reports whether it is one.
func (s *survey) addTime(f *csvFile, values [][]byte) bool {
	if m, reason := parseMoment(bytes.TrimSpace(values[f.time.date.index])); reason != notISO {
		s.bare = s.bare || reason == "" && !m.hasOffset
		return reason == ""
	}
	var days []planner.Day
	for i, order := range dateOrders {
		m, _, reason := f.moment(values, order)
		if reason != "" {
			continue
		}
		s.bare = s.bare || !m.hasOffset
		s.counts[i].add(m.day)
		days = append(days, m.day)
	}
	if len(days) == 0 {
		return false
	}
	s.nonISO++
	if len(days) < len(dateOrders) || slices.Min(days) != slices.Max(days) {
		s.sameInAll = false
		if s.example == "" && len(days) > 1 {
			s.example = cut(bytes.TrimSpace(values[f.time.date.index]))
		}
	}
	return true
}

// settleOrder settles in which order the file writes its dates.
func (s *survey) settleOrder(how How) error {
	s.order = dayFirst
	if how.Dates != "" {
		i := slices.Index(dateOrders[:], dateOrder(strings.ToLower(how.Dates)))
		if i < 0 {
			return planner.Problemf(planner.Invalid, "dates %q are not known", cut([]byte(how.Dates))).
				WithHint("Use dates:d/m/y, dates:m/d/y or dates:y/m/d.")
		}
		s.order, s.saidOrder = dateOrders[i], how.Dates
		return nil
	}
	fitting := s.fitting()
	switch {
	case s.nonISO == 0 || s.sameInAll:
		return nil
	case len(fitting) == 1:
		s.order = fitting[0]
		return nil
	case slices.Contains(fitting, dateOrder(how.UsualDates)):
		s.order, s.saidOrder = dateOrder(how.UsualDates), how.UsualDates
		return nil
	}
	var choices []string
	for _, order := range fitting {
		choices = append(choices, "dates:"+string(order))
	}
	return planner.Problemf(planner.Refused, "the dates could be in more than one order: %q", s.example).
		WithHint("Say which, and send the file again: %s. It is remembered for the station.", strings.Join(choices, " or "))
}

// fitting returns the orders that explain the file best: that most dates are
// read in, and, of those, the one in which the days follow each other while
// they leap about in every other.
func (s *survey) fitting() (fitting []dateOrder) {
	most := 0
	for _, count := range s.counts {
		most = max(most, count.read)
	}
	var best []int
	for i, count := range s.counts {
		if count.read == most && most > 0 {
			best = append(best, i)
			fitting = append(fitting, dateOrders[i])
		}
	}
	if len(best) == 0 || s.alike(best) {
		return fitting[:min(len(fitting), 1)]
	}
	best, fitting = s.nearest(best)
	const surely = 2 // days in a row; one could be chance
	for _, i := range best {
		follows := s.counts[i].steps >= surely && s.counts[i].jumps*10 <= s.counts[i].steps
		for _, other := range best {
			follows = follows && (other == i || s.counts[other].steps == 0)
		}
		if follows {
			return []dateOrder{dateOrders[i]}
		}
	}
	return fitting
}

// nearest leaves out orders in which the rows go back and forth over many times
// the days that they cover in another: 01-07-13, 31-07-13 is a month, not the
// 30 years from 2001 to 2031.
func (s *survey) nearest(of []int) (best []int, fitting []dateOrder) {
	const times = 20
	least := s.counts[of[0]].travel
	for _, i := range of {
		least = min(least, s.counts[i].travel)
	}
	for _, i := range of {
		if least == 0 || s.counts[i].travel <= times*least {
			best, fitting = append(best, i), append(fitting, dateOrders[i])
		}
	}
	return best, fitting
}

// alike reports whether the orders were never told apart by a date.
func (s *survey) alike(orders []int) bool { return len(orders) > 1 && s.example == "" }

// settleSensor picks the sensor of a file whose rows name theirs.
func (f *csvFile) settleSensor(s *survey, how How) error {
	if f.sensor == nil || len(s.sensors) < 2 {
		if f.sensor != nil && how.Sensor != "" && !s.sensors[how.Sensor] && !s.isColumn(f, how) {
			return askSensor(planner.Problemf(planner.Refused, "the file has no sensor %q", cut([]byte(how.Sensor))), s.sensorNames())
		}
		f.sensor = nil
		return nil
	}
	switch {
	case s.sensors[how.Sensor]:
		f.wanted = how.Sensor
	case how.Sensor == "" && s.sensors[how.UsualSensor]:
		f.wanted = how.UsualSensor
	case len(s.sensors) >= mostSensors:
		return planner.Problemf(planner.Refused, "the column %q has %d values or more", cut([]byte(f.sensor.name)), mostSensors).
			WithHint("Send a file of one sensor.")
	default:
		return askSensor(planner.Problemf(planner.Refused, "the file has %d sensors", len(s.sensors)), s.sensorNames())
	}
	return nil
}

func (s *survey) isColumn(f *csvFile, how How) bool {
	return f.sensor == nil || how.Sensor == f.sensor.name
}

func (s *survey) sensorNames() (names []string) {
	for name := range s.sensors {
		names = append(names, cut([]byte(name)))
	}
	slices.Sort(names)
	return names
}

// settleClock looks whether times without an offset are those of the clock on
// the wall.
func (f *csvFile) settleClock(src *spool, l layout, s *survey) error {
	c := &f.clocks
	var evidence *wallEvidence
	if !c.said && c.zone != nil {
		evidence = newWallEvidence(c.zone)
	}
	up, down, last := 0, 0, int64(0)
	err := f.eachRow(src, l, func(_ int, values [][]byte) {
		m, _, reason := f.moment(values, f.order)
		if reason != "" || m.hasOffset || !m.hasClock || !yearsOK(m.day) {
			return
		}
		if f.sensor != nil && string(bytes.TrimSpace(values[f.sensor.index])) != f.wanted {
			return
		}
		local := int64(m.day)*secondsPerDay + int64(m.second)
		switch {
		case last != 0 && local > last:
			up++
		case last != 0 && local < last:
			down++
		}
		last = local
		if evidence != nil {
			evidence.add(local)
		}
	})
	c.backwards = down > up
	if err != nil || evidence == nil {
		return err
	}
	s.notWall = evidence.against()
	wall, unsure := evidence.judge()
	if unsure {
		return planner.Problemf(planner.Refused, "the times skip an hour in spring as the clock on the wall does, and do not double one in autumn").
			WithHint("Say which clock the logger runs on, and send the file again: clock:wall or clock:standard.")
	}
	if wall {
		c.kind = wallClock
	}
	return nil
}

// valueCount is how the temperatures of a file are spread.
type valueCount struct {
	known  int
	over50 int
	over35 int
	named  [2]int // with °C, with °F behind them
}

// add takes one value as written.
func (v *valueCount) add(text []byte) {
	value, units, ok := parseMeasured(text)
	if !ok || missingNumber(value) {
		return
	}
	v.known++
	switch {
	case units == planner.Celsius:
		v.named[0]++
	case units == planner.Fahrenheit:
		v.named[1]++
	}
	if value > 50 {
		v.over50++
	}
	if value > 35 {
		v.over35++
	}
}

// guess tells the unit by the values. Air over 50 °C is a rare record: a
// twentieth of all values above it means °F. When most values are above 35 the
// file may be a hot month in °C or a cold one in °F, and is asked for.
func (v valueCount) guess() (units planner.Units, err error) {
	switch {
	case v.named[1] > 0 && v.named[0] == 0:
		return planner.Fahrenheit, nil
	case v.named[0] > 0:
		return planner.Celsius, nil
	case v.over50*20 >= v.known && v.over50 > 1:
		return planner.Fahrenheit, nil
	case v.over35*2 > v.known:
		return "", planner.Problemf(planner.Refused, "the file does not say its unit, and its temperatures could be °C or °F").
			WithHint("Say which, and send the file again: units:c or units:f.")
	}
	return planner.Celsius, nil
}

// String writes the order for a note.
func (o dateOrder) String() string {
	switch o {
	case monthFirst:
		return fmt.Sprintf("month/day/year (%s)", string(o))
	case yearFirst:
		return fmt.Sprintf("year/month/day (%s)", string(o))
	}
	return fmt.Sprintf("day/month/year (%s)", string(o))
}
