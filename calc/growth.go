package calc

import (
	"fmt"
	"math"
)

// The published parameters of the growth potential. The optima of 68 and 88 °F
// are confirmed in print, the widths and the °C pairs are from memory. The °C
// pairs are the °F pairs rounded by hand, so the two give slightly different
// curves: at most 0.0074 apart for cool season, 0.045 for warm season (0 to 45 °C).
// Moving any of them moves every growth potential, and all nitrogen use with it.
const (
	coolOptimumC = 20.0
	coolWidthC   = 5.5
	warmOptimumC = 31.0
	warmWidthC   = 7.0

	coolOptimumF = 68.0
	coolWidthF   = 10.0
	warmOptimumF = 88.0
	warmWidthF   = 12.0
)

// GrowthCurve is the bell curve of turf growth against mean temperature.
// OptimumC is the temperature of full growth, WidthC the distance in °C at which
// growth has fallen to 61 % (the curve's standard deviation), HeldAbove whether
// growth stays at full above the optimum instead of falling.
type GrowthCurve struct {
	OptimumC, WidthC float64
	HeldAbove        bool
}

// CoolSeason returns the curve of cool-season turf, optimum 20 °C, width 5.5 °C.
//
// Source: Gelernter & Stowell 2005, Golf Course Management, March, 108-113 (from
// memory); the optimum, as 68 °F, is in a trade article by the same authors.
func CoolSeason() GrowthCurve { return GrowthCurve{OptimumC: coolOptimumC, WidthC: coolWidthC} }

// WarmSeason returns the curve of warm-season turf, optimum 31 °C, width 7 °C,
// falling above the optimum. Set HeldAbove for the authors' later variant.
//
// Source: as [CoolSeason]; the optimum is printed as 88 °F.
func WarmSeason() GrowthCurve { return GrowthCurve{OptimumC: warmOptimumC, WidthC: warmWidthC} }

// CoolSeasonF returns the curve of cool-season turf from the °F pair, 68 and
// 10 °F, converted exactly: 20 °C and 50/9 °C. Source: as [CoolSeason].
func CoolSeasonF() GrowthCurve {
	return GrowthCurve{
		OptimumC: CelsiusFromFahrenheit(coolOptimumF),
		WidthC:   CelsiusDegreesFromFahrenheit(coolWidthF),
	}
}

// WarmSeasonF returns the curve of warm-season turf from the °F pair, 88 and
// 12 °F, converted exactly: 280/9 °C and 20/3 °C. Source: as [WarmSeason].
func WarmSeasonF() GrowthCurve {
	return GrowthCurve{
		OptimumC: CelsiusFromFahrenheit(warmOptimumF),
		WidthC:   CelsiusDegreesFromFahrenheit(warmWidthF),
	}
}

// Validate returns [ErrCurve] when the optimum or the width is not finite, or the
// width is not above 0. The methods of the curve call it.
func (g GrowthCurve) Validate() error {
	if !isFinite(g.OptimumC) {
		return fmt.Errorf("growth curve: optimum is %v; give a temperature: %w", g.OptimumC, ErrCurve)
	}
	if !isFinite(g.WidthC) || g.WidthC <= 0 {
		return fmt.Errorf("growth curve: width is %v °C; give a number above 0: %w", g.WidthC, ErrCurve)
	}
	return nil
}

// Potential returns the growth potential of a day from its mean temperature.
//
//	growth potential = exp(−½ ((T − optimum) / width)²)
//
// meanC is the mean temperature of a day, or of longer, in °C. The result is a
// fraction from 0 to 1, 1 at the optimum; it is above 0 for every temperature
// grass meets and underflows to 0 some 38 widths away. A held curve gives 1 at
// and above the optimum.
//
// A curve that cannot be used gives [ErrCurve], a mean that is not finite
// [ErrNotFinite].
//
// Source: Gelernter & Stowell 2005, Golf Course Management, March, 108-113 (from
// memory); the held variant is from a later note by the same authors.
func (g GrowthCurve) Potential(meanC float64) (float64, error) {
	if err := g.Validate(); err != nil {
		return 0, err
	}
	if err := requireFinite("mean", meanC); err != nil {
		return 0, fmt.Errorf("growth potential: %w", err)
	}
	return g.at(meanC), nil
}

// PotentialOverHours returns the mean of the growth potentials of a day's readings.
//
//	mean over the hours of exp(−½ ((T − optimum) / width)²)
//
// It is a separate figure, not a better [GrowthCurve.Potential]: the curve was
// fitted to means of a day or longer. The mean over hours is the larger of the two
// where the day lies further than one width from the optimum, the smaller within.
// hoursC holds equally spaced readings in °C, at least one. The result is a
// fraction from 0 to 1.
//
// A curve that cannot be used gives [ErrCurve], an empty list [ErrNoValues], a
// reading that is not finite [ErrNotFinite].
//
// Source: the curve as in Potential, averaged over the day.
func (g GrowthCurve) PotentialOverHours(hoursC []float64) (float64, error) {
	if err := g.Validate(); err != nil {
		return 0, err
	}
	if err := requireReadings(hoursC); err != nil {
		return 0, fmt.Errorf("growth potential over hours: %w", err)
	}
	var sum float64
	for _, readingC := range hoursC {
		sum += g.at(readingC)
	}
	return sum / float64(len(hoursC)), nil
}

// at is the bare curve, for a checked curve and a finite temperature.
func (g GrowthCurve) at(temperatureC float64) float64 {
	if g.HeldAbove && temperatureC >= g.OptimumC {
		return 1
	}
	widths := (temperatureC - g.OptimumC) / g.WidthC
	return math.Exp(-0.5 * widths * widths)
}
