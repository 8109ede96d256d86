package knownday_test

import (
	"math"
	"slices"
	"testing"

	"swardbook/calc/knownday"
)

// meanOf adds plainly: this test must not use calc, whose tests lean on the catalogue.
func meanOf(valuesC []float64) float64 {
	var sumC float64
	for _, valueC := range valuesC {
		sumC += valueC
	}
	return sumC / float64(len(valuesC))
}

func within(got, want, tolerance float64) bool { return math.Abs(got-want) <= tolerance }

// Every day must be what its own fields say.
func TestDays(t *testing.T) {
	seen := make(map[string]bool)
	for _, d := range knownday.Days() {
		t.Run(d.Name, func(t *testing.T) {
			if seen[d.Name] {
				t.Error("name used twice")
			}
			seen[d.Name] = true
			if d.Source == "" {
				t.Error("no source")
			}
			if n := len(d.HoursC); n < 23 || n > 25 {
				t.Errorf("%d readings", n)
			}
			if slices.Max(d.HoursC) > d.HighC+d.Tolerance || slices.Min(d.HoursC) < d.LowC-d.Tolerance {
				t.Errorf("readings from %g to %g leave the extremes %g to %g", slices.Min(d.HoursC), slices.Max(d.HoursC), d.LowC, d.HighC)
			}
			if got := meanOf(d.HoursC); !within(got, d.HourlyMeanC, d.Tolerance) {
				t.Errorf("hourly mean %.12g, stated %.12g", got, d.HourlyMeanC)
			}
			if got := meanOf(d.RestC()); !within(got, d.MeanOfRestC, d.Tolerance) {
				t.Errorf("mean of the rest %.12g, stated %.12g", got, d.MeanOfRestC)
			}
			if got := (d.HighC + d.LowC) / 2; !within(got, d.MidrangeMeanC, d.Tolerance) {
				t.Errorf("midrange mean %.12g, stated %.12g", got, d.MidrangeMeanC)
			}
			if len(d.RestC())+len(d.Missing) != len(d.HoursC) {
				t.Errorf("%d readings came, %d are missing, of %d", len(d.RestC()), len(d.Missing), len(d.HoursC))
			}
			if len(d.Missing) == 0 && (!d.Whole || d.BridgedMeanC != d.HourlyMeanC) {
				t.Error("a day without gaps must be whole, with one mean")
			}
		})
	}
}

// The kinds of day the catalogue promises.
func TestDaysHasEveryKind(t *testing.T) {
	var names []string
	lengths := make(map[int]bool)
	for _, d := range knownday.Days() {
		names = append(names, d.Name)
		lengths[len(d.HoursC)] = true
	}
	for _, want := range []string{
		"constant", "straight ramp", "sine", "second harmonic", "invented",
		"lost 13, 14, 15", "lost 12 to 15", "23 hours", "25 hours", "freezing", "below base",
	} {
		if !slices.Contains(names, want) {
			t.Errorf("no day %q", want)
		}
	}
	if !lengths[23] || !lengths[24] || !lengths[25] {
		t.Errorf("lengths %v, want 23, 24 and 25", lengths)
	}
}

// A caller may scribble on what it got.
func TestDaysAreTheCallersOwn(t *testing.T) {
	knownday.Invented().HoursC[0] = 99
	for _, d := range knownday.Days() {
		d.HoursC[0] = 99
	}
	if got := knownday.Invented().HoursC[0]; got != 14.2 {
		t.Errorf("first reading is now %g", got)
	}
}

func TestConventions(t *testing.T) {
	d := knownday.Invented()
	for _, c := range knownday.Conventions() {
		if got := c.Of(knownday.Readings25C(), d.HighC, d.LowC); !within(got, c.MeanC, c.Tolerance) {
			t.Errorf("%s: %.12g, stated %.12g", c.Name, got, c.MeanC)
		}
		weight := c.HighWeight + c.LowWeight
		for _, w := range c.Weights {
			weight += w
		}
		if weight != c.Divisor {
			t.Errorf("%s: weights sum to %g, divisor %g", c.Name, weight, c.Divisor)
		}
		if c.Source == "" {
			t.Errorf("%s: no source", c.Name)
		}
	}
}

// The two ways of labelling 24 hours differ by exactly (T24 − T00)/24.
func TestShifted(t *testing.T) {
	readingsC := knownday.Readings25C()
	want := (readingsC[24] - readingsC[0]) / 24
	if got := meanOf(knownday.Shifted().HoursC) - meanOf(knownday.Invented().HoursC); !within(got, want, 1e-12) {
		t.Errorf("hours 01 to 24 less 00 to 23 = %g, want %g", got, want)
	}
}

func TestEightFromExtremes(t *testing.T) {
	readingsC, want := knownday.EightFromExtremesC()
	if len(readingsC) != 8 {
		t.Fatalf("%d readings", len(readingsC))
	}
	if got := meanOf(readingsC); !within(got, want, 0.5e-6) {
		t.Errorf("mean %.9f, stated %.6f", got, want)
	}
}

func TestDegreeDaysNameADay(t *testing.T) {
	names := make(map[string]bool)
	for _, d := range knownday.Days() {
		names[d.Name] = true
	}
	methods := []string{"mean", "midrange", "floored-extremes", "single-sine", "degree-hours"}
	for _, row := range knownday.AllDegreeDays() {
		if !names[row.Day] || !slices.Contains(methods, row.Method) || row.Source == "" {
			t.Errorf("row %+v names no day, no method or no source", row)
		}
	}
}
