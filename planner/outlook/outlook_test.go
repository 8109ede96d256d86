package outlook_test

import (
	"math"
	"reflect"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"swardbook/planner"
	"swardbook/planner/outlook"
)

func date(text string) planner.Day {
	day, err := planner.ParseDay(text)
	if err != nil {
		panic(err)
	}
	return day
}

func within(got, want float64) bool { return math.Abs(got-want) <= 1e-9 }

// known is a day with a 24-hour mean and extremes 6 above and 4 below it.
func known(day planner.Day, c float64) planner.DayFacts {
	return planner.DayFacts{Day: day, HasExtremes: true, HighC: c + 6, LowC: c - 4, ExtremesFrom: planner.FromStation,
		HasHourly: true, HourlyC: c, SlotsReal: 24, SlotsWanted: 24}
}

// recordOf is a record from first through last; keep says of which days
// something is known, and how warm they are.
func recordOf(first, last planner.Day, keep func(planner.Day) (c float64, known bool)) planner.Record {
	record := planner.Record{Revision: 1}
	for day := first; day <= last; day++ {
		facts := planner.DayFacts{Day: day}
		if c, ok := keep(day); ok {
			facts = known(day, c)
		}
		record.Facts = append(record.Facts, facts)
	}
	return record
}

// numbered makes each day as warm as its number of the year, so that a member
// shows which day it stands on.
func numbered(day planner.Day) (float64, bool) {
	return float64(day-planner.DayOf(day.Year(), 1, 1)) / 10, true
}

func outlookOf(t testing.TB, record planner.Record, hand []planner.HandDay, asOf planner.Day) planner.Outlook {
	t.Helper()
	out := outlook.Simple{}.Outlook(record, hand, asOf)
	checkOutlook(t, out, asOf)
	return out
}

// checkOutlook holds what Plan.Outlook promises of every outlook.
func checkOutlook(t interface {
	Helper()
	Fatalf(string, ...any)
}, out planner.Outlook, asOf planner.Day) {
	t.Helper()
	if out.AsOf != asOf || out.Start > asOf || len(out.Path) != int(asOf-out.Start)+outlook.Horizon || len(out.Members) < 1 {
		t.Fatalf("as of %s from %s, %d days, %d members", out.AsOf, out.Start, len(out.Path), len(out.Members))
	}
	if years := len(out.Members); out.Years != 0 && out.Years != years || out.SpreadKnown() != (years > 1) {
		t.Fatalf("%d years among %d members, spread known %t", out.Years, years, out.SpreadKnown())
	}
	for _, row := range append([][]planner.DayFacts{out.Path}, out.Members...) {
		if len(row) != len(out.Path) {
			t.Fatalf("a member of %d days beside a path of %d", len(row), len(out.Path))
		}
		for i, facts := range row {
			if facts.Day != out.Start+planner.Day(i) {
				t.Fatalf("day %s stands where %s should", facts.Day, out.Start+planner.Day(i))
			}
			for _, c := range []float64{facts.HighC, facts.LowC, facts.HourlyC} {
				if math.IsNaN(c) || math.IsInf(c, 0) {
					t.Fatalf("%+v holds no number", facts)
				}
			}
			if facts.Empty() && !out.Path[i].Empty() {
				t.Fatalf("%s is known on the path and not in a member", facts.Day)
			}
		}
	}
}

func TestNoRecord(t *testing.T) {
	asOf := date("2024-06-10")
	out := outlookOf(t, planner.Record{}, nil, asOf)
	if out.Start != asOf || out.Engine != outlook.EngineRecentDays || out.Years != 0 || out.Typed != 0 || out.SpreadKnown() {
		t.Errorf("%+v", out)
	}
	for _, facts := range out.Path {
		if !facts.Empty() {
			t.Fatalf("%s is known: %+v", facts.Day, facts)
		}
	}
	typed := outlookOf(t, planner.Record{}, []planner.HandDay{{Day: asOf + 1, HighC: 25, LowC: 15}}, asOf)
	for i, facts := range typed.Path {
		if facts.Empty() == (i == 1) || !reflect.DeepEqual(facts, typed.Members[0][i]) {
			t.Errorf("day %d: %+v", i, facts)
		}
	}
	if typed.Typed != 1 || typed.Path[1].HighC != 25 {
		t.Errorf("%d typed, %+v", typed.Typed, typed.Path[1])
	}
}

// Under a year the mean of the newest 14 known days stands for all. By hand: days
// of 1 to 20 °C, of which the newest 14 are 7 to 20, mean 13.5; without the 18th
// and 19th they are 5 to 17 and 20, mean (143 + 20)/14.
func TestLessThanAYear(t *testing.T) {
	asOf := date("2024-06-21")
	counting := func(gone ...int) func(planner.Day) (float64, bool) {
		return func(day planner.Day) (float64, bool) {
			n := int(day - date("2024-06-01") + 1)
			return float64(n), !slices.Contains(gone, n)
		}
	}
	for _, row := range []struct {
		name string
		gone []int
		want float64
	}{
		{"whole", nil, 13.5},
		{"two missing", []int{18, 19}, (143.0 + 20) / 14},
		{"the newest missing", []int{20}, 12.5}, // 6 to 19
		{"few are known", []int{1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12, 13, 14, 15, 16, 17}, 19}, // 18, 19, 20
	} {
		out := outlookOf(t, recordOf(date("2024-06-01"), asOf-1, counting(row.gone...)), nil, asOf)
		if out.Engine != outlook.EngineRecentDays || out.Years != 0 || len(out.Members) != 1 {
			t.Fatalf("%s: engine %d, %d years, %d members", row.name, out.Engine, out.Years, len(out.Members))
		}
		for i, facts := range out.Path {
			if !within(facts.HourlyC, row.want) || !within(facts.HighC, row.want+6) || !within(facts.LowC, row.want-4) || facts.ExtremesFrom != planner.FromAhead {
				t.Fatalf("%s: %s is %+v, want a mean of %g", row.name, facts.Day, facts, row.want)
			}
			if !reflect.DeepEqual(facts, out.Members[0][i]) {
				t.Fatalf("%s: path %+v, member %+v", row.name, facts, out.Members[0][i])
			}
		}
	}
}

// Highs, lows and 24-hour means are averaged each over the days that know them.
func TestRecentDaysOfTwoKinds(t *testing.T) {
	asOf := date("2024-06-05")
	record := planner.Record{Facts: []planner.DayFacts{
		{Day: asOf - 4, HasExtremes: true, HighC: 20, LowC: 10},
		{Day: asOf - 3, HasHourly: true, HourlyC: 13},
		known(asOf-2, 15), // 21 and 11
		{Day: asOf - 1},
	}}
	if facts := outlookOf(t, record, nil, asOf).Path[20]; !within(facts.HighC, 20.5) || !within(facts.LowC, 10.5) || !within(facts.HourlyC, 14) {
		t.Errorf("%+v; want 20.5, 10.5 and 14", facts)
	}
	daily := planner.Record{Facts: record.Facts[:1]}
	if facts := outlookOf(t, daily, nil, asOf).Path[20]; facts.HasHourly || facts.HourlyC != 0 || facts.HighC != 20 {
		t.Errorf("%+v; a 24-hour mean that no day has", facts)
	}
}

// Each past year goes on from the same month and day as it went; the path is
// their mean.
func TestPastYears(t *testing.T) {
	asOf := date("2024-05-10")
	record := recordOf(date("2021-01-01"), asOf-1, func(day planner.Day) (float64, bool) {
		c, _ := numbered(day)
		return c + 100*float64(day.Year()-2020), true // says the year, too
	})
	out := outlookOf(t, record, nil, asOf)
	if out.Engine != outlook.EnginePastYears || out.Years != 3 || out.Start != asOf {
		t.Fatalf("engine %d, %d years from %s", out.Engine, out.Years, out.Start)
	}
	for i := range outlook.Horizon {
		sum := 0.0
		for n, from := range []string{"2023-05-10", "2022-05-10", "2021-05-10"} { // newest first
			want := record.At(date(from) + planner.Day(i))
			want.Day = asOf + planner.Day(i)
			if !reflect.DeepEqual(out.Members[n][i], want) {
				t.Fatalf("member %d, day %d: %+v, want %+v", n, i, out.Members[n][i], want)
			}
			sum += want.HourlyC
		}
		if path := out.Path[i]; !within(path.HourlyC, sum/3) || !within(path.HighC, sum/3+6) || !within(path.LowC, sum/3-4) {
			t.Fatalf("path, day %d: %+v, want %g", i, path, sum/3)
		}
	}
}

func TestLeapDays(t *testing.T) {
	for _, row := range []struct{ asOf, from string }{
		{"2024-02-29", "2023-02-28"}, // a year without 29 February goes on from the 28th
		{"2024-03-01", "2023-03-01"},
		{"2025-02-28", "2024-02-28"},
		{"2025-03-01", "2024-03-01"},
	} {
		asOf := date(row.asOf)
		record := recordOf(date(row.from)-20, asOf-1, numbered)
		out := outlookOf(t, record, nil, asOf)
		if out.Years != 1 {
			t.Fatalf("%s: %d years", row.asOf, out.Years)
		}
		for i, facts := range out.Members[0][asOf-out.Start:] {
			if want := record.At(date(row.from) + planner.Day(i)); want.Empty() || !within(facts.HourlyC, want.HourlyC) {
				t.Fatalf("%s, day %d: %g, want that of %s, %g", row.asOf, i, facts.HourlyC, want.Day, want.HourlyC)
			}
		}
	}
	// A gap across 29 February does not move the days ahead.
	asOf := date("2024-03-05")
	record := recordOf(date("2022-12-01"), date("2024-02-20"), numbered)
	out := outlookOf(t, record, nil, asOf)
	if ahead := out.Members[0][asOf-out.Start]; out.Start != date("2024-02-21") || !within(ahead.HourlyC, record.At(date("2023-03-05")).HourlyC) {
		t.Errorf("from %s; 5 March goes on as a day of %g, want %g", out.Start, ahead.HourlyC, record.At(date("2023-03-05")).HourlyC)
	}
}

// Years known too little are left out: less than four fifths of all days, or of
// the first thirty.
func TestPoorlyKnownYears(t *testing.T) {
	asOf := date("2024-05-10")
	for _, row := range []struct {
		name string
		gone func(n int) bool // n days after 10 May 2023
		in   bool
	}{
		{"all known", func(int) bool { return false }, true},
		{"73 days lost: four fifths are left", func(n int) bool { return n >= 100 && n < 173 }, true},
		{"74 days lost", func(n int) bool { return n >= 100 && n < 174 }, false},
		{"6 of the first thirty lost", func(n int) bool { return n >= 10 && n < 16 }, true},
		{"7 of the first thirty lost", func(n int) bool { return n >= 10 && n < 17 }, false},
		{"the thirty-first is not among them", func(n int) bool { return n >= 10 && n < 16 || n >= 30 && n < 34 }, true},
		{"short gaps are lines", func(n int) bool { return n%4 != 0 }, true},
	} {
		record := recordOf(date("2022-05-01"), asOf-1, func(day planner.Day) (float64, bool) {
			return 10, day < date("2023-05-10") || day > asOf-5 || !row.gone(int(day-date("2023-05-10")))
		})
		out := outlookOf(t, record, nil, asOf)
		if want := map[bool]int{true: 2, false: 1}[row.in]; out.Years != want {
			t.Errorf("%s: %d years, want %d", row.name, out.Years, want)
		}
	}
}

// Days a year lacks come from the mean of the others; days that all lack from the
// newest known days.
func TestDaysThatAYearLacks(t *testing.T) {
	asOf := date("2024-05-10")
	gap := func(year int) planner.Day { return planner.DayOf(year, 8, 1) }
	record := recordOf(date("2021-05-01"), asOf-1, func(day planner.Day) (float64, bool) {
		lost := day >= gap(2023) && day < gap(2023)+20 || day >= gap(2022)+10 && day < gap(2022)+20 || day >= gap(2021)+15 && day < gap(2021)+20
		c := float64(day.Year() - 2020)
		if day >= asOf-14 {
			c = 30
		}
		return c, !lost
	})
	out := outlookOf(t, record, nil, asOf)
	from := int(gap(2024) - out.Start)
	for i, want := range map[int][]float64{ // 2023, 2022, 2021, path
		from - 1: {3, 2, 1, 2}, from: {1.5, 2, 1, 1.5}, from + 9: {1.5, 2, 1, 1.5}, from + 10: {1, 1, 1, 1},
		from + 14: {1, 1, 1, 1}, from + 15: {30, 30, 30, 30}, from + 19: {30, 30, 30, 30}, from + 20: {3, 2, 1, 2},
	} {
		for n, row := range append(slices.Clone(out.Members), out.Path) {
			if !within(row[i].HourlyC, want[n]) {
				t.Errorf("day %d, row %d: %g, want %g", i-from, n, row[i].HourlyC, want[n])
			}
		}
	}
}

func TestTypedDays(t *testing.T) {
	asOf := date("2024-05-10")
	record := recordOf(date("2022-01-01"), asOf-1, numbered)
	plain := outlookOf(t, record, nil, asOf)
	hand := []planner.HandDay{
		{Day: asOf - 1, HighC: 50, LowC: 50}, // past: known by now
		{Day: asOf, HighC: 31, LowC: 19},
		{Day: asOf + 2, HighC: 11, LowC: -1},
		{Day: asOf + 4, HighC: 50, LowC: 50, Cleared: true},
		{Day: asOf + outlook.Horizon - 1, HighC: 21, LowC: 20},
		{Day: asOf + outlook.Horizon, HighC: 50, LowC: 50}, // beyond the days ahead
	}
	out := outlookOf(t, record, hand, asOf)
	if out.Typed != 3 || out.Years != plain.Years || out.Engine != plain.Engine {
		t.Errorf("%d typed, %d years, engine %d", out.Typed, out.Years, out.Engine)
	}
	for n, row := range append([][]planner.DayFacts{out.Path}, out.Members...) {
		was := append([][]planner.DayFacts{plain.Path}, plain.Members...)[n]
		for i, facts := range row {
			want := was[i]
			for _, typed := range hand {
				if typed.Day == facts.Day && !typed.Cleared {
					want = planner.DayFacts{Day: facts.Day, HasExtremes: true, HighC: typed.HighC, LowC: typed.LowC, ExtremesFrom: planner.FromHand}
				}
			}
			if !reflect.DeepEqual(facts, want) {
				t.Fatalf("row %d, %s: %+v, want %+v", n, facts.Day, facts, want)
			}
		}
	}
}

// The outlook begins at the first day that is missing and that no line fills.
func TestStart(t *testing.T) {
	asOf := date("2024-05-20")
	long := date("2021-01-01")
	for _, row := range []struct {
		name  string
		first planner.Day
		gone  []int // days before asOf
		want  planner.Day
	}{
		{"no gap", long, nil, asOf},
		{"yesterday missing", long, []int{1}, asOf - 1},
		{"three newest missing", long, []int{1, 2, 3}, asOf - 3},
		{"a gap that a line fills", long, []int{5, 6, 7}, asOf},
		{"a longer gap", long, []int{5, 6, 7, 8}, asOf - 8},
		{"the first of two gaps", long, []int{1, 20, 21, 22, 23}, asOf - 23},
		{"a line, then yesterday", long, []int{1, 5}, asOf - 1},
		{"a gap out of reach", long, []int{401, 402, 403, 404}, asOf},
		{"a gap half out of reach", long, []int{399, 400, 401, 402}, asOf - 400},
		{"the record begins later", asOf - 30, nil, asOf - 400},
		{"the record begins today", asOf, nil, asOf}, // nothing to go by
	} {
		record := recordOf(row.first, asOf-1, func(day planner.Day) (float64, bool) { return 10, !slices.Contains(row.gone, int(asOf-day)) })
		out := outlookOf(t, record, nil, asOf)
		if out.Start != row.want {
			t.Errorf("%s: from %s, want %s", row.name, out.Start, row.want)
		}
		if row.first < asOf && out.Path[0].Empty() {
			t.Errorf("%s: nothing is known of %s", row.name, out.Start)
		}
	}
	// A record that ends weeks before the morning goes on from its end.
	record := recordOf(long, asOf-40, func(planner.Day) (float64, bool) { return 10, true })
	out := outlookOf(t, record, nil, asOf)
	if out.Start != asOf-39 || out.Years != 3 || out.Path[0].Empty() {
		t.Errorf("a record that ended: from %s, %d years", out.Start, out.Years)
	}
}

// A work done before the record begins is not told late: the days without a
// record count as the days ahead do. By hand: 20 °C throughout, 200 °C-days, done
// 12 days ago, so the tenth day counted was two days before the morning.
func TestWorkBeforeTheRecord(t *testing.T) {
	asOf := date("2024-05-20")
	record := recordOf(asOf-3, asOf-1, func(planner.Day) (float64, bool) { return 20, true })
	plan := planner.Plan{
		AsOf: asOf, Record: record, Outlook: outlookOf(t, record, nil, asOf), Surfaces: []planner.Surface{{ID: 1, Name: "greens"}},
		Works: []planner.Work{{ID: 1, Surface: 1, Name: "regulator", Settings: planner.Always(planner.WorkSettings{
			Counting: planner.Counting{Counts: planner.ByDegreeDays}, Target: 200, Basis: planner.Hourly})}},
		Log: []planner.Entry{{ID: 1, Day: asOf - 12, Passes: []planner.Pass{{Work: 1}}}},
	}
	e, err := planner.Evaluate(plan)
	if err != nil {
		t.Fatal(err)
	}
	facts, _ := e.Works[0].OwnFacts()
	if want := (planner.Passage{Day: asOf - 2, Known: true}); facts.Date() != want || facts.Total != (planner.Sum{Total: 60, Days: 11, Missing: 8}) {
		t.Errorf("due %s with %+v, want %s", facts.Date().Day, facts.Total, want.Day)
	}
}

// drawRecord draws a record of up to four years with gaps.
func drawRecord(t *rapid.T, asOf planner.Day) planner.Record {
	first := asOf - planner.Day(rapid.IntRange(1, 1500).Draw(t, "length"))
	seed := rapid.IntRange(0, 1000).Draw(t, "weather")
	var gaps [][2]planner.Day
	for range rapid.IntRange(0, 6).Draw(t, "gaps") {
		from := first + planner.Day(rapid.IntRange(0, 1500).Draw(t, "from"))
		gaps = append(gaps, [2]planner.Day{from, from + planner.Day(rapid.SampledFrom([]int{0, 1, 2, 3, 9, 40, 120}).Draw(t, "gap"))})
	}
	return recordOf(first, asOf+400, func(day planner.Day) (float64, bool) {
		for _, gap := range gaps {
			if day >= gap[0] && day <= gap[1] {
				return 0, false
			}
		}
		return 12 + 10*math.Sin(float64(int(day)*7+seed)), true
	})
}

// Nothing of the morning's own day or later is looked at, and the record is not
// written to.
func TestNoLookingAhead(t *testing.T) {
	asOf := date("2024-03-05")
	rapid.Check(t, func(t *rapid.T) {
		record := drawRecord(t, asOf)
		changed := planner.Record{Facts: slices.Clone(record.Facts), Revision: 2}
		for i := range changed.Facts {
			if changed.Facts[i].Day >= asOf {
				changed.Facts[i] = known(changed.Facts[i].Day, rapid.Float64Range(-20, 40).Draw(t, "later"))
			}
		}
		hand := []planner.HandDay{{Day: asOf + planner.Day(rapid.IntRange(0, 20).Draw(t, "typed")), HighC: 20, LowC: 10}}
		first := outlook.Simple{}.Outlook(record, hand, asOf)
		checkOutlook(t, first, asOf)
		if second := (outlook.Simple{}).Outlook(changed, hand, asOf); !reflect.DeepEqual(first, second) {
			t.Fatalf("later readings changed the outlook")
		}
		if second := (outlook.Simple{}).Outlook(record.Before(asOf), hand, asOf); !reflect.DeepEqual(first, second) {
			t.Fatalf("the record cut at the morning gives another outlook")
		}
		for _, facts := range record.Facts {
			if c := record.At(facts.Day); !reflect.DeepEqual(c, facts) {
				t.Fatalf("the record became %+v on %s", c, facts.Day)
			}
		}
		if first.Start > asOf-400 && first.Start < asOf {
			if facts, _ := record.Before(asOf).Filled(first.Start); !facts.Empty() {
				t.Fatalf("it begins on %s, of which the record knows %+v", first.Start, facts)
			}
		}
	})
}

// A second route: each member written as a lookup of the day a number of years
// before, gaps of up to three days being lines.
func TestMembersAgainstTheRecord(t *testing.T) {
	asOf := date("2024-03-05")
	rapid.Check(t, func(t *rapid.T) {
		record := drawRecord(t, asOf).Before(asOf)
		out := outlook.Simple{}.Outlook(record, nil, asOf)
		checkOutlook(t, out, asOf)
		member := 0
		for ago := 1; ago <= 5; ago++ {
			from := planner.DayOf(asOf.Year()-ago, 3, 5)
			all, near := 0, 0
			for i := range outlook.Horizon {
				if facts, _ := record.Filled(from + planner.Day(i)); !facts.Empty() {
					all++
					if i < 30 {
						near++
					}
				}
			}
			if 5*all < 4*outlook.Horizon || near < 24 {
				continue
			}
			if member >= out.Years {
				t.Fatalf("%d years, yet the year from %s is known: %d days, %d of the first thirty", out.Years, from, all, near)
			}
			for i := range outlook.Horizon {
				want, _ := record.Filled(from + planner.Day(i))
				got := out.Members[member][int(asOf-out.Start)+i]
				if want.Empty() {
					want = out.Path[int(asOf-out.Start)+i]
				}
				if got.HighC != want.HighC || got.HourlyC != want.HourlyC {
					t.Fatalf("the year from %s, day %d: %+v, want %+v", from, i, got, want)
				}
			}
			member++
		}
		if member != out.Years {
			t.Fatalf("%d years, counted %d", out.Years, member)
		}
	})
}
