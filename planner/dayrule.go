package planner

import (
	"fmt"
	"time"

	"swardbook/calc"
)

// Boundary says where a site's day begins.
type Boundary string

// The boundaries of a day.
const (
	// StandardMidnight runs midnight to midnight in the site's standard time
	// all year, so that every day has 24 hours.
	StandardMidnight Boundary = "standard"
	// CivilMidnight follows the clock on the wall: 23, 24 or 25 hours.
	CivilMidnight Boundary = "civil"
	// FixedHour ends a day at a fixed standard-time hour, for stations read by
	// hand: with hour 9, the day named 4 June is the 24 hours to 09:00 on 4
	// June.
	FixedHour Boundary = "hour"
)

// DayRule says which instants belong to a day and where its hourly slots are.
type DayRule struct {
	// OffsetSeconds is the site's standard time, east of UTC positive.
	OffsetSeconds int      `json:"offset_seconds"`
	Boundary      Boundary `json:"boundary"`
	ClosingHour   int      `json:"closing_hour,omitempty"` // FixedHour only, 1 to 23
	// FirstSlot is 0 for slots 00 to 23 and 1 for slots 01 to 24.
	FirstSlot int `json:"first_slot,omitempty"`
}

// StandardOffset is the site's standard time in the year: the smaller of the
// zone's offsets on 1 January and 1 July, in seconds east of UTC. It does not
// ask whether it "is summer time": some zones (Europe/Dublin) call winter the
// exception.
func StandardOffset(zone *time.Location, year int) int {
	_, january := time.Date(year, time.January, 1, 12, 0, 0, 0, zone).Zone()
	_, july := time.Date(year, time.July, 1, 12, 0, 0, 0, zone).Zone()
	return min(january, july)
}

// Check refuses a rule that no day can be cut by.
func (r DayRule) Check() error {
	switch {
	case r.OffsetSeconds < -14*3600 || r.OffsetSeconds > 15*3600:
		return Problemf(Invalid, "an offset of %d seconds from UTC is not on earth", r.OffsetSeconds)
	case r.FirstSlot != 0 && r.FirstSlot != 1:
		return Problemf(Invalid, "a day's first slot is 0 or 1, not %d", r.FirstSlot)
	case r.Boundary == FixedHour && (r.ClosingHour < 1 || r.ClosingHour > 23):
		return Problemf(Invalid, "a day cannot end at hour %d", r.ClosingHour).WithHint("Give an hour from 1 to 23.")
	case r.Boundary != StandardMidnight && r.Boundary != CivilMidnight && r.Boundary != FixedHour:
		return Problemf(Invalid, "%q is not a day boundary", r.Boundary).WithHint("Use standard, civil or hour.")
	}
	return nil
}

// Window is the stretch of time that a day is.
type Window struct {
	Day        Day
	Start, End int64 // UTC seconds; Start belongs to the day, End to the next
	FirstSlot  int   // 0: slots stand at Start, Start+1 h …; 1: they end at End
	Offset     int64 // the site's standard time in seconds east of UTC, to name a reading's time
}

// Window returns the day's stretch of time. The zone is read for
// CivilMidnight only.
func (r DayRule) Window(zone *time.Location, day Day) Window {
	w := Window{Day: day, FirstSlot: r.FirstSlot, Offset: int64(r.OffsetSeconds)}
	if r.Boundary == CivilMidnight {
		w.Start, w.End = civilMidnight(zone, day), civilMidnight(zone, day+1)
		return w
	}
	w.Start = int64(day)*secondsPerDay - int64(r.OffsetSeconds)
	if r.Boundary == FixedHour {
		w.Start += int64(r.ClosingHour-24) * secondsPerHour
	}
	w.End = w.Start + secondsPerDay
	return w
}

const secondsPerHour = 60 * 60

// mostAhead is more than any clock has been ahead of UTC, in seconds.
const mostAhead = 16 * secondsPerHour

// civilMidnight is the first instant at which the zone's clocks show the day
// or, where they leave it out, a later one: where midnight is skipped it is
// the instant of the change, where it comes twice the first of the two.
func civilMidnight(zone *time.Location, day Day) int64 {
	at := time.Unix(int64(day)*secondsPerDay-mostAhead, 0).In(zone)
	for {
		_, offset := at.Zone()
		midnight := int64(day)*secondsPerDay - int64(offset)
		_, change := at.ZoneBounds()
		if change.IsZero() || midnight < change.Unix() {
			return max(midnight, at.Unix())
		}
		at = change
	}
}

// DayOf returns the day that an instant belongs to.
func (r DayRule) DayOf(zone *time.Location, at int64) Day {
	day := Day(floorDiv(at+int64(r.OffsetSeconds), secondsPerDay))
	for r.Window(zone, day).Start > at {
		day--
	}
	for r.Window(zone, day).End <= at {
		day++
	}
	return day
}

// slots is the number of hourly slots of the window.
func (w Window) slots() int { return int((w.End - w.Start + secondsPerHour - 1) / secondsPerHour) }

// slotAt is the instant of slot i, which may lie before or after the window.
// It matters from which end they are counted on a day that is no whole number
// of hours.
func (w Window) slotAt(i int) int64 {
	if w.FirstSlot == 1 {
		return w.End - int64(w.slots()-1-i)*secondsPerHour
	}
	return w.Start + int64(i)*secondsPerHour
}

// holds reports whether a reading belongs to the day: with slots 01 to 24 a
// reading at its end does and one at its start does not.
func (w Window) holds(at int64) bool {
	if w.FirstSlot == 1 {
		return at > w.Start && at <= w.End
	}
	return at >= w.Start && at < w.End
}

const (
	// longestBridge is the longest run of missing hourly slots that a straight
	// line bridges (common practice: three hours). A longer one would move the
	// day's mean by more than the two means differ.
	longestBridge = 3
	// spikeC is how far a reading must stand from the readings before and after
	// it, within 90 minutes each, to be doubted (common practice).
	spikeC       = 10.0
	spikeSeconds = 90 * 60
	halfHour     = 30 * 60
)

// Reach is how far outside a day's window readings can matter to it, in
// seconds: a gap of three slots across midnight ends at the fourth.
const Reach = (longestBridge+1)*secondsPerHour + halfHour

// BuildDay cuts one day out of a station's readings. readings are in order of
// time and reach at least Reach beyond the window where there are any; own is
// the station's daily reading, nil when it gives none. Values that are no
// temperature must have been refused before.
//
// Slot h takes the reading nearest to h:00 within 30 minutes; a reading exactly
// half an hour away belongs to the later slot, and of two equally near the
// earlier counts. Runs of up to 3 missing slots, counted across midnight, are
// bridged by a straight line. The day has a 24-hour mean when no slot is left
// open and at least three quarters of them (18 of 24) are real; else the
// publisher's own mean stands in, marked Published. Its extremes are the
// station's own, else those of all readings of a day with as many real slots.
func BuildDay(w Window, readings []Reading, own *DailyReading) DayFacts {
	n := w.slots()
	facts := DayFacts{Day: w.Day, SlotsWanted: n}
	slots := fillSlots(w, readings)
	bridged, wasBridged := calc.BridgeGaps(slots, longestBridge)
	inside := bridged[longestBridge+1 : longestBridge+1+n]
	open := 0
	for i := range inside {
		switch {
		case wasBridged[longestBridge+1+i]:
			facts.SlotsBridged++
		case inside[i].Known:
			facts.SlotsReal++
		default:
			open++
		}
	}
	enough := 4*facts.SlotsReal >= 3*n
	if enough && open == 0 && n > 0 { // a date that the clocks left out has no hours
		facts.HoursC = make([]float64, n)
		for i, slot := range inside {
			facts.HoursC[i] = slot.C
		}
		if mean, err := calc.HourlyMean(facts.HoursC); err == nil {
			facts.HourlyC, facts.HasHourly = mean, true
		}
	}
	addOwn(&facts, own)
	if enough && !facts.HasExtremes {
		addExtremes(&facts, w, readings)
	}
	facts.Doubt = doubt(w, readings)
	return facts
}

// fillSlots gives each slot its reading, four slots either side included.
func fillSlots(w Window, readings []Reading) []calc.Slot {
	n := w.slots() + 2*(longestBridge+1)
	slots := make([]calc.Slot, n)
	distance := make([]int64, n)
	first := w.slotAt(-(longestBridge + 1))
	for _, reading := range readings {
		i := floorDiv(reading.At-first+halfHour, secondsPerHour)
		if i < 0 || i >= int64(n) {
			continue
		}
		away := reading.At - (first + i*secondsPerHour)
		if away < 0 {
			away = -away
		}
		if !slots[i].Known || away < distance[i] {
			slots[i] = calc.Slot{C: reading.C, Known: true}
			distance[i] = away
		}
	}
	return slots
}

func addOwn(facts *DayFacts, own *DailyReading) {
	if own == nil {
		return
	}
	facts.HasExtremes, facts.HighC, facts.LowC, facts.ExtremesFrom = true, own.HighC, own.LowC, FromStation
	if own.HasMean && !facts.HasHourly {
		facts.HasHourly, facts.HourlyC, facts.Published = true, own.MeanC, true
	}
}

func addExtremes(facts *DayFacts, w Window, readings []Reading) {
	for _, reading := range readings {
		if !w.holds(reading.At) {
			continue
		}
		if !facts.HasExtremes {
			facts.HasExtremes, facts.ExtremesFrom = true, FromHourly
			facts.HighC, facts.LowC = reading.C, reading.C
		}
		facts.HighC = max(facts.HighC, reading.C)
		facts.LowC = min(facts.LowC, reading.C)
	}
}

// doubt names the first reading of the day that leaps away from the readings
// on both its sides and back.
func doubt(w Window, readings []Reading) string {
	for i := 1; i+1 < len(readings); i++ {
		before, at, after := readings[i-1], readings[i], readings[i+1]
		if !w.holds(at.At) || at.At-before.At > spikeSeconds || after.At-at.At > spikeSeconds {
			continue
		}
		up := at.C-before.C >= spikeC && at.C-after.C >= spikeC
		down := before.C-at.C >= spikeC && after.C-at.C >= spikeC
		if up || down {
			clock := time.Unix(at.At+w.Offset, 0).UTC().Format("15:04")
			return fmt.Sprintf("%.1f °C at %s between %.1f and %.1f", at.C, clock, before.C, after.C)
		}
	}
	return ""
}
