package planner

// Standing says what a day's units stand on.
type Standing uint8

// From worst to best.
const (
	Nothing Standing = iota // the day is missing
	StandIn                 // on the other mean, or on high and low instead of readings
	Own                     // on the basis asked for
)

// Measure turns a day's weather into the units that a work or a season total
// counts. The units of a day are never negative.
type Measure interface {
	// Units returns the day's units on the basis. Where the day lacks what the
	// basis needs, the nearest thing stands in and the standing says so; with
	// nothing to stand on the units are 0. next is the day after, read by
	// methods that reach into the next morning.
	Units(day, next DayFacts, basis Basis) (units float64, standing Standing)
	// Bases returns the bases a figure of this measure comes on: both means,
	// or the one basis of a measure that does not stand on a mean.
	Bases() []Basis
	// Unit is the unit of a running total.
	Unit() Unit
}

// NewMeasure returns the measure that counts this way. turf says what grows on
// which day, for the measures that stand on growth potential; nil makes a
// measure that knows no units, enough to check the counting. A counting that
// makes no sense (an unknown method, an upper limit below the base) is an
// error.
func NewMeasure(c Counting, turf func(Day) Turf) (Measure, error) {
	switch c.Counts {
	case ByDays:
		return days{}, nil
	case ByDegreeDays:
		return newDegreeDays(c)
	case ByGrowthDays:
		return growthDays{turf}, nil
	case ByNitrogen:
		return nitrogenUse{turf}, nil
	}
	return nil, Problemf(Invalid, "%q is nothing that can be counted", c.Counts).
		WithHint("Use counts:days, degree-days, growth-days or nitrogen.")
}

// bothMeans are the bases of every figure of a daily mean, in the order shown.
func bothMeans() []Basis { return []Basis{Hourly, Midrange} }

// meanOrOther is the day's mean on the basis, else on the other mean.
func meanOrOther(day DayFacts, basis Basis) (meanC float64, standing Standing) {
	if meanC, known := day.Mean(basis); known {
		return meanC, Own
	}
	if meanC, known := day.Mean(basis.Other()); known {
		return meanC, StandIn
	}
	return 0, Nothing
}

// days counts calendar days.
type days struct{}

func (days) Units(DayFacts, DayFacts, Basis) (float64, Standing) { return 1, Own }
func (days) Bases() []Basis                                      { return []Basis{NoBasis} }
func (days) Unit() Unit                                          { return Days }
