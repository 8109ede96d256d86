package calc_test

import (
	"testing"

	"pgregory.net/rapid"

	"swardbook/calc"
)

// A day of 15 °C on the cool-season curve with a ceiling of 3 g/m² a month, in
// months of 28 to 31 days. Computed at 50 digits from potential · ceiling / days.
func TestNitrogenUse(t *testing.T) {
	potential := must(calc.CoolSeason().Potential(15))
	if !agrees(potential, 0.661514655649) {
		t.Fatalf("potential %.12g", potential)
	}
	for days, want := range map[int]float64{
		28: 0.0708765702481, 29: 0.0684325505844, 30: 0.0661514655649, 31: 0.0640175473209,
	} {
		if got := must(calc.NitrogenUse(potential, 3, days)); !agrees(got, want) {
			t.Errorf("%d days: %.12g g/m², want %.12g", days, got, want)
		}
	}
}

// A month's use summed by the day is not the use of the month's mean temperature:
// 15 days at 10 °C and 15 at 20 °C. Computed at 50 digits.
func TestNitrogenUseByDayAndByMonth(t *testing.T) {
	use := func(meanC float64) float64 {
		return must(calc.NitrogenUse(must(calc.CoolSeason().Potential(meanC)), 3, 30))
	}
	var byDay float64
	for day := range 30 {
		meanC := 10.0
		if day >= 15 {
			meanC = 20
		}
		byDay += use(meanC)
	}
	byMonth := 30 * use(15)
	if !agrees(byDay, 1.78724279252) || !agrees(byMonth, 1.98454396695) {
		t.Errorf("by day %.12g, want 1.78724279252; by month %.12g, want 1.98454396695", byDay, byMonth)
	}
	if percent := 100 * (byDay/byMonth - 1); !within(percent, -9.9, 0.05) {
		t.Errorf("difference %.3f %%, want -9.9", percent)
	}
}

// A perfect month uses exactly its ceiling, whatever its length.
func TestNitrogenUseOfAPerfectMonth(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		ceilingGM2 := rapid.Float64Range(0, 10).Draw(t, "ceiling")
		days := rapid.IntRange(28, 31).Draw(t, "days")
		potential := rapid.Float64Range(0, 1).Draw(t, "potential")
		full := must(calc.NitrogenUse(1, ceilingGM2, days))
		if !within(full*float64(days), ceilingGM2, absolute) {
			t.Fatalf("%d perfect days use %g of %g", days, full*float64(days), ceilingGM2)
		}
		if got := must(calc.NitrogenUse(potential, ceilingGM2, days)); got < 0 || got > full {
			t.Fatalf("potential %g uses %g, a perfect day %g", potential, got, full)
		}
	})
}

func TestNitrogenUseRefuses(t *testing.T) {
	tests := []struct {
		name               string
		potential, ceiling float64
		days               int
		want               error
	}{
		{"potential NaN", nan, 3, 30, calc.ErrNotFinite},
		{"potential infinite", infinity, 3, 30, calc.ErrNotFinite},
		{"ceiling NaN", 0.5, nan, 30, calc.ErrNotFinite},
		{"ceiling infinite", 0, infinity, 30, calc.ErrNotFinite},
		{"potential as a percentage", 66, 3, 30, calc.ErrNitrogen},
		{"potential below 0", -0.01, 3, 30, calc.ErrNitrogen},
		{"ceiling below 0", 0.5, -3, 30, calc.ErrNitrogen},
		{"no days", 0.5, 3, 0, calc.ErrNitrogen},
		{"27 days", 0.5, 3, 27, calc.ErrNitrogen},
		{"32 days", 0.5, 3, 32, calc.ErrNitrogen},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			got, err := calc.NitrogenUse(tt.potential, tt.ceiling, tt.days)
			checkError(t, got, err, tt.want)
		})
	}
	if got := must(calc.NitrogenUse(0.5, 0, 30)); got != 0 {
		t.Errorf("ceiling 0 uses %g", got)
	}
}
