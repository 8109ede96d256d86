package planner

// Curve is the season total of each day from the start to the day before end,
// on the first basis of the measure: the season's picture. A total that cannot
// be counted is an error.
func (s Season) Curve(plan Plan, start, end Day) ([]float64, error) {
	measure, err := s.State.Settings.measure()
	if err != nil {
		return nil, err
	}
	total := 0.0
	var curve []float64
	for _, units := range (counter{plan: plan, measure: measure, basis: measure.Bases()[0]}).past(start, end).units {
		total += units
		curve = append(curve, total)
	}
	return curve, nil
}
