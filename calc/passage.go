package calc

import (
	"fmt"
	"iter"
	"math"
)

// Reached reports whether a running total has come to its target.
//
//	round(total, 6 decimals) ≥ round(target, 6 decimals)
//
// total and target are in the same unit, whichever it is; halves round away from
// zero. Both sides are rounded so that the rounding error of adding many days
// never moves a date, here or in a spreadsheet's cells. A total or a target that
// is not finite has not been reached.
//
// Source: that the day counts on which the sum passes the target is common
// practice; the rounding is this program's own.
func Reached(total, target float64) bool {
	if !isFinite(total) || !isFinite(target) {
		return false
	}
	return roundSix(total) >= roundSix(target)
}

// decimalsEnd is where rounding to six decimals stops having any effect: from
// 2^33 on, neighbouring float64 values are further apart than 0.000001.
const decimalsEnd = 1 << 33

// roundSix rounds to six decimals, halves away from zero.
func roundSix(value float64) float64 {
	if math.Abs(value) >= decimalsEnd {
		return value
	}
	return math.Round(value*1e6) / 1e6
}

// FirstPassage returns the first day on which a running total has reached its
// target.
//
//	total(n) = start + units(1) + … + units(n)
//	days     = the smallest n with Reached(total(n), target)
//
// start is the total before the first day, units what each day adds, in order
// (asked for only as far as they are needed), target what to reach, all in the
// same unit. Units may be negative; the first
// passage counts even if the total falls back later. days is 0 when start
// already reaches the target, and n when the n-th unit does it.
//
// When the units end first, reached is false and days is how many were added. A
// unit, or a total, that is not finite ends the search in the same way before
// that day: a day without a number must not be passed over in silence. A start
// or a target that is not finite is never reached.
//
// Source: see [Reached].
func FirstPassage(start float64, units iter.Seq[float64], target float64) (days int, reached bool) {
	if !isFinite(start) || !isFinite(target) {
		return 0, false
	}
	total := start
	if Reached(total, target) {
		return 0, true
	}
	for unit := range units {
		total += unit
		if !isFinite(total) {
			return days, false
		}
		days++
		if Reached(total, target) {
			return days, true
		}
	}
	return days, false
}

// rankNoise is the rounding error forgiven in share · count, so that
// 0.07 · 100 = 7.000000000000001 is rank 7 and not 8. It is above float64's error
// for counts up to a million, and far below the step of any share a person states.
const rankNoise = 1e-9

// Rank returns which of count values in ascending order, counted from 1, stands
// at a share: the nearest rank.
//
//	rank = ceil(share · count), within 1 … count
//
// share is from 0 to 1 (0.1 for the early, 0.5 the middle, 0.9 the late value);
// 0 gives the first value. No value is invented between two: the answer is
// always one of them. Rounding error in the product is forgiven.
//
// A share that is not finite gives [ErrNotFinite], one outside 0 to 1
// [ErrShare], a count below 1 [ErrNoValues].
//
// Source: Hyndman & Fan 1996, definition 1 (number from memory).
func Rank(share float64, count int) (int, error) {
	switch {
	case !isFinite(share):
		return 0, fmt.Errorf("rank: share is %v; give 0 to 1: %w", share, ErrNotFinite)
	case share < 0 || share > 1:
		return 0, fmt.Errorf("rank: share %g; give 0 to 1: %w", share, ErrShare)
	case count < 1:
		return 0, fmt.Errorf("rank: of %d values; give at least one: %w", count, ErrNoValues)
	}
	rank := math.Ceil(share*float64(count) - rankNoise)
	if rank >= float64(count) { // also keeps the largest counts from overflowing int
		return count, nil
	}
	return max(int(rank), 1), nil
}
