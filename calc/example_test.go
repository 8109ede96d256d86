package calc_test

import (
	"errors"
	"fmt"
	"slices"

	"swardbook/calc"
)

func ExampleHourlyMean() {
	readings := []float64{ // °C, 00:00 to 23:00
		14.2, 13.6, 13.1, 12.7, 12.4, 12.2, 12.9, 14.8, 17.1, 19.4, 21.5, 23.2,
		24.6, 25.7, 26.3, 26.1, 25.4, 24.0, 22.1, 20.2, 18.6, 17.3, 16.2, 15.3,
	}
	mean, err := calc.HourlyMean(readings)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("24-hour mean %.2f °C\n", mean)
	// Output: 24-hour mean 18.70 °C
}

func ExampleMidrangeMean() {
	mean, err := calc.MidrangeMean(26.8, 11.9)
	fmt.Printf("high/low mean %.2f °C, error %v\n", mean, err)

	_, err = calc.MidrangeMean(11.9, 26.8)
	fmt.Println(err)
	fmt.Println("swapped:", errors.Is(err, calc.ErrHighBelowLow))
	// Output:
	// high/low mean 19.35 °C, error <nil>
	// high/low mean: high 11.9 °C is below low 26.8 °C; check whether the two were swapped: high below low
	// swapped: true
}

func ExampleBridgeGaps() {
	slots := []calc.Slot{
		{C: 24, Known: true}, {}, {}, {C: 27, Known: true}, // a gap of two
		{}, // a gap at the end
	}
	bridged, wasBridged := calc.BridgeGaps(slots, 3)
	for i, slot := range bridged {
		fmt.Println(slot.C, slot.Known, wasBridged[i])
	}
	// Output:
	// 24 true false
	// 25 true true
	// 26 true true
	// 27 true false
	// 0 false false
}

func ExampleMethods() {
	for _, method := range calc.Methods() {
		fmt.Println(method)
	}
	// Output:
	// mean
	// floored-extremes
	// four-case
	// single-triangle
	// double-triangle
	// single-sine
	// double-sine
	// degree-hours
}

func ExampleMethod_Cutoffs() {
	fmt.Println(calc.MethodFourCase.Cutoffs())
	fmt.Println(calc.MethodMean.Cutoffs())
	fmt.Println(calc.MethodSingleSine.Cutoffs())
	// Output:
	// [none]
	// [none horizontal]
	// [none horizontal intermediate vertical]
}

func ExampleCutoffs() {
	fmt.Println(calc.Cutoffs())
	// Output: [none horizontal intermediate vertical]
}

func ExampleThresholds_Validate() {
	err := calc.Thresholds{LowerC: 10, UpperC: 5, Cutoff: calc.CutoffHorizontal}.Validate()
	fmt.Println(err)
	// Output: upper threshold 5 °C is not above base 10 °C; raise it or use no cutoff: unusable thresholds
}

func ExampleDegreeDaysFromMean() {
	dd, err := calc.DegreeDaysFromMean(18.7, calc.Thresholds{LowerC: 0})
	fmt.Printf("%.1f °C-days base 0, error %v\n", dd, err)
	dd, err = calc.DegreeDaysFromMean(7.5, calc.Thresholds{LowerC: 10})
	fmt.Printf("%.1f °C-days base 10, error %v\n", dd, err)
	// Output:
	// 18.7 °C-days base 0, error <nil>
	// 0.0 °C-days base 10, error <nil>
}

func ExampleDegreeDaysFlooredExtremes() {
	// The 86/50 rule on a day of 44 to 95 °F.
	thresholds := calc.Thresholds{
		LowerC: calc.CelsiusFromFahrenheit(50),
		UpperC: calc.CelsiusFromFahrenheit(86),
		Cutoff: calc.CutoffHorizontal,
	}
	dd, err := calc.DegreeDaysFlooredExtremes(calc.CelsiusFromFahrenheit(95), calc.CelsiusFromFahrenheit(44), thresholds)
	fmt.Printf("%.1f °C-days = %.1f °F-days, error %v\n", dd, calc.FahrenheitDegreesFromCelsius(dd), err)
	// Output: 10.0 °C-days = 18.0 °F-days, error <nil>
}

func ExampleDegreeDaysFourCase() {
	dd, err := calc.DegreeDaysFourCase(18, 4, calc.Thresholds{LowerC: 10})
	fmt.Printf("%.2f °C-days base 10, error %v\n", dd, err)
	// Output: 2.50 °C-days base 10, error <nil>
}

func ExampleDegreeDaysSingleTriangle() {
	dd, err := calc.DegreeDaysSingleTriangle(18, 4, calc.Thresholds{LowerC: 10})
	fmt.Printf("%.3f °C-days base 10, error %v\n", dd, err)
	// Output: 2.286 °C-days base 10, error <nil>
}

func ExampleDegreeDaysDoubleTriangle() {
	dd, err := calc.DegreeDaysDoubleTriangle(18, 4, 7, calc.Thresholds{LowerC: 10})
	fmt.Printf("%.3f °C-days base 10, error %v\n", dd, err)
	// A night warmer than the day: the second half day rises from 18 to 22 °C.
	dd, err = calc.DegreeDaysDoubleTriangle(18, 4, 22, calc.Thresholds{LowerC: 10})
	fmt.Printf("%.3f °C-days base 10, error %v\n", dd, err)
	// Output:
	// 2.597 °C-days base 10, error <nil>
	// 6.143 °C-days base 10, error <nil>
}

func ExampleDegreeDaysSingleSine() {
	thresholds := calc.Thresholds{LowerC: 10, UpperC: 30}
	for _, cutoff := range calc.Cutoffs() {
		thresholds.Cutoff = cutoff
		dd, err := calc.DegreeDaysSingleSine(38, 5, thresholds)
		fmt.Printf("%-12s %6.3f °C-days, error %v\n", cutoff, dd, err)
	}
	// Output:
	// none         12.339 °C-days, error <nil>
	// horizontal   10.623 °C-days, error <nil>
	// intermediate  8.908 °C-days, error <nil>
	// vertical      4.069 °C-days, error <nil>
}

func ExampleDegreeDaysDoubleSine() {
	dd, err := calc.DegreeDaysDoubleSine(18, 4, 7, calc.Thresholds{LowerC: 10})
	fmt.Printf("%.3f °C-days base 10, error %v\n", dd, err)
	// Output: 2.968 °C-days base 10, error <nil>
}

func ExampleDegreeDaysFromHours() {
	// Four readings, evenly spaced over the day; two of them above the base.
	dd, err := calc.DegreeDaysFromHours([]float64{6, 12, 18, 9}, calc.Thresholds{LowerC: 10})
	fmt.Printf("%.1f °C-days base 10, error %v\n", dd, err)
	// Output: 2.5 °C-days base 10, error <nil>
}

func ExampleCoolSeason() {
	fmt.Printf("%+v\n", calc.CoolSeason())
	// Output: {OptimumC:20 WidthC:5.5 HeldAbove:false}
}

func ExampleWarmSeason() {
	fmt.Printf("%+v\n", calc.WarmSeason())
	// Output: {OptimumC:31 WidthC:7 HeldAbove:false}
}

func ExampleCoolSeasonF() {
	curve := calc.CoolSeasonF()
	fmt.Printf("optimum %.2f °C, width %.4f °C\n", curve.OptimumC, curve.WidthC)
	// Output: optimum 20.00 °C, width 5.5556 °C
}

func ExampleWarmSeasonF() {
	curve := calc.WarmSeasonF()
	fmt.Printf("optimum %.4f °C, width %.4f °C\n", curve.OptimumC, curve.WidthC)
	// Output: optimum 31.1111 °C, width 6.6667 °C
}

func ExampleGrowthCurve_Validate() {
	fmt.Println(calc.GrowthCurve{OptimumC: 24}.Validate())
	// Output: growth curve: width is 0 °C; give a number above 0: unusable growth curve
}

func ExampleGrowthCurve_Potential() {
	for _, mean := range []float64{10, 15, 20, 25} {
		potential, err := calc.CoolSeason().Potential(mean)
		fmt.Printf("%g °C: %.0f %%, error %v\n", mean, 100*potential, err)
	}
	warm := calc.WarmSeason()
	warm.HeldAbove = true
	potential, err := warm.Potential(35)
	fmt.Printf("warm season held at 35 °C: %.0f %%, error %v\n", 100*potential, err)
	// Output:
	// 10 °C: 19 %, error <nil>
	// 15 °C: 66 %, error <nil>
	// 20 °C: 100 %, error <nil>
	// 25 °C: 66 %, error <nil>
	// warm season held at 35 °C: 100 %, error <nil>
}

func ExampleGrowthCurve_PotentialOverHours() {
	// A cold night and a warm afternoon: some growth, though the mean of 10 °C has less.
	overHours, err := calc.CoolSeason().PotentialOverHours([]float64{2, 10, 18, 10})
	fmt.Printf("over hours %.0f %%, error %v\n", 100*overHours, err)
	ofMean, err := calc.CoolSeason().Potential(10)
	fmt.Printf("of the mean %.0f %%, error %v\n", 100*ofMean, err)
	// Output:
	// over hours 33 %, error <nil>
	// of the mean 19 %, error <nil>
}

func ExampleNitrogenUse() {
	potential, err := calc.CoolSeason().Potential(15)
	if err != nil {
		fmt.Println(err)
		return
	}
	use, err := calc.NitrogenUse(potential, 3, 30)
	fmt.Printf("%.3f g N/m² that day, error %v\n", use, err)
	// Output: 0.066 g N/m² that day, error <nil>
}

func ExampleCelsiusFromFahrenheit() {
	fmt.Printf("%.1f °C\n", calc.CelsiusFromFahrenheit(68))
	// Output: 20.0 °C
}

func ExampleFahrenheitFromCelsius() {
	fmt.Printf("%.1f °F\n", calc.FahrenheitFromCelsius(31))
	// Output: 87.8 °F
}

func ExampleFahrenheitDegreesFromCelsius() {
	fmt.Printf("%.0f °F-days\n", calc.FahrenheitDegreesFromCelsius(200))
	// Output: 360 °F-days
}

func ExampleCelsiusDegreesFromFahrenheit() {
	fmt.Printf("%.0f °C-days\n", calc.CelsiusDegreesFromFahrenheit(200))
	// Output: 111 °C-days
}

func ExampleKilogramsPerHectareFromGramsPerSquareMetre() {
	fmt.Printf("%.0f kg/ha\n", calc.KilogramsPerHectareFromGramsPerSquareMetre(2.9))
	// Output: 29 kg/ha
}

func ExampleGramsPerSquareMetreFromKilogramsPerHectare() {
	fmt.Printf("%.1f g/m²\n", calc.GramsPerSquareMetreFromKilogramsPerHectare(29))
	// Output: 2.9 g/m²
}

func ExamplePoundsPer1000SquareFeetFromGramsPerSquareMetre() {
	fmt.Printf("%.2f lb/1000 ft²\n", calc.PoundsPer1000SquareFeetFromGramsPerSquareMetre(3))
	// Output: 0.61 lb/1000 ft²
}

func ExampleGramsPerSquareMetreFromPoundsPer1000SquareFeet() {
	fmt.Printf("%.2f g/m²\n", calc.GramsPerSquareMetreFromPoundsPer1000SquareFeet(1))
	// Output: 4.88 g/m²
}

func ExampleReached() {
	fmt.Println(calc.Reached(0.1+0.1+0.1, 0.3), calc.Reached(199.3, 200))
	// Output: true false
}

func ExampleFirstPassage() {
	ahead := []float64{18.4, 15.0, 12.7, 14.9} // °C-days a day
	days, reached := calc.FirstPassage(158, slices.Values(ahead), 200)
	fmt.Printf("in %d days: %v\n", days, reached)
	days, reached = calc.FirstPassage(100, slices.Values(ahead), 200)
	fmt.Printf("within %d days: %v\n", days, reached)
	// Output:
	// in 3 days: true
	// within 4 days: false
}

func ExampleRank() {
	dates := []string{"3 May", "4 May", "4 May", "5 May", "5 May", "5 May", "6 May", "6 May", "8 May", "11 May"}
	for _, share := range []float64{0.1, 0.5, 0.9} {
		rank, err := calc.Rank(share, len(dates))
		if err != nil {
			fmt.Println(err)
			return
		}
		fmt.Println(dates[rank-1])
	}
	// Output:
	// 3 May
	// 5 May
	// 8 May
}

func ExampleCatalogue() {
	for _, formula := range calc.Catalogue() {
		if formula.ID == "midrange-mean" {
			fmt.Printf("%s: %s\n%s (%s)\n", formula.Title, formula.Words, formula.Source, formula.Status)
		}
	}
	// Output:
	// High/low mean: Add the day's high and low and divide by 2.
	// McMaster & Wilhelm 1997; Bernhardt & Carleton 2018, J. Climate 31:979 (printed)
}

func ExampleHeatIndexF() {
	index, err := calc.HeatIndexF(96, 65)
	fmt.Printf("%.0f °F, %v\n", index, err)
	// Output: 121 °F, <nil>
}

func ExampleHeatBandOf() {
	fmt.Println(calc.HeatBandOf(95))
	// Output: extreme caution
}

func ExampleHoursBelow() {
	hours, err := calc.HoursBelow(4, -4, 0)
	fmt.Printf("%.0f hours below freezing, %v\n", hours, err)
	// Output: 12 hours below freezing, <nil>
}

func ExampleFormula_Origin() {
	fmt.Println(calc.Formula{Source: "Zalom et al. 1983", Status: calc.StatusPrinted}.Origin())
	fmt.Println(calc.Formula{Source: "common practice", Status: calc.StatusCommonPractice}.Origin())
	// Output:
	// Zalom et al. 1983 (printed)
	// common practice
}
