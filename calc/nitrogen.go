package calc

import "fmt"

// The shortest and longest month, in days.
const (
	shortestMonth = 28
	longestMonth  = 31
)

// NitrogenUse returns the nitrogen turf uses on one day, at a growth potential.
//
//	use = growth potential · ceiling / days in the month
//
// potential is the day's growth potential, 0 to 1; ceilingGM2 the nitrogen a
// surface uses in a month of perfect growing weather, in g/m², 0 or more;
// daysInMonth 28 to 31. The result is in g/m² for that day. Summing it over the
// days of a month is not the same as using the potential of the month's mean
// temperature. The function knows no ceiling of its own and none is a
// recommendation: the site states it.
//
// A value that is not finite gives [ErrNotFinite]; one that is out of its range
// gives [ErrNitrogen].
//
// Source: common practice.
func NitrogenUse(potential, ceilingGM2 float64, daysInMonth int) (float64, error) {
	switch {
	case !isFinite(potential):
		return 0, fmt.Errorf("nitrogen use: growth potential is %v; the day needs a mean temperature first: %w", potential, ErrNotFinite)
	case !isFinite(ceilingGM2):
		return 0, fmt.Errorf("nitrogen use: ceiling is %v; give g/m² a month: %w", ceilingGM2, ErrNotFinite)
	case potential < 0 || potential > 1:
		return 0, fmt.Errorf("nitrogen use: growth potential %g is outside 0 to 1; give a fraction, not a percentage: %w", potential, ErrNitrogen)
	case ceilingGM2 < 0:
		return 0, fmt.Errorf("nitrogen use: ceiling %g g/m² a month is below 0; give 0 or more: %w", ceilingGM2, ErrNitrogen)
	case daysInMonth < shortestMonth || daysInMonth > longestMonth:
		return 0, fmt.Errorf("nitrogen use: a month of %d days; give %d to %d: %w", daysInMonth, shortestMonth, longestMonth, ErrNitrogen)
	}
	return potential * ceilingGM2 / float64(daysInMonth), nil
}
