package planner

// growthDays counts summed growth potential: 1 is a day of perfect growing
// weather.
type growthDays struct {
	turf func(Day) Turf
}

func (m growthDays) Units(day, _ DayFacts, basis Basis) (float64, Standing) {
	return potential(m.turf, day, basis)
}

func (growthDays) Bases() []Basis { return bothMeans() }
func (growthDays) Unit() Unit     { return GrowthDays }

// potential is the day's growth potential, 0 to 1, on its mean.
func potential(turf func(Day) Turf, day DayFacts, basis Basis) (float64, Standing) {
	meanC, standing := meanOrOther(day, basis)
	if standing == Nothing || turf == nil {
		return 0, Nothing
	}
	gp, err := turf(day.Day).Curve.Potential(meanC)
	if err != nil {
		return 0, Nothing
	}
	return gp, standing
}
