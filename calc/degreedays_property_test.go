package calc_test

import (
	"math"
	"slices"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
	"pgregory.net/rapid"

	"swardbook/calc"
)

// slack forgives rounding where two sums of the size of a day's degree days are
// compared.
const slack = 1e-10

// overMethods runs a property for every method with each of the cutoffs it takes.
func overMethods(t *testing.T, cutoffs []calc.Cutoff, property func(t *rapid.T, m calc.Method, cutoff calc.Cutoff)) {
	for _, m := range calc.Methods() {
		for _, cutoff := range m.Cutoffs() {
			if !slices.Contains(cutoffs, cutoff) {
				continue
			}
			t.Run(string(m)+"/"+string(cutoff), func(t *testing.T) {
				rapid.Check(t, func(t *rapid.T) { property(t, m, cutoff) })
			})
		}
	}
}

// Degree days are never below 0, and a higher base never gives more.
func TestDegreeDaysFallWithTheBase(t *testing.T) {
	overMethods(t, calc.Cutoffs(), func(t *rapid.T, m calc.Method, cutoff calc.Cutoff) {
		d, th := drawDay(t), drawThresholds(t, cutoff)
		got := must(anyMethod(m, d, th))
		if got < 0 {
			t.Fatalf("%g is below 0", got)
		}
		raised := th
		raised.LowerC += rapid.Float64Range(0, 0.99).Draw(t, "raise") * (th.UpperC - th.LowerC)
		if raised.LowerC >= raised.UpperC {
			return // rounding brought them together
		}
		if more := must(anyMethod(m, d, raised)); more > got+slack {
			t.Fatalf("base %g gives %g, base %g gives %g", th.LowerC, got, raised.LowerC, more)
		}
	})
}

// A warmer day never has fewer degree days, with no cutoff or a horizontal one.
// (The other cutoffs are there to make a hot day count less.)
func TestDegreeDaysRiseWithTemperature(t *testing.T) {
	rising := []calc.Cutoff{calc.CutoffNone, calc.CutoffHorizontal}
	overMethods(t, rising, func(t *rapid.T, m calc.Method, cutoff calc.Cutoff) {
		d, th := drawDay(t), drawThresholds(t, cutoff)
		warmer := d
		warmer.highC += rapid.Float64Range(0, 15).Draw(t, "high warmer")
		warmer.lowC = min(warmer.highC, d.lowC+rapid.Float64Range(0, 15).Draw(t, "low warmer"))
		warmer.nextLowC += rapid.Float64Range(0, 15).Draw(t, "next low warmer")
		cool, warm := must(anyMethod(m, d, th)), must(anyMethod(m, warmer, th))
		if warm < cool-slack {
			t.Fatalf("%+v gives %g, the warmer %+v gives %g", d, cool, warmer, warm)
		}
	})
}

// Every cutoff only takes away: horizontal from none, intermediate and vertical
// from horizontal. And all four agree below the upper threshold.
func TestCutoffsOnlyTakeAway(t *testing.T) {
	overMethods(t, calc.Cutoffs(), func(t *rapid.T, m calc.Method, cutoff calc.Cutoff) {
		d, th := drawDay(t), drawThresholds(t, cutoff)
		fuller := th
		fuller.Cutoff = calc.CutoffNone
		if cutoff == calc.CutoffIntermediate || cutoff == calc.CutoffVertical {
			fuller.Cutoff = calc.CutoffHorizontal
		}
		cut, full := must(anyMethod(m, d, th)), must(anyMethod(m, d, fuller))
		if cut > full+slack {
			t.Fatalf("%s gives %g, %s gives %g", th.Cutoff, cut, fuller.Cutoff, full)
		}
		if max(d.highC, d.nextLowC) <= th.UpperC && !within(cut, full, slack) {
			t.Fatalf("below the upper threshold %s gives %g, %s gives %g", th.Cutoff, cut, fuller.Cutoff, full)
		}
	})
}

// A double method is the mean of two single days (the intermediate cutoff's floor
// apart, which comes after the sum), and the single day when the lows are equal.
func TestDoubleIsTheMeanOfTwoSingles(t *testing.T) {
	pairs := map[calc.Method]calc.Method{
		calc.MethodDoubleTriangle: calc.MethodSingleTriangle,
		calc.MethodDoubleSine:     calc.MethodSingleSine,
	}
	for double, single := range pairs {
		for _, cutoff := range calc.Cutoffs() {
			rapid.Check(t, func(t *rapid.T) {
				d, th := drawDay(t), drawThresholds(t, cutoff)
				second := day{highC: max(d.highC, d.nextLowC), lowC: min(d.highC, d.nextLowC)}
				got := must(onExtremes(double, d, th))
				mean := (must(onExtremes(single, d, th)) + must(onExtremes(single, second, th))) / 2
				if cutoff == calc.CutoffIntermediate && got > mean+slack || cutoff != calc.CutoffIntermediate && !within(got, mean, slack) {
					t.Fatalf("%s %s of %+v: %g, mean of two singles %g", double, cutoff, d, got, mean)
				}
				same := day{highC: d.highC, lowC: d.lowC, nextLowC: d.lowC}
				if got, want := must(onExtremes(double, same, th)), must(onExtremes(single, d, th)); !within(got, want, slack) {
					t.Fatalf("%s %s with equal lows: %g, single %g", double, cutoff, got, want)
				}
			})
		}
	}
}

// Flooring the extremes never gives less than flooring the mean (McMaster &
// Wilhelm 1997: method 1 gives less whenever only the low is below the base).
func TestFlooredExtremesAtLeastFlooredMean(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d, th := drawDay(t), drawThresholds(t, calc.CutoffNone)
		first, second := must(anyMethod(calc.MethodMean, d, th)), must(onExtremes(calc.MethodFlooredExtremes, d, th))
		if first > second+slack {
			t.Fatalf("%+v over %g: method 1 %g, method 2 %g", d, th.LowerC, first, second)
		}
		onlyLowBelow := d.lowC < th.LowerC-1e-6 && d.highC > th.LowerC+1e-6
		if onlyLowBelow && first >= second {
			t.Fatalf("only the low is below: method 1 %g, method 2 %g", first, second)
		}
	})
}

// curve gives the temperature at a time of day from 0 to 1, the high at ½.
type curve func(d day, time float64) float64

func triangleCurve(d day, time float64) float64 {
	if time <= 0.5 {
		return d.lowC + (d.highC-d.lowC)*2*time
	}
	return d.highC + (d.nextLowC-d.highC)*(2*time-1)
}

func sineCurve(d day, time float64) float64 {
	if time <= 0.5 {
		return (d.highC+d.lowC)/2 - (d.highC-d.lowC)/2*math.Cos(2*math.Pi*time)
	}
	return (d.highC+d.nextLowC)/2 - (d.highC-d.nextLowC)/2*math.Cos(2*math.Pi*time)
}

// rate is what a moment at a temperature counts, as the cutoffs define it.
func rate(temperatureC float64, th calc.Thresholds) float64 {
	switch {
	case temperatureC <= th.LowerC:
		return 0
	case th.Cutoff == calc.CutoffNone || temperatureC <= th.UpperC:
		return temperatureC - th.LowerC
	case th.Cutoff == calc.CutoffHorizontal:
		return th.UpperC - th.LowerC
	case th.Cutoff == calc.CutoffIntermediate:
		return th.UpperC - th.LowerC - (temperatureC - th.UpperC)
	}
	return 0 // vertical
}

// crossing finds by bisection when a curve that only rises or only falls between
// two times passes a temperature; ok is false when it does not.
func crossing(temperatureAt func(float64) float64, from, to, thresholdC float64) (time float64, ok bool) {
	startAbove := temperatureAt(from) > thresholdC
	if startAbove == (temperatureAt(to) > thresholdC) {
		return 0, false
	}
	for range 60 {
		middle := (from + to) / 2
		if (temperatureAt(middle) > thresholdC) == startAbove {
			from = middle
		} else {
			to = middle
		}
	}
	return (from + to) / 2, true
}

// integrate sums the rate over the day by Gauss-Legendre quadrature of the curve,
// piece by piece between the moments at which it crosses a threshold.
func integrate(shape curve, d day, th calc.Thresholds) float64 {
	temperatureAt := func(time float64) float64 { return shape(d, time) }
	var total float64
	for _, half := range [][2]float64{{0, 0.5}, {0.5, 1}} {
		marks := []float64{half[0]}
		lower, lowerOK := crossing(temperatureAt, half[0], half[1], th.LowerC)
		upper, upperOK := crossing(temperatureAt, half[0], half[1], th.UpperC)
		if lowerOK && upperOK {
			lower, upper = min(lower, upper), max(lower, upper)
		}
		if lowerOK {
			marks = append(marks, lower)
		}
		if upperOK {
			marks = append(marks, upper)
		}
		marks = append(marks, half[1])
		for i := range len(marks) - 1 {
			total += quad.Fixed(func(time float64) float64 { return rate(temperatureAt(time), th) },
				marks[i], marks[i+1], 24, quad.Legendre{}, 0)
		}
	}
	return max(total, 0)
}

// The second route: the area under the drawn curve by numerical integration
// (gonum.org/v1/gonum/integrate/quad), which shares no formula with the code.
func TestCurvesAgainstQuadrature(t *testing.T) {
	shapes := map[calc.Method]curve{
		calc.MethodSingleTriangle: triangleCurve, calc.MethodDoubleTriangle: triangleCurve,
		calc.MethodSingleSine: sineCurve, calc.MethodDoubleSine: sineCurve,
	}
	for m, shape := range shapes {
		for _, cutoff := range calc.Cutoffs() {
			t.Run(string(m)+"/"+string(cutoff), func(t *testing.T) {
				rapid.Check(t, func(t *rapid.T) {
					d, th := drawDay(t), drawThresholds(t, cutoff)
					if m == calc.MethodSingleTriangle || m == calc.MethodSingleSine {
						d.nextLowC = d.lowC
					}
					// A vertical cutoff jumps at U, and a day flat beside it decides on one last bit.
					if cutoff == calc.CutoffVertical && (nearly(d.highC, th.UpperC) || nearly(d.lowC, th.UpperC) || nearly(d.nextLowC, th.UpperC)) {
						t.Skip("on the jump")
					}
					got, want := must(onExtremes(m, d, th)), integrate(shape, d, th)
					if !within(got, want, 1e-7) {
						t.Fatalf("%+v, %+v: %.12g, by quadrature %.12g", d, th, got, want)
					}
				})
			})
		}
	}
}

// nearly reports whether two temperatures are so close that the quadrature's own
// crossing is not sharp.
func nearly(a, b float64) bool { return math.Abs(a-b) < 1e-6 }

// Degree-hours of a day sampled finely come to the area under its curve.
func TestDegreeHoursAgainstSine(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d, th := drawDay(t), drawThresholds(t, calc.CutoffHorizontal)
		d.nextLowC = d.lowC
		const samples = 4800
		hoursC := make([]float64, samples)
		for i := range hoursC {
			hoursC[i] = sineCurve(d, (float64(i)+0.5)/samples)
		}
		got, want := must(calc.DegreeDaysFromHours(hoursC, th)), must(calc.DegreeDaysSingleSine(d.highC, d.lowC, th))
		if !within(got, want, 1e-3) {
			t.Fatalf("%+v, %+v: %g from %d readings, single sine %g", d, th, got, samples, want)
		}
	})
}
