package planner

import (
	"slices"

	"swardbook/calc"
)

// Tomorrow is what the evening says of the next day. It never says that a day
// is good for anything.
type Tomorrow struct {
	Day   Day
	Facts DayFacts // on the path; empty when nothing is known
	// FrostShare is the share of members with a low below 0 °C, WhiteFrostShare
	// that with a low at which grass can be white while the air is above 0 °C.
	FrostShare, WhiteFrostShare float64
	Years                       int // past years among the members
	SpreadKnown                 bool
	HoursBelowZero              float64  // on the path
	HeatIndexC                  Optional // of the high, when humidity is known
	HeatBand                    calc.HeatBand
	HumidityPercent             Optional
	RainMM                      Optional
	WindMS                      Optional
	Works                       []WorkState // due by then, most urgent first
	Closed                      []Closed
}

// WhiteFrostC is the low below which frost on the grass is thought of: ground
// frost comes with the screen some degrees above 0 (common practice).
const WhiteFrostC = 3.0

// NextDay looks at the day after the plan's own, as the evening's post does.
func NextDay(plan Plan) (Tomorrow, error) {
	evaluation, err := Evaluate(plan)
	if err != nil {
		return Tomorrow{}, err
	}
	day := plan.AsOf + 1
	out := Tomorrow{Day: day, Facts: plan.Outlook.at(plan.Outlook.Path, day), SpreadKnown: plan.Outlook.SpreadKnown(), Years: plan.Outlook.Years, Closed: closedOnDay(plan.Closed, day)}
	for _, member := range plan.Outlook.Members {
		facts := plan.Outlook.at(member, day)
		if facts.HasExtremes && facts.LowC < 0 {
			out.FrostShare += 1 / float64(len(plan.Outlook.Members))
		}
		if facts.HasExtremes && facts.LowC < WhiteFrostC {
			out.WhiteFrostShare += 1 / float64(len(plan.Outlook.Members))
		}
	}
	if out.Facts.HasExtremes {
		if out.HoursBelowZero, err = calc.HoursBelow(out.Facts.HighC, out.Facts.LowC, 0); err != nil {
			return Tomorrow{}, err
		}
	}
	for _, typed := range plan.Hand {
		if typed.Day == day {
			out.HumidityPercent, out.RainMM, out.WindMS = typed.HumidityPercent, typed.RainMM, typed.WindMS
			out.addHeat(typed)
		}
	}
	for _, state := range evaluation.Works {
		if facts, ok := state.OwnFacts(); ok && state.Status != Resting && facts.Date().Known && facts.Date().Day <= day {
			out.Works = append(out.Works, state)
		}
	}
	slices.SortStableFunc(out.Works, func(a, b WorkState) int {
		left, _ := a.OwnFacts()
		right, _ := b.OwnFacts()
		return int(left.Date().Day - right.Date().Day)
	})
	return out, nil
}

// addHeat adds the heat index of the high, where the humidity was typed.
func (t *Tomorrow) addHeat(typed HandDay) {
	if !typed.HumidityPercent.Known {
		return
	}
	indexF, err := calc.HeatIndexF(calc.FahrenheitFromCelsius(typed.HighC), typed.HumidityPercent.Value)
	if err != nil {
		return // no humidity or no air temperature that the index is for
	}
	t.HeatIndexC = Optional{calc.CelsiusFromFahrenheit(indexF), true}
	t.HeatBand = calc.HeatBandOf(indexF)
}

func closedOnDay(all []Closed, day Day) []Closed {
	return filter(all, func(closed Closed) bool {
		closed.Works = nil
		return closed.Covers(0, day)
	})
}

// Figures lists what is known of the day.
func (t Tomorrow) Figures() Figures {
	f := Figures{{Key: "tomorrow.date", Value: float64(t.Day), Unit: Date, Basis: NoBasis}}
	add := func(name string, value Optional, unit Unit) {
		if value.Known {
			f = append(f, Figure{Key: "tomorrow." + name, Value: value.Value, Unit: unit, Basis: Extremes})
		}
	}
	known := t.Facts.HasExtremes
	add("high_c", Optional{t.Facts.HighC, known}, DegreesC)
	add("low_c", Optional{t.Facts.LowC, known}, DegreesC)
	add("frost_share", Optional{t.FrostShare, known && t.SpreadKnown}, Share)
	add("white_frost_share", Optional{t.WhiteFrostShare, known && t.SpreadKnown}, Share)
	add("hours_below_zero", Optional{t.HoursBelowZero, known}, Hours)
	add("heat_index_c", t.HeatIndexC, DegreesC)
	add("humidity_percent", t.HumidityPercent, Percent)
	add("rain_mm", t.RainMM, Millimetres)
	add("wind_ms", t.WindMS, MetresPerSecond)
	return f
}
