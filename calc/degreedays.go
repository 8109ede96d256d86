package calc

import "fmt"

// Method names one published way to take a day's degree days. Its text is the
// word that set-up and figures use, and the catalogue's entry of a method is
// "degree-days-" followed by it.
type Method string

// The methods, each with the function that computes it.
const (
	MethodMean            Method = "mean"             // [DegreeDaysFromMean]
	MethodFlooredExtremes Method = "floored-extremes" // [DegreeDaysFlooredExtremes]
	MethodFourCase        Method = "four-case"        // [DegreeDaysFourCase]
	MethodSingleTriangle  Method = "single-triangle"  // [DegreeDaysSingleTriangle]
	MethodDoubleTriangle  Method = "double-triangle"  // [DegreeDaysDoubleTriangle]
	MethodSingleSine      Method = "single-sine"      // [DegreeDaysSingleSine]
	MethodDoubleSine      Method = "double-sine"      // [DegreeDaysDoubleSine]
	MethodDegreeHours     Method = "degree-hours"     // [DegreeDaysFromHours]
)

// Methods returns every method, in the order to be shown.
func Methods() []Method {
	return []Method{
		MethodMean, MethodFlooredExtremes, MethodFourCase,
		MethodSingleTriangle, MethodDoubleTriangle,
		MethodSingleSine, MethodDoubleSine, MethodDegreeHours,
	}
}

// Cutoffs returns the cutoffs the method takes, in the order to be shown: none
// only for the four-case method, all for the triangles and sines, none and
// horizontal for the others. A method that is not one of [Methods] takes none
// at all: the result is empty.
func (m Method) Cutoffs() []Cutoff {
	switch m {
	case MethodFourCase:
		return []Cutoff{CutoffNone}
	case MethodMean, MethodFlooredExtremes, MethodDegreeHours:
		return []Cutoff{CutoffNone, CutoffHorizontal}
	case MethodSingleTriangle, MethodDoubleTriangle, MethodSingleSine, MethodDoubleSine:
		return Cutoffs()
	}
	return nil
}

// Cutoff says what happens above the upper threshold U (L is the lower one).
//
//	none          the rate goes on rising, T − L: there is no upper threshold
//	horizontal    the rate stays at U − L
//	intermediate  the rate falls as fast as it rose, U − L − (T − U)
//	vertical      the rate is 0
//
// Source: Zalom et al. 1983 (from memory).
type Cutoff string

// The cutoffs.
const (
	CutoffNone         Cutoff = "none"
	CutoffHorizontal   Cutoff = "horizontal"
	CutoffIntermediate Cutoff = "intermediate"
	CutoffVertical     Cutoff = "vertical"
)

// Cutoffs returns every cutoff, in the order to be shown.
func Cutoffs() []Cutoff {
	return []Cutoff{CutoffNone, CutoffHorizontal, CutoffIntermediate, CutoffVertical}
}

// Thresholds are the temperatures in °C between which a day's warmth counts.
// LowerC is the base. UpperC is read only when Cutoff is not none; an empty
// Cutoff counts as none.
type Thresholds struct {
	LowerC, UpperC float64
	Cutoff         Cutoff
}

// Validate returns [ErrCutoff] for an unknown cutoff, and [ErrThresholds] when a
// threshold that is read is not finite or the upper one is not above the lower.
// Every degree-day function calls it.
func (t Thresholds) Validate() error {
	switch t.Cutoff {
	case "", CutoffNone, CutoffHorizontal, CutoffIntermediate, CutoffVertical:
	default:
		return fmt.Errorf("cutoff %q is unknown; use one of %v: %w", string(t.Cutoff), Cutoffs(), ErrCutoff)
	}
	if !isFinite(t.LowerC) {
		return fmt.Errorf("base is %v; give a temperature: %w", t.LowerC, ErrThresholds)
	}
	if !t.cuts() {
		return nil
	}
	if !isFinite(t.UpperC) {
		return fmt.Errorf("upper threshold is %v; give a temperature: %w", t.UpperC, ErrThresholds)
	}
	if t.UpperC <= t.LowerC {
		return fmt.Errorf("upper threshold %g °C is not above base %g °C; raise it or use no cutoff: %w", t.UpperC, t.LowerC, ErrThresholds)
	}
	return nil
}

// cuts reports whether there is an upper threshold.
func (t Thresholds) cuts() bool { return t.Cutoff != "" && t.Cutoff != CutoffNone }

// clip brings a temperature into the range that counts, for the methods that take
// no other cutoff than horizontal.
func (t Thresholds) clip(valueC float64) float64 {
	if t.cuts() {
		valueC = min(valueC, t.UpperC)
	}
	return max(valueC, t.LowerC)
}

// validateFor is Validate together with the question whether method m takes the cutoff.
func (t Thresholds) validateFor(m Method) error {
	if err := t.Validate(); err != nil {
		return err
	}
	cutoff := t.Cutoff
	if cutoff == "" {
		cutoff = CutoffNone
	}
	for _, taken := range m.Cutoffs() {
		if cutoff == taken {
			return nil
		}
	}
	return fmt.Errorf("method %s does not take cutoff %s; use one of %v: %w", m, cutoff, m.Cutoffs(), ErrCutoff)
}
