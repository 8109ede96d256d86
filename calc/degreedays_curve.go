package calc

import (
	"fmt"
	"math"
)

// DegreeDaysSingleTriangle returns a day's degree days from its high and low, the
// day being a straight rise from the low to the high and back.
//
//	A(h) = (high − h)² / (2 (high − low))    area above h, low < h < high
//	F(h) = (high − h) / (high − low)         share of the day above h
//
//	none          A(L)
//	horizontal    A(L) − A(U)
//	intermediate  A(L) − 2 A(U), and 0 when that is negative
//	vertical      A(L) − A(U) − (U − L) F(U)
//
// With h at or above the high, A and F are 0; with h at or below the low, A is
// the mean less h and F is 1. highC and lowC are the day's extremes in °C, t the
// base L and the upper threshold U with its cutoff. The result is in °C-days and
// never below 0. A day of one temperature is fine, and one that stays exactly at
// U is not cut off by the vertical cutoff.
//
// A high below the low gives [ErrHighBelowLow], a value that is not finite
// [ErrNotFinite], unusable thresholds [ErrThresholds], an unknown cutoff
// [ErrCutoff].
//
// Source: Zalom et al. 1983 (from memory); checked by numerical integration.
func DegreeDaysSingleTriangle(highC, lowC float64, t Thresholds) (float64, error) {
	if err := requireDay(MethodSingleTriangle, highC, lowC, t); err != nil {
		return 0, err
	}
	return curveResult(t.total(triangleAbove, highC, lowC))
}

// DegreeDaysDoubleTriangle returns a day's degree days from two half days: a
// straight rise from the low to the high and a straight fall to the next day's low.
//
//	degree days = [ S(low, high) + S(next low, high) ] / 2
//
// S is the whole-day value of [DegreeDaysSingleTriangle], except that the
// intermediate cutoff sets a negative day to 0 only after the two are added.
// nextLowC is the next day's low in °C. In real data it may lie above today's
// high (a warm front overnight); the second half day then rises from the high to
// the next low and is S(high, next low), which is exact, continues the formula
// without a jump, and is no error. The rest is as in DegreeDaysSingleTriangle.
//
// Source: Zalom et al. 1983 (from memory); checked by numerical integration. The
// rule for a warm next night is this program's own.
func DegreeDaysDoubleTriangle(highC, lowC, nextLowC float64, t Thresholds) (float64, error) {
	return doubleCurve(MethodDoubleTriangle, triangleAbove, highC, lowC, nextLowC, t)
}

// DegreeDaysSingleSine returns a day's degree days from its high and low, the day
// being one sine wave from the low to the high and back.
//
//	m = (high + low)/2,  w = (high − low)/2,  θ = asin((h − m)/w)
//	A(h) = [ (m − h)(π/2 − θ) + w cos θ ] / π    area above h, low < h < high
//	F(h) = (π/2 − θ) / π                         share of the day above h
//
// The cutoffs, the edges, the units and the errors are those of
// [DegreeDaysSingleTriangle], with this A and F.
//
// Source: Baskerville & Emin 1969; cutoffs Zalom et al. 1983 (both from memory);
// checked by numerical integration.
func DegreeDaysSingleSine(highC, lowC float64, t Thresholds) (float64, error) {
	if err := requireDay(MethodSingleSine, highC, lowC, t); err != nil {
		return 0, err
	}
	return curveResult(t.total(sineAbove, highC, lowC))
}

// DegreeDaysDoubleSine returns a day's degree days from two half sine waves: from
// the low to the high, and from the high to the next day's low.
//
//	degree days = [ S(low, high) + S(next low, high) ] / 2
//
// S is the whole-day value of [DegreeDaysSingleSine]. The floor of the
// intermediate cutoff, a next low above the high, units and errors are as in
// [DegreeDaysDoubleTriangle].
//
// Source: Allen 1976 (from memory); checked by numerical integration. The rule
// for a warm next night is this program's own.
func DegreeDaysDoubleSine(highC, lowC, nextLowC float64, t Thresholds) (float64, error) {
	return doubleCurve(MethodDoubleSine, sineAbove, highC, lowC, nextLowC, t)
}

// above gives, for a day between lowC and highC, the area of its curve above a
// threshold in °C-days, and the share (0 to 1) of the day spent above it.
type above func(highC, lowC, thresholdC float64) (areaC, share float64)

// total returns the day's sum under a curve. Only the intermediate cutoff can
// make it negative (beyond rounding); curveResult floors it.
func (t Thresholds) total(curve above, highC, lowC float64) float64 {
	areaC, _ := curve(highC, lowC, t.LowerC)
	if !t.cuts() {
		return areaC
	}
	aboveUpperC, shareAboveUpper := curve(highC, lowC, t.UpperC)
	switch t.Cutoff {
	case CutoffIntermediate:
		return areaC - 2*aboveUpperC
	case CutoffVertical:
		return areaC - aboveUpperC - (t.UpperC-t.LowerC)*shareAboveUpper
	}
	return areaC - aboveUpperC
}

// curveResult floors a day's sum at 0, and refuses one that overflowed.
func curveResult(totalC float64) (float64, error) {
	totalC, err := finiteResult("degree days", totalC)
	return max(totalC, 0), err
}

// doubleCurve is the mean of two whole-day values, one for each half day.
func doubleCurve(m Method, curve above, highC, lowC, nextLowC float64, t Thresholds) (float64, error) {
	if err := requireDay(m, highC, lowC, t); err != nil {
		return 0, err
	}
	if err := requireFinite("next low", nextLowC); err != nil {
		return 0, fmt.Errorf("degree days: %w", err)
	}
	if err := requireSpan(highC, nextLowC); err != nil {
		return 0, fmt.Errorf("degree days: %w", err)
	}
	firstC := t.total(curve, highC, lowC)
	secondC := t.total(curve, max(highC, nextLowC), min(highC, nextLowC))
	return curveResult(firstC/2 + secondC/2)
}

// outside answers for both curves where the threshold does not cut them: all of
// the day below it, or all of it above.
func outside(highC, lowC, thresholdC float64) (areaC, share float64, ok bool) {
	switch {
	case thresholdC >= highC:
		return 0, 0, true
	case thresholdC <= lowC:
		return (highC+lowC)/2 - thresholdC, 1, true
	}
	return 0, 0, false
}

// triangleAbove is A and F of the triangle. The span it divides by is never 0: a
// threshold that cuts the curve lies strictly between the extremes.
func triangleAbove(highC, lowC, thresholdC float64) (areaC, share float64) {
	if areaC, share, ok := outside(highC, lowC, thresholdC); ok {
		return areaC, share
	}
	share = (highC - thresholdC) / (highC - lowC)
	return (highC - thresholdC) * share / 2, share
}

// sineAbove is A and F of the sine. The ratio is kept within ±1, where rounding
// may push it out and asin would be NaN.
func sineAbove(highC, lowC, thresholdC float64) (areaC, share float64) {
	if areaC, share, ok := outside(highC, lowC, thresholdC); ok {
		return areaC, share
	}
	meanC, halfRangeC := (highC+lowC)/2, (highC-lowC)/2
	ratio := min(max((thresholdC-meanC)/halfRangeC, -1), 1)
	angle := math.Asin(ratio)
	aboveAngle := math.Pi/2 - angle
	areaC = ((meanC-thresholdC)*aboveAngle + halfRangeC*math.Cos(angle)) / math.Pi
	return areaC, aboveAngle / math.Pi
}
