package knownday

import "slices"

const (
	workedByHand = "by hand from the readings"
	fiftyDigits  = "computed at 50 digits from the stated formula"
)

// inventedC returns the readings of the invented day at 00:00 to 24:00: 25
// readings, the last of which is the next day's first. Sum of 00 to 23: 448.9.
func inventedC() []float64 {
	return []float64{
		14.2, 13.6, 13.1, 12.7, 12.4, 12.2, 12.9, 14.8, 17.1, 19.4, 21.5, 23.2, 24.6,
		25.7, 26.3, 26.1, 25.4, 24.0, 22.1, 20.2, 18.6, 17.3, 16.2, 15.3, 14.6,
	}
}

// Invented returns the invented day, readings 00:00 to 23:00: an ordinary clear
// day whose true extremes, 26.8 and 11.9 °C, fall between readings and whose two
// means are 0.65 °C apart.
func Invented() Day {
	return complete(Day{
		Name:   "invented",
		HoursC: inventedC()[:24],
		HighC:  26.8, LowC: 11.9,
		HourlyMeanC: 18.7041666667, MidrangeMeanC: 19.35,
		Tolerance: 1e-9, Source: fiftyDigits + "; formulas printed (AMS Glossary; McMaster & Wilhelm 1997)",
	})
}

// Shifted returns the same curve with readings 01:00 to 24:00, the other way of
// labelling a day's 24 hours.
func Shifted() Day {
	d := Invented()
	d.Name, d.HoursC = "invented, hours 01 to 24", inventedC()[1:]
	d.HourlyMeanC = 18.7208333333
	return complete(d)
}

// gaps are the invented day with readings missing.
func gaps() []Day {
	gap := func(name string, restC, bridgedC float64, missing ...int) Day {
		d := Invented()
		d.Name, d.Missing, d.MeanOfRestC, d.BridgedMeanC = name, missing, restC, bridgedC
		d.Whole = len(missing) <= LongestBridge
		d.Source = fiftyDigits
		return d
	}
	return []Day{
		Shifted(),
		gap("lost 13, 14, 15", 17.6571428571, 18.575, 13, 14, 15),
		gap("lost 03, 04, 05", 19.6, 18.775, 3, 4, 5),
		gap("lost 12 to 15", 17.31, 0, 12, 13, 14, 15),
		gap("lost 02 to 05", 19.925, 0, 2, 3, 4, 5),
	}
}

// clockChanges are civil days on which the clocks change. In spring 02:00 does
// not exist; in autumn 02:00 comes twice, here with the same reading.
func clockChanges() []Day {
	spring, autumn := Invented(), Invented()
	spring.Name, autumn.Name = "23 hours", "25 hours"
	spring.HoursC = slices.Delete(inventedC()[:24], 2, 3)
	spring.HourlyMeanC = 18.947826087
	spring.Source = fiftyDigits + ": sum 435.8 over 23"
	autumn.HoursC = slices.Insert(inventedC()[:24], 2, 13.1)
	autumn.HourlyMeanC = 18.48
	autumn.Source = workedByHand + ": (448.9 + 13.1)/25"
	return []Day{complete(spring), complete(autumn)}
}

// Convention is one way to take the invented day's mean, as a weighted sum: the
// weight of each reading (by its hour, 0 to 24), of the high and of the low, and
// what the sum is divided by.
type Convention struct {
	Name                  string
	Weights               map[int]float64
	HighWeight, LowWeight float64
	Divisor               float64
	MeanC                 float64
	Tolerance             float64
	Source                string
}

// Of returns the convention's mean of 25 readings from 00:00 to 24:00 and the
// day's extremes.
func (c Convention) Of(hoursC []float64, highC, lowC float64) float64 {
	sumC := c.HighWeight*highC + c.LowWeight*lowC
	for hour, readingC := range hoursC {
		sumC += c.Weights[hour] * readingC
	}
	return sumC / c.Divisor
}

// Readings25C returns the invented day's readings at 00:00 to 24:00, for
// [Convention.Of].
func Readings25C() []float64 { return inventedC() }

// evenly gives each of the hours from, from+step, … to the weight 1.
func evenly(from, to, step int) map[int]float64 {
	weights := make(map[int]float64)
	for hour := from; hour <= to; hour += step {
		weights[hour] = 1
	}
	return weights
}

// halfEnds halves the weights of 00:00 and 24:00, as the trapezoid rule does.
func halfEnds(weights map[int]float64) map[int]float64 {
	weights[0], weights[24] = 0.5, 0.5
	return weights
}

// without removes one hour.
func without(weights map[int]float64, hour int) map[int]float64 {
	delete(weights, hour)
	return weights
}

// ekholmModen are the Swedish weights of 07, 13 and 19 h, the high and the low.
func ekholmModen(name string, at07, at13, at19, high, low, meanC float64, source string) Convention {
	return Convention{
		Name: name, Weights: map[int]float64{7: at07, 13: at13, 19: at19},
		HighWeight: high, LowWeight: low, Divisor: 100, MeanC: meanC, Tolerance: 1e-9, Source: source,
	}
}

// Conventions returns the ways to take the invented day's mean, the two of the
// program first.
func Conventions() []Convention {
	const smhi = "weights printed, SMHI's table for 11 to 13° E; value computed"
	return []Convention{
		{Name: "24 hourly, 00 to 23", Weights: evenly(0, 23, 1), Divisor: 24, MeanC: 18.7041666667, Tolerance: 1e-9, Source: "AMS Glossary (printed); value computed"},
		{Name: "high/low, true extremes", HighWeight: 1, LowWeight: 1, Divisor: 2, MeanC: 19.35, Tolerance: 1e-9, Source: "McMaster & Wilhelm 1997 (printed); value computed"},
		{Name: "24 hourly, 01 to 24", Weights: evenly(1, 24, 1), Divisor: 24, MeanC: 18.7208333333, Tolerance: 1e-9, Source: "hour-ending labels (printed, US park-service station guide); value computed"},
		{Name: "trapezoid, 00 to 24", Weights: halfEnds(evenly(0, 24, 1)), Divisor: 24, MeanC: 18.7125, Tolerance: 1e-9, Source: "computed: the average of the two 24-hour rows"},
		{Name: "high/low of the readings", Weights: map[int]float64{5: 1, 14: 1}, Divisor: 2, MeanC: 19.25, Tolerance: 1e-9, Source: "computed: 12.2 and 26.3 are the extreme readings"},
		{Name: "eight synoptic, 00 to 21", Weights: evenly(0, 21, 3), Divisor: 8, MeanC: 18.6625, Tolerance: 1e-9, Source: "formula from memory; value computed"},
		{Name: "eight synoptic, 03 to 24", Weights: evenly(3, 24, 3), Divisor: 8, MeanC: 18.7125, Tolerance: 1e-9, Source: "formula from memory; value computed"},
		{Name: "three-hourly trapezoid", Weights: halfEnds(evenly(0, 24, 3)), Divisor: 8, MeanC: 18.6875, Tolerance: 1e-9, Source: "computed"},
		{Name: "four main hours", Weights: evenly(0, 18, 6), Divisor: 4, MeanC: 18.45, Tolerance: 1e-9, Source: "fallback of the German weather service (second-hand); value computed"},
		{Name: "Mannheim hours", Weights: map[int]float64{7: 1, 14: 1, 21: 2}, Divisor: 4, MeanC: 18.925, Tolerance: 1e-9, Source: "German rule until 31 March 2001 (printed, second-hand); value computed"},
		{Name: "extremes and two hours", Weights: map[int]float64{7: 1, 19: 1}, HighWeight: 1, LowWeight: 1, Divisor: 4, MeanC: 18.425, Tolerance: 1e-9, Source: "formula from memory; value computed"},
		ekholmModen("Ekholm-Modén, July", 19, 18, 27, 10, 26, 18.666, smhi),
		ekholmModen("Ekholm-Modén, January", 33, 15, 32, 10, 10, 19.073, smhi),
		ekholmModen("Ekholm-Modén, April", 24, 19, 28, 10, 19, 19.032, "weights printed, SMHI's table for 12 to 13° E; value computed"),
		ekholmModen("Stockholm, July", 19, 18, 26, 10, 27, 18.583, "weights printed, Moberg et al., table II; value computed"),
		{Name: "23 readings, 02 skipped", Weights: without(evenly(0, 23, 1), 2), Divisor: 23, MeanC: 18.947826087, Tolerance: 1e-9, Source: "computed: a spring clock change done wrong"},
	}
}

// EightFromExtremesC returns eight three-hourly temperatures of the invented day
// made up from its extremes, and their mean.
//
//	T(I) = low + f(I)(high − low),  f(I) = 0.931 + 0.114 I − 0.0703 I² + 0.0053 I³,  I = 1 … 8
//
// Source: formula of the CERES crop models (from memory; named in Weiss & Hays
// 2005); the mean is computed, to 6 decimals.
func EightFromExtremesC() (readingsC []float64, meanC float64) {
	d := Invented()
	for step := 1; step <= 8; step++ {
		i := float64(step)
		f := 0.931 + 0.114*i - 0.0703*i*i + 0.0053*i*i*i
		readingsC = append(readingsC, d.LowC+f*(d.HighC-d.LowC))
	}
	return readingsC, 19.498255
}

// DegreeDays is a day's known degree days: the day's name, the thresholds with
// horizontal cutoff (no cutoff when UpperC is not above LowerC), the method by
// its usual name, and the value in °C-days.
type DegreeDays struct {
	Day            string
	Method         string
	LowerC, UpperC float64
	WantC          float64
	Tolerance      float64
	Source         string
}

// AllDegreeDays returns the known degree days. Method is "mean" (of the 24-hour
// mean), "midrange" (of the high/low mean), "floored-extremes", "single-sine" or
// "degree-hours".
func AllDegreeDays() []DegreeDays {
	return []DegreeDays{
		{"invented", "degree-hours", 15, 24, 3.95416666667, 1e-9, fiftyDigits},
		{"invented", "single-sine", 15, 24, 4.43806088525, 1e-9, fiftyDigits},
		{"invented", "midrange", 15, 24, 4.35, 1e-9, fiftyDigits},
		{"invented", "floored-extremes", 15, 24, 4.5, 1e-9, fiftyDigits},
		{"invented", "degree-hours", 10, 30, 8.70416666667, 1e-9, fiftyDigits},
		{"invented", "midrange", 10, 30, 9.35, 1e-9, fiftyDigits},
		{"invented", "floored-extremes", 10, 30, 9.35, 1e-9, fiftyDigits},
		{"invented", "single-sine", 10, 30, 9.35, 1e-9, fiftyDigits},
		{"invented", "mean", 10, 0, 8.70416666667, 1e-9, "computed: the 24-hour mean less 10, no reading being below it"},
		{"below base", "mean", 10, 0, 0, 0, workedByHand},
		{"below base", "midrange", 10, 0, 0, 0, workedByHand},
		{"below base", "floored-extremes", 10, 0, 0, 0, workedByHand},
		{"below base", "single-sine", 10, 0, 0, 0, workedByHand},
		{"below base", "degree-hours", 10, 0, 0, 0, workedByHand},
		{"warm afternoon, mean below base", "mean", 10, 0, 0, 0, workedByHand + ": 7.5 is below 10"},
		{"warm afternoon, mean below base", "midrange", 10, 0, 0.5, 1e-12, workedByHand + ": 10.5 − 10"},
		{"warm afternoon, mean below base", "floored-extremes", 10, 0, 2.5, 1e-12, workedByHand + ": (15 + 10)/2 − 10"},
		{"warm afternoon, mean below base", "degree-hours", 10, 0, 5.0 / 6, 1e-12, workedByHand + ": 4 hours of 5 over 24"},
		{"freezing", "mean", 0, 0, 0, 0, workedByHand + ": −0.5 is below 0"},
		{"freezing", "midrange", 0, 0, 1, 1e-12, workedByHand},
		{"freezing", "degree-hours", 0, 0, 1, 1e-12, workedByHand + ": 6 hours of 4 over 24"},
	}
}
