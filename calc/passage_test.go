package calc_test

import (
	"errors"
	"math"
	"slices"
	"testing"

	"gonum.org/v1/gonum/stat"
	"pgregory.net/rapid"

	"swardbook/calc"
)

// increments are fourteen invented daily units with the running totals computed
// from them: 200 is passed on day 13, day 12 being short by 0.7.
var (
	increments = []float64{14.3, 15.1, 13.8, 16.6, 17.9, 18.4, 15.0, 12.7, 14.9, 19.2, 20.3, 21.1, 17.4, 16.0}
	totals     = []float64{14.3, 29.4, 43.2, 59.8, 77.7, 96.1, 111.1, 123.8, 138.7, 157.9, 178.2, 199.3, 216.7, 232.7}
)

func TestFirstPassage(t *testing.T) {
	constant := func(unit float64) []float64 { return slices.Repeat([]float64{unit}, 30) }
	tests := []struct {
		name    string
		start   float64
		units   []float64
		target  float64
		days    int
		reached bool
	}{
		{"invented days to 200", 0, increments, 200, 13, true},
		{"0.7 already there", 0.7, increments, 200, 12, true},
		{"just under 0.7", 0.69, increments, 200, 13, true},
		{"20 a day to 200: on the day, not the day after", 0, constant(20), 200, 10, true},
		{"17.3 a day to 200", 0, constant(17.3), 200, 12, true},
		{"a tenth a day to 1, whose sum is 0.9999999999999999", 0, constant(0.1), 1, 10, true},
		{"start at the target", 200, increments, 200, 0, true},
		{"start over the target", 250, nil, 200, 0, true},
		{"start within rounding of the target", 199.9999999, nil, 200, 0, true},
		{"start just under, no days", 199.9, nil, 200, 0, false},
		{"the days end first", 0, increments, 233, 14, false},
		{"on the last day", 0, increments, 232.7, 14, true},
		{"days that add nothing", 0, constant(0), 200, 30, false},
		{"falls back later: the first passage counts", 0, []float64{10, -5, 10}, 10, 1, true},
		{"falls first", 0, []float64{-5, 10, 10}, 10, 3, true},
		{"target below 0, start below it", -20, []float64{5, 5, 5}, -10, 2, true},
		{"a day without a number ends the search", 0, []float64{15, nan, 500}, 200, 1, false},
		{"an infinite day too", 0, []float64{infinity}, 200, 0, false},
		{"minus infinity too", 0, []float64{15, 15, -infinity, 500}, 200, 2, false},
		{"a total that overflows", 0, []float64{-math.MaxFloat64, -math.MaxFloat64, 500}, 200, 1, false},
		{"a bad day after the target is not looked at", 0, []float64{200, nan}, 200, 1, true},
		{"start NaN", nan, increments, 200, 0, false},
		{"start infinite", infinity, increments, 200, 0, false},
		{"target NaN", 0, increments, nan, 0, false},
		{"target minus infinity", 0, increments, -infinity, 0, false},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			days, reached := calc.FirstPassage(tt.start, slices.Values(tt.units), tt.target)
			if days != tt.days || reached != tt.reached {
				t.Errorf("day %d, reached %v; want day %d, %v", days, reached, tt.days, tt.reached)
			}
		})
	}
}

// Every running total, taken as the target, is reached on its own day, and a
// millionth more on the day after.
func TestFirstPassageAtEveryTotal(t *testing.T) {
	for i, total := range totals {
		if days, reached := calc.FirstPassage(0, slices.Values(increments), total); days != i+1 || !reached {
			t.Errorf("target %g: day %d, reached %v; want day %d", total, days, reached, i+1)
		}
		days, reached := calc.FirstPassage(0, slices.Values(increments), total+1e-6)
		last := i == len(totals)-1
		if reached == last || !last && days != i+2 {
			t.Errorf("target %g and a millionth: day %d, reached %v", total, days, reached)
		}
	}
}

func TestReached(t *testing.T) {
	tests := []struct {
		name          string
		total, target float64
		want          bool
	}{
		{"over", 200.5, 200, true},
		{"equal", 200, 200, true},
		{"under", 199.9, 200, false},
		{"a sum of tenths", 0.1 + 0.2, 0.3, true},
		{"and the other way round", 0.3, 0.1 + 0.2, true},
		{"a millionth short", 199.999999, 200, false},
		{"half a millionth short rounds up", 199.9999995, 200, true},
		{"a little more than half short does not", 199.9999994, 200, false},
		{"the target is rounded too", 200, 200.0000004, true},
		{"halves round away from zero below 0", -0.0000005, 0, false},
		{"less than half rounds to 0", -0.0000004, 0, true},
		{"nothing to reach", 0, 0, true},
		{"large numbers are compared as they are", 1e15, 1e15 + 1, false},
		{"and where six decimals no longer fit", math.Nextafter(1<<33, 0), 1 << 33, false},
		{"the largest number", math.MaxFloat64, math.MaxFloat64, true},
		{"total NaN", nan, 200, false},
		{"target NaN", 200, nan, false},
		{"total infinite", infinity, 200, false},
		{"target minus infinity", 200, -infinity, false},
	}
	for _, tt := range tests {
		if got := calc.Reached(tt.total, tt.target); got != tt.want {
			t.Errorf("%s: Reached(%v, %v) = %v", tt.name, tt.total, tt.target, got)
		}
	}
}

// A higher target never comes earlier, and a head start never makes it later.
func TestFirstPassageProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		units := rapid.SliceOfN(rapid.Float64Range(0, 30), 0, 40).Draw(t, "units")
		start := rapid.Float64Range(0, 100).Draw(t, "start")
		target := rapid.Float64Range(0, 400).Draw(t, "target")
		days, reached := calc.FirstPassage(start, slices.Values(units), target)
		total := start
		for _, unit := range units[:days] {
			total += unit
		}
		if calc.Reached(total, target) != reached {
			t.Fatalf("day %d, reached %v, but the total is %g of %g", days, reached, total, target)
		}
		if reached && days > 0 && calc.Reached(total-units[days-1], target-1e-6) && total-units[days-1] > target {
			t.Fatalf("day %d, but %g of %g was there the day before", days, total-units[days-1], target)
		}
		more := rapid.Float64Range(0, 50).Draw(t, "more")
		higherDays, higherReached := calc.FirstPassage(start, slices.Values(units), target+more)
		if higherReached && (!reached || higherDays < days) {
			t.Fatalf("target %g on day %d (%v), %g on day %d", target, days, reached, target+more, higherDays)
		}
		headDays, headReached := calc.FirstPassage(start+more, slices.Values(units), target)
		if reached && (!headReached || headDays > days) {
			t.Fatalf("day %d, with a head start of %g day %d (%v)", days, more, headDays, headReached)
		}
	})
}

func TestRank(t *testing.T) {
	tests := []struct {
		share float64
		count int
		want  int
	}{
		{0.1, 10, 1}, {0.5, 10, 5}, {0.9, 10, 9}, {1, 10, 10}, {0, 10, 1},
		{0.1, 1, 1}, {0.5, 1, 1}, {0.9, 1, 1},
		{0.1, 11, 2}, {0.5, 11, 6}, {0.9, 11, 10},
		{0.1, 30, 3}, {0.9, 30, 27}, {0.5, 31, 16}, {0.1, 31, 4},
		{0.07, 100, 7},     // 0.07·100 is 7.000000000000001 in float64
		{0.55, 100, 55},    // 55.00000000000001
		{0.1 + 0.2, 10, 3}, // 3.0000000000000004
		{0.300001, 10, 4},  // more than noise
		{0.7, 1000000, 700000}, {1e-9, 5, 1},
		{1, math.MaxInt, math.MaxInt}, {0, math.MaxInt, 1},
	}
	for _, tt := range tests {
		if got := must(calc.Rank(tt.share, tt.count)); got != tt.want {
			t.Errorf("Rank(%v, %d) = %d, want %d", tt.share, tt.count, got, tt.want)
		}
	}
}

func TestRankRefuses(t *testing.T) {
	tests := []struct {
		name  string
		share float64
		count int
		want  error
	}{
		{"percent for a share", 90, 10, calc.ErrShare},
		{"just over 1", math.Nextafter(1, 2), 10, calc.ErrShare},
		{"below 0", -0.1, 10, calc.ErrShare},
		{"NaN", nan, 10, calc.ErrNotFinite},
		{"infinite", infinity, 10, calc.ErrNotFinite},
		{"nothing to rank", 0.5, 0, calc.ErrNoValues},
		{"a negative count", 0.5, -3, calc.ErrNoValues},
	}
	for _, tt := range tests {
		if got, err := calc.Rank(tt.share, tt.count); !errors.Is(err, tt.want) || got != 0 {
			t.Errorf("%s: %d, %v; want %v", tt.name, got, err, tt.want)
		}
	}
}

// The second route: gonum.org/v1/gonum/stat's empirical quantile takes the same
// order statistic.
func TestRankAgainstGonum(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		count := rapid.IntRange(1, 200).Draw(t, "count")
		share := float64(rapid.IntRange(1, 999).Draw(t, "thousandths")) / 1000
		exact := share * float64(count)
		if math.Abs(exact-math.Round(exact)) < 1e-9 {
			t.Skip("a whole number, where gonum does not forgive rounding")
		}
		ordered := make([]float64, count)
		for i := range ordered {
			ordered[i] = float64(i + 1)
		}
		if got, want := must(calc.Rank(share, count)), stat.Quantile(share, stat.Empirical, ordered, nil); float64(got) != want {
			t.Fatalf("share %g of %d: rank %d, gonum's %g", share, count, got, want)
		}
	})
}
