package planner

import "swardbook/calc"

// nitrogenUse counts what a surface is expected to use: growth potential times
// the month's ceiling over the days of the month, g N/m².
type nitrogenUse struct {
	turf func(Day) Turf
}

func (m nitrogenUse) Units(day, _ DayFacts, basis Basis) (float64, Standing) {
	gp, standing := potential(m.turf, day, basis)
	if standing == Nothing {
		return 0, Nothing
	}
	use, err := calc.NitrogenUse(gp, m.turf(day.Day).CeilingGM2, day.Day.DaysInMonth())
	if err != nil {
		return 0, Nothing
	}
	return use, standing
}

func (nitrogenUse) Bases() []Basis { return bothMeans() }
func (nitrogenUse) Unit() Unit     { return NitrogenGM2 }
