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
	Resting    Status = "resting"     // out of its season, or the lead has it rest
	Full       Status = "full"        // the most of the season is reached
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
	// Behind names the parts of the surface that were not done when others last
	// were: the old count stands for them.
	Behind []string
	// Doubted is the count as it stands without the newest pass, on the own
	// mean, when that pass is doubtful.
	Doubted *DueFacts
	Season  SeasonUse
	// Resumes is the first day of the next season of a resting work.
	Resumes Passage
	// RestsThen says that the due date lies outside the work's season.
	RestsThen bool
	Closed    *ClosedNote // of the date told; nil when it is open
	// AskForgotten is set on the one morning on which the work turns overdue:
	// it was perhaps done and not logged.
	AskForgotten bool
	// Rain is what fell on the newest pass within its rain-free hours and is
	// still to be asked about; nil when there is nothing to ask.
	Rain *RainAfter
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
	// GapFrom is the day from which the least days run: the newest pass over what
	// is to be done next, by the work itself; DayMin when there is none.
	GapFrom Day
	// Held is the first day that the least days between two passes allow, when
	// it is later than the middle date; else unknown.
	Held Passage
	// filled is the total through yesterday with missing days taken from the
	// path, and last its last day: a work whose station is dead is overdue all
	// the same.
	filled, last float64
}

// earliest is the first day that the least days between two passes allow;
// DayMin without any.
func (d DueFacts) earliest(limits Limits) Day {
	if limits.LeastDays == 0 || d.GapFrom == DayMin {
		return DayMin
	}
	return d.GapFrom + Day(limits.LeastDays)
}

// Date is the date that is told: the middle one, or the later day to which the
// least days between two passes hold it.
func (d DueFacts) Date() Passage {
	if d.Held.Known {
		return d.Held
	}
	return d.Middle
}

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
	state.Season = p.seasonUse(work, state.Settings)
	if !state.Settings.Season.On(p.AsOf) {
		state.Status, state.Resumes = Resting, state.Settings.Season.next(p.AsOf)
		return state, nil
	}
	done := p.passesOf(work)
	passes, started := roundsOf(surface, done)
	if state.Settings.Counts == ByNitrogen {
		passes, started = p.feedRounds(surface, passes)
	}
	if !started {
		return state, nil
	}
	state.LastDone, state.Behind = passes.Since, passes.Behind
	state.Rain = p.rainOn(state)
	for _, basis := range measure.Bases() {
		state.Bases = append(state.Bases, p.dueOn(state, measure, basis, passes))
	}
	if n := len(done); n > 0 && done[n-1].Result == Doubtful && state.Settings.Counts != ByNitrogen {
		if before, ok := roundsOf(surface, done[:n-1]); ok {
			facts := p.dueOn(state, measure, state.Own, before)
			state.Doubted = &facts
		}
	}
	state.Status = p.status(state)
	p.flagDate(&state)
	return state, nil
}

// feedRounds is where a work stands that counts by nitrogen: since the newest
// feed of the surface, by whichever work; the least days run from its own.
func (p Plan) feedRounds(surface Surface, own rounds) (rounds, bool) {
	feeds := p.feeds(surface, p.balanceSince(surface))
	if len(feeds) == 0 {
		return rounds{}, false
	}
	return rounds{Since: feeds[len(feeds)-1].Day, Last: own.Last}, true
}

// dueOn counts the work on a basis from the day after its passes and says when
// it falls due.
func (p Plan) dueOn(state WorkState, measure Measure, basis Basis, passes rounds) DueFacts {
	c := counter{plan: p, measure: measure, basis: basis}
	target := state.Settings.Target
	if state.Settings.Counts == ByNitrogen {
		feeds := p.feeds(state.Surface, p.balanceSince(state.Surface))
		c.less = releasedOn(feeds)
		target = c.leftAfterLast(feeds) - state.Settings.Target
	}
	facts := c.due(passes.Since+1, target)
	facts.GapFrom = passes.Last
	if earliest := facts.earliest(state.Settings.Limits); facts.Middle.Known && earliest > facts.Middle.Day {
		facts.Held = Passage{earliest, true}
	}
	return facts
}

// flagDate says what is in the way of the date told.
func (p Plan) flagDate(state *WorkState) {
	if state.Status != Resting && state.Season.full(state.Settings.Limits) != "" {
		state.Status = Full
	}
	facts, ok := state.OwnFacts()
	date := facts.Date()
	if !ok || !date.Known {
		return
	}
	told := Passage{max(date.Day, p.AsOf), true}
	state.RestsThen = !state.Settings.Season.On(told.Day)
	state.Closed = p.closedNote(state.Work.ID, told.Day, max(p.AsOf, facts.earliest(state.Settings.Limits)))
	if state.Status == Overdue {
		yesterday := p
		yesterday.AsOf--
		before := facts
		before.filled -= facts.last
		state.AskForgotten = date.Day > state.LastDone && !yesterday.overdue(*state, before)
	}
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

// due counts from the day since and finds the dates.
func (c counter) due(since Day, target float64) DueFacts {
	past := c.past(since, c.plan.AsOf)
	outlook := c.plan.Outlook
	facts := DueFacts{
		Basis: c.basis, Since: since, Total: past.sum, Target: target,
		Path: c.passage(outlook.Path, past, target), SpreadKnown: outlook.SpreadKnown(),
	}
	for day := since; day < c.plan.AsOf; day++ {
		facts.last = c.along(outlook.Path, past, day)
		facts.filled += facts.last
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
	case p.overdue(state, facts):
		return Overdue
	default:
		return Due
	}
}

// overdue reports whether the total through the day before the plan's morning
// is past the work's latest, and at least a day has gone by since the date.
func (p Plan) overdue(state WorkState, facts DueFacts) bool {
	date := facts.Date()
	return date.Known && p.AsOf-date.Day > 1 && facts.filled > state.latest(facts.Target)
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
