package calc_test

import (
	"math"
	"strconv"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
	"pgregory.net/rapid"

	"swardbook/calc"
)

// Every row of the reference: the algorithm to 1e-9, and the printed chart to
// half a degree where the chart is the bare regression without adjustment.
func TestHeatIndex(t *testing.T) {
	for _, row := range reference(t, "heat_index_cases.csv", 164) {
		number := func(key string) float64 { return must(strconv.ParseFloat(row[key], 64)) }
		got, err := calc.HeatIndexF(number("t_f"), number("rh_pct"))
		if err != nil || !agrees(got, number("heat_index_f")) {
			t.Errorf("%s °F, %s %%: %v, %v, want %s", row["t_f"], row["rh_pct"], got, err, row["heat_index_f"])
		}
	}
	// Values of the US National Weather Service's chart (second-hand).
	for _, row := range []struct{ t, r, want float64 }{{90, 50, 95}, {96, 65, 121}, {100, 40, 109}, {88, 80, 106}, {92, 70, 112}} {
		if got := must(calc.HeatIndexF(row.t, row.r)); !within(got, row.want, 0.5) {
			t.Errorf("%v °F, %v %%: %v, printed %v", row.t, row.r, got, row.want)
		}
	}
}

func TestHeatIndexRefuses(t *testing.T) {
	for _, row := range []struct {
		t, r float64
		want error
	}{{nan, 50, calc.ErrNotFinite}, {infinity, 50, calc.ErrNotFinite}, {141, 50, calc.ErrNotFinite}, {-51, 50, calc.ErrNotFinite},
		{90, nan, calc.ErrHumidity}, {90, -1, calc.ErrHumidity}, {90, 100.1, calc.ErrHumidity}} {
		got, err := calc.HeatIndexF(row.t, row.r)
		checkError(t, got, err, row.want)
	}
}

func TestHeatIndexIsFinite(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		index, err := calc.HeatIndexF(rapid.Float64Range(-50, 140).Draw(t, "t"), rapid.Float64Range(0, 100).Draw(t, "r"))
		if err != nil || math.IsNaN(index) || math.IsInf(index, 0) {
			t.Fatalf("%v, %v", index, err)
		}
	})
}

func TestHeatBand(t *testing.T) {
	for _, row := range []struct {
		f    float64
		want calc.HeatBand
	}{{79.9, calc.HeatNone}, {80, calc.HeatCaution}, {90, calc.HeatExtremeCaution}, {103, calc.HeatDanger},
		{124.9, calc.HeatDanger}, {125, calc.HeatExtremeDanger}, {nan, calc.HeatNone}} {
		if got := calc.HeatBandOf(row.f); got != row.want {
			t.Errorf("%v °F is %q, want %q", row.f, got, row.want)
		}
	}
}

// The second route counts the share of a sine day below the threshold by
// numerical integration of a step.
func TestHoursBelow(t *testing.T) {
	for _, row := range []struct{ high, low, threshold, want float64 }{
		{10, 2, 0, 0}, {-1, -5, 0, 24}, {4, -4, 0, 12}, {5, 5, 5, 0}, {5, 5, 6, 24}, {2, 0, 0, 0},
	} {
		if got := must(calc.HoursBelow(row.high, row.low, row.threshold)); !within(got, row.want, 1e-9) {
			t.Errorf("%v/%v below %v: %v h, want %v", row.high, row.low, row.threshold, got, row.want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		low := rapid.Float64Range(-20, 20).Draw(t, "low")
		high := low + rapid.Float64Range(0.5, 25).Draw(t, "range")
		threshold := low + rapid.Float64Range(0.02, 0.98).Draw(t, "share")*(high-low)
		step := func(x float64) float64 {
			if (high+low)/2+(high-low)/2*math.Sin(x) < threshold {
				return 1
			}
			return 0
		}
		want := 24 * quad.Fixed(step, -math.Pi/2, math.Pi/2, 20000, quad.Legendre{}, 0) / math.Pi
		if got := must(calc.HoursBelow(high, low, threshold)); !within(got, want, 0.01) {
			t.Fatalf("%v h, by integration %v", got, want)
		}
	})
	for _, row := range []struct {
		high, low, threshold float64
		want                 error
	}{{nan, 0, 0, calc.ErrNotFinite}, {1, 2, 0, calc.ErrHighBelowLow}, {2, 1, infinity, calc.ErrNotFinite}} {
		got, err := calc.HoursBelow(row.high, row.low, row.threshold)
		checkError(t, got, err, row.want)
	}
}
