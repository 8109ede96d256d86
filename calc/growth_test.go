package calc_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"swardbook/calc"
	"swardbook/calc/knownday"
)

// held returns a curve that does not fall above its optimum.
func held(g calc.GrowthCurve) calc.GrowthCurve {
	g.HeldAbove = true
	return g
}

// All 456 rows computed at 50 digits from the published formula, the means over a
// day checked by quadrature; sources in testdata/calc/SOURCES.md.
func TestGrowthPotentialReferenceRows(t *testing.T) {
	curves := map[string]calc.GrowthCurve{
		"cool_c": calc.CoolSeason(), "warm_c": calc.WarmSeason(),
		"cool_f": calc.CoolSeasonF(), "warm_f": calc.WarmSeasonF(),
		"warm_c_clamp": held(calc.WarmSeason()), "warm_f_clamp": held(calc.WarmSeasonF()),
	}
	for i, row := range reference(t, "growth_potential_cases.csv", 456) {
		g, ok := curves[row["params"]]
		if !ok {
			t.Fatalf("row %d: params %q", i+2, row["params"])
		}
		meanC, want := number(t, row, "t_mean_c"), number(t, row, "gp")
		var got float64
		switch row["case"] {
		case "point":
			got = must(g.Potential(meanC))
		case "day":
			samples := int(number(t, row, "n_samples"))
			if samples == 0 {
				samples = 240 // the integral: equal samples of a whole wave converge faster than any power
			}
			got = must(g.PotentialOverHours(wave(meanC, number(t, row, "amplitude_c"), samples)))
		default:
			t.Fatalf("row %d: case %q", i+2, row["case"])
		}
		if !agrees(got, want) {
			t.Errorf("row %d %v: %.12g, want %.12g", i+2, row, got, want)
		}
	}
}

// wave samples one sine wave evenly.
func wave(meanC, amplitudeC float64, samples int) []float64 {
	hoursC := make([]float64, samples)
	for i := range hoursC {
		hoursC[i] = meanC + amplitudeC*math.Sin(2*math.Pi*float64(i)/float64(samples))
	}
	return hoursC
}

// What the growth-curve functions promise: the published pairs, and the °F pairs
// as exact fractions. The optima of 68 and 88 °F are printed (a trade article by
// Gelernter & Stowell); the rest is from memory.
func TestCurves(t *testing.T) {
	tests := []struct {
		name  string
		curve calc.GrowthCurve
		want  calc.GrowthCurve
	}{
		{"cool", calc.CoolSeason(), calc.GrowthCurve{OptimumC: 20, WidthC: 5.5}},
		{"warm", calc.WarmSeason(), calc.GrowthCurve{OptimumC: 31, WidthC: 7}},
		{"cool °F", calc.CoolSeasonF(), calc.GrowthCurve{OptimumC: 20, WidthC: 50.0 / 9}},
		{"warm °F", calc.WarmSeasonF(), calc.GrowthCurve{OptimumC: 280.0 / 9, WidthC: 20.0 / 3}},
	}
	for _, tt := range tests {
		if !within(tt.curve.OptimumC, tt.want.OptimumC, 1e-14) || !within(tt.curve.WidthC, tt.want.WidthC, 1e-14) || tt.curve.HeldAbove {
			t.Errorf("%s: %+v, want %+v", tt.name, tt.curve, tt.want)
		}
	}
	if got := calc.FahrenheitFromCelsius(calc.CoolSeasonF().OptimumC); !within(got, 68, 0.5) {
		t.Errorf("cool optimum %g °F, printed 68", got)
	}
	if got := calc.FahrenheitFromCelsius(calc.WarmSeasonF().OptimumC); !within(got, 88, 0.5) {
		t.Errorf("warm optimum %g °F, printed 88", got)
	}
}

// The °C and °F pairs side by side, five decimals: cool °C, cool °F, their
// difference, warm °C, warm °F, their difference. Computed at 50 digits.
func TestPairsSideBySide(t *testing.T) {
	rows := [][7]float64{
		{0, 0.00134, 0.00153, 0.00019, 0.00006, 0.00002, -0.00004},
		{6, 0.03918, 0.04179, 0.00261, 0.00170, 0.00083, -0.00087},
		{9, 0.13534, 0.14083, 0.00549, 0.00716, 0.00409, -0.00308},
		{12, 0.34720, 0.35459, 0.00739, 0.02513, 0.01643, -0.00870},
		{15, 0.66151, 0.66698, 0.00546, 0.07337, 0.05393, -0.01944},
		{18, 0.93602, 0.93725, 0.00123, 0.17826, 0.14458, -0.03368},
		{21, 0.98361, 0.98393, 0.00032, 0.36045, 0.31659, -0.04385},
		{24, 0.76762, 0.77167, 0.00405, 0.60653, 0.56615, -0.04038},
		{27, 0.44489, 0.45212, 0.00723, 0.84937, 0.82684, -0.02252},
		{30, 0.19150, 0.19790, 0.00640, 0.98985, 0.98621, -0.00364},
		{33, 0.06121, 0.06471, 0.00350, 0.96001, 0.96066, 0.00065},
		{36, 0.01453, 0.01581, 0.00128, 0.77484, 0.76423, -0.01061},
		{39, 0.00256, 0.00289, 0.00032, 0.52045, 0.49652, -0.02393},
		{42, 0.00034, 0.00039, 0.00006, 0.29092, 0.26345, -0.02747},
		{45, 0.00003, 0.00004, 0.00001, 0.13534, 0.11416, -0.02117},
	}
	const half = 0.5e-5 + 1e-12
	for _, r := range rows {
		cool, coolF := must(calc.CoolSeason().Potential(r[0])), must(calc.CoolSeasonF().Potential(r[0]))
		warm, warmF := must(calc.WarmSeason().Potential(r[0])), must(calc.WarmSeasonF().Potential(r[0]))
		for i, got := range []float64{cool, coolF, coolF - cool, warm, warmF, warmF - warm} {
			if !within(got, r[i+1], half) {
				t.Errorf("%g °C, column %d: %.7f, want %.5f", r[0], i+1, got, r[i+1])
			}
		}
	}
}

// The largest gaps between the pairs on 0 to 45 °C, computed at 50 digits, and
// found again by walking the range.
func TestLargestGapBetweenPairs(t *testing.T) {
	tests := []struct {
		name         string
		c, f         calc.GrowthCurve
		sign         float64 // which side is searched
		gap, halfGap float64
		atC          []float64
	}{
		{"cool", calc.CoolSeason(), calc.CoolSeasonF(), 1, 0.00739450, 0.5e-8, []float64{12.18, 27.82}},
		{"warm, °F lower", calc.WarmSeason(), calc.WarmSeasonF(), -1, -0.0445534, 0.5e-7, []float64{21.89}},
		{"warm, °F higher", calc.WarmSeason(), calc.WarmSeasonF(), 1, 0.001337, 0.5e-6, []float64{32.18}},
	}
	for _, tt := range tests {
		gapAt := func(meanC float64) float64 {
			return must(tt.f.Potential(meanC)) - must(tt.c.Potential(meanC))
		}
		var largest, at float64
		for step := range 45001 {
			meanC := float64(step) / 1000
			if gap := gapAt(meanC); gap*tt.sign > largest*tt.sign {
				largest, at = gap, meanC
			}
		}
		if !within(largest, tt.gap, tt.halfGap) {
			t.Errorf("%s: largest gap %.9f, want %.9f", tt.name, largest, tt.gap)
		}
		for _, atC := range tt.atC {
			if !within(gapAt(atC), largest, 1e-8) {
				t.Errorf("%s: gap %.9f at %g °C, largest %.9f at %g °C", tt.name, gapAt(atC), atC, largest, at)
			}
		}
	}
}

// Half height, and one width away, on both sides. Half-height offsets computed
// at 50 digits: width·√(2 ln 2).
func TestGrowthPotentialLandmarks(t *testing.T) {
	tests := []struct {
		g       calc.GrowthCurve
		offsetC float64
	}{
		{calc.CoolSeason(), 6.47575512384},
		{calc.WarmSeason(), 8.24187015761},
	}
	for _, tt := range tests {
		for _, side := range []float64{-1, 1} {
			if got := must(tt.g.Potential(tt.g.OptimumC + side*tt.offsetC)); !agrees(got, 0.5) {
				t.Errorf("%+v, %g °C away: %.12g, want 0.5", tt.g, side*tt.offsetC, got)
			}
			if got := must(tt.g.Potential(tt.g.OptimumC + side*tt.g.WidthC)); !agrees(got, math.Exp(-0.5)) {
				t.Errorf("%+v, one width away: %.12g, want 0.61", tt.g, got)
			}
		}
		if got := must(tt.g.Potential(tt.g.OptimumC)); got != 1 {
			t.Errorf("%+v at its optimum: %g, want 1", tt.g, got)
		}
	}
	// A variant seen in practice, e rounded to 2.718: how far it moves cool season at 10 °C (computed).
	exact, z := must(calc.CoolSeason().Potential(10)), 0.5*(10/5.5)*(10/5.5)
	if gap := math.Pow(2.718, -z) - exact; !within(gap, 3.3e-5, 0.05e-5) {
		t.Errorf("with e = 2.718 the potential moves by %g, want 3.3e-5", gap)
	}
}

// A held curve is 1 from the optimum on and the same curve below it.
func TestHeldCurve(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := calc.WarmSeason()
		meanC := rapid.Float64Range(-40, 60).Draw(t, "mean")
		got := must(held(g).Potential(meanC))
		want := 1.0
		if meanC < g.OptimumC {
			want = must(g.Potential(meanC))
		}
		if got != want {
			t.Fatalf("held at %g °C: %g, want %g", meanC, got, want)
		}
	})
}

func TestGrowthPotentialProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := calc.GrowthCurve{
			OptimumC: rapid.Float64Range(10, 40).Draw(t, "optimum"),
			WidthC:   rapid.Float64Range(3, 12).Draw(t, "width"),
		}
		offsetC := rapid.Float64Range(0, 60).Draw(t, "offset")
		below, above := must(g.Potential(g.OptimumC-offsetC)), must(g.Potential(g.OptimumC+offsetC))
		if !within(below, above, absolute) {
			t.Fatalf("%+v, %g °C away: %g below, %g above", g, offsetC, below, above)
		}
		if below <= 0 || below > 1 {
			t.Fatalf("%g is outside (0, 1]", below)
		}
		further := must(g.Potential(g.OptimumC - offsetC - rapid.Float64Range(0, 20).Draw(t, "further")))
		if further > below {
			t.Fatalf("%g at %g °C from the optimum, %g further away", below, offsetC, further)
		}
	})
}

// Outside one width from the optimum the hourly figure is the larger, within it
// the smaller; and a constant day has one figure.
func TestPotentialOverHoursAgainstTheDailyMean(t *testing.T) {
	g := calc.CoolSeason()
	for _, tt := range []struct {
		name          string
		meanC, swingC float64
		hoursLarger   bool
	}{
		{"cold day, all beyond one width", 8, 5, true},
		{"hot day, all beyond one width", 32, 5, true},
		{"fine day, all within one width", 20, 5, false},
	} {
		hours := must(g.PotentialOverHours(wave(tt.meanC, tt.swingC, 24)))
		mean := must(g.Potential(tt.meanC))
		if (hours > mean) != tt.hoursLarger {
			t.Errorf("%s: over hours %g, of the mean %g", tt.name, hours, mean)
		}
	}
	for _, d := range knownday.Days() {
		over := must(g.PotentialOverHours(d.HoursC))
		if d.Name == "constant" && !agrees(over, must(g.Potential(d.HourlyMeanC))) {
			t.Errorf("constant day: over hours %g, of the mean %g", over, must(g.Potential(d.HourlyMeanC)))
		}
		if over <= 0 || over > 1 {
			t.Errorf("%s: %g is outside (0, 1]", d.Name, over)
		}
	}
	if got := must(held(g).PotentialOverHours([]float64{20, 30, 40})); got != 1 {
		t.Errorf("held, all at or above the optimum: %g, want 1", got)
	}
}

func TestGrowthPotentialRefuses(t *testing.T) {
	curves := []struct {
		name string
		g    calc.GrowthCurve
	}{
		{"zero value", calc.GrowthCurve{}},
		{"width 0", calc.GrowthCurve{OptimumC: 20}},
		{"width below 0", calc.GrowthCurve{OptimumC: 20, WidthC: -5.5}},
		{"width NaN", calc.GrowthCurve{OptimumC: 20, WidthC: nan}},
		{"width infinite", calc.GrowthCurve{OptimumC: 20, WidthC: infinity}},
		{"optimum NaN", calc.GrowthCurve{OptimumC: nan, WidthC: 5.5}},
		{"optimum infinite", calc.GrowthCurve{OptimumC: infinity, WidthC: 5.5, HeldAbove: true}},
	}
	for _, tt := range curves {
		t.Run(tt.name, func(t *testing.T) {
			checkError(t, 0, tt.g.Validate(), calc.ErrCurve)
			got, err := tt.g.Potential(15)
			checkError(t, got, err, calc.ErrCurve)
			got, err = tt.g.PotentialOverHours([]float64{15})
			checkError(t, got, err, calc.ErrCurve)
		})
	}
	for _, g := range []calc.GrowthCurve{calc.CoolSeason(), held(calc.WarmSeason())} {
		for _, meanC := range []float64{nan, infinity, -infinity} {
			got, err := g.Potential(meanC)
			checkError(t, got, err, calc.ErrNotFinite)
			got, err = g.PotentialOverHours([]float64{15, meanC})
			checkError(t, got, err, calc.ErrNotFinite)
		}
		got, err := g.PotentialOverHours(nil)
		checkError(t, got, err, calc.ErrNoValues)
	}
	// Finite and absurd is answered: nothing grows there.
	if got := must(calc.CoolSeason().Potential(math.MaxFloat64)); got != 0 {
		t.Errorf("at the largest number: %g, want 0", got)
	}
	// "Some 38 widths away" it underflows to 0, at 37 it does not yet.
	g := calc.CoolSeason()
	if near, far := must(g.Potential(g.OptimumC-37*g.WidthC)), must(g.Potential(g.OptimumC-39*g.WidthC)); near <= 0 || far != 0 {
		t.Errorf("37 widths away %g, 39 widths away %g", near, far)
	}
}
