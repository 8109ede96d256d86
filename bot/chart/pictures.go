package chart

import (
	"fmt"
	"image/color"
	"math"
	"strconv"

	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"

	"swardbook/bot/reply"
	"swardbook/planner"
)

// own is the work's count on its own mean; ok is false when the data lack the
// work.
func own(data planner.SheetData, work planner.WorkID) (count planner.SheetCount, ok bool) {
	for _, one := range data.Works {
		for _, count := range one.Counts {
			if one.State.Work.ID == work && count.Due.Basis == one.State.Own {
				return count, true
			}
		}
	}
	return planner.SheetCount{}, false
}

// Running draws a work's running total with its band to the target as it
// stands, and as it would be. ok is false when the work is not started in
// either.
func Running(state planner.WorkState, asOf planner.Day, units planner.Units, stands, whatIf planner.SheetData) (picture reply.Picture, ok bool, err error) {
	before, hasBefore := own(stands, state.Work.ID)
	after, hasAfter := own(whatIf, state.Work.ID)
	if !hasBefore || !hasAfter {
		return reply.Picture{}, false, nil
	}
	show := func(value float64) float64 { shown, _ := units.Show(value, state.Unit); return shown }
	unit := units.Counted(state.Unit, state.Settings.Counting)
	// From the day of the pass, on which the count stands at nothing.
	from, to := min(before.Due.Since, after.Due.Since)-1, asOf+7
	for _, due := range []planner.DueFacts{before.Due, after.Due} {
		for _, date := range []planner.Passage{due.Late, due.Path} {
			if date.Known {
				to = max(to, date.Day+4)
			}
		}
	}
	name := state.Surface.Name + " " + state.Work.Name
	c := newCanvas(name, unit, true)
	c.Y.Min = 0
	curve := func(data planner.SheetData, count planner.SheetCount) plotter.XYs {
		return points(data.Days[0].Facts.Day, from, to, count.Running, show)
	}
	if before.Due.SpreadKnown {
		c.band("likely", points(asOf, from, to, before.Curves[2], show), points(asOf, from, to, before.Curves[0], show))
	}
	c.line("as it stands", curve(stands, before), dark, 2.4, nil)
	c.line("what if", curve(whatIf, after), light, 2.4, dashes)
	c.line("target", level(from, to, show(before.Due.Target)), black, 1.2, dots)
	if after.Due.Target != before.Due.Target {
		c.line("target, what if", level(from, to, show(after.Due.Target)), light, 1.4, dotDash)
	}
	if yesterday := asOf - 1; yesterday > from {
		c.line("yesterday", plotter.XYs{{X: float64(yesterday), Y: c.Y.Min}, {X: float64(yesterday), Y: c.Y.Max}}, faint, 1, nil)
	}
	alt := fmt.Sprintf("%s: running total in %s from %s to %s. As it stands the target falls on %s, in the what-if on %s.",
		name, unit, from.Short(), to.Short(), told(before.Due), told(after.Due))
	picture, err = c.picture("running-total.png", alt)
	return picture, err == nil, err
}

func told(due planner.DueFacts) string {
	if date := due.Date(); date.Known {
		return date.Day.Short()
	}
	return "no date in the days ahead"
}

// points are the values from the first day on, those of the days from through
// to.
func points(first, from, to planner.Day, values []float64, show func(float64) float64) plotter.XYs {
	var out plotter.XYs
	for i, value := range values {
		if day := first + planner.Day(i); day >= from && day <= to {
			out = append(out, plotter.XY{X: float64(day), Y: show(value)})
		}
	}
	return out
}

// Season draws a season total beside those of past years, through the same day
// of the year. ok is false when nothing of the season has passed.
func Season(plan planner.Plan, season planner.Season) (picture reply.Picture, ok bool, err error) {
	units, state := plan.Site.Units, season.State
	show := func(value float64) float64 { shown, _ := units.Show(value, state.Unit); return shown }
	unit := units.Counted(state.Unit, state.Settings.Counting)
	c := newCanvas(state.Total.Name+": season so far", unit, true)
	draw := func(name string, start, end planner.Day, ink color.Color, thick float64, dash []vg.Length) (float64, error) {
		curve, err := season.Curve(plan, start, end)
		if err != nil || len(curve) == 0 {
			return 0, err
		}
		c.line(name, points(state.Start, state.Start, planner.DayMax, curve, show), ink, thick, dash)
		return show(curve[len(curve)-1]), nil
	}
	lowest, highest := math.Inf(1), math.Inf(-1)
	for i := len(season.Past) - 1; i >= 0; i-- { // the newest on top
		past := season.Past[i]
		ink, thick, dash, name := color.Color(faint), 1.2, []vg.Length(nil), ""
		switch i {
		case 0:
			ink, thick, dash, name = light, 1.8, dashes, strconv.Itoa(past.Start.Year())
		case 1:
			name = "older years"
		}
		last, err := draw(name, past.Start, past.End, ink, thick, dash)
		if err != nil {
			return reply.Picture{}, false, err
		}
		lowest, highest = min(lowest, last), max(highest, last)
	}
	year := strconv.Itoa(state.Start.Year())
	last, err := draw(year, state.Start, plan.AsOf, dark, 2.8, nil)
	if err != nil || plan.AsOf <= state.Start {
		return reply.Picture{}, false, err
	}
	alt := fmt.Sprintf("%s, running total in %s: %s stands at %.0f.", state.Total.Name, unit, year, last)
	if len(season.Past) > 0 {
		alt += fmt.Sprintf(" Past years stood at %.0f to %.0f by the same date.", lowest, highest)
	}
	picture, err = c.picture("season.png", alt)
	return picture, err == nil, err
}

// thickness keeps many days apart.
func thickness(days int) float64 {
	if days > 120 {
		return 0.8
	}
	return 1.6
}

// Means draws the high/low mean less the 24-hour mean of each day that has
// both. ok is false when no day has.
func Means(record planner.Record, means planner.Means, units planner.Units) (picture reply.Picture, ok bool, err error) {
	if means.Days == 0 {
		return reply.Picture{}, false, nil
	}
	var line plotter.XYs
	for day := means.From; day <= means.To; day++ {
		facts := record.At(day)
		midrangeC, hasMidrange := facts.Mean(planner.Midrange)
		hourlyC, hasHourly := facts.Mean(planner.Hourly)
		if hasMidrange && hasHourly {
			line = append(line, plotter.XY{X: float64(day), Y: units.Difference(midrangeC - hourlyC)})
		}
	}
	c := newCanvas("High/low mean less 24-hour mean", units.Degree(), true)
	first, last := planner.Day(line[0].X), planner.Day(line[len(line)-1].X)
	c.line("each day", line, middle, thickness(len(line)), nil)
	c.line("on average", level(first, last, units.Difference(means.DifferenceC)), dark, 2.4, dashes)
	c.line("", level(first, last, 0), black, 0.8, nil)
	days := fmt.Sprintf("%d days", means.Days)
	if means.Days == 1 {
		days = "1 day"
	}
	alt := fmt.Sprintf("High/low mean less 24-hour mean of %s, %s to %s: %+.2f %s on average, the largest %+.2f on %s.", days, first, last,
		units.Difference(means.DifferenceC), units.Degree(), units.Difference(means.LargestC), means.LargestDay.Short())
	picture, err = c.picture("means.png", alt)
	return picture, err == nil, err
}
