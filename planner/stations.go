package planner

// StationFacts are the facts of one station of a site, contiguous and in order;
// nil when it has none.
type StationFacts struct {
	Name  string
	Facts []DayFacts
}

// sharedDays is how many days another station must share with the first before
// their mean difference is taken off it: about a month, so that it is more than
// the weather of a few days (common practice).
const sharedDays = 30

// JoinStations is the record of a site with several stations, the first by rank
// first: each day is the first station's; one of which that knows nothing is
// that of the next station that knows something, marked with its name (Other).
//
// A day that stands in is shifted by the mean difference between the two
// stations,
//
//	shift = mean over shared days of (first − other)
//
// for highs, for lows and for 24-hour means each, over all days before it on
// which both know the value, once there are 30 for everything that it has
// (OtherDays says how many); before that it comes as it was measured. Days after
// it never count, so that a past morning is recomputed as it was. Facts are
// contiguous from the first to the last day of any station.
func JoinStations(ranked []StationFacts) []DayFacts {
	first, last, some := reach(ranked)
	if !some {
		return nil
	}
	if len(ranked) == 1 {
		return ranked[0].Facts
	}
	joined := make([]DayFacts, 0, last-first+1)
	shifts := make([]shift, len(ranked))
	for day := first; day <= last; day++ {
		own := ranked[0].at(day)
		facts := own
		for i := 1; i < len(ranked); i++ {
			other := ranked[i].at(day)
			if facts.Empty() && !other.Empty() {
				facts = shifts[i].applied(other)
				facts.Other = ranked[i].Name
			}
			shifts[i].add(own, other)
		}
		joined = append(joined, facts)
	}
	return joined
}

// reach returns the first and the last day of any station.
func reach(ranked []StationFacts) (first, last Day, some bool) {
	for _, station := range ranked {
		if len(station.Facts) == 0 {
			continue
		}
		from, to := station.Facts[0].Day, station.Facts[len(station.Facts)-1].Day
		if !some {
			first, last, some = from, to, true
		}
		first, last = min(first, from), max(last, to)
	}
	return first, last, some
}

func (s StationFacts) at(day Day) DayFacts { return Record{Facts: s.Facts}.At(day) }

// shift is what two stations differ by so far.
type shift struct{ high, low, hourly difference }

// difference is a running mean of first less other.
type difference struct {
	sumC float64
	days int
}

func (d *difference) add(firstC, otherC float64) {
	d.sumC += firstC - otherC
	d.days++
}

func (d difference) meanC() float64 { return d.sumC / float64(d.days) }

// add takes a day that both stations know something of.
func (s *shift) add(first, other DayFacts) {
	if first.HasExtremes && other.HasExtremes {
		s.high.add(first.HighC, other.HighC)
		s.low.add(first.LowC, other.LowC)
	}
	if first.HasHourly && other.HasHourly {
		s.hourly.add(first.HourlyC, other.HourlyC)
	}
}

// applied returns the other station's day with the differences taken off, or as
// it is while one of them stands on too few days.
func (s shift) applied(facts DayFacts) DayFacts {
	days := 0
	if facts.HasExtremes {
		days = s.high.days
	}
	if facts.HasHourly && (!facts.HasExtremes || s.hourly.days < days) {
		days = s.hourly.days
	}
	if days < sharedDays {
		return facts
	}
	facts.OtherDays = days
	if facts.HasExtremes {
		facts.HighC += s.high.meanC()
		facts.LowC += s.low.meanC()
		if facts.HighC < facts.LowC { // a day of next to no range: keep its middle
			middleC := (facts.HighC + facts.LowC) / 2
			facts.HighC, facts.LowC = middleC, middleC
		}
	}
	if !facts.HasHourly {
		return facts
	}
	byC := s.hourly.meanC()
	facts.HourlyC += byC
	facts.HoursC = raised(facts.HoursC, byC)
	return facts
}
