package planner_test

import (
	"math"
	"testing"

	"swardbook/planner"
)

// The totals are worked out by hand from the definitions: 1 ha = 10 000 m², 1
// acre = 43 560 ft², 1 lb = 453.59237 g, 1 ft = 0.3048 m, 1 US fl oz = 29.5735295625 mL.
func TestAmountsOfAnArea(t *testing.T) {
	for _, row := range []struct {
		name              string
		units             planner.Units
		rate              planner.Rate
		areaM2            float64
		rateIn, areaIn    string
		shown, area, want float64
		wantIn            string
	}{
		{"14 g/m² on 1.1 ha", planner.Celsius, planner.Rate{Kind: planner.MassRate, Value: 14, NPercent: 21}, 11000, "g/m²", "m²", 14, 11000, 154, "kg"},
		{"2.5 g N/m² on 5200 m²", planner.Celsius, planner.Rate{Kind: planner.NutrientRate, Value: 2.5}, 5200, "g N/m²", "m²", 2.5, 5200, 13, "kg N"},
		{"1.2 L/ha on half a hectare", planner.Celsius, planner.Rate{Kind: planner.VolumeRate, Value: 0.12}, 5000, "L/ha", "m²", 1.2, 5000, 0.6, "L"},
		{"2 lb/1000 ft² on an acre", planner.Fahrenheit, planner.Rate{Kind: planner.MassRate, Value: 2 * 453.59237 / 92.90304}, 4046.8564224, "lb/1000 ft²", "ft²", 2, 43560, 87.12, "lb"},
		{"half a lb N/1000 ft² on 10 000 ft²", planner.Fahrenheit, planner.Rate{Kind: planner.NutrientRate, Value: 0.5 * 453.59237 / 92.90304}, 929.0304, "lb N/1000 ft²", "ft²", 0.5, 10000, 5, "lb N"},
		{"11 fl oz/acre on three acres", planner.Fahrenheit, planner.Rate{Kind: planner.VolumeRate, Value: 11 * 29.5735295625 / 4046.8564224}, 3 * 4046.8564224, "fl oz/acre", "ft²", 11, 130680, 33, "fl oz"},
	} {
		units := row.units.Amounts(row.rate.Kind)
		rate, area := row.rate.Value/units.PerRate, row.areaM2/units.PerArea
		if math.Abs(rate-row.shown) > 1e-12*row.shown || math.Abs(area-row.area) > 1e-12*row.area || math.Abs(rate*area/units.Divisor-row.want) > 1e-12*row.want {
			t.Errorf("%s: %g %s on %g %s = %g", row.name, rate, units.Rate, area, units.Area, rate*area/units.Divisor)
		}
		if units.Rate != row.rateIn || units.Area != row.areaIn || units.Total != row.wantIn {
			t.Errorf("%s: units %+v", row.name, units)
		}
	}
	if got := planner.Celsius.Amounts("no such kind"); got != (planner.AmountUnits{}) {
		t.Errorf("an unknown kind has units %+v", got)
	}
}

// The last rate is that of the newest pass that was not lost.
func TestLastRate(t *testing.T) {
	rate := planner.Rate{Kind: planner.VolumeRate, Value: 0.1}
	entry := func(day planner.Day, result planner.Result, pass planner.Pass) planner.Entry {
		return planner.Entry{Day: day, Result: result, Passes: []planner.Pass{pass}}
	}
	plan := planner.Plan{Log: []planner.Entry{
		entry(10, planner.Good, planner.Pass{Work: 1, NitrogenGM2: 2}),
		entry(11, planner.Good, planner.Pass{Work: 2, Rate: rate}),
		entry(12, planner.Lost, planner.Pass{Work: 2, Rate: planner.Rate{Kind: planner.VolumeRate, Value: 9}}),
		entry(13, planner.Good, planner.Pass{Work: 3, Rate: rate}),
		entry(14, planner.Doubtful, planner.Pass{Work: 3}),
	}}
	for work, want := range map[planner.WorkID]planner.Rate{
		1: {Kind: planner.NutrientRate, Value: 2}, 2: rate, 3: {}, 4: {},
	} {
		if got := plan.LastRate(work); got != want {
			t.Errorf("work %d: %+v, want %+v", work, got, want)
		}
	}
}
