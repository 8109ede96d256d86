package planner

import "swardbook/calc"

// Interval is the time from one pass of a work to the next, as it really ran.
type Interval struct {
	From, To Day
	Days     int
	Sums     []IntervalSum
}

// IntervalSum is what an interval came to in one measure on one basis.
type IntervalSum struct {
	Counts Counts
	Unit   Unit
	Basis  Basis
	Sum    Sum
}

// PastIntervals returns how the work's intervals really ran, oldest first: the
// days from one pass to the next, and what they came to in degree days (by the
// work's own method, else from the mean above 0 °C) and in growth days of its
// surface, on both means. Lost passes are left out; a surface done in parts is
// done once all of them are, as of the first; a count starts the day after a
// pass and runs through the day of the next.
func PastIntervals(plan Plan, work Work) ([]Interval, error) {
	surface, ok := plan.Surface(work.Surface)
	if !ok {
		return nil, Problemf(NotFound, "the work's surface is not there")
	}
	counting := work.Settings.On(plan.AsOf).Counting
	if counting.Counts != ByDegreeDays {
		counting = Counting{Counts: ByDegreeDays, Method: calc.MethodMean}
	}
	var measures []Measure
	for _, c := range []Counting{counting, {Counts: ByGrowthDays}} {
		measure, err := NewMeasure(c, surface.Turf.On)
		if err != nil {
			return nil, err
		}
		measures = append(measures, measure)
	}
	kinds := []Counts{ByDegreeDays, ByGrowthDays}
	var intervals []Interval
	days := wholeDays(plan.Log, work.ID, surface)
	for i := 1; i < len(days); i++ {
		from, to := days[i-1], days[i]
		interval := Interval{From: from, To: to, Days: int(to - from)}
		for j, measure := range measures {
			for _, basis := range measure.Bases() {
				sum := counter{plan: plan, measure: measure, basis: basis}.past(from+1, to+1).sum
				interval.Sums = append(interval.Sums, IntervalSum{kinds[j], measure.Unit(), basis, sum})
			}
		}
		intervals = append(intervals, interval)
	}
	return intervals, nil
}

// wholeDays are the days as of which the whole surface was done, in order, each
// once.
func wholeDays(log []Entry, work WorkID, surface Surface) (days []Day) {
	var done []donePass
	for _, entry := range log {
		pass, has := entry.Of(work)
		if !has || entry.Result == Lost {
			continue
		}
		done = append(done, donePass{entry.Day, pass.Part, entry.Result})
		if since, _, ok := wholeSince(surface, done); ok && (len(days) == 0 || since > days[len(days)-1]) {
			days = append(days, since)
		}
	}
	return days
}

// MeanInterval is the mean of the newest intervals, at most the number asked
// for; ok is false when there is none.
func MeanInterval(intervals []Interval, most int) (days float64, sums []float64, ok bool) {
	if len(intervals) == 0 {
		return 0, nil, false
	}
	intervals = intervals[max(0, len(intervals)-most):]
	n := float64(len(intervals))
	sums = make([]float64, len(intervals[0].Sums))
	for _, interval := range intervals {
		days += float64(interval.Days) / n
		for i, sum := range interval.Sums {
			sums[i] += sum.Sum.Total / n
		}
	}
	return days, sums, true
}
