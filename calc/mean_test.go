package calc_test

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"swardbook/calc"
	"swardbook/calc/knownday"
)

func TestMeansOfKnownDays(t *testing.T) {
	for _, d := range knownday.Days() {
		t.Run(d.Name, func(t *testing.T) {
			if got := must(calc.HourlyMean(d.HoursC)); !within(got, d.HourlyMeanC, d.Tolerance) {
				t.Errorf("hourly mean %.12g, want %.12g (%s)", got, d.HourlyMeanC, d.Source)
			}
			if got := must(calc.HourlyMean(d.RestC())); !within(got, d.MeanOfRestC, d.Tolerance) {
				t.Errorf("mean of the rest %.12g, want %.12g (%s)", got, d.MeanOfRestC, d.Source)
			}
			if got := must(calc.MidrangeMean(d.HighC, d.LowC)); !within(got, d.MidrangeMeanC, d.Tolerance) {
				t.Errorf("midrange mean %.12g, want %.12g (%s)", got, d.MidrangeMeanC, d.Source)
			}
		})
	}
}

func TestBridgedMeansOfKnownDays(t *testing.T) {
	for _, d := range knownday.Days() {
		t.Run(d.Name, func(t *testing.T) {
			slots := make([]calc.Slot, len(d.HoursC))
			for i, readingC := range d.HoursC {
				slots[i] = calc.Slot{C: readingC, Known: !d.IsMissing(i)}
			}
			bridged, wasBridged := calc.BridgeGaps(slots, knownday.LongestBridge)
			var hoursC []float64
			for i, slot := range bridged {
				if slot.Known {
					hoursC = append(hoursC, slot.C)
				}
				if wasBridged[i] != (d.Whole && d.IsMissing(i)) {
					t.Errorf("slot %d bridged: %v", i, wasBridged[i])
				}
			}
			if whole := len(hoursC) == len(d.HoursC); whole != d.Whole {
				t.Fatalf("whole after bridging: %v, want %v", whole, d.Whole)
			}
			if !d.Whole {
				return
			}
			if got := must(calc.HourlyMean(hoursC)); !within(got, d.BridgedMeanC, d.Tolerance) {
				t.Errorf("bridged mean %.12g, want %.12g (%s)", got, d.BridgedMeanC, d.Source)
			}
		})
	}
}

// HourlyMean serves any equally spaced readings: the evenly weighted conventions
// of the invented day, with their values.
func TestHourlyMeanOfEvenConventions(t *testing.T) {
	tried := 0
	for _, c := range knownday.Conventions() {
		var hoursC []float64
		even := len(c.Weights) > 2
		for hour, readingC := range knownday.Readings25C() {
			if weight, ok := c.Weights[hour]; ok {
				even = even && weight == 1
				hoursC = append(hoursC, readingC)
			}
		}
		if !even || c.HighWeight != 0 {
			continue
		}
		tried++
		if got := must(calc.HourlyMean(hoursC)); !within(got, c.MeanC, c.Tolerance) {
			t.Errorf("%s: %.12g, want %.12g (%s)", c.Name, got, c.MeanC, c.Source)
		}
	}
	if tried != 6 {
		t.Errorf("tried %d conventions, want 6", tried)
	}
	readingsC, want := knownday.EightFromExtremesC()
	if got := must(calc.HourlyMean(readingsC)); !within(got, want, 0.5e-6) {
		t.Errorf("eight from the extremes: %.9f, want %.6f", got, want)
	}
}

func TestHourlyMeanRefuses(t *testing.T) {
	tests := []struct {
		name   string
		hoursC []float64
		want   error
	}{
		{"nil", nil, calc.ErrNoValues},
		{"empty", []float64{}, calc.ErrNoValues},
		{"NaN", []float64{10, nan}, calc.ErrNotFinite},
		{"infinity", []float64{infinity, 10}, calc.ErrNotFinite},
		{"both infinities, whose sum is NaN", []float64{infinity, -infinity}, calc.ErrNotFinite},
		{"sum overflows", []float64{math.MaxFloat64, math.MaxFloat64}, calc.ErrNotFinite},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			got, err := calc.HourlyMean(tt.hoursC)
			checkError(t, got, err, tt.want)
		})
	}
	if got := must(calc.HourlyMean([]float64{7.5})); got != 7.5 {
		t.Errorf("mean of one reading = %g, want 7.5", got)
	}
}

func TestMidrangeMeanRefuses(t *testing.T) {
	tests := []struct {
		name        string
		highC, lowC float64
		want        error
	}{
		{"high below low", 4, 12, calc.ErrHighBelowLow},
		{"high just below low", 12, math.Nextafter(12, 13), calc.ErrHighBelowLow},
		{"high NaN", nan, 12, calc.ErrNotFinite},
		{"low NaN", 12, nan, calc.ErrNotFinite},
		{"high infinite", infinity, 12, calc.ErrNotFinite},
		{"low minus infinity", 12, -infinity, calc.ErrNotFinite},
		{"sum overflows", math.MaxFloat64, math.MaxFloat64, calc.ErrNotFinite},
		{"difference overflows", math.MaxFloat64, -math.MaxFloat64, calc.ErrNotFinite},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			got, err := calc.MidrangeMean(tt.highC, tt.lowC)
			checkError(t, got, err, tt.want)
		})
	}
}

// Both means move with the thermometer: d degrees warmer all day is d degrees
// more. And readings in another order have the same mean.
func TestMeanProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		hoursC := rapid.SliceOfN(rapid.Float64Range(-60, 60), 1, 30).Draw(t, "hours")
		warmer := rapid.Float64Range(-20, 20).Draw(t, "warmer")
		meanC := must(calc.HourlyMean(hoursC))
		if meanC < slices.Min(hoursC)-absolute || meanC > slices.Max(hoursC)+absolute {
			t.Fatalf("mean %g leaves the readings' range", meanC)
		}
		shifted := make([]float64, len(hoursC))
		for i, readingC := range hoursC {
			shifted[len(hoursC)-1-i] = readingC + warmer
		}
		if got := must(calc.HourlyMean(shifted)); !within(got, meanC+warmer, 1e-11) {
			t.Fatalf("%g warmer and reversed: mean %g, was %g", warmer, got, meanC)
		}
		highC, lowC := slices.Max(hoursC), slices.Min(hoursC)
		midrangeC := must(calc.MidrangeMean(highC, lowC))
		if midrangeC < lowC || midrangeC > highC {
			t.Fatalf("midrange %g leaves %g to %g", midrangeC, lowC, highC)
		}
	})
}

// row writes slots as text: a number is a known slot, nan a slot not known.
func row(values ...float64) []calc.Slot {
	slots := make([]calc.Slot, len(values))
	for i, value := range values {
		if !math.IsNaN(value) {
			slots[i] = calc.Slot{C: value, Known: true}
		}
	}
	return slots
}

func TestBridgeGaps(t *testing.T) {
	x := nan
	tests := []struct {
		name    string
		slots   []calc.Slot
		longest int
		want    []calc.Slot
		filled  []int
	}{
		{"nothing to do", row(1, 2, 3), 3, row(1, 2, 3), nil},
		{"one slot", row(10, x, 14), 3, row(10, 12, 14), []int{1}},
		{"three slots, falling", row(20, x, x, x, 12), 3, row(20, 18, 16, 14, 12), []int{1, 2, 3}},
		{"exactly the longest", row(0, x, x, 3), 2, row(0, 1, 2, 3), []int{1, 2}},
		{"one longer than the longest", row(0, x, x, 3), 1, row(0, x, x, 3), nil},
		{"a long and a short gap", row(0, x, x, 3, x, 5), 1, row(0, x, x, 3, 4, 5), []int{4}},
		{"gap at the start", row(x, 5, 6), 3, row(x, 5, 6), nil},
		{"gap at the end", row(5, 6, x), 3, row(5, 6, x), nil},
		{"gaps at both ends and within", row(x, 5, x, 7, x), 3, row(x, 5, 6, 7, x), []int{2}},
		{"two gaps share a slot", row(0, x, 2, x, 4), 3, row(0, 1, 2, 3, 4), []int{1, 3}},
		{"across freezing", row(-1, x, 1), 3, row(-1, 0, 1), []int{1}},
		{"same on both sides", row(14.1, x, x, 14.1), 3, row(14.1, 14.1, 14.1, 14.1), []int{1, 2}},
		{"no known slot", row(x, x, x), 3, row(x, x, x), nil},
		{"one known slot", row(x, 9, x), 3, row(x, 9, x), nil},
		{"longest 0", row(1, x, 3), 0, row(1, x, 3), nil},
		{"longest below 0", row(1, x, 3), -1, row(1, x, 3), nil},
		{"empty", nil, 3, []calc.Slot{}, nil},
		{"a known NaN counts as unknown", []calc.Slot{{C: 1, Known: true}, {C: nan, Known: true}, {C: 3, Known: true}}, 3, row(1, 2, 3), []int{1}},
		{"a known infinity at the end", []calc.Slot{{C: 1, Known: true}, {C: infinity, Known: true}}, 3, row(1, x), nil},
		{"what an unknown slot holds is dropped", []calc.Slot{{C: 99}, {C: 2, Known: true}}, 3, row(x, 2), nil},
		{"the span overflows", row(-math.MaxFloat64, x, math.MaxFloat64), 3, row(-math.MaxFloat64, 0, math.MaxFloat64), []int{1}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			got, was := calc.BridgeGaps(tt.slots, tt.longest)
			if !slices.Equal(got, tt.want) {
				t.Errorf("got %v, want %v", got, tt.want)
			}
			if len(was) != len(tt.slots) {
				t.Fatalf("%d marks for %d slots", len(was), len(tt.slots))
			}
			for i, filled := range was {
				if filled != slices.Contains(tt.filled, i) {
					t.Errorf("slot %d marked %v", i, filled)
				}
			}
		})
	}
}

// The neighbouring days' slots, passed along, let a gap at midnight be bridged.
func TestBridgeGapsAcrossMidnight(t *testing.T) {
	today := row(nan, 6, 7)
	if got, _ := calc.BridgeGaps(today, 3); got[0].Known {
		t.Error("a gap at the start of the day was bridged from one side")
	}
	got, _ := calc.BridgeGaps(append(row(4), today...), 3)
	if want := (calc.Slot{C: 5, Known: true}); got[1] != want {
		t.Errorf("with yesterday's last slot: %v, want %v", got[1], want)
	}
}

func TestBridgeGapsProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		slots := rapid.SliceOfN(rapid.Custom(func(t *rapid.T) calc.Slot {
			return calc.Slot{C: rapid.Float64Range(-60, 60).Draw(t, "c"), Known: rapid.Bool().Draw(t, "known")}
		}), 0, 48).Draw(t, "slots")
		longest := rapid.IntRange(0, 5).Draw(t, "longest")
		input := slices.Clone(slots)
		bridged, was := calc.BridgeGaps(slots, longest)
		if !slices.Equal(slots, input) {
			t.Fatal("the input was modified")
		}
		run := 0
		for i, slot := range bridged {
			switch {
			case slots[i].Known && (slot != slots[i] || was[i]):
				t.Fatalf("known slot %d was touched", i)
			case was[i]:
				run++
				left, right := nearestKnown(slots, i, -1), nearestKnown(slots, i, 1)
				if slot.C < min(left, right) || slot.C > max(left, right) {
					t.Fatalf("slot %d: %g leaves the range of its ends %g and %g", i, slot.C, left, right)
				}
			default:
				run = 0
			}
			if run > longest {
				t.Fatalf("a run of %d was bridged, longest is %d", run, longest)
			}
		}
		again, wasAgain := calc.BridgeGaps(bridged, longest)
		if !slices.Equal(again, bridged) || slices.Contains(wasAgain, true) {
			t.Fatal("bridging twice bridges more")
		}
	})
}

// nearestKnown returns the nearest known temperature before or after a slot.
func nearestKnown(slots []calc.Slot, from, step int) float64 {
	for i := from + step; i >= 0 && i < len(slots); i += step {
		if slots[i].Known {
			return slots[i].C
		}
	}
	return nan
}
