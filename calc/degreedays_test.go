package calc_test

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"swardbook/calc"
	"swardbook/calc/knownday"
)

// All 209 rows computed at 50 digits from the published formulas and checked by
// quadrature; sources in testdata/calc/SOURCES.md.
func TestDegreeDayReferenceRows(t *testing.T) {
	methods := map[string]calc.Method{
		"average_m1": calc.MethodMean, "average_m2": calc.MethodFlooredExtremes, "mcvicker": calc.MethodFourCase,
		"single_triangle": calc.MethodSingleTriangle, "double_triangle": calc.MethodDoubleTriangle,
		"single_sine": calc.MethodSingleSine, "double_sine": calc.MethodDoubleSine,
	}
	for i, row := range reference(t, "degree_day_cases.csv", 209) {
		m, ok := methods[row["method"]]
		if !ok {
			t.Fatalf("row %d: method %q", i+2, row["method"])
		}
		th := calc.Thresholds{LowerC: number(t, row, "lower_c"), Cutoff: calc.Cutoff(row["cutoff"])}
		if row["upper_c"] != "" {
			th.UpperC = number(t, row, "upper_c")
		}
		d := day{highC: number(t, row, "tmax_c"), lowC: number(t, row, "tmin_c")}
		if row["next_tmin_c"] != "" {
			d.nextLowC = number(t, row, "next_tmin_c")
		}
		got, err := anyMethod(m, d, th)
		if want := number(t, row, "dd_c"); err != nil || !agrees(got, want) {
			t.Errorf("row %d %v: %.12g (%v), want %.12g", i+2, row, got, err, want)
		}
	}
}

func TestDegreeDaysOfKnownDays(t *testing.T) {
	days := make(map[string]knownday.Day)
	for _, d := range knownday.Days() {
		days[d.Name] = d
	}
	for _, row := range knownday.AllDegreeDays() {
		d := days[row.Day]
		th := calc.Thresholds{LowerC: row.LowerC}
		if row.UpperC > row.LowerC {
			th.UpperC, th.Cutoff = row.UpperC, calc.CutoffHorizontal
		}
		var got float64
		switch row.Method {
		case "mean":
			got = must(calc.DegreeDaysFromMean(must(calc.HourlyMean(d.HoursC)), th))
		case "midrange":
			got = must(calc.DegreeDaysFromMean(must(calc.MidrangeMean(d.HighC, d.LowC)), th))
		case "floored-extremes":
			got = must(calc.DegreeDaysFlooredExtremes(d.HighC, d.LowC, th))
		case "single-sine":
			got = must(calc.DegreeDaysSingleSine(d.HighC, d.LowC, th))
		case "degree-hours":
			got = must(calc.DegreeDaysFromHours(d.HoursC, th))
		default:
			t.Fatalf("method %q", row.Method)
		}
		if !within(got, row.WantC, row.Tolerance) {
			t.Errorf("%s, %s, %g to %g: %.12g, want %.12g (%s)", row.Day, row.Method, row.LowerC, row.UpperC, got, row.WantC, row.Source)
		}
	}
}

// The four-case rule as Met Éireann's page prints it, one day in each case and
// one on each border; values by hand from that formula.
func TestFourCases(t *testing.T) {
	tests := []struct {
		name                string
		highC, lowC, wantDD float64
	}{
		{"low above the base", 18, 12, 5},
		{"low at the base", 18, 10, 4},
		{"mean above, low below", 18, 4, 2.5},
		{"mean at the base", 14, 6, 1},
		{"mean below, high above", 12, 4, 0.5},
		{"high at the base", 10, 4, 0},
		{"all below", 9, 4, 0},
	}
	for _, tt := range tests {
		if got := must(calc.DegreeDaysFourCase(tt.highC, tt.lowC, calc.Thresholds{LowerC: 10})); !agrees(got, tt.wantDD) {
			t.Errorf("%s: %g, want %g", tt.name, got, tt.wantDD)
		}
	}
}

// Four days of the 86/50 °F rule, computed in °F and converted by 5/9 only:
// (low, high) in °F, degree days in °F. Base 50 °F is 10 °C, 86 °F is 30 °C.
func TestEightySixFifty(t *testing.T) {
	th := calc.Thresholds{LowerC: calc.CelsiusFromFahrenheit(50), UpperC: calc.CelsiusFromFahrenheit(86), Cutoff: calc.CutoffHorizontal}
	for _, tt := range []struct{ lowF, highF, wantF float64 }{
		{44, 95, 18}, {40, 58, 4}, {62, 90, 24}, {48, 70, 10},
	} {
		got := must(calc.DegreeDaysFlooredExtremes(calc.CelsiusFromFahrenheit(tt.highF), calc.CelsiusFromFahrenheit(tt.lowF), th))
		if gotF := calc.FahrenheitDegreesFromCelsius(got); !agrees(gotF, tt.wantF) {
			t.Errorf("%g/%g °F: %g °F-days, want %g", tt.lowF, tt.highF, gotF, tt.wantF)
		}
	}
}

// A day whose next low lies above its high: the second half day rises from the
// high to the next low. Triangle values by hand: base 10, no cutoff, 14 to 20,
// then up to 24: mean 17 and 22, half of each over 10 = 9.5.
func TestDoubleMethodsOnAWarmNextNight(t *testing.T) {
	none := calc.Thresholds{LowerC: 10}
	horizontal := calc.Thresholds{LowerC: 10, UpperC: 22, Cutoff: calc.CutoffHorizontal}
	tests := []struct {
		name                  string
		highC, lowC, nextLowC float64
		th                    calc.Thresholds
		want                  float64
	}{
		{"no cutoff", 20, 14, 24, none, 9.5},
		// Second half 20 to 24 in a line over U = 22: 12 less a quarter of 2 is 11.5; (7 + 11.5)/2.
		{"horizontal", 20, 14, 24, horizontal, 9.25},
		{"flat day, then warm", 14, 14, 18, none, 5},
		{"all below base, then above", 8, 4, 12, none, 0.25}, // (0 + (12-10)²/(2·4))/2
	}
	for _, tt := range tests {
		if got := must(calc.DegreeDaysDoubleTriangle(tt.highC, tt.lowC, tt.nextLowC, tt.th)); !agrees(got, tt.want) {
			t.Errorf("%s: %g, want %g", tt.name, got, tt.want)
		}
	}
	// No jump where the next low passes the high.
	for _, double := range []func(h, l, n float64, th calc.Thresholds) (float64, error){calc.DegreeDaysDoubleTriangle, calc.DegreeDaysDoubleSine} {
		at := must(double(20, 14, 20, horizontal))
		for _, step := range []float64{-1e-9, 1e-9} {
			if got := must(double(20, 14, 20+step, horizontal)); !within(got, at, 1e-8) {
				t.Errorf("next low %g beside the high: %.12g, at the high %.12g", step, got, at)
			}
		}
	}
}

// The intermediate cutoff's floor comes after the halves are added: L = 10,
// U = 20, first half day 26 to 44 (sum −5: 2·20 − 10 − 35), second 10 to 44.
func TestDoubleIntermediateIsFlooredAfterTheSum(t *testing.T) {
	th := calc.Thresholds{LowerC: 10, UpperC: 20, Cutoff: calc.CutoffIntermediate}
	single := must(calc.DegreeDaysSingleTriangle(44, 26, th))
	if single != 0 {
		t.Errorf("single triangle %g, want the floor 0", single)
	}
	// Second: A(10) = 17, A(20) = 24²/(2·34); 17 − 2·A(20) = 0.0588…: less than 5, so the day is 0.
	if got := must(calc.DegreeDaysDoubleTriangle(44, 26, 10, th)); got != 0 {
		t.Errorf("double triangle %g, want 0: flooring each half first would give 0.0294", got)
	}
	// Both halves positive. Low 21, high 23: 2·20 − 10 − 22 = 8; next low 31 (above the high): 2·20 − 10 − 27 = 3; (8 + 3)/2.
	if got := must(calc.DegreeDaysDoubleTriangle(23, 21, 31, th)); !agrees(got, 5.5) {
		t.Errorf("double triangle %g, want 5.5", got)
	}
	// Low 21, high 33: 30 − 27 = 3; next low 31 to 33: 30 − 32 = −2; (3 − 2)/2 = 0.5, not 1.5.
	if got := must(calc.DegreeDaysDoubleTriangle(33, 21, 31, th)); !agrees(got, 0.5) {
		t.Errorf("double triangle %g, want 0.5", got)
	}
}

// A day exactly at the upper threshold is not above it.
func TestVerticalCutoffAtTheThreshold(t *testing.T) {
	th := calc.Thresholds{LowerC: 10, UpperC: 30, Cutoff: calc.CutoffVertical}
	for _, m := range []calc.Method{calc.MethodSingleTriangle, calc.MethodSingleSine, calc.MethodDoubleTriangle, calc.MethodDoubleSine} {
		if got := must(onExtremes(m, day{30, 30, 30}, th)); got != 20 {
			t.Errorf("%s, flat at 30: %g, want 20", m, got)
		}
		if got := must(onExtremes(m, day{30.5, 30.5, 30.5}, th)); got != 0 {
			t.Errorf("%s, flat at 30.5: %g, want 0", m, got)
		}
	}
}

func TestMethodsAndCutoffs(t *testing.T) {
	wantMethods := []calc.Method{"mean", "floored-extremes", "four-case", "single-triangle", "double-triangle", "single-sine", "double-sine", "degree-hours"}
	if got := calc.Methods(); !slices.Equal(got, wantMethods) {
		t.Errorf("methods %v, want %v", got, wantMethods)
	}
	wantCutoffs := []calc.Cutoff{"none", "horizontal", "intermediate", "vertical"}
	if got := calc.Cutoffs(); !slices.Equal(got, wantCutoffs) {
		t.Errorf("cutoffs %v, want %v", got, wantCutoffs)
	}
	if got := calc.Method("mode").Cutoffs(); len(got) != 0 {
		t.Errorf("an unknown method takes %v", got)
	}
	calc.Methods()[0], calc.Cutoffs()[0] = "scribbled", "scribbled"
	if calc.Methods()[0] != calc.MethodMean || calc.Cutoffs()[0] != calc.CutoffNone {
		t.Error("a caller can change the lists")
	}
}

// Every method takes exactly the cutoffs it says it takes, and an empty cutoff
// as none.
func TestEveryMethodWithEveryCutoff(t *testing.T) {
	d := day{highC: 26, lowC: 12, nextLowC: 14}
	for _, m := range calc.Methods() {
		for _, cutoff := range calc.Cutoffs() {
			got, err := anyMethod(m, d, calc.Thresholds{LowerC: 10, UpperC: 30, Cutoff: cutoff})
			if slices.Contains(m.Cutoffs(), cutoff) {
				if err != nil || got <= 0 {
					t.Errorf("%s with %s: %g, %v", m, cutoff, got, err)
				}
			} else {
				checkError(t, got, err, calc.ErrCutoff)
			}
		}
		none := must(anyMethod(m, d, calc.Thresholds{LowerC: 10, Cutoff: calc.CutoffNone}))
		empty := must(anyMethod(m, d, calc.Thresholds{LowerC: 10}))
		if none != empty {
			t.Errorf("%s: %g with none, %g with an empty cutoff", m, none, empty)
		}
	}
}

func TestThresholdsValidate(t *testing.T) {
	tests := []struct {
		name string
		th   calc.Thresholds
		want error
	}{
		{"zero value: base 0, no cutoff", calc.Thresholds{}, nil},
		{"upper not read without a cutoff", calc.Thresholds{LowerC: 10, UpperC: nan, Cutoff: calc.CutoffNone}, nil},
		{"upper below lower not read either", calc.Thresholds{LowerC: 10, UpperC: 5}, nil},
		{"horizontal", calc.Thresholds{LowerC: 10, UpperC: 30, Cutoff: calc.CutoffHorizontal}, nil},
		{"upper equals lower", calc.Thresholds{LowerC: 10, UpperC: 10, Cutoff: calc.CutoffHorizontal}, calc.ErrThresholds},
		{"upper below lower", calc.Thresholds{LowerC: 10, UpperC: 5, Cutoff: calc.CutoffVertical}, calc.ErrThresholds},
		{"upper NaN", calc.Thresholds{LowerC: 10, UpperC: nan, Cutoff: calc.CutoffIntermediate}, calc.ErrThresholds},
		{"upper infinite", calc.Thresholds{LowerC: 10, UpperC: infinity, Cutoff: calc.CutoffHorizontal}, calc.ErrThresholds},
		{"lower NaN", calc.Thresholds{LowerC: nan}, calc.ErrThresholds},
		{"lower minus infinity", calc.Thresholds{LowerC: -infinity}, calc.ErrThresholds},
		{"unknown cutoff", calc.Thresholds{LowerC: 10, UpperC: 30, Cutoff: "sloping"}, calc.ErrCutoff},
		{"cutoff in capitals", calc.Thresholds{LowerC: 10, UpperC: 30, Cutoff: "Horizontal"}, calc.ErrCutoff},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			checkError(t, 0, tt.th.Validate(), tt.want)
			if tt.want == nil {
				return
			}
			for _, m := range calc.Methods() {
				got, err := anyMethod(m, day{26, 12, 14}, tt.th)
				if err == nil {
					t.Errorf("%s gave %g", m, got)
				}
			}
		})
	}
}

// What no method may turn into a number.
func TestDegreeDaysRefuse(t *testing.T) {
	const huge = math.MaxFloat64
	tests := []struct {
		name string
		day  day
		want error
	}{
		{"high below low", day{4, 12, 4}, calc.ErrHighBelowLow},
		{"high NaN", day{nan, 12, 4}, calc.ErrNotFinite},
		{"low NaN", day{12, nan, 4}, calc.ErrNotFinite},
		{"high infinite", day{infinity, 12, 4}, calc.ErrNotFinite},
		{"low minus infinity", day{12, -infinity, 4}, calc.ErrNotFinite},
		{"sum overflows", day{huge, huge, 4}, calc.ErrNotFinite},
		{"span overflows", day{huge, -huge, 4}, calc.ErrNotFinite},
	}
	for _, tt := range tests {
		for _, m := range calc.Methods() {
			if m == calc.MethodMean || m == calc.MethodDegreeHours {
				continue // they have no extremes
			}
			t.Run(fmt.Sprintf("%s/%s", tt.name, m), func(t *testing.T) {
				got, err := onExtremes(m, tt.day, calc.Thresholds{LowerC: 10})
				checkError(t, got, err, tt.want)
			})
		}
	}
	for _, nextLowC := range []float64{nan, infinity, -infinity} {
		for _, m := range []calc.Method{calc.MethodDoubleTriangle, calc.MethodDoubleSine} {
			got, err := onExtremes(m, day{20, 10, nextLowC}, calc.Thresholds{LowerC: 10})
			checkError(t, got, err, calc.ErrNotFinite)
		}
	}
	for _, nextLowC := range []float64{huge, -huge} { // alone fine, beside the high too large
		got, err := calc.DegreeDaysDoubleSine(huge/1.5, huge/4, nextLowC, calc.Thresholds{LowerC: 10})
		checkError(t, got, err, calc.ErrNotFinite)
	}
}

func TestDegreeDaysFromMeanAndHoursRefuse(t *testing.T) {
	base := calc.Thresholds{LowerC: 10}
	for _, meanC := range []float64{nan, infinity, -infinity} {
		got, err := calc.DegreeDaysFromMean(meanC, base)
		checkError(t, got, err, calc.ErrNotFinite)
		got, err = calc.DegreeDaysFromHours([]float64{12, meanC}, base)
		checkError(t, got, err, calc.ErrNotFinite)
	}
	got, err := calc.DegreeDaysFromHours(nil, base)
	checkError(t, got, err, calc.ErrNoValues)
	low := calc.Thresholds{LowerC: -math.MaxFloat64}
	got, err = calc.DegreeDaysFromMean(math.MaxFloat64, low)
	checkError(t, got, err, calc.ErrNotFinite)
	got, err = calc.DegreeDaysFromHours([]float64{math.MaxFloat64}, low)
	checkError(t, got, err, calc.ErrNotFinite)
	got, err = calc.DegreeDaysSingleSine(1e300, 1e300, low)
	if err == nil && !within(got, math.MaxFloat64, 1e301) {
		t.Errorf("a day of 1e300 over the lowest base: %g", got)
	}
}

// Days whose base lies one float64 above the low: rounding brings the sine's ratio
// below −1, where asin has no value. Found by search; the day is all but wholly
// above its base, so its degree days are the mean less the base.
func TestSineWithTheBaseBesideTheLow(t *testing.T) {
	for _, d := range []day{
		{highC: 7.1, lowC: -0x1.92fae1426792dp-48},
		{highC: 57.4, lowC: -0x1.516c7334aae1cp-47},
		{highC: 1, lowC: 0x1.0cca5a2e58c46p-43},
	} {
		th := calc.Thresholds{LowerC: math.Nextafter(d.lowC, 100)}
		got, err := calc.DegreeDaysSingleSine(d.highC, d.lowC, th)
		if want := d.highC / 2; err != nil || !agrees(got, want) {
			t.Errorf("%+v: %.12g (%v), want %.12g", d, got, err, want)
		}
	}
}
