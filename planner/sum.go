package planner

import "swardbook/calc"

// Sum is a running total over whole days and what it rests on.
type Sum struct {
	Total   float64
	Days    int // days summed
	StandIn int // days on the other mean, or on high and low instead of readings
	Line    int // days on a straight line between their neighbours
	Missing int // days left out: the total is "at least"
	Other   int // days on which another station stood in
}

// AllStandIn reports whether no day of the sum stands on its own basis.
func (s Sum) AllStandIn() bool { return s.StandIn > 0 && s.StandIn+s.Line+s.Missing == s.Days }

// longestLine is the longest run of missing days that a straight line between
// their neighbours fills in a sum (common practice; older WMO completeness
// rules allow no more than three consecutive days).
const longestLine = 3

// Filled returns the day's facts; a day of which nothing is known, in a run of
// at most three such days, comes as a straight line between its neighbours.
func (r Record) Filled(day Day) (facts DayFacts, line bool) {
	facts = r.At(day)
	if !facts.Empty() {
		return facts, false
	}
	before, after := day-1, day+1
	for r.At(before).Empty() && day-before < longestLine+1 {
		before--
	}
	for r.At(after).Empty() && after-before <= longestLine+1 {
		after++
	}
	left, right := r.At(before), r.At(after)
	if left.Empty() || right.Empty() || after-before > longestLine+1 {
		return facts, false
	}
	return between(left, right, day)
}

// between is the straight line from left to right at the day; only what both
// ends have is known.
func between(left, right DayFacts, day Day) (DayFacts, bool) {
	share := float64(day-left.Day) / float64(right.Day-left.Day)
	at := func(a, b float64) float64 { return a + (b-a)*share }
	facts := DayFacts{Day: day, SlotsWanted: left.SlotsWanted}
	if left.HasExtremes && right.HasExtremes {
		facts.HasExtremes, facts.ExtremesFrom = true, FromLine
		facts.HighC, facts.LowC = at(left.HighC, right.HighC), at(left.LowC, right.LowC)
	}
	if left.HasHourly && right.HasHourly {
		facts.HasHourly, facts.HourlyC = true, at(left.HourlyC, right.HourlyC)
	}
	return facts, !facts.Empty()
}

// counter counts one measure on one basis over a plan's days, past and ahead.
type counter struct {
	plan    Plan
	measure Measure
	basis   Basis
	// less, when not nil, is taken off each day's units: the slow nitrogen that
	// came on it.
	less func(Day) float64
}

// off is what is taken off the day's units.
func (c counter) off(day Day) float64 {
	if c.less == nil {
		return 0
	}
	return c.less(day)
}

// pastUnits are the units of the days from First to the day before the plan's
// morning, and what they rest on.
type pastUnits struct {
	first Day
	units []float64
	known []bool
	sum   Sum
}

// past counts the days from first to the day before end, or to the day before
// the plan's morning where that is earlier.
func (c counter) past(first, end Day) pastUnits {
	past := pastUnits{first: first}
	for day := first; day < min(end, c.plan.AsOf); day++ {
		facts, line := c.plan.Record.Filled(day)
		units, standing := c.measure.Units(facts, c.next(day), c.basis)
		units -= c.off(day)
		past.units = append(past.units, units)
		past.known = append(past.known, standing != Nothing)
		past.sum.add(units, standing, line)
		if facts.Other != "" && c.basis != NoBasis {
			past.sum.Other++
		}
	}
	return past
}

func (s *Sum) add(units float64, standing Standing, line bool) {
	s.Days++
	s.Total += units
	switch {
	case standing == Nothing:
		s.Missing++
	case line:
		s.Line++
	case standing == StandIn:
		s.StandIn++
	}
}

// next is the day after a past day: from the record, or the first day ahead.
func (c counter) next(day Day) DayFacts {
	if day+1 >= c.plan.AsOf {
		return c.plan.Outlook.at(c.plan.Outlook.Path, day+1)
	}
	facts, _ := c.plan.Record.Filled(day + 1)
	return facts
}

// Passage is the first day on which a running total reaches its target; Known
// is false when it does not within the days ahead.
type Passage struct {
	Day   Day
	Known bool
}

// passage finds the first day whose running total, from past.first on, reaches
// the target, along the path or a member; missing past days are taken from it
// too. A target of 0 or less was reached the day before the count began.
func (c counter) passage(days []DayFacts, past pastUnits, target float64) Passage {
	n, reached := calc.FirstPassage(0, func(yield func(float64) bool) {
		for day := past.first; day < c.plan.Outlook.end() && yield(c.along(days, past, day)); day++ {
		}
	}, target)
	if !reached {
		return Passage{}
	}
	return Passage{past.first - 1 + Day(n), true}
}

func (c counter) along(days []DayFacts, past pastUnits, day Day) float64 {
	if i := int(day - past.first); i < len(past.units) && past.known[i] {
		return past.units[i]
	}
	outlook := c.plan.Outlook
	units, _ := c.measure.Units(outlook.at(days, day), outlook.at(days, day+1), c.basis)
	return units - c.off(day)
}
