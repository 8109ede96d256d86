package calc_test

import (
	"math"
	"math/big"
	"testing"

	"pgregory.net/rapid"

	"swardbook/calc"
)

// Computed at 50 digits from 1 lb = 453.59237 g and 1 ft = 0.3048 m.
func TestFactors(t *testing.T) {
	tests := []struct {
		name      string
		got, want float64
	}{
		{"1 lb/1000 ft² in g/m²", calc.GramsPerSquareMetreFromPoundsPer1000SquareFeet(1), 4.88242763638},
		{"as a fraction", calc.GramsPerSquareMetrePerPoundPer1000SquareFeet, 45359237.0 / 9290304},
		{"1 lb/1000 ft² in kg/ha", calc.KilogramsPerHectareFromGramsPerSquareMetre(calc.GramsPerSquareMetreFromPoundsPer1000SquareFeet(1)), 48.8242763638},
		{"1 g/m² in lb/1000 ft²", calc.PoundsPer1000SquareFeetFromGramsPerSquareMetre(1), 0.204816143623},
		{"3 g/m² in lb/1000 ft²", calc.PoundsPer1000SquareFeetFromGramsPerSquareMetre(3), 0.614448430868},
		{"3.5 g/m² in lb/1000 ft²", calc.PoundsPer1000SquareFeetFromGramsPerSquareMetre(3.5), 0.716856502679},
		{"4 g/m² in lb/1000 ft²", calc.PoundsPer1000SquareFeetFromGramsPerSquareMetre(4), 0.81926457449},
		{"1 g/m² in kg/ha", calc.KilogramsPerHectareFromGramsPerSquareMetre(1), 10},
		{"1 acre in m²", calc.SquareMetresPerAcre, 4046.8564224},
		{"1 lb/acre in kg/ha", calc.KilogramsPerHectareFromGramsPerSquareMetre(calc.GramsPerPound / calc.SquareMetresPerAcre), 1.12085115619},
		{"1 oz/1000 ft² in g/m²", calc.GramsPerOunce / calc.SquareMetresPer1000SquareFeet, 0.305151727274},
		{"1000 ft² in m²", calc.SquareMetresPer1000SquareFeet, 92.90304},
	}
	for _, tt := range tests {
		if !agrees(tt.got, tt.want) {
			t.Errorf("%s: %.12g, want %.12g", tt.name, tt.got, tt.want)
		}
	}
}

// The constant is the nearest float64 to the exact fraction, not the quotient of
// two rounded numbers. Second route: math/big.
func TestFactorIsRoundedOnce(t *testing.T) {
	want, _ := big.NewRat(45359237, 9290304).Float64()
	if calc.GramsPerSquareMetrePerPoundPer1000SquareFeet != want {
		t.Errorf("%.17g, exact fraction %.17g", calc.GramsPerSquareMetrePerPoundPer1000SquareFeet, want)
	}
}

// Fixed points of the two scales by definition, and degree days that convert
// without the 32: 200 °C-days are 360 °F-days (second-hand: an interview with the
// author of the 200 °C-day interval gives 360 with base 32 °F).
func TestTemperatureScales(t *testing.T) {
	for _, tt := range []struct{ c, f float64 }{
		{0, 32}, {100, 212}, {-40, -40}, {20, 68}, {10, 50}, {30, 86}, {37.5, 99.5}, {280.0 / 9, 88},
	} {
		if got := calc.FahrenheitFromCelsius(tt.c); !within(got, tt.f, 1e-12) {
			t.Errorf("%g °C = %.15g °F, want %g", tt.c, got, tt.f)
		}
		if got := calc.CelsiusFromFahrenheit(tt.f); !within(got, tt.c, 1e-12) {
			t.Errorf("%g °F = %.15g °C, want %g", tt.f, got, tt.c)
		}
	}
	for _, tt := range []struct{ c, f float64 }{{0, 0}, {1, 1.8}, {200, 360}, {-5, -9}, {10, 18}, {1000.0 / 9, 200}} {
		if got := calc.FahrenheitDegreesFromCelsius(tt.c); !within(got, tt.f, 1e-12) {
			t.Errorf("%g °C-days = %.15g °F-days, want %g", tt.c, got, tt.f)
		}
		if got := calc.CelsiusDegreesFromFahrenheit(tt.f); !within(got, tt.c, 1e-12) {
			t.Errorf("%g °F-days = %.15g °C-days, want %g", tt.f, got, tt.c)
		}
	}
}

func TestUnitRoundTrips(t *testing.T) {
	trips := []struct {
		name      string
		out, back func(float64) float64
	}{
		{"temperature", calc.FahrenheitFromCelsius, calc.CelsiusFromFahrenheit},
		{"degrees", calc.FahrenheitDegreesFromCelsius, calc.CelsiusDegreesFromFahrenheit},
		{"kg/ha", calc.KilogramsPerHectareFromGramsPerSquareMetre, calc.GramsPerSquareMetreFromKilogramsPerHectare},
		{"lb/1000 ft²", calc.PoundsPer1000SquareFeetFromGramsPerSquareMetre, calc.GramsPerSquareMetreFromPoundsPer1000SquareFeet},
	}
	for _, trip := range trips {
		t.Run(trip.name, func(t *testing.T) {
			rapid.Check(t, func(t *rapid.T) {
				value := rapid.Float64Range(-1000, 1000).Draw(t, "value")
				if got := trip.back(trip.out(value)); !within(got, value, absolute) {
					t.Fatalf("there and back: %.17g, was %.17g", got, value)
				}
				if got := trip.out(trip.back(value)); !within(got, value, absolute) {
					t.Fatalf("back and there: %.17g, was %.17g", got, value)
				}
			})
			for _, value := range []float64{nan, infinity, -infinity} {
				if got := trip.out(value); !math.IsNaN(got) && !math.IsInf(got, 0) {
					t.Errorf("%v became the number %g", value, got)
				}
				if got := trip.back(value); !math.IsNaN(got) && !math.IsInf(got, 0) {
					t.Errorf("%v became the number %g", value, got)
				}
			}
		})
	}
}
