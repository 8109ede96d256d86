package calc

// Exact factors between units. All rest on the definitions of the international
// yard and pound of 1959 (1 ft = 0.3048 m, 1 lb = 453.59237 g) and of the
// Fahrenheit scale; being untyped constants they are carried exactly and rounded
// once, where they are used. Moving one moves every figure shown in that unit.
const (
	// FahrenheitDegreesPerCelsiusDegree: a step of 1 °C is one of 9/5 °F.
	FahrenheitDegreesPerCelsiusDegree = 9.0 / 5.0
	// FahrenheitAtFreezing is 0 °C on the Fahrenheit scale.
	FahrenheitAtFreezing = 32.0

	// GramsPerPound: 1 lb = 453.59237 g, by definition.
	GramsPerPound = 453.59237
	// GramsPerOunce: 1 oz = 1/16 lb.
	GramsPerOunce = GramsPerPound / 16
	// MetresPerFoot: 1 ft = 0.3048 m, by definition.
	MetresPerFoot = 0.3048
	// MMPerInch: 1 in = 1/12 ft = 25.4 mm.
	MMPerInch = 1000 * MetresPerFoot / 12
	// SquareMetresPer1000SquareFeet: 1000 · 0.3048² = 92.90304 m².
	SquareMetresPer1000SquareFeet = 1000 * MetresPerFoot * MetresPerFoot
	// SquareFeetPerAcre: 1 acre = 43560 ft².
	SquareFeetPerAcre = 43560
	// SquareMetresPerAcre: 43560 · 0.3048² = 4046.8564224 m².
	SquareMetresPerAcre = SquareFeetPerAcre * MetresPerFoot * MetresPerFoot

	// KilogramsPerHectarePerGramPerSquareMetre: 1 g/m² = 10000 g/ha = 10 kg/ha.
	KilogramsPerHectarePerGramPerSquareMetre = 10.0
	// GramsPerSquareMetrePerPoundPer1000SquareFeet: 1 lb/1000 ft² =
	// 453.59237 g / 92.90304 m² = 45359237/9290304 g/m², about 4.88243.
	GramsPerSquareMetrePerPoundPer1000SquareFeet = GramsPerPound / SquareMetresPer1000SquareFeet
)

// The functions below only multiply and add. They have no error: a value that is
// not finite stays so, and is refused by whichever function receives it next.

// CelsiusFromFahrenheit converts a temperature (not a difference) from °F to °C.
//
//	°C = (°F − 32) · 5/9
func CelsiusFromFahrenheit(temperatureF float64) float64 {
	return (temperatureF - FahrenheitAtFreezing) / FahrenheitDegreesPerCelsiusDegree
}

// FahrenheitFromCelsius converts a temperature (not a difference) from °C to °F.
//
//	°F = °C · 9/5 + 32
func FahrenheitFromCelsius(temperatureC float64) float64 {
	return temperatureC*FahrenheitDegreesPerCelsiusDegree + FahrenheitAtFreezing
}

// FahrenheitDegreesFromCelsius converts a difference of temperatures, or degree
// days, from °C to °F. The 32 has no part in it.
//
//	°F-days = °C-days · 9/5
func FahrenheitDegreesFromCelsius(degreesC float64) float64 {
	return degreesC * FahrenheitDegreesPerCelsiusDegree
}

// CelsiusDegreesFromFahrenheit converts a difference of temperatures, or degree
// days, from °F to °C. The 32 has no part in it.
//
//	°C-days = °F-days · 5/9
func CelsiusDegreesFromFahrenheit(degreesF float64) float64 {
	return degreesF / FahrenheitDegreesPerCelsiusDegree
}

// KilogramsPerHectareFromGramsPerSquareMetre converts a rate from g/m² to kg/ha.
//
//	kg/ha = g/m² · 10
func KilogramsPerHectareFromGramsPerSquareMetre(rateGM2 float64) float64 {
	return rateGM2 * KilogramsPerHectarePerGramPerSquareMetre
}

// GramsPerSquareMetreFromKilogramsPerHectare converts a rate from kg/ha to g/m².
//
//	g/m² = kg/ha / 10
func GramsPerSquareMetreFromKilogramsPerHectare(rateKgHa float64) float64 {
	return rateKgHa / KilogramsPerHectarePerGramPerSquareMetre
}

// PoundsPer1000SquareFeetFromGramsPerSquareMetre converts a rate from g/m² to
// lb/1000 ft².
//
//	lb/1000 ft² = g/m² · 9290304/45359237
func PoundsPer1000SquareFeetFromGramsPerSquareMetre(rateGM2 float64) float64 {
	return rateGM2 / GramsPerSquareMetrePerPoundPer1000SquareFeet
}

// GramsPerSquareMetreFromPoundsPer1000SquareFeet converts a rate from
// lb/1000 ft² to g/m².
//
//	g/m² = lb/1000 ft² · 45359237/9290304
func GramsPerSquareMetreFromPoundsPer1000SquareFeet(ratePounds float64) float64 {
	return ratePounds * GramsPerSquareMetrePerPoundPer1000SquareFeet
}

const (
	// MillilitresPerFluidOunce: 1 US fluid ounce = 1/128 US gallon of 231 in³,
	// 231 · 2.54³ / 128 cm³ = 29.5735295625 mL.
	MillilitresPerFluidOunce = 231 * 2.54 * 2.54 * 2.54 / 128
	// MillilitresPerGallon: 1 US gallon = 128 fluid ounces = 3785.411784 mL.
	MillilitresPerGallon = 128 * MillilitresPerFluidOunce
	// SquareMetresPerHectare: 1 ha = 10000 m².
	SquareMetresPerHectare = 10000.0
)
