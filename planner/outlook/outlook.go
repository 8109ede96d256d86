// Package outlook makes the days ahead: days typed by hand while there are
// any, then past years of the site's own record, with their spread; without
// past years the mean of the last days stands for all of them, and no spread
// is known.
//
// It must not know works or targets, and must not look at any reading of the
// morning's own day or later.
package outlook

import (
	"swardbook/planner"
)

const (
	// Horizon is how many days ahead an outlook reaches: as far as last year's
	// record can go on from the same date.
	Horizon = 365
	// lookback is how far back the outlook fills days missing from the record.
	// A work not done for longer is overdue by any count.
	lookback = 400
	// recentDays is how many of the newest known days stand for the days ahead
	// when there are no past years.
	recentDays = 14
	// A past year is a member when at least four fifths of its days are known,
	// among the whole and among the first thirty.
	knownShare = 0.8
	nearDays   = 30
)

// The numbers of the engines, kept with what is issued; never given anew.
const (
	EnginePastYears  = 1
	EngineRecentDays = 2
)

// Simple is the first engine. The zero value is ready to use.
type Simple struct{}

var _ planner.Ahead = Simple{}

// Outlook returns the days ahead of asOf. Typed days stand in the path and in
// every member; after them each past year goes on from the same month and day
// as it went, and the path is their mean, day by day. Days a year lacks are
// taken from the mean of the others, days that all lack from the mean of the
// newest known days.
func (Simple) Outlook(record planner.Record, hand []planner.HandDay, asOf planner.Day) planner.Outlook {
	record = record.Before(asOf)
	out := planner.Outlook{AsOf: asOf, Start: firstGap(record, asOf), Engine: EnginePastYears}
	length := int(asOf-out.Start) + Horizon
	out.Members = pastYears(record, out.Start, asOf, length)
	out.Years = len(out.Members)
	recent := recentMean(record)
	if out.Years == 0 {
		out.Engine = EngineRecentDays
		out.Members = [][]planner.DayFacts{make([]planner.DayFacts, length)}
	}
	out.Path = make([]planner.DayFacts, length)
	for i := range out.Path {
		day := out.Start + planner.Day(i)
		out.Path[i] = expected(out.Members, i, recent)
		out.Path[i].Day = day
		for _, member := range out.Members {
			if member[i].Empty() {
				member[i] = out.Path[i]
			}
			member[i].Day = day
		}
	}
	out.Typed = putTyped(&out, hand)
	return out
}

// firstGap is the first day in reach that is missing from the record and that
// no straight line fills; asOf when there is none. Days before the record
// begins are missing too: a work may have been done before the station stood.
// Without any record there is nothing to fill them with.
func firstGap(record planner.Record, asOf planner.Day) planner.Day {
	if _, ok := record.First(); !ok {
		return asOf
	}
	for day := asOf - lookback; day < asOf; day++ {
		if facts, _ := record.Filled(day); facts.Empty() {
			return day
		}
	}
	return asOf
}

// pastYears returns, newest first, each past year that is known well enough,
// going on from the month and day of asOf; the days from start to asOf are those
// before it.
func pastYears(record planner.Record, start, asOf planner.Day, length int) [][]planner.DayFacts {
	first, ok := record.First()
	if !ok {
		return nil
	}
	var members [][]planner.DayFacts
	for ago := 1; ; ago++ {
		sameDay := asOf.InYear(asOf.Year() - ago)
		if sameDay+Horizon <= first {
			return members
		}
		member := make([]planner.DayFacts, length)
		for i := range member {
			member[i], _ = record.Filled(sameDay + start - asOf + planner.Day(i))
		}
		ahead := member[asOf-start:]
		if wellKnown(ahead) && wellKnown(ahead[:nearDays]) {
			members = append(members, member)
		}
	}
}

func wellKnown(days []planner.DayFacts) bool {
	known := 0
	for _, day := range days {
		if !day.Empty() {
			known++
		}
	}
	return float64(known) >= knownShare*float64(len(days))
}

// recentMean is the mean of the newest known days of the record; an empty day
// when there are none.
func recentMean(record planner.Record) planner.DayFacts {
	var known averaging
	for i := len(record.Facts) - 1; i >= 0 && known.days < recentDays; i-- {
		known.add(&record.Facts[i])
	}
	return known.mean()
}

// expected is the mean of what the members know of day i, else the recent mean.
func expected(members [][]planner.DayFacts, i int, recent planner.DayFacts) planner.DayFacts {
	var known averaging
	for _, member := range members {
		known.add(&member[i])
	}
	if known.days > 0 {
		return known.mean()
	}
	return recent
}

// averaging averages highs, lows and 24-hour means, each over the days that
// know it.
type averaging struct {
	high, low, hourly float64 // sums
	extremes, means   int     // days that have them
	days              int     // days that have one or the other
}

// add takes a day that stays where it is: there are thousands.
func (a *averaging) add(day *planner.DayFacts) {
	if day.HasExtremes {
		a.high += day.HighC
		a.low += day.LowC
		a.extremes++
	}
	if day.HasHourly {
		a.hourly += day.HourlyC
		a.means++
	}
	if day.HasExtremes || day.HasHourly {
		a.days++
	}
}

func (a *averaging) mean() planner.DayFacts {
	mean := planner.DayFacts{SlotsWanted: 24}
	if a.extremes > 0 {
		mean.HasExtremes, mean.ExtremesFrom = true, planner.FromAhead
		mean.HighC, mean.LowC = a.high/float64(a.extremes), a.low/float64(a.extremes)
	}
	if a.means > 0 {
		mean.HasHourly, mean.HourlyC = true, a.hourly/float64(a.means)
	}
	return mean
}

// putTyped puts the typed days into the path and every member, and counts them.
func putTyped(out *planner.Outlook, hand []planner.HandDay) (typed int) {
	for _, day := range hand {
		i := int(day.Day - out.Start)
		if day.Cleared || day.Day < out.AsOf || i >= len(out.Path) {
			continue
		}
		facts := day.Facts()
		out.Path[i] = facts
		for _, member := range out.Members {
			member[i] = facts
		}
		typed++
	}
	return typed
}
