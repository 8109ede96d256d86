package planner

import (
	"strconv"
	"strings"

	"swardbook/calc"
)

// RateKind says what a rate is an amount of.
type RateKind string

// The kinds of rates.
const (
	NutrientRate RateKind = "nitrogen" // g N/m²
	MassRate     RateKind = "mass"     // g of product a m², with its N percent
	VolumeRate   RateKind = "volume"   // mL of product a m²
)

// Rate is what was given to a square metre. The zero Rate means none was said.
type Rate struct {
	Kind     RateKind `json:"kind,omitempty"`
	Value    float64  `json:"value,omitempty"`     // g N/m², g/m² or mL/m²
	NPercent float64  `json:"n_percent,omitempty"` // nitrogen of a product by mass, 0 to 100
}

// NitrogenGM2 is the nitrogen that the rate gives, g N/m²:
//
//	product g/m² · N % / 100
//
// It is 0 for a volume: a litre's nitrogen needs its density, so a liquid feed
// is logged by its nitrogen.
func (r Rate) NitrogenGM2() float64 {
	switch r.Kind {
	case NutrientRate:
		return r.Value
	case MassRate:
		return r.Value * r.NPercent / 100
	}
	return 0
}

// Check refuses a rate that cannot have been given.
func (r Rate) Check() error {
	switch {
	case r == Rate{}:
		return nil
	case r.Kind != NutrientRate && r.Kind != MassRate && r.Kind != VolumeRate:
		return Problemf(Invalid, "%q is no kind of rate", r.Kind)
	case !(r.Value >= 0 && r.Value <= maxRate):
		return Problemf(Invalid, "%g is no rate that can be given to a square metre", r.Value).
			WithHint("Give 0 to %d g or mL a square metre, like rate:2.5.", maxRate)
	case !(r.NPercent >= 0 && r.NPercent <= maxNPercent):
		return Problemf(Invalid, "%g %% nitrogen is not possible", r.NPercent).WithHint("Urea has the most of the solid feeds, 46 %% (common practice).")
	case r.NitrogenGM2() > maxPassGM2:
		return tooMuchNitrogen(r.NitrogenGM2())
	}
	return nil
}

func tooMuchNitrogen(gM2 float64) error {
	return Problemf(Invalid, "%s g N/m² is more than a pass can give", number(gM2)).
		WithHint("Give 0 to %d g N/m². Product goes with its nitrogen percent: rate:\"14 g/m2\" n:21 is 2.94 g N/m².", maxPassGM2)
}

const (
	maxRate     = 1000 // g or mL a m²: a tonne, or ten thousand litres, over 1000 m²
	maxNPercent = 82   // ammonia, the richest there is
)

// RateUnit is a unit that rates are typed and shown in. One of it is Factor g
// or mL a square metre.
type RateUnit struct {
	Name   string // as typed, lower case, without spaces
	Shown  string
	Volume bool
	Factor float64
}

// RateUnits are the units of rates, exact; those of mass also stand for
// nitrogen ("gN/m2").
func RateUnits() []RateUnit {
	return []RateUnit{
		{"g/m2", "g/m²", false, 1},
		{"kg/ha", "kg/ha", false, 1 / calc.KilogramsPerHectarePerGramPerSquareMetre},
		{"lb/1000ft2", "lb/1000 ft²", false, calc.GramsPerSquareMetrePerPoundPer1000SquareFeet},
		{"oz/1000ft2", "oz/1000 ft²", false, calc.GramsPerOunce / calc.SquareMetresPer1000SquareFeet},
		{"lb/acre", "lb/acre", false, calc.GramsPerPound / calc.SquareMetresPerAcre},
		{"ml/m2", "mL/m²", true, 1},
		{"l/ha", "L/ha", true, 1000 / calc.SquareMetresPerHectare},
		{"floz/acre", "fl oz/acre", true, calc.MillilitresPerFluidOunce / calc.SquareMetresPerAcre},
		{"floz/1000ft2", "fl oz/1000 ft²", true, calc.MillilitresPerFluidOunce / calc.SquareMetresPer1000SquareFeet},
		{"gal/acre", "gal/acre", true, calc.MillilitresPerGallon / calc.SquareMetresPerAcre},
	}
}

// ParseRate reads a rate as typed: "2.5" and "2.5 gN/m2" are nitrogen (a bare
// number above 5 is asked back, as it is most often product), "14
// g/m2" with a nitrogen percent is a mass of product, "1.2 L/ha" a volume of
// product. hasN says that a percent was given; a mass without one is a Missing
// problem that asks which it is.
func ParseRate(text string, nPercent float64, hasN bool) (Rate, error) {
	compact := strings.ToLower(strings.NewReplacer(" ", "", "²", "2", "·", "").Replace(text))
	end := strings.IndexFunc(compact, func(r rune) bool { return (r < '0' || r > '9') && r != '.' && r != '-' && r != '+' })
	if end < 0 {
		end = len(compact)
	}
	value, err := strconv.ParseFloat(compact[:end], 64)
	if err != nil {
		return Rate{}, noRate(text)
	}
	rate, err := rateIn(compact[end:], value, text, nPercent, hasN)
	if err != nil {
		return Rate{}, err
	}
	return rate, rate.Check()
}

func rateIn(unit string, value float64, text string, nPercent float64, hasN bool) (Rate, error) {
	if unit == "" && !hasN {
		if value > WordGM2 {
			return Rate{}, Problemf(Missing, "%s g N/m² in one pass: nitrogen or product?", number(value)).
				WithHint("Nitrogen: rate:\"%[1]s gN/m2\". Product: rate:\"%[1]s g/m2\" with its nitrogen percent, like n:21.", number(value))
		}
		return Rate{Kind: NutrientRate, Value: value}, nil
	}
	if unit == "" {
		unit = "g/m2"
	}
	for _, known := range RateUnits() {
		switch mass, area, _ := strings.Cut(known.Name, "/"); {
		case !known.Volume && unit == mass+"n/"+area && !hasN:
			return Rate{Kind: NutrientRate, Value: value * known.Factor}, nil
		case unit != known.Name:
			continue
		case known.Volume:
			return Rate{Kind: VolumeRate, Value: value * known.Factor}, nil
		case !hasN:
			return Rate{}, Problemf(Missing, "Is %s nitrogen or product?", text).
				WithHint("Nitrogen: rate:\"%s %sN/%s\". Product: add its nitrogen percent, like n:21, or n:0 for none.",
					number(value), mass, area)
		default:
			return Rate{Kind: MassRate, Value: value * known.Factor, NPercent: nPercent}, nil
		}
	}
	return Rate{}, noRate(text)
}

func noRate(text string) error {
	names := make([]string, 0, len(RateUnits()))
	for _, unit := range RateUnits() {
		names = append(names, unit.Name)
	}
	return Problemf(Invalid, "%q is not a rate", text).
		WithHint("A number is nitrogen in g/m², like rate:2.5. Units: %s; with N for nitrogen, like rate:\"25 kgN/ha\".", strings.Join(names, ", "))
}

// Words says what was given to a square metre, and its nitrogen: "14 g/m² at
// 21 % = 2.94 g N/m²".
func (r Rate) Words() string {
	switch r.Kind {
	case NutrientRate:
		return number(r.Value) + " g N/m²"
	case MassRate:
		text := number(r.Value) + " g/m²"
		if r.NPercent > 0 {
			text += " at " + number(r.NPercent) + " % = " + number(r.NitrogenGM2()) + " g N/m²"
		}
		return text
	case VolumeRate:
		return number(r.Value/liquidPerHectare) + " L/ha"
	}
	return ""
}

// liquidPerHectare is 1 L/ha in mL/m².
const liquidPerHectare = 1000 / calc.SquareMetresPerHectare

// Over says how much product, or nitrogen, an area takes: "1.1 ha = 154 kg";
// "" without an area or a rate.
func (r Rate) Over(areaM2 float64) string {
	if areaM2 <= 0 || r.Value <= 0 {
		return ""
	}
	area := number(areaM2) + " m²"
	if areaM2 >= calc.SquareMetresPerHectare/10 {
		area = number(areaM2/calc.SquareMetresPerHectare) + " ha"
	}
	total := r.Value * areaM2 / 1000
	switch r.Kind {
	case NutrientRate:
		return area + " = " + number(total) + " kg N"
	case MassRate:
		return area + " = " + number(total) + " kg"
	}
	return area + " = " + number(total) + " L"
}
