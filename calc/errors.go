package calc

import (
	"errors"
	"fmt"
	"math"
)

// The kinds of error this package returns, each wrapped in a sentence that says
// which value was refused and what to do about it. Compare with [errors.Is].
var (
	// ErrNoValues: a list that needs at least one value is empty.
	ErrNoValues = errors.New("no values")
	// ErrNotFinite: a value is NaN or infinite, or so large that the result would be.
	ErrNotFinite = errors.New("not a finite number")
	// ErrHighBelowLow: a day's high is below its low.
	ErrHighBelowLow = errors.New("high below low")
	// ErrThresholds: the lower or upper threshold cannot be used.
	ErrThresholds = errors.New("unusable thresholds")
	// ErrCutoff: the cutoff is unknown, or the method does not take it.
	ErrCutoff = errors.New("unusable cutoff")
	// ErrCurve: a growth curve's optimum or width cannot be used.
	ErrCurve = errors.New("unusable growth curve")
	// ErrNitrogen: a potential, ceiling or month length for nitrogen is out of range.
	ErrNitrogen = errors.New("unusable nitrogen figure")
	// ErrHumidity: a relative humidity is not between 0 and 100 %.
	ErrHumidity = errors.New("unusable humidity")
	// ErrShare: a share is outside 0 to 1.
	ErrShare = errors.New("unusable share")
)

// isFinite reports whether value is neither NaN nor an infinity.
func isFinite(value float64) bool {
	return !math.IsNaN(value) && !math.IsInf(value, 0)
}

// requireFinite refuses a single named temperature that is not finite.
func requireFinite(name string, valueC float64) error {
	if isFinite(valueC) {
		return nil
	}
	return fmt.Errorf("%s is %v; leave the value out as missing: %w", name, valueC, ErrNotFinite)
}

// requireReadings refuses an empty list and names the first reading that is not finite.
func requireReadings(hoursC []float64) error {
	if len(hoursC) == 0 {
		return fmt.Errorf("the day has no readings; use its high and low instead: %w", ErrNoValues)
	}
	for i, readingC := range hoursC {
		if !isFinite(readingC) {
			return fmt.Errorf("reading %d of %d is %v; mark it as missing: %w", i+1, len(hoursC), readingC, ErrNotFinite)
		}
	}
	return nil
}

// requireExtremes refuses a high or low that is not finite, a high below its low,
// and a pair too large to add or subtract.
func requireExtremes(highC, lowC float64) error {
	if err := requireFinite("high", highC); err != nil {
		return err
	}
	if err := requireFinite("low", lowC); err != nil {
		return err
	}
	if highC < lowC {
		return fmt.Errorf("high %g °C is below low %g °C; check whether the two were swapped: %w", highC, lowC, ErrHighBelowLow)
	}
	return requireSpan(highC, lowC)
}

// requireSpan refuses two temperatures whose sum or difference overflows, so that
// the formulas after it can be written as they are published.
func requireSpan(highC, lowC float64) error {
	if isFinite(highC+lowC) && isFinite(highC-lowC) {
		return nil
	}
	return fmt.Errorf("%g and %g °C are too large to compute with; check the unit: %w", highC, lowC, ErrNotFinite)
}

// finiteResult refuses a result that overflowed: the inputs were finite, but far
// beyond any temperature.
func finiteResult(what string, value float64) (float64, error) {
	if isFinite(value) {
		return value, nil
	}
	return 0, fmt.Errorf("%s overflows; check the temperatures and their unit: %w", what, ErrNotFinite)
}
