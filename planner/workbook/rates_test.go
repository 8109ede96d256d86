package workbook_test

import (
	"testing"

	"swardbook/planner"
)

// withRates gives the plan's surfaces an area and its passes rates of every
// kind, and none.
func withRates(plan planner.Plan) planner.Plan {
	rates := []planner.Rate{
		{Kind: planner.VolumeRate, Value: 0.12}, {Kind: planner.MassRate, Value: 14, NPercent: 21}, {},
		{Kind: planner.MassRate, Value: 2.25}, {Kind: planner.VolumeRate, Value: 0.0307}, {Kind: planner.NutrientRate, Value: 1.5},
	}
	plan.Surfaces = append([]planner.Surface(nil), plan.Surfaces...)
	for i := range plan.Surfaces {
		plan.Surfaces[i].AreaM2 = 5520 * float64(i+1)
	}
	var log []planner.Entry
	for _, entry := range plan.Log {
		entry.Passes = append([]planner.Pass(nil), entry.Passes...)
		for i := range entry.Passes {
			entry.Passes[i].Rate = rates[int(entry.Passes[i].Work)%len(rates)]
		}
		log = append(log, entry)
	}
	plan.Log = log
	return plan
}

// LibreOffice computes amounts, nitrogen and the largest difference as they
// are cached, on plans with rates and areas, with works resting, full and not
// started.
func TestLibreOfficeComputesAmounts(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("recalculates in LibreOffice with SWARDBOOK_SLOW=1")
	}
	t.Parallel()
	books := [][]byte{build(t, standingPlan()), build(t, withRates(withGap(editedPlan())))}
	for number := uint64(100); number < 112; number++ {
		books = append(books, build(t, withRates(randomPlan(number))))
	}
	for i, computed := range recalculated(t, books) {
		faults, _ := differences(t, books[i], computed)
		for j, fault := range faults {
			if j < 6 {
				t.Errorf("book %d: %s", i, fault)
			}
		}
	}
}
