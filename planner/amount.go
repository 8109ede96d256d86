package planner

import "swardbook/calc"

// AmountUnits are the units in which a site reads a rate, an area and what the
// area takes. The factors are exact:
//
//	total = rate · area / Divisor
type AmountUnits struct {
	Rate, Area, Total string  // as shown: "g/m²", "m²", "kg"
	PerRate           float64 // g or mL a square metre in one of Rate
	PerArea           float64 // square metres in one of Area
	Divisor           float64
}

// Amounts are the units of the site for rates of the kind: g/m², L/ha and m²,
// or, where temperatures are read in °F, lb/1000 ft², fl oz/acre and ft². The
// zero AmountUnits stand for a kind that is not known.
func (u Units) Amounts(kind RateKind) AmountUnits {
	const squareMetresPerSquareFoot = calc.MetresPerFoot * calc.MetresPerFoot
	mass := AmountUnits{Rate: "g/m²", Area: "m²", Total: "kg", PerRate: 1, PerArea: 1, Divisor: 1000}
	volume := AmountUnits{Rate: "L/ha", Area: "m²", Total: "L", PerRate: liquidPerHectare, PerArea: 1, Divisor: calc.SquareMetresPerHectare}
	if u == Fahrenheit {
		mass = AmountUnits{Rate: "lb/1000 ft²", Area: "ft²", Total: "lb", PerArea: squareMetresPerSquareFoot, Divisor: 1000,
			PerRate: calc.GramsPerSquareMetrePerPoundPer1000SquareFeet}
		volume = AmountUnits{Rate: "fl oz/acre", Area: "ft²", Total: "fl oz", PerArea: squareMetresPerSquareFoot, Divisor: calc.SquareFeetPerAcre,
			PerRate: calc.MillilitresPerFluidOunce / calc.SquareMetresPerAcre}
	}
	switch kind {
	case MassRate:
		return mass
	case VolumeRate:
		return volume
	case NutrientRate:
		mass.Rate, mass.Total = nitrogenOf(mass.Rate), mass.Total+" N"
		return mass
	}
	return AmountUnits{}
}

// nitrogenOf names a rate of nitrogen: "g/m²" becomes "g N/m²".
func nitrogenOf(rate string) string {
	for i, r := range rate {
		if r == '/' {
			return rate[:i] + " N" + rate[i:]
		}
	}
	return rate
}

// LastRate is the rate of the newest pass of the work that was not lost, its
// nitrogen where no more was said; the zero Rate when there is none.
func (p Plan) LastRate(work WorkID) Rate {
	for i := len(p.Log) - 1; i >= 0; i-- {
		pass, ok := p.Log[i].Of(work)
		if !ok || p.Log[i].Result == Lost {
			continue
		}
		if pass.Rate == (Rate{}) {
			return nitrogenRate(pass.NitrogenGM2)
		}
		return pass.Rate
	}
	return Rate{}
}
