package planner

import (
	"math"
	"slices"

	"swardbook/calc"
)

// degreeDays counts accumulated temperature above a base, °C-days.
type degreeDays struct {
	method     calc.Method
	thresholds calc.Thresholds
}

func newDegreeDays(c Counting) (Measure, error) {
	m := degreeDays{c.Method, c.Thresholds}
	if m.method == "" {
		m.method = calc.MethodMean
	}
	if !slices.Contains(calc.Methods(), m.method) {
		return nil, Problemf(Invalid, "%q is not a degree-day method", m.method)
	}
	limits := []float64{m.thresholds.LowerC}
	if cutoff := m.thresholds.Cutoff; cutoff != "" && cutoff != calc.CutoffNone {
		limits = append(limits, m.thresholds.UpperC)
	}
	for _, limitC := range limits {
		if err := CheckTemperature(limitC); err != nil {
			return nil, err
		}
	}
	// A trial day shows whether method and limits go together.
	trial := DayFacts{HasExtremes: true, HighC: 20, LowC: 10, HasHourly: true, HourlyC: 15, HoursC: []float64{15}}
	if _, err := m.own(trial, trial, Midrange); err != nil {
		return nil, err
	}
	return m, nil
}

func (m degreeDays) Units(day, next DayFacts, basis Basis) (float64, Standing) {
	units, standing, err := m.units(day, next, basis)
	if err != nil {
		return 0, Nothing
	}
	return units, standing
}

// units takes the method's own input where the day has it; else high and low
// stand in through the single sine, and a mean alone as a flat day.
func (m degreeDays) units(day, next DayFacts, basis Basis) (float64, Standing, error) {
	switch {
	case m.method == calc.MethodMean:
		meanC, standing := meanOrOther(day, basis)
		if standing == Nothing {
			return 0, Nothing, nil
		}
		units, err := calc.DegreeDaysFromMean(meanC, m.thresholds)
		return units, standing, err
	case m.method == calc.MethodDegreeHours && day.HoursC == nil && day.HasExtremes:
		units, err := calc.DegreeDaysSingleSine(m.settled(day.HighC), m.settled(day.LowC), m.thresholds)
		return units, StandIn, err
	case m.method == calc.MethodDegreeHours && day.HoursC != nil, m.method != calc.MethodDegreeHours && day.HasExtremes:
		units, err := m.own(day, next, basis)
		return units, Own, err
	case day.HasHourly:
		meanC := m.settled(day.HourlyC)
		units, err := calc.DegreeDaysSingleSine(meanC, meanC, m.thresholds)
		return units, StandIn, err
	}
	return 0, Nothing, nil
}

// own computes the method on its own input, which the day must have.
func (m degreeDays) own(day, next DayFacts, basis Basis) (float64, error) {
	nextLowC := day.LowC // a night not known yet is taken as this one
	if next.HasExtremes {
		nextLowC = next.LowC
	}
	day.HighC, day.LowC, nextLowC = m.settled(day.HighC), m.settled(day.LowC), m.settled(nextLowC)
	switch m.method {
	case calc.MethodMean:
		meanC, _ := meanOrOther(day, basis)
		return calc.DegreeDaysFromMean(meanC, m.thresholds)
	case calc.MethodFlooredExtremes:
		return calc.DegreeDaysFlooredExtremes(day.HighC, day.LowC, m.thresholds)
	case calc.MethodFourCase:
		return calc.DegreeDaysFourCase(day.HighC, day.LowC, m.thresholds)
	case calc.MethodSingleTriangle:
		return calc.DegreeDaysSingleTriangle(day.HighC, day.LowC, m.thresholds)
	case calc.MethodDoubleTriangle:
		return calc.DegreeDaysDoubleTriangle(day.HighC, day.LowC, nextLowC, m.thresholds)
	case calc.MethodSingleSine:
		return calc.DegreeDaysSingleSine(day.HighC, day.LowC, m.thresholds)
	case calc.MethodDoubleSine:
		return calc.DegreeDaysDoubleSine(day.HighC, day.LowC, nextLowC, m.thresholds)
	default:
		return calc.DegreeDaysFromHours(day.HoursC, m.thresholds)
	}
}

// alike is how near two temperatures are taken as one, °C: far below what any
// thermometer tells apart, far above what adding and converting rounds off.
const alike = 1e-9

// settled is the temperature, or the threshold that it is but for rounding: what
// was warmed, converted or put on a line may miss the threshold that it reads
// as, and the vertical cutoff counts a whole day or none there.
func (m degreeDays) settled(c float64) float64 {
	for _, thresholdC := range []float64{m.thresholds.LowerC, m.thresholds.UpperC} {
		if math.Abs(c-thresholdC) < alike {
			return thresholdC
		}
	}
	return c
}

func (m degreeDays) Bases() []Basis {
	switch m.method {
	case calc.MethodMean:
		return bothMeans()
	case calc.MethodDegreeHours:
		return []Basis{Readings}
	default:
		return []Basis{Extremes}
	}
}

func (m degreeDays) Unit() Unit { return DegreeDays }
