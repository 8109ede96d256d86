package planner

import (
	"fmt"
	"slices"

	"swardbook/calc"
)

// Status says where a work stands on the plan's morning.
type Status string

// The states of a work.
const (
	NotStarted Status = "not started" // no entry yet: never due, never overdue
	NotYet     Status = "not yet"     // the count is running
	DueToday   Status = "today"       // the target is expected to be reached today
	Due        Status = "due"         // the target was reached by yesterday
	Overdue    Status = "overdue"     // the total is past the work's latest
	NoDate     Status = "no date"     // the target is not reached in the days ahead
)

// WorkState is where one work stands.
type WorkState struct {
	Work     Work
	Surface  Surface
	Settings WorkSettings
	Unit     Unit
	Status   Status     // on the work's own mean
	LastDone Day        // the newest pass that the count stands on; meaningless when NotStarted
	Own      Basis      // the basis of the work's own mean
	Bases    []DueFacts // one per basis of the measure; empty when NotStarted
}

// DueFacts is the count of a work and its due date on one basis.
type DueFacts struct {
	Basis Basis
	Since Day // first day counted
	Total Sum // from Since to yesterday
	// Target is the total at which the work falls due. For a work that counts
	// by nitrogen it is what was there after the newest feed less the reserve.
	Target float64
	Path   Passage // along the path
	// Early, Middle and Late are the 10th, 50th and 90th percentile of the
	// members' dates; with one member all are its date.
	Early, Middle, Late Passage
	SpreadKnown         bool
}

// Date is the date that is told: the middle one.
func (d DueFacts) Date() Passage { return d.Middle }

// On returns the state's figures on the basis.
func (w WorkState) On(basis Basis) (DueFacts, bool) {
	for _, facts := range w.Bases {
		if facts.Basis == basis {
			return facts, true
		}
	}
	return DueFacts{}, false
}

// OwnFacts returns the figures on the work's own mean; ok is false when the
// work is not started.
func (w WorkState) OwnFacts() (facts DueFacts, ok bool) { return w.On(w.Own) }

// OtherFacts returns the figures on the other mean; ok is false when there is
// no other.
func (w WorkState) OtherFacts() (facts DueFacts, ok bool) {
	if w.Own.Other() == w.Own {
		return DueFacts{}, false
	}
	return w.On(w.Own.Other())
}

// evaluateWork counts the work on all its bases and says when it falls due.
func (p Plan) evaluateWork(work Work) (WorkState, error) {
	surface, ok := p.Surface(work.Surface)
	if !ok {
		return WorkState{}, fmt.Errorf("work %d stands on surface %d, which the plan lacks", work.ID, work.Surface)
	}
	state := WorkState{Work: work, Surface: surface, Settings: work.Settings.On(p.AsOf), Status: NotStarted}
	measure, err := NewMeasure(state.Settings.Counting, surface.Turf.On)
	if err != nil {
		return WorkState{}, fmt.Errorf("work %s on %s: %w", work.Name, surface.Name, err)
	}
	state.Unit = measure.Unit()
	state.Own = ownBasis(measure, state.Settings.Basis, p.Record)
	last, started := p.countStart(state)
	if !started {
		return state, nil
	}
	state.LastDone = last
	for _, basis := range measure.Bases() {
		c := counter{p, measure, basis}
		state.Bases = append(state.Bases, c.due(last+1, p.targetOn(state, c)))
	}
	state.Status = p.status(state)
	return state, nil
}

// ownBasis is the basis a work is told on: its only one, the lead's choice, or
// the 24-hour mean where the record has hourly readings.
func ownBasis(measure Measure, chosen Basis, record Record) Basis {
	bases := measure.Bases()
	switch {
	case len(bases) == 1:
		return bases[0]
	case slices.Contains(bases, chosen):
		return chosen
	case record.HasHourly():
		return Hourly
	default:
		return Midrange
	}
}

// countStart is the day of the pass that the count stands on.
func (p Plan) countStart(state WorkState) (Day, bool) {
	if state.Settings.Counts == ByNitrogen {
		feeds := p.feeds(state.Surface.ID)
		if len(feeds) == 0 {
			return 0, false
		}
		return feeds[len(feeds)-1].Day, true
	}
	last, ok := p.LastDone(state.Work.ID)
	return last.Day, ok
}

func (p Plan) targetOn(state WorkState, c counter) float64 {
	if state.Settings.Counts != ByNitrogen {
		return state.Settings.Target
	}
	return p.leftAfterLastFeed(state.Surface.ID, c) - state.Settings.Target
}

// due counts from the day since and finds the dates.
func (c counter) due(since Day, target float64) DueFacts {
	past := c.past(since, c.plan.AsOf)
	outlook := c.plan.Outlook
	facts := DueFacts{
		Basis: c.basis, Since: since, Total: past.sum, Target: target,
		Path: c.passage(outlook.Path, past, target), SpreadKnown: outlook.SpreadKnown(),
	}
	dates := make([]Passage, len(outlook.Members))
	for i, member := range outlook.Members {
		dates[i] = c.passage(member, past, target)
	}
	slices.SortFunc(dates, earlier)
	facts.Early, facts.Middle, facts.Late = atShare(dates, 0.1), atShare(dates, 0.5), atShare(dates, 0.9)
	return facts
}

// earlier orders passages by day; one that never comes is last.
func earlier(a, b Passage) int {
	switch {
	case a.Known && b.Known:
		return int(a.Day - b.Day)
	case a.Known:
		return -1
	case b.Known:
		return 1
	}
	return 0
}

// atShare is the order statistic of sorted passages; none when there are none.
func atShare(sorted []Passage, share float64) Passage {
	rank, err := calc.Rank(share, len(sorted))
	if err != nil {
		return Passage{}
	}
	return sorted[rank-1]
}

// status places the work on its own mean. It is due once the total through
// yesterday has reached the target, and overdue once that total is past the
// latest and a day has gone by.
func (p Plan) status(state WorkState) Status {
	facts, ok := state.OwnFacts()
	if !ok || !facts.Date().Known {
		return NoDate
	}
	switch date := facts.Date().Day; {
	case date > p.AsOf:
		return NotYet
	case date == p.AsOf:
		return DueToday
	case p.AsOf-date > 1 && facts.Total.Total > state.latest(facts.Target):
		return Overdue
	default:
		return Due
	}
}

// latestShare is how far past its target a work may run before it is overdue
// when the lead has not said (common practice): a tenth.
const latestShare = 0.1

func (w WorkState) latest(target float64) float64 {
	if w.Settings.Latest > 0 {
		return w.Settings.Latest
	}
	return target * (1 + latestShare)
}
