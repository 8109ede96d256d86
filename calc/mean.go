package calc

import "fmt"

// HourlyMean returns the mean of equally spaced readings.
//
//	mean = (T1 + T2 + … + Tn) / n
//
// hoursC holds the day's readings in °C, in any order: 24 on an ordinary day, 23
// or 25 on a civil day with a clock change, at least one. The result is in °C.
// Whether enough readings are there for the mean to stand for the day is the
// caller's question; a missing reading must be left out or bridged before
// (see [BridgeGaps]), it has no number here.
//
// An empty list gives [ErrNoValues]; a reading that is not finite, or readings
// whose sum overflows, give [ErrNotFinite].
//
// Source: American Meteorological Society, Glossary of Meteorology, "mean daily
// temperature": the mean of 24 equidistant readings.
func HourlyMean(hoursC []float64) (float64, error) {
	if err := requireReadings(hoursC); err != nil {
		return 0, fmt.Errorf("hourly mean: %w", err)
	}
	var sumC float64
	for _, readingC := range hoursC {
		sumC += readingC
	}
	return finiteResult("hourly mean", sumC/float64(len(hoursC)))
}

// MidrangeMean returns the mean of a day's high and low.
//
//	mean = (high + low) / 2
//
// highC and lowC are the day's extremes in °C, and so is the result. A high
// equal to the low is a day of one temperature and is fine; a high below the low
// gives [ErrHighBelowLow]; a value that is not finite, or a sum that overflows,
// gives [ErrNotFinite].
//
// Source: McMaster & Wilhelm 1997; Bernhardt & Carleton 2018 (J. Climate 31:979)
// compare it with the 24-hour mean.
func MidrangeMean(highC, lowC float64) (float64, error) {
	if err := requireExtremes(highC, lowC); err != nil {
		return 0, fmt.Errorf("high/low mean: %w", err)
	}
	return (highC + lowC) / 2, nil
}

// Slot is one place in a row of equally spaced readings. C is the reading in °C
// and counts only when Known.
type Slot struct {
	C     float64
	Known bool
}

// BridgeGaps fills short gaps in a row of equally spaced readings with a straight
// line between the known slots on their two sides.
//
//	T(i) = A + (B − A) · i / (n + 1)      slot i = 1 … n of a gap of n slots
//
// slots are in order of time; longest is the greatest number of unknown slots in
// a row that is bridged. A longer gap stays unknown as a whole, and so does a gap
// at either end of the row, which has a known slot on one side only: pass the
// neighbouring days' slots along to bridge across midnight. A longest below 1
// bridges nothing.
//
// bridged has the length of slots, and wasBridged tells which of its slots were
// filled in; slots itself is not modified. A known slot whose C is not finite
// counts as unknown. A slot that stays unknown has C = 0. A bridged value never
// lies outside the range of the two values it stands between.
//
// Source: common practice.
func BridgeGaps(slots []Slot, longest int) (bridged []Slot, wasBridged []bool) {
	bridged = make([]Slot, len(slots))
	wasBridged = make([]bool, len(slots))
	before := -1 // the last known slot seen
	for i, slot := range slots {
		if !slot.Known || !isFinite(slot.C) {
			continue
		}
		bridged[i] = slot
		gap := i - before - 1
		if before >= 0 && gap >= 1 && gap <= longest {
			for j := before + 1; j < i; j++ {
				share := float64(j-before) / float64(gap+1)
				bridged[j] = Slot{C: between(bridged[before].C, slot.C, share), Known: true}
				wasBridged[j] = true
			}
		}
		before = i
	}
	return bridged, wasBridged
}

// between returns the point at share (0 to 1) of the straight line from a to b.
// The weighted form cannot overflow; the limits remove its last rounding error.
func between(a, b, share float64) float64 {
	value := a*(1-share) + b*share
	return min(max(value, min(a, b)), max(a, b))
}
