package calc_test

import (
	"encoding/binary"
	"math"
	"slices"
	"testing"

	"swardbook/calc"
)

// checkNumber demands either an error with 0 beside it, or a finite number of at
// least the given floor.
func checkNumber(t *testing.T, what string, got float64, err error, floor float64) {
	t.Helper()
	switch {
	case err != nil && got != 0:
		t.Errorf("%s: %g beside %v", what, got, err)
	case err == nil && (math.IsNaN(got) || math.IsInf(got, 0) || got < floor):
		t.Errorf("%s: %g", what, got)
	}
}

func FuzzDegreeDays(f *testing.F) {
	f.Add(18.0, 4.0, 7.0, 10.0, 30.0)
	f.Add(38.0, 5.0, 9.0, 10.0, 30.0)
	f.Add(17.5, 17.5, 17.5, 10.0, 30.0)
	f.Add(20.0, 14.0, 24.0, 10.0, 22.0)
	f.Add(nan, infinity, -infinity, nan, infinity)
	f.Add(math.MaxFloat64, -math.MaxFloat64, 0.0, -math.MaxFloat64, math.MaxFloat64)
	f.Add(5*math.SmallestNonzeroFloat64, 3*math.SmallestNonzeroFloat64, 0.0, 4*math.SmallestNonzeroFloat64, 1.0)
	f.Fuzz(func(t *testing.T, highC, lowC, nextLowC, lowerC, upperC float64) {
		d := day{highC: highC, lowC: lowC, nextLowC: nextLowC}
		for _, m := range calc.Methods() {
			for _, cutoff := range append(calc.Cutoffs(), "", "unknown") {
				got, err := anyMethod(m, d, calc.Thresholds{LowerC: lowerC, UpperC: upperC, Cutoff: cutoff})
				checkNumber(t, string(m)+" "+string(cutoff), got, err, 0)
			}
		}
	})
}

func FuzzGrowthAndNitrogen(f *testing.F) {
	f.Add(20.0, 5.5, 15.0, 3.0, 30, false)
	f.Add(31.0, 7.0, 35.0, 4.0, 28, true)
	f.Add(0.0, math.SmallestNonzeroFloat64, 0.0, 0.0, 31, false)
	f.Add(nan, nan, nan, nan, -1, true)
	f.Add(-math.MaxFloat64, math.MaxFloat64, math.MaxFloat64, math.MaxFloat64, 31, false)
	f.Fuzz(func(t *testing.T, optimumC, widthC, meanC, ceilingGM2 float64, days int, heldAbove bool) {
		g := calc.GrowthCurve{OptimumC: optimumC, WidthC: widthC, HeldAbove: heldAbove}
		potential, err := g.Potential(meanC)
		checkNumber(t, "potential", potential, err, 0)
		overHours, err := g.PotentialOverHours([]float64{meanC, optimumC})
		checkNumber(t, "potential over hours", overHours, err, 0)
		if potential > 1 || overHours > 1 {
			t.Errorf("potential %g, over hours %g", potential, overHours)
		}
		for _, share := range []float64{potential, meanC} {
			use, err := calc.NitrogenUse(share, ceilingGM2, days)
			checkNumber(t, "nitrogen use", use, err, 0)
		}
	})
}

// floats reads a list of float64 from fuzzed bytes: any bit pattern can occur.
func floats(data []byte) []float64 {
	var values []float64
	for len(data) >= 8 {
		values = append(values, math.Float64frombits(binary.LittleEndian.Uint64(data)))
		data = data[8:]
	}
	return values
}

// bytesOf is the inverse of floats, for seeds.
func bytesOf(values ...float64) []byte {
	var data []byte
	for _, value := range values {
		data = binary.LittleEndian.AppendUint64(data, math.Float64bits(value))
	}
	return data
}

func FuzzReadings(f *testing.F) {
	f.Add(bytesOf(14.2, 13.6, nan, 12.7), 3)
	f.Add(bytesOf(nan, nan), 1)
	f.Add(bytesOf(math.MaxFloat64, nan, -math.MaxFloat64), 3)
	f.Add([]byte{}, 0)
	f.Fuzz(func(t *testing.T, data []byte, longest int) {
		hoursC := floats(data)
		mean, err := calc.HourlyMean(hoursC)
		checkNumber(t, "hourly mean", mean, err, -math.MaxFloat64)
		fromHours, err := calc.DegreeDaysFromHours(hoursC, calc.Thresholds{LowerC: 10})
		checkNumber(t, "degree days from hours", fromHours, err, 0)
		bridged, was := calc.BridgeGaps(row(hoursC...), longest)
		if len(bridged) != len(hoursC) || len(was) != len(hoursC) {
			t.Fatalf("%d slots became %d, %d marks", len(hoursC), len(bridged), len(was))
		}
		for i, slot := range bridged {
			if math.IsNaN(slot.C) || math.IsInf(slot.C, 0) || was[i] && !slot.Known || !slot.Known && slot.C != 0 {
				t.Errorf("slot %d: %+v, bridged %v", i, slot, was[i])
			}
		}
	})
}

func FuzzFirstPassage(f *testing.F) {
	f.Add(0.0, 200.0, bytesOf(increments...))
	f.Add(nan, infinity, bytesOf(nan, -infinity))
	f.Add(math.MaxFloat64, 0.0, bytesOf(math.MaxFloat64))
	f.Fuzz(func(t *testing.T, start, target float64, data []byte) {
		units := floats(data)
		days, reached := calc.FirstPassage(start, slices.Values(units), target)
		if days < 0 || days > len(units) {
			t.Fatalf("day %d of %d", days, len(units))
		}
		total := start
		for i, unit := range units[:days] {
			if calc.Reached(total, target) {
				t.Fatalf("day %d, but day %d had %g of %g", days, i, total, target)
			}
			total += unit
		}
		if calc.Reached(total, target) != reached {
			t.Fatalf("day %d: %g of %g, reached %v", days, total, target, reached)
		}
	})
}

func FuzzRank(f *testing.F) {
	f.Add(0.1, 10)
	f.Add(0.9, math.MaxInt)
	f.Add(nan, -1)
	f.Fuzz(func(t *testing.T, share float64, count int) {
		rank, err := calc.Rank(share, count)
		if err == nil && (rank < 1 || rank > count) || err != nil && rank != 0 {
			t.Errorf("Rank(%g, %d) = %d, %v", share, count, rank, err)
		}
	})
}
