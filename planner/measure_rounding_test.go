package planner_test

import (
	"math"
	"testing"

	"swardbook/calc"
	"swardbook/planner"
)

// A temperature that misses a threshold by rounding alone counts as one that
// stands on it. By hand: a day of 18.3 °C throughout, base 10, upper limit 18.3,
// vertical cutoff, is 8.3 °C-days, for it is not above the limit; a tenth more
// is cut off whole.
func TestRoundingDoesNotMoveAThreshold(t *testing.T) {
	const limitC = 18.3
	for _, method := range []calc.Method{calc.MethodSingleTriangle, calc.MethodDoubleTriangle, calc.MethodSingleSine, calc.MethodDoubleSine} {
		m := measure(t, countingBy(method, calc.Thresholds{LowerC: 10, UpperC: limitC, Cutoff: calc.CutoffVertical}), nil)
		for _, row := range []struct{ c, want float64 }{
			{limitC, 8.3}, {math.Nextafter(limitC, 99), 8.3}, {math.Nextafter(limitC, 0), 8.3}, {limitC + 5e-10, 8.3},
			{planner.Fahrenheit.TemperatureC(planner.Fahrenheit.Temperature(limitC)), 8.3}, {limitC + 0.1, 0},
		} {
			for _, day := range []planner.DayFacts{
				{HasExtremes: true, HighC: row.c, LowC: row.c},
				{HasHourly: true, HourlyC: row.c},
			} {
				if got, _ := m.Units(day, day, planner.Extremes); !within(got, row.want, 1e-9) {
					t.Errorf("%s: %.17g °C gives %g, want %g", method, row.c, got, row.want)
				}
			}
		}
	}
}
