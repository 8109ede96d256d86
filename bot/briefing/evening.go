package briefing

import (
	"fmt"
	"strings"

	"swardbook/bot/reply"
	"swardbook/calc"
	"swardbook/planner"
)

// Evening composes the evening's post about the next day: frost and heat for
// the crew, rain and wind if known, what is due. It never says that a day is
// good for spraying, nor for anything else.
func Evening(t planner.Tomorrow, plan planner.Plan) reply.Reply {
	units := plan.Site.Units
	r := reply.Of(reply.Heading("Tomorrow at " + plan.Site.Name + ", " + t.Day.Short()))
	r.Figures = t.Figures()
	for _, closed := range t.Closed {
		r.Add(reply.Text("Closed: " + closed.Name))
	}
	if !t.Facts.HasExtremes {
		r.Add(reply.Text("Nothing is known of tomorrow's weather: type it with /weather ahead."))
	} else {
		fields := reply.Fields{
			{Name: "high", Value: Amount(t.Facts.HighC, planner.DegreesC, units) + " " + units.Degree()},
			{Name: "low", Value: Amount(t.Facts.LowC, planner.DegreesC, units) + " " + units.Degree()},
		}
		fields = append(fields, known("humidity", t.HumidityPercent, "%")...)
		fields = append(fields, known("rain", t.RainMM, "mm")...)
		fields = append(fields, known("wind", t.WindMS, "m/s")...)
		r.Add(fields)
		if frost := frostText(t); frost != "" {
			r.Add(reply.Text(frost))
		}
		if heat := heatText(t, units); heat != "" {
			r.Add(reply.Text(heat))
		}
	}
	if len(t.Works) == 0 {
		r.Add(reply.Text("Nothing falls due."))
	}
	for _, state := range t.Works {
		lines := append([]string{Title(state) + ": " + When(state, plan.AsOf)}, InTheWay(state)...)
		r.Add(reply.Text(strings.Join(lines, "\n")))
	}
	if len(t.Works) > 0 {
		r.Add(reply.Text(Cautions(t.Works)))
	}
	r.Add(reply.Text(AheadNote(plan.Outlook)))
	return r
}

func known(name string, value planner.Optional, unit string) reply.Fields {
	if !value.Known {
		return nil
	}
	return reply.Fields{{Name: name, Value: Plain(value.Value) + " " + unit}}
}

// frostText is the risk of frost and the hours below zero; "" when none is
// thought of.
func frostText(t planner.Tomorrow) string {
	switch {
	case t.Facts.LowC >= planner.WhiteFrostC && t.WhiteFrostShare == 0:
		return ""
	case t.Facts.LowC < 0:
		return fmt.Sprintf("Frost: about %s below 0 °C%s. Keep traffic off frozen turf.", hours(t.HoursBelowZero), chance(t, t.FrostShare))
	}
	return fmt.Sprintf("Frost possible%s: grass can be white while the air is a few degrees above 0 °C.", chance(t, t.WhiteFrostShare))
}

// chance tells a share of the past years in words; "" for a day typed by hand
// and where no spread is known.
func chance(t planner.Tomorrow, share float64) string {
	if !t.SpreadKnown || t.Facts.ExtremesFrom == planner.FromHand {
		return ""
	}
	years := min(t.Years, 10)
	return fmt.Sprintf(" (%.0f of %d years)", float64(years)*share, years)
}

func hours(h float64) string {
	if h < 1.5 {
		return "an hour"
	}
	return fmt.Sprintf("%.0f hours", h)
}

// heatText is the heat index with its class, and what goes with it.
func heatText(t planner.Tomorrow, units planner.Units) string {
	if !t.HeatIndexC.Known || t.HeatBand == calc.HeatNone {
		return ""
	}
	return fmt.Sprintf("Heat index up to %s %s in shade: %s. Full sun adds up to %s %s. Water, rest, shade; new crew build up over days. Your employer's and the local code's heat rules hold.",
		Amount(t.HeatIndexC.Value, planner.DegreesC, units), units.Degree(), t.HeatBand,
		Amount(calc.CelsiusDegreesFromFahrenheit(fullSunF), planner.DifferenceC, units), units.Degree())
}

// fullSunF is what full sun adds to the heat index at most (US National Weather
// Service, heat index page).
const fullSunF = 15
