package planner

import (
	"fmt"
	"slices"
	"time"
)

// Rain is what a station's gauge caught up to a time, since its reading before.
type Rain struct {
	At int64 // UTC seconds since 1970
	MM float64
}

// MostRainMM is the most rain that is taken as one reading. The most that fell
// in an hour is 305 mm, in Holt, Missouri, in 1947 (from memory: the World
// Meteorological Organization's archive of extremes); the margin keeps a new
// record from being refused.
const MostRainMM = 500.0

// CheckRain refuses what no gauge has caught: NaN, less than nothing, more than
// MostRainMM.
func CheckRain(mm float64) error {
	if !(mm >= 0 && mm <= MostRainMM) {
		return fmt.Errorf("%g mm of rain is outside 0 to %g: check the value and its unit", mm, MostRainMM)
	}
	return nil
}

// RainAfter is what fell on a pass within its rain-free hours.
type RainAfter struct {
	Entry EntryID
	Hours float64       // the work's rain-free hours
	MM    float64       // all that fell within them; 0 when none did
	First time.Duration // from the pass to the first reading with rain
	// Whole says that gauge readings cover the hours without a gap over 90
	// minutes: with no rain in them it was dry.
	Whole bool
}

// Rained reports whether rain fell.
func (r RainAfter) Rained() bool { return r.MM > 0 }

const (
	// rainDays is how long after a pass it is asked whether it still counts.
	rainDays = 14
	// gaugeGap is the longest time between two readings of a gauge that counts
	// as watched.
	gaugeGap = 90 * time.Minute
)

// RainAfter returns what fell within so many hours after the entry, by the
// plan's gauge readings. A reading stands for the time since the one before, so
// rain of the hour in which the pass was done is told too. ok is false for an
// entry without a time of day, and where hours is 0 or less.
func (p Plan) RainAfter(entry Entry, hours float64) (after RainAfter, ok bool) {
	done, ok := p.Site.instant(entry.Day, entry.Clock)
	if !ok || !(hours > 0) {
		return RainAfter{}, false
	}
	after = RainAfter{Entry: entry.ID, Hours: hours, Whole: true}
	end := done.Add(time.Duration(hours * float64(time.Hour)))
	seen := done
	for _, reading := range p.Rain {
		at := time.Unix(reading.At, 0)
		if !at.After(done) || seen.Equal(end) {
			continue
		}
		after.Whole = after.Whole && at.Sub(seen) <= gaugeGap
		if at.After(end) {
			seen = end
			continue
		}
		seen = at
		if reading.MM > 0 && after.MM == 0 {
			after.First = at.Sub(done)
		}
		after.MM += reading.MM
	}
	after.Whole = after.Whole && !seen.Before(end)
	return after, true
}

// RainedOn reports whether rain is known to have fallen within the rain-free
// hours of any of the entry's works, and nobody has said that it was doubtful or
// lost.
func (p Plan) RainedOn(entry Entry) bool {
	return entry.Result == Good && slices.ContainsFunc(p.Works, func(work Work) bool {
		_, has := entry.Of(work.ID)
		rain, ok := p.RainAfter(entry, work.Settings.On(p.AsOf).RainFreeHours)
		return has && ok && rain.Rained()
	})
}

// instant is the moment at which the clock on the wall of the site shows the
// time on the day. ok is false without a time.
func (s Site) instant(day Day, clock string) (time.Time, bool) {
	at, err := time.Parse("15:04", clock)
	zone, zoneErr := s.Location()
	if err != nil || zoneErr != nil {
		return time.Time{}, false
	}
	year, month, date := day.Date()
	return time.Date(year, time.Month(month), date, at.Hour(), at.Minute(), 0, 0, zone), true
}

// rainOn is the rain on the work's newest pass that is still to be asked about:
// it fell within the rain-free hours, within the last 14 days, and nobody has
// said what became of the pass. nil when there is nothing to ask.
func (p Plan) rainOn(state WorkState) *RainAfter {
	for i := len(p.Log) - 1; i >= 0; i-- {
		entry := p.Log[i]
		if _, has := entry.Of(state.Work.ID); !has || entry.Result == Lost {
			continue
		}
		if entry.Result != Good || entry.RainCounts || p.AsOf-entry.Day > rainDays {
			return nil
		}
		if after, ok := p.RainAfter(entry, state.Settings.RainFreeHours); ok && after.Rained() {
			return &after
		}
		return nil
	}
	return nil
}
