package calc

import "fmt"

// DegreeDaysFromMean returns a day's degree days from its mean temperature.
//
//	degree days = min(max(mean, L), U) − L
//
// meanC is the day's mean in °C, on whichever mean the caller stands; t is the
// base L and, with a horizontal cutoff, the upper threshold U at which the mean
// is capped. The result is in °C-days and never below 0: a mean below the base
// counts as the base.
//
// A mean that is not finite gives [ErrNotFinite]; thresholds that cannot be used
// give [ErrThresholds]; a cutoff other than none or horizontal gives [ErrCutoff].
//
// Source: McMaster & Wilhelm 1997, method 1 (read in the abstract). That the cap
// applies to the mean is this program's own reading: the paper's was not seen.
func DegreeDaysFromMean(meanC float64, t Thresholds) (float64, error) {
	if err := t.validateFor(MethodMean); err != nil {
		return 0, fmt.Errorf("degree days from the mean: %w", err)
	}
	if err := requireFinite("mean", meanC); err != nil {
		return 0, fmt.Errorf("degree days from the mean: %w", err)
	}
	return finiteResult("degree days from the mean", t.clip(meanC)-t.LowerC)
}

// DegreeDaysFlooredExtremes returns a day's degree days from its high and low,
// each brought between the thresholds before they are averaged.
//
//	H = min(max(high, L), U)
//	W = min(max(low, L), U)
//	degree days = (H + W)/2 − L
//
// highC and lowC are the day's extremes in °C; t is the base L and, with a
// horizontal cutoff, the upper threshold U. The result is in °C-days, never below
// 0, and never below [DegreeDaysFromMean] of the high/low mean when there is no
// cutoff. With 50 and 86 °F this is the "86/50" rule.
//
// A high below the low gives [ErrHighBelowLow], a value that is not finite
// [ErrNotFinite], unusable thresholds [ErrThresholds], a cutoff other than none
// or horizontal [ErrCutoff].
//
// Source: McMaster & Wilhelm 1997, method 2 (read in the abstract); the cap on
// each extreme is from memory.
func DegreeDaysFlooredExtremes(highC, lowC float64, t Thresholds) (float64, error) {
	if err := requireDay(MethodFlooredExtremes, highC, lowC, t); err != nil {
		return 0, err
	}
	return finiteResult("degree days", (t.clip(highC)+t.clip(lowC))/2-t.LowerC)
}

// DegreeDaysFourCase returns a day's degree days from its high and low by the
// four-case rule, which approximates the part of the day above the base.
//
//	low ≥ L                 (high + low)/2 − L
//	mean ≥ L > low          (high − L)/2 − (L − low)/4
//	mean < L < high         (high − L)/4
//	high ≤ L                0
//
// highC and lowC are the day's extremes in °C, mean is (high + low)/2; t is the
// base L. The result is in °C-days and never below 0.
//
// A high below the low gives [ErrHighBelowLow], a value that is not finite
// [ErrNotFinite], an unusable base [ErrThresholds], any cutoff [ErrCutoff].
//
// Source: Met Éireann, page on degree days.
func DegreeDaysFourCase(highC, lowC float64, t Thresholds) (float64, error) {
	if err := requireDay(MethodFourCase, highC, lowC, t); err != nil {
		return 0, err
	}
	baseC, meanC := t.LowerC, (highC+lowC)/2
	var degreeDays float64
	switch {
	case highC <= baseC:
	case lowC >= baseC:
		degreeDays = meanC - baseC
	case meanC >= baseC:
		degreeDays = (highC-baseC)/2 - (baseC-lowC)/4
	default:
		degreeDays = (highC - baseC) / 4
	}
	return finiteResult("degree days", degreeDays)
}

// DegreeDaysFromHours returns a day's degree days from its readings: the
// degree-hours divided by the number of hours.
//
//	degree days = mean over the hours of [ min(max(T, L), U) − L ]
//
// hoursC holds equally spaced readings of the whole day in °C, at least one and
// 24 on an ordinary day; t is the base L and, with a horizontal cutoff, the upper
// threshold U. The result is in °C-days and never below 0. Missing readings must
// be left out or bridged before.
//
// An empty list gives [ErrNoValues], a reading that is not finite [ErrNotFinite],
// unusable thresholds [ErrThresholds], a cutoff other than none or horizontal
// [ErrCutoff].
//
// Source: the definition of a degree-hour; with 24 readings, degree-hours / 24.
func DegreeDaysFromHours(hoursC []float64, t Thresholds) (float64, error) {
	if err := t.validateFor(MethodDegreeHours); err != nil {
		return 0, fmt.Errorf("degree days from hours: %w", err)
	}
	if err := requireReadings(hoursC); err != nil {
		return 0, fmt.Errorf("degree days from hours: %w", err)
	}
	var sumC float64
	for _, readingC := range hoursC {
		sumC += t.clip(readingC) - t.LowerC
	}
	return finiteResult("degree days from hours", sumC/float64(len(hoursC)))
}

// requireDay checks what every method on extremes needs.
func requireDay(m Method, highC, lowC float64, t Thresholds) error {
	if err := t.validateFor(m); err != nil {
		return fmt.Errorf("degree days: %w", err)
	}
	if err := requireExtremes(highC, lowC); err != nil {
		return fmt.Errorf("degree days: %w", err)
	}
	return nil
}
