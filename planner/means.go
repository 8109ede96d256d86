package planner

import (
	"math"

	"gonum.org/v1/gonum/stat"
)

// Means compares the two daily means over a stretch of days.
type Means struct {
	From, To Day
	Days     int // days that have both means
	// DifferenceC is the mean of high/low mean less 24-hour mean, °C.
	DifferenceC float64
	// AbsDifferenceC is the mean size of the difference.
	AbsDifferenceC float64
	// SpreadC is the standard deviation of the difference, with n - 1; it needs
	// two days (HasSpread).
	SpreadC   float64
	HasSpread bool
	// LargestC is the difference largest by size, signed; of equal ones the
	// earliest.
	LargestC   float64
	LargestDay Day
}

// equalC is the margin, in °C, within which two sizes are equal: that of
// floating point, as 1.2 less 0.2 is not 1 to the last bit.
const equalC = 1e-9

// CompareMeans compares the two means over the days from through to that have
// both. With no such day only From, To and Days (0) mean anything.
func CompareMeans(record Record, from, to Day) Means {
	means := Means{From: from, To: to}
	var differences []float64
	sizes := 0.0
	for day := from; day <= to; day++ {
		facts := record.At(day)
		midrangeC, hasMidrange := facts.Mean(Midrange)
		hourlyC, hasHourly := facts.Mean(Hourly)
		if !hasMidrange || !hasHourly {
			continue
		}
		difference := midrangeC - hourlyC
		if len(differences) == 0 || math.Abs(difference) > math.Abs(means.LargestC)+equalC {
			means.LargestC, means.LargestDay = difference, day
		}
		differences = append(differences, difference)
		sizes += math.Abs(difference)
	}
	means.Days = len(differences)
	if means.Days == 0 {
		return means
	}
	means.AbsDifferenceC = sizes / float64(means.Days)
	means.DifferenceC = stat.Mean(differences, nil)
	if means.Days > 1 {
		means.SpreadC, means.HasSpread = stat.StdDev(differences, nil), true
	}
	return means
}

// Figures lists the comparison; with no day that has both means only the count.
func (m Means) Figures() Figures {
	f := Figures{
		{Key: "means.from", Value: float64(m.From), Unit: Date, Basis: NoBasis},
		{Key: "means.to", Value: float64(m.To), Unit: Date, Basis: NoBasis},
		{Key: "means.days", Value: float64(m.Days), Unit: Count, Basis: NoBasis},
	}
	if m.Days == 0 {
		return f
	}
	f = append(f,
		Figure{Key: "means.mean_difference_c", Value: m.DifferenceC, Unit: DifferenceC, Basis: NoBasis},
		Figure{Key: "means.mean_abs_difference_c", Value: m.AbsDifferenceC, Unit: DifferenceC, Basis: NoBasis})
	if m.HasSpread {
		f = append(f, Figure{Key: "means.sd_c", Value: m.SpreadC, Unit: DifferenceC, Basis: NoBasis})
	}
	return append(f,
		Figure{Key: "means.largest_c", Value: m.LargestC, Unit: DifferenceC, Basis: NoBasis},
		Figure{Key: "means.largest_date", Value: float64(m.LargestDay), Unit: Date, Basis: NoBasis})
}
