package planner

import (
	"fmt"

	"swardbook/calc"
)

// Basis says which mean a figure stands on.
type Basis string

// The bases. Hourly and midrange are the two daily means; the others say that
// the choice between the two does not arise.
const (
	Hourly   Basis = "hourly"   // the mean of the day's 24 on-the-hour readings
	Midrange Basis = "midrange" // (high + low) / 2
	Extremes Basis = "extremes" // the day's high and low themselves (sine, triangle)
	Readings Basis = "readings" // the readings themselves (degree-hours)
	NoBasis  Basis = "none"     // no temperature at all (days)
)

// Words names the basis as users see it.
func (b Basis) Words() string {
	switch b {
	case Hourly:
		return "24-hour mean"
	case Midrange:
		return "high/low mean"
	case Extremes:
		return "high and low"
	case Readings:
		return "hourly readings"
	default:
		return "days"
	}
}

// Other returns the other of the two means, and the basis itself where there
// is no other.
func (b Basis) Other() Basis {
	switch b {
	case Hourly:
		return Midrange
	case Midrange:
		return Hourly
	default:
		return b
	}
}

// Reading is one air temperature of a station.
type Reading struct {
	At int64   // UTC seconds since 1970
	C  float64 // °C
}

// DailyReading is what a station itself gives for one day: its own extremes
// and, where the publisher gives one, its own mean of 24 hours.
type DailyReading struct {
	Day     Day
	HighC   float64
	LowC    float64
	MeanC   float64
	HasMean bool
}

// Check refuses a daily reading that cannot be: a value that is no number or
// outside what has been measured on earth, a high below the low, a mean
// outside the two.
func (d DailyReading) Check() error {
	for _, value := range []float64{d.HighC, d.LowC} {
		if err := CheckTemperature(value); err != nil {
			return err
		}
	}
	if d.HighC < d.LowC {
		return fmt.Errorf("the high %.1f °C is below the low %.1f °C: swap them or correct one", d.HighC, d.LowC)
	}
	if d.HasMean && !(d.MeanC >= d.LowC && d.MeanC <= d.HighC) {
		return fmt.Errorf("the mean %.1f °C is outside the low %.1f and the high %.1f °C", d.MeanC, d.LowC, d.HighC)
	}
	return nil
}

// Lowest and highest air temperature that is taken as one. The world records
// are -89.2 and 56.7 °C (as tabled in the HadISD quality-control code, Dunn et
// al. 2012); the margin keeps a new record from being refused.
const (
	LowestC  = -95.0
	HighestC = 62.0
)

// CheckTemperature refuses what no thermometer in open air has shown: NaN,
// infinities, below -95 °C or above 62 °C.
func CheckTemperature(c float64) error {
	if !(c >= LowestC && c <= HighestC) {
		return fmt.Errorf("%.4g °C is outside %g to %g °C: check the value and its unit", c, LowestC, HighestC)
	}
	return nil
}

// Source says where a day's figures come from.
type Source uint8

// The sources of a day, measured first.
const (
	Unknown     Source = iota // nothing is known of the day
	FromStation               // the station's own daily extremes
	FromHourly                // the extremes of the hourly readings, which clip them
	FromHand                  // typed by the lead
	FromLine                  // a straight line between neighbouring days
	FromAhead                 // the outlook stands in
)

// DayFacts is what is known of one day: facts only, never learned or filled
// values when it comes out of the record.
type DayFacts struct {
	Day          Day
	HasExtremes  bool    // HighC and LowC are known
	HighC        float64 // °C
	LowC         float64
	ExtremesFrom Source
	HasHourly    bool    // HourlyC is known
	HourlyC      float64 // the 24-hour mean, °C
	Published    bool    // HourlyC is the publisher's own daily mean
	SlotsReal    int     // hours that hold a reading
	SlotsBridged int     // hours bridged by a straight line
	SlotsWanted  int     // hours of the day: 24; 23 or 25 on some civil days
	// HoursC are the day's hourly values, bridged ones included; nil unless
	// the 24-hour mean stands on readings.
	HoursC []float64
	// Other is the station that stands in for the first by rank on this day, and
	// OtherDays the number of shared days whose mean difference was taken off it;
	// 0 when it comes as it was measured. "" when the day is the first station's.
	Other     string
	OtherDays int
	// Doubt names, in words, a reading that looks wrong; "" when none does. A
	// doubted value still counts until the lead strikes it.
	Doubt string
}

// Mean returns the day's mean on the basis. It is not known when the day lacks
// that mean or its extremes cannot be; it never falls back (the caller does, and
// labels it).
func (f DayFacts) Mean(basis Basis) (meanC float64, known bool) {
	switch {
	case basis == Hourly && f.HasHourly:
		return f.HourlyC, true
	case basis == Midrange && f.HasExtremes:
		meanC, err := calc.MidrangeMean(f.HighC, f.LowC)
		return meanC, err == nil
	}
	return 0, false
}

// Empty reports whether nothing is known of the day.
func (f DayFacts) Empty() bool { return !f.HasExtremes && !f.HasHourly }

// Warmer returns the day with every temperature raised by the difference.
func (f DayFacts) Warmer(byC float64) DayFacts {
	f.HighC += byC
	f.LowC += byC
	f.HourlyC += byC
	f.HoursC = raised(f.HoursC, byC)
	return f
}

// raised returns the values with the difference added; nil stays nil.
func raised(valuesC []float64, byC float64) []float64 {
	if valuesC == nil {
		return nil
	}
	out := make([]float64, len(valuesC))
	for i, c := range valuesC {
		out[i] = c + byC
	}
	return out
}

// Record is the weather record of a site: what is known of each past day.
type Record struct {
	// Facts are contiguous and in order, a day without readings included as
	// an empty DayFacts; nil when there is no record.
	Facts []DayFacts
	// Revision changes whenever any day may have changed.
	Revision int64
}

// First returns the first day of the record; ok is false when it is empty.
func (r Record) First() (day Day, ok bool) {
	if len(r.Facts) == 0 {
		return 0, false
	}
	return r.Facts[0].Day, true
}

// Last returns the newest day of the record; ok is false when it is empty.
func (r Record) Last() (day Day, ok bool) {
	if len(r.Facts) == 0 {
		return 0, false
	}
	return r.Facts[len(r.Facts)-1].Day, true
}

// At returns the facts of a day; an empty DayFacts outside the record.
func (r Record) At(day Day) DayFacts {
	if first, ok := r.First(); ok && day >= first && int(day-first) < len(r.Facts) {
		return r.Facts[day-first]
	}
	return DayFacts{Day: day}
}

// Before returns the record as it was known to end the day before: a past
// morning is recomputed on it.
func (r Record) Before(day Day) Record {
	first, ok := r.First()
	if !ok || day <= first {
		return Record{Revision: r.Revision}
	}
	if n := int(day - first); n < len(r.Facts) {
		r.Facts = r.Facts[:n:n]
	}
	return r
}

// HasHourly reports whether any day of the record has a 24-hour mean.
func (r Record) HasHourly() bool {
	for _, facts := range r.Facts {
		if facts.HasHourly {
			return true
		}
	}
	return false
}
