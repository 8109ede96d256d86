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
// surface, on both means. Lost passes are left out, and so are the times over
// which the work rested; a surface done in parts is done once all of them are, as
// of the first; a count starts the day after a pass, or after it was watered in,
// and runs through the day of the next; of today nothing is known yet.
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
	done := wholePasses(plan.Log, work, surface)
	for i := 1; i < len(done); i++ {
		from, to := done[i-1], done[i]
		if work.onSince(to.done) > from.done {
			continue
		}
		interval := Interval{From: from.done, To: to.done, Days: int(to.done - from.done)}
		for j, measure := range measures {
			for _, basis := range measure.Bases() {
				sum := counter{plan: plan, measure: measure, basis: basis}.past(from.counts+1, to.done+1).sum
				if to.done >= plan.AsOf {
					sum.Days, sum.Missing = sum.Days+1, sum.Missing+1 // the day is not over
				}
				interval.Sums = append(interval.Sums, IntervalSum{kinds[j], measure.Unit(), basis, sum})
			}
		}
		intervals = append(intervals, interval)
	}
	return intervals, nil
}

// wholePass is the day on which the whole surface was done, as of the first of
// its parts, and the day after which it counts.
type wholePass struct{ done, counts Day }

// wholePasses are the rounds that were ended, in order, one a day.
func wholePasses(log []Entry, work Work, surface Surface) (whole []wholePass) {
	var done, counts []donePass
	for _, entry := range log {
		pass, has := entry.Of(work.ID)
		if !has || entry.Result == Lost {
			continue
		}
		done = append(done, donePass{entry.Day, pass.Part, entry.Result})
		counts = append(counts, donePass{countsFrom(work.Settings.On(entry.Day), entry), pass.Part, entry.Result})
		onDay, ok := roundsOf(surface, done)
		if !ok || len(onDay.Behind) > 0 || len(whole) > 0 && onDay.Since <= whole[len(whole)-1].done {
			continue
		}
		from, _ := roundsOf(surface, counts)
		whole = append(whole, wholePass{onDay.Since, from.Since})
	}
	return whole
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
