package planner_test

import (
	"fmt"
	"math"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"swardbook/planner"
)

// stretch is a station's record: from the day on, so many days, 1 °C warmer
// every day; days of lost have nothing.
func stretch(from planner.Day, days int, startC float64, lost ...int) []planner.DayFacts {
	facts := make([]planner.DayFacts, days)
	for i := range facts {
		facts[i] = planner.DayFacts{Day: from + planner.Day(i), HasExtremes: true, HighC: startC + float64(i) + 5, LowC: startC + float64(i) - 5,
			HasHourly: true, HourlyC: startC + float64(i) - 0.5, HoursC: []float64{startC + float64(i) - 0.5}}
	}
	for _, i := range lost {
		facts[i] = planner.DayFacts{Day: from + planner.Day(i)}
	}
	return facts
}

// Worked by hand: the other station is 2 °C warmer on every day.
func TestJoinStations(t *testing.T) {
	t.Parallel()
	const d = planner.Day(15000)
	first := planner.StationFacts{Name: "pond", Facts: stretch(d, 40, 10, 29, 30, 31)}
	other := planner.StationFacts{Name: "roof", Facts: stretch(d, 45, 12)}
	joined := planner.JoinStations([]planner.StationFacts{first, other})
	if len(joined) != 45 {
		t.Fatalf("%d days, want 45", len(joined))
	}
	if diff := cmp.Diff(first.Facts[:29], joined[:29]); diff != "" {
		t.Errorf("days of the first station: %s", diff)
	}
	// Days 29 to 31 share 29 days before them: as measured. Day 40 shares 37.
	if got := joined[30]; got.Other != "roof" || got.OtherDays != 0 || got.HighC != 12+30+5 {
		t.Errorf("before 30 shared days: %+v", got)
	}
	got := joined[40]
	if got.Other != "roof" || got.OtherDays != 37 || got.HighC != 10+40+5 || got.LowC != 10+40-5 || got.HourlyC != 10+40-0.5 || got.HoursC[0] != got.HourlyC {
		t.Errorf("after 37 shared days: %+v", got)
	}
	if other.Facts[40].HoursC[0] != 12+40-0.5 {
		t.Error("the other station's own facts were changed")
	}
	third := planner.StationFacts{Name: "yard", Facts: stretch(d-2, 2, 5)}
	joined = planner.JoinStations([]planner.StationFacts{first, other, third})
	if joined[0].Day != d-2 || joined[0].Other != "yard" || joined[2].Other != "" {
		t.Errorf("with a third: %+v", joined[:3])
	}
	for _, none := range [][]planner.StationFacts{nil, {{Name: "pond"}}, {{}, {}}} {
		if got := planner.JoinStations(none); got != nil {
			t.Errorf("no facts: %v", got)
		}
	}
}

// Whatever is missing where: days the first has are its own, nothing is made up,
// days are contiguous, and what a day is never hangs on later days.
func TestJoinStationsProperties(t *testing.T) {
	t.Parallel()
	rapid.Check(t, func(r *rapid.T) {
		var ranked []planner.StationFacts
		for i := range rapid.IntRange(1, 3).Draw(r, "stations") {
			days := rapid.IntRange(0, 60).Draw(r, "days")
			facts := stretch(planner.Day(15000+rapid.IntRange(-5, 5).Draw(r, "from")), days, rapid.Float64Range(-20, 20).Draw(r, "°C"))
			for _, lost := range rapid.SliceOfN(rapid.IntRange(0, 59), 0, 25).Draw(r, "lost") {
				if lost < days {
					facts[lost] = planner.DayFacts{Day: facts[lost].Day}
				}
			}
			ranked = append(ranked, planner.StationFacts{Name: fmt.Sprint("s", i), Facts: facts})
		}
		joined := planner.JoinStations(ranked)
		for i, day := range joined {
			own := planner.Record{Facts: ranked[0].Facts}.At(day.Day)
			if !own.Empty() && cmp.Diff(own, day) != "" {
				r.Fatalf("%s is not the first station's", day.Day)
			}
			if i > 0 && day.Day != joined[i-1].Day+1 {
				r.Fatalf("%s after %s", day.Day, joined[i-1].Day)
			}
			known := false
			for _, station := range ranked {
				known = known || !planner.Record{Facts: station.Facts}.At(day.Day).Empty()
			}
			if known == day.Empty() || day.HasExtremes && day.HighC < day.LowC || math.IsNaN(day.HighC) {
				r.Fatalf("%s, known %t: %+v", day.Day, known, day)
			}
		}
		if len(joined) == 0 {
			return
		}
		until := joined[rapid.IntRange(0, len(joined)-1).Draw(r, "until")].Day
		var cut []planner.StationFacts
		for _, station := range ranked {
			cut = append(cut, planner.StationFacts{Name: station.Name, Facts: planner.Record{Facts: station.Facts}.Before(until).Facts})
		}
		want := planner.Record{Facts: joined}.Before(until).Facts
		for _, day := range planner.JoinStations(cut) { // may end earlier: nothing known behind
			if diff := cmp.Diff(planner.Record{Facts: want}.At(day.Day), day); diff != "" {
				r.Fatalf("%s as known before %s: %s", day.Day, until, diff)
			}
		}
	})
}

func ExampleJoinStations() {
	day := planner.DayOf(2024, 6, 4)
	own := func(day planner.Day, highC, lowC float64) planner.DayFacts {
		return planner.DayFacts{Day: day, HasExtremes: true, HighC: highC, LowC: lowC}
	}
	joined := planner.JoinStations([]planner.StationFacts{
		{Name: "green 7", Facts: []planner.DayFacts{own(day, 24, 13)}},
		{Name: "workshop", Facts: []planner.DayFacts{own(day, 25, 14), own(day+1, 26, 15)}},
	})
	for _, facts := range joined {
		fmt.Printf("%s %.0f/%.0f %q\n", facts.Day.Short(), facts.HighC, facts.LowC, facts.Other)
	}
	// Output:
	// Tue 4 Jun 24/13 ""
	// Wed 5 Jun 26/15 "workshop"
}

func TestASumSaysWhichDaysAreAnotherStations(t *testing.T) {
	t.Parallel()
	for other, want := range map[int]string{0: "[]", 1: "[1 day from another station]", 3: "[3 days from another station]"} {
		if got := fmt.Sprint(planner.Sum{Days: 9, Other: other}.Notes()); got != want {
			t.Errorf("%d days: %s, want %s", other, got, want)
		}
	}
}
