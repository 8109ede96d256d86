// Package knownday is a catalogue of days whose answers are known, for tests of
// whatever computes with a day's temperatures: each with its readings, its
// extremes, both means, a tolerance, and where the expected number comes from.
//
// It is imported by tests only. It must not know of calc or of anything else of
// the program: the numbers here are worked by other means, and a test that
// compares them with the code would prove nothing if they came from it. All days
// and places are invented.
package knownday

import "math"

// LongestBridge is the longest gap, in slots, that BridgedMeanC assumes filled.
const LongestBridge = 3

// Day is one day with known answers. HoursC holds what the thermometer showed,
// one reading an hour from the day's first: 24, or 23 or 25 where a civil day has
// a clock change. Missing lists the slots (from 0) whose reading never came; the
// value in HoursC is then what the record should have had. HighC and LowC are the
// day's extremes, which may lie between readings.
//
// HourlyMeanC is the mean of HoursC, nothing missing. MeanOfRestC is the mean of
// the readings that came. BridgedMeanC is the mean after straight lines over gaps
// of up to [LongestBridge] slots, and counts only when Whole: with a longer gap
// the day has no 24-hour mean. On a day without gaps the three are equal.
type Day struct {
	Name    string
	HoursC  []float64
	Missing []int

	HighC, LowC float64

	HourlyMeanC   float64
	MeanOfRestC   float64
	BridgedMeanC  float64
	Whole         bool
	MidrangeMeanC float64

	Tolerance float64 // absolute, °C, for all four means
	Source    string
}

// IsMissing reports whether the reading of a slot never came.
func (d Day) IsMissing(slot int) bool {
	for _, missing := range d.Missing {
		if missing == slot {
			return true
		}
	}
	return false
}

// RestC returns the readings that came, in order.
func (d Day) RestC() []float64 {
	var rest []float64
	for slot, readingC := range d.HoursC {
		if !d.IsMissing(slot) {
			rest = append(rest, readingC)
		}
	}
	return rest
}

// Days returns the catalogue. The slices are the caller's own.
func Days() []Day {
	days := shapes()
	days = append(days, Invented())
	days = append(days, gaps()...)
	return append(days, clockChanges()...)
}

// complete fills in the means of a day without gaps.
func complete(d Day) Day {
	d.MeanOfRestC, d.BridgedMeanC, d.Whole = d.HourlyMeanC, d.HourlyMeanC, true
	return d
}

// every returns n readings, each computed from its slot.
func every(n int, readingC func(slot int) float64) []float64 {
	hoursC := make([]float64, n)
	for slot := range hoursC {
		hoursC[slot] = readingC(slot)
	}
	return hoursC
}

// clock returns the angle of a slot on a wave that peaks at 15:00.
func clock(slot int) float64 { return 2 * math.Pi * float64(slot-15) / 24 }

// shapes are days whose curve has a closed form.
func shapes() []Day {
	return []Day{
		complete(Day{
			Name:   "constant",
			HoursC: every(24, func(int) float64 { return 15 }),
			HighC:  15, LowC: 15, HourlyMeanC: 15, MidrangeMeanC: 15,
			Tolerance: 1e-12, Source: "one temperature is its own mean",
		}),
		complete(Day{
			Name:   "straight ramp",
			HoursC: every(24, func(slot int) float64 { return 4 + float64(slot) }),
			HighC:  27, LowC: 4, HourlyMeanC: 15.5, MidrangeMeanC: 15.5,
			Tolerance: 1e-12, Source: "mean of an arithmetic series: half of first plus last",
		}),
		complete(Day{
			Name:   "sine",
			HoursC: every(24, func(slot int) float64 { return 15 + 8*math.Cos(clock(slot)) }),
			HighC:  23, LowC: 7, HourlyMeanC: 15, MidrangeMeanC: 15,
			Tolerance: 1e-12, Source: "the samples of a whole wave sum to 0; peak and trough fall on readings, so both means agree",
		}),
		complete(Day{
			// First harmonic 8, second B = 1.6 = 0.2 of it: high/low mean less 24-hour mean is B.
			Name: "second harmonic",
			HoursC: every(24, func(slot int) float64 {
				return 15 + 8*math.Cos(clock(slot)) + 1.6*math.Cos(2*clock(slot))
			}),
			HighC: 24.6, LowC: 8.6, HourlyMeanC: 15, MidrangeMeanC: 16.6,
			Tolerance: 1e-12, Source: "closed form: the means differ by exactly the second harmonic while it is at most a quarter of the first",
		}),
		complete(Day{
			// 18 hours at -2 and 6 at 4: the two means lie on either side of freezing.
			Name:   "freezing",
			HoursC: every(24, func(slot int) float64 { return stepC(slot, 10, 16, 4, -2) }),
			HighC:  4, LowC: -2, HourlyMeanC: -0.5, MidrangeMeanC: 1,
			Tolerance: 1e-12, Source: "by hand: (18·(−2) + 6·4)/24",
		}),
		complete(Day{
			Name:   "below base",
			HoursC: every(24, func(slot int) float64 { return stepC(slot, 6, 18, 8, 4) }),
			HighC:  8, LowC: 4, HourlyMeanC: 6, MidrangeMeanC: 6,
			Tolerance: 1e-12, Source: "by hand: (12·4 + 12·8)/24; every reading is below a base of 10",
		}),
		complete(Day{
			// 20 hours at 6 and 4 at 15: warm for four hours over base 10, 24-hour mean below it, high/low mean above.
			Name:   "warm afternoon, mean below base",
			HoursC: every(24, func(slot int) float64 { return stepC(slot, 12, 16, 15, 6) }),
			HighC:  15, LowC: 6, HourlyMeanC: 7.5, MidrangeMeanC: 10.5,
			Tolerance: 1e-12, Source: "by hand: (20·6 + 4·15)/24",
		}),
	}
}

// stepC is insideC in the slots from up to but not including to, else outsideC.
func stepC(slot, from, to int, insideC, outsideC float64) float64 {
	if slot >= from && slot < to {
		return insideC
	}
	return outsideC
}
