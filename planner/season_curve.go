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

// SeasonCurves are the running totals that a season's picture shows, a value
// for each day from the start of the season through yesterday, all on the first
// basis of the measure.
type SeasonCurves struct {
	Season Season
	This   []float64 // empty before the first day of the season is over
	Newest []float64 // of the newest past year; empty without one
	// Lowest and Highest are of each day the ends of the past years; empty with
	// fewer than two of them.
	Lowest, Highest []float64
}

// Curves are the season's running totals beside those of its past years. Of a
// past year that lacks the 29 February of this one the last total stands for
// it; one that has it is cut a day earlier. A total that cannot be counted is an
// error.
func (s Season) Curves(plan Plan) (SeasonCurves, error) {
	this, err := s.Curve(plan, s.State.Start, plan.AsOf)
	if err != nil || len(this) == 0 {
		return SeasonCurves{Season: s}, err
	}
	curves := SeasonCurves{Season: s, This: this}
	for i, year := range s.Past {
		past, err := s.Curve(plan, year.Start, year.End)
		if err != nil {
			return SeasonCurves{}, err
		}
		past = asLong(past, len(this))
		switch {
		case i == 0:
			curves.Newest = past
			continue
		case i == 1:
			curves.Lowest, curves.Highest = append([]float64(nil), curves.Newest...), append([]float64(nil), curves.Newest...)
		}
		for day, total := range past {
			curves.Lowest[day], curves.Highest[day] = min(curves.Lowest[day], total), max(curves.Highest[day], total)
		}
	}
	return curves, nil
}

// asLong brings a running total to so many days: it cuts, or carries the last
// total on.
func asLong(curve []float64, days int) []float64 {
	for len(curve) < days {
		last := 0.0
		if len(curve) > 0 {
			last = curve[len(curve)-1]
		}
		curve = append(curve, last)
	}
	return curve[:days]
}
