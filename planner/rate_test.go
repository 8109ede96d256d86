package planner_test

import (
	"errors"
	"fmt"
	"math"
	"testing"

	"pgregory.net/rapid"

	"swardbook/planner"
)

// Expected numbers: 1 lb/1000 ft² = 4.88242763638 g/m² and 1 lb/acre =
// 1.12085115619 kg/ha follow from 1 lb = 453.59237 g and 1 ft = 0.3048 m; the
// US gallon is 231 in³ (NIST Handbook 44, appendix C, from memory); 2.5 g N at
// 21 % N is 11.9047619048 g of product (computed).
func TestParseRate(t *testing.T) {
	for _, row := range []struct {
		text     string
		n        float64
		hasN     bool
		want     planner.Rate
		nitrogen float64
	}{
		{"2.5", 0, false, planner.Rate{Kind: planner.NutrientRate, Value: 2.5}, 2.5},
		{"2.5 gN/m2", 0, false, planner.Rate{Kind: planner.NutrientRate, Value: 2.5}, 2.5},
		{"25 kg N/ha", 0, false, planner.Rate{Kind: planner.NutrientRate, Value: 2.5}, 2.5},
		{"0.5 lb N/1000 ft²", 0, false, planner.Rate{Kind: planner.NutrientRate, Value: 2.44121381819}, 2.44121381819},
		{"14 g/m²", 21, true, planner.Rate{Kind: planner.MassRate, Value: 14, NPercent: 21}, 2.94},
		{"14", 21, true, planner.Rate{Kind: planner.MassRate, Value: 14, NPercent: 21}, 2.94},
		{"140 kg/ha", 21, true, planner.Rate{Kind: planner.MassRate, Value: 14, NPercent: 21}, 2.94},
		{"11.9047619048 g/m2", 21, true, planner.Rate{Kind: planner.MassRate, Value: 11.9047619048, NPercent: 21}, 2.5},
		{"100 lb/acre", 10, true, planner.Rate{Kind: planner.MassRate, Value: 11.2085115619, NPercent: 10}, 1.12085115619},
		{"5", 0, false, planner.Rate{Kind: planner.NutrientRate, Value: 5}, 5},
		{"7 gN/m2", 0, false, planner.Rate{Kind: planner.NutrientRate, Value: 7}, 7}, // said to be nitrogen
		{"30 g/m2", 21, true, planner.Rate{Kind: planner.MassRate, Value: 30, NPercent: 21}, 6.3},
		{"5 g/m2", 0, true, planner.Rate{Kind: planner.MassRate, Value: 5}, 0},
		{"1.2 L/ha", 0, false, planner.Rate{Kind: planner.VolumeRate, Value: 0.12}, 0},
		{"1 gal/acre", 0, false, planner.Rate{Kind: planner.VolumeRate, Value: 3785.411784 / 4046.8564224}, 0},
		{"128 fl oz/acre", 0, false, planner.Rate{Kind: planner.VolumeRate, Value: 3785.411784 / 4046.8564224}, 0},
	} {
		got, err := planner.ParseRate(row.text, row.n, row.hasN)
		if err != nil || got.Kind != row.want.Kind || got.NPercent != row.want.NPercent || math.Abs(got.Value-row.want.Value) > 1e-9 {
			t.Errorf("%q: %+v, %v, want %+v", row.text, got, err, row.want)
		}
		if math.Abs(got.NitrogenGM2()-row.nitrogen) > 1e-9 {
			t.Errorf("%q gives %v g N/m², want %v", row.text, got.NitrogenGM2(), row.nitrogen)
		}
	}
}

func TestParseRateRefuses(t *testing.T) {
	for _, row := range []struct {
		text string
		n    float64
		hasN bool
		kind planner.Kind
	}{
		{"", 0, false, planner.Invalid}, {"much", 0, false, planner.Invalid}, {"-1", 0, false, planner.Invalid},
		{"NaN", 0, false, planner.Invalid}, {"Inf", 0, false, planner.Invalid}, {"1e9 g/m2", 21, true, planner.Invalid},
		{"2 bags", 0, false, planner.Invalid}, {"5.01", 0, false, planner.Missing}, {"51 gN/m2", 0, false, planner.Invalid}, {"14 g/m2", 83, true, planner.Invalid},
		{"14 g/m2", 0, false, planner.Missing}, {"300 g/m2", 21, true, planner.Invalid}, {"2 gN/m2", 21, true, planner.Invalid},
	} {
		rate, err := planner.ParseRate(row.text, row.n, row.hasN)
		var problem *planner.Problem
		if !errors.As(err, &problem) || problem.Kind != row.kind || problem.Hint == "" {
			t.Errorf("%q: %+v, %v, want a %s problem with a hint", row.text, rate, err, row.kind)
		}
	}
}

// Every rate entered in one unit comes back to the same figure in every other.
func TestRateUnitsRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		value := rapid.Float64Range(0.001, 900).Draw(t, "g or mL a m2")
		for _, unit := range planner.RateUnits() {
			back := (value / unit.Factor) * unit.Factor
			if math.Abs(back-value) > 1e-12*value {
				t.Fatalf("%s: %v comes back as %v", unit.Name, value, back)
			}
			typed := fmt.Sprintf("%.15f %s", value/unit.Factor, unit.Name)
			rate, err := planner.ParseRate(typed, 0, true)
			if err != nil || math.Abs(rate.Value-value) > 1e-9*value {
				t.Fatalf("%q: %+v, %v, want %v", typed, rate, err, value)
			}
		}
	})
}

func FuzzParseRate(f *testing.F) {
	for _, seed := range []string{"2.5", "14 g/m2", "25 kgN/ha", "1.2 L/ha", "0.5 lb N/1000 ft²", "-", "1e308 g/m2", "..", "+1"} {
		f.Add(seed, 21.0, true)
		f.Add(seed, 0.0, false)
	}
	f.Fuzz(func(t *testing.T, text string, n float64, hasN bool) {
		rate, err := planner.ParseRate(text, n, hasN)
		if err == nil && (rate.Check() != nil || math.IsNaN(rate.NitrogenGM2()) || math.IsInf(rate.Value, 0)) {
			t.Errorf("%q: %+v", text, rate)
		}
	})
}

func ExampleRate() {
	rate, err := planner.ParseRate("14 g/m2", 21, true)
	fmt.Println(rate.Words(), err)
	fmt.Println(rate.Over(11000))
	// Output:
	// 14 g/m² at 21 % = 2.94 g N/m² <nil>
	// 1.1 ha = 154 kg
}
