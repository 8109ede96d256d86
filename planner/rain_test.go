package planner_test

import (
	"errors"
	"math"
	"testing"
	"time"

	"pgregory.net/rapid"

	"swardbook/planner"
)

// dublin is in UTC+1 in June: 06:10 on the wall is 05:10 UTC.
func dublin(plan planner.Plan) planner.Plan {
	plan.Site.Zone = "Europe/Dublin"
	return plan
}

// gauge makes readings of the day, from "15:04" in UTC and mm in turn.
func gauge(day planner.Day, readings ...any) (rain []planner.Rain) {
	for i := 0; i < len(readings); i += 2 {
		at, err := time.Parse("15:04", readings[i].(string))
		if err != nil {
			panic(err)
		}
		rain = append(rain, planner.Rain{At: int64(day)*86400 + int64(at.Hour()*3600+at.Minute()*60), MM: readings[i+1].(float64)})
	}
	return rain
}

func at(clock string) func(*planner.Entry) { return func(e *planner.Entry) { e.Clock = clock } }

func TestRainAfter(t *testing.T) {
	for _, row := range []struct {
		name  string
		clock string
		hours float64
		rain  []planner.Rain
		mm    float64
		first time.Duration
		whole bool
		none  bool // not ok
	}{
		{name: "40 minutes after", clock: "06:10", hours: 4, rain: gauge(june(3), "05:00", 9.0, "05:50", 1.8, "06:50", 0.0, "07:50", 0.4, "09:10", 0.0),
			mm: 2.2, first: 40 * time.Minute, whole: true},
		{name: "on the very end", clock: "06:10", hours: 4, rain: gauge(june(3), "09:10", 0.2), mm: 0.2, first: 4 * time.Hour},
		{name: "just past the end", clock: "06:10", hours: 4, rain: gauge(june(3), "06:00", 0.0, "07:00", 0.0, "08:00", 0.0, "09:11", 5.0), whole: true},
		{name: "the moment itself is before it", clock: "06:10", hours: 1, rain: gauge(june(3), "05:10", 5.0, "06:10", 0.0), whole: true},
		{name: "dry, as far as the gauge goes", clock: "06:10", hours: 4, rain: gauge(june(3), "06:00", 0.0, "07:00", 0.0)},
		{name: "a gap of the gauge", clock: "06:10", hours: 4, rain: gauge(june(3), "06:00", 0.0, "08:00", 0.0, "09:00", 0.0, "10:00", 0.0)},
		{name: "no gauge", clock: "06:10", hours: 4},
		{name: "over midnight", clock: "23:30", hours: 2, rain: append(gauge(june(3), "23:00", 0.0), gauge(june(4), "00:15", 1.0, "00:45", 0.0)...),
			mm: 1, first: 105 * time.Minute, whole: true},
		{name: "no time of day", hours: 4, rain: gauge(june(3), "05:50", 1.8), none: true},
		{name: "no rain-free hours", clock: "06:10", rain: gauge(june(3), "05:50", 1.8), none: true},
		{name: "hours that are no number", clock: "06:10", hours: math.NaN(), none: true},
	} {
		plan := dublin(simple(byDays(20), june(10)))
		plan.Rain = row.rain
		entry := doneOn(june(3), at(row.clock))
		entry.ID = 7
		got, ok := plan.RainAfter(entry, row.hours)
		if ok == row.none {
			t.Errorf("%s: ok is %v", row.name, ok)
		}
		want := planner.RainAfter{Entry: 7, Hours: row.hours, MM: row.mm, First: row.first, Whole: row.whole}
		if ok && (got != want || got.Rained() != (row.mm > 0)) {
			t.Errorf("%s: %+v, want %+v", row.name, got, want)
		}
	}
}

// What is asked stops being asked once anything was said of the pass, once it
// is old, and where the gauge tells nothing.
func TestRainIsAskedOnce(t *testing.T) {
	settings := byDays(20)
	settings.RainFreeHours = 4
	wet := gauge(june(3), "05:50", 1.8)
	counts := func(e *planner.Entry) { e.RainCounts = true }
	for _, row := range []struct {
		name  string
		asOf  planner.Day
		log   []planner.Entry
		asked bool
	}{
		{"the day after", june(4), []planner.Entry{doneOn(june(3), at("06:10"))}, true},
		{"on the day itself", june(3), []planner.Entry{doneOn(june(3), at("06:10"))}, true},
		{"two weeks after", june(17), []planner.Entry{doneOn(june(3), at("06:10"))}, true},
		{"later", june(18), []planner.Entry{doneOn(june(3), at("06:10"))}, false},
		{"it was said to count", june(4), []planner.Entry{doneOn(june(3), at("06:10"), counts)}, false},
		{"it was said to be doubtful", june(4), []planner.Entry{doneOn(june(3), at("06:10"), result(planner.Doubtful))}, false},
		{"it was lost", june(4), []planner.Entry{doneOn(june(1)), doneOn(june(3), at("06:10"), result(planner.Lost))}, false},
		{"an older pass beneath a newer", june(6), []planner.Entry{doneOn(june(3), at("06:10")), doneOn(june(5), at("06:10"))}, false},
		{"no time was logged", june(4), []planner.Entry{doneOn(june(3))}, false},
		{"it rained before", june(4), []planner.Entry{doneOn(june(3), at("07:00"))}, false},
	} {
		plan := dublin(simple(settings, row.asOf, row.log...))
		plan.Rain = wet
		state := stateOf(t, plan)
		newest := plan.Log[len(plan.Log)-1]
		if rained := plan.RainedOn(newest); rained != (newest.Day == june(3) && newest.Clock == "06:10" && newest.Result == planner.Good) {
			t.Errorf("%s: it rained on the newest pass: %v", row.name, rained)
		}
		if got := state.Rain != nil; got != row.asked {
			t.Errorf("%s: asked is %v", row.name, got)
		}
		_, told := state.Figures(row.asOf).Get("due.greens.regulator.rain_mm")
		if told != row.asked {
			t.Errorf("%s: the figure is there: %v", row.name, told)
		}
	}
}

// Whatever the gauge says, what fell within the hours is no more than it caught
// in all, and a question is only asked when something fell.
func TestRainIsWithinWhatTheGaugeCaught(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		plan := dublin(planner.Plan{AsOf: june(10)})
		second := int64(june(3)) * 86400
		caught := 0.0
		for range rapid.IntRange(0, 40).Draw(r, "readings") {
			second += rapid.Int64Range(1, 7200).Draw(r, "step")
			mm := rapid.Float64Range(0, 20).Draw(r, "mm")
			plan.Rain = append(plan.Rain, planner.Rain{At: second, MM: mm})
			caught += mm
		}
		hours := rapid.Float64Range(0.1, 48).Draw(r, "hours")
		after, ok := plan.RainAfter(doneOn(june(3), at("06:10")), hours)
		if !ok || after.MM < 0 || after.MM > caught || after.First < 0 || after.First.Hours() > hours {
			r.Errorf("%+v of %g mm in %g h", after, caught, hours)
		}
	})
}

func TestCheckRain(t *testing.T) {
	for mm, ok := range map[float64]bool{0: true, 0.254: true, planner.MostRainMM: true, -0.1: false, 500.1: false, math.Inf(1): false, math.NaN(): false} {
		if err := planner.CheckRain(mm); (err == nil) != ok {
			t.Errorf("%g mm: %v", mm, err)
		}
	}
}

// The gauge is looked up for the works that need it, from two weeks before the
// morning to its midnight, or to now.
func TestBookLoadsRain(t *testing.T) {
	today := june(20)
	work := regulator(100)
	s := &shelf{setup: planner.Setup{Surfaces: planOf(today, nil, times(9, 20)).Surfaces, Works: []planner.Work{work}},
		rain: gauge(today-1, "05:50", 1.8)}
	plan, err := bookOf(s).Plan(t.Context(), quillmere(), today, today)
	if err != nil || plan.Rain != nil || s.rainTo != 0 {
		t.Errorf("without rain-free hours: %v, asked to %d, %v", plan.Rain, s.rainTo, err)
	}
	settings := work.Settings[0].Value
	settings.RainFreeHours = 4
	s.setup.Works[0].Settings = planner.Always(settings)
	zone, err := quillmere().Location()
	if err != nil {
		t.Fatal(err)
	}
	midnight := func(day planner.Day) int64 { return quillmere().Rules.On(day).Window(zone, day).Start }
	for asOf, to := range map[planner.Day]int64{today: midnight(today + 2), today - 3: midnight(today - 3)} {
		plan, err := bookOf(s).Plan(t.Context(), quillmere(), asOf, today)
		if err != nil || len(plan.Rain) != 1 || s.rainFrom != midnight(asOf-15) || s.rainTo != to {
			t.Errorf("%s: %v from %d to %d, want %d to %d, %v", asOf, plan.Rain, s.rainFrom, s.rainTo, midnight(asOf-15), to, err)
		}
	}
	busy := planner.Problemf(planner.Busy, "somebody else holds the store")
	s.fails = map[string]error{"Rain": busy}
	if _, err := bookOf(s).Plan(t.Context(), quillmere(), today, today); !errors.Is(err, busy) {
		t.Errorf("the error of the store is %v", err)
	}
}
