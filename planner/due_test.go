package planner_test

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"swardbook/calc"
	"swardbook/planner"
)

var trial = []float64{14.3, 15.1, 13.8, 16.6, 17.9, 18.4, 15.0, 12.7, 14.9, 19.2, 20.3, 21.1, 17.4, 16.0}

// Day of the first passage, by hand: the running totals of the first row are
// 14.3 29.4 43.2 59.8 77.7 96.1 111.1 123.8 138.7 157.9 178.2 199.3 216.7 232.7,
// so 200 comes on day 13; 20 a day reaches 200 on day 10 exactly, 17.3 on day 12.
func TestFirstPassage(t *testing.T) {
	first := date("2024-05-02") // first day counted; the work was done the day before
	for _, row := range []struct {
		name   string
		c      []float64
		target float64
		day    int // 0: not reached
	}{
		{"the row by hand", trial, 200, 13},
		{"short by 0.7 on day 12", trial, 199.3, 12},
		{"a hair more", trial, 199.3001, 13},
		{"20 a day, exactly", times(30, 20), 200, 10},
		{"17.3 a day", times(30, 17.3), 200, 12},
		{"0.1 a day sums to 20, rounding apart", times(300, 0.1), 20, 200},
		{"0.1 two thousand times", times(2100, 0.1), 200, 2000},
		{"within a millionth", times(30, 20), 200.0000004, 10},
		{"not within a millionth", times(30, 20), 200.000001, 11},
		{"the last day ahead", times(10, 20), 200, 10},
		{"a day too few", times(9, 20), 200, 0},
		{"flat days, nothing counts", times(30, 0), 200, 0},
		{"frost, nothing counts", times(30, -8), 200, 0},
		{"warmth after a flat spell", append(times(20, 0), times(20, 50)...), 200, 24},
	} {
		// The same row wholly ahead, wholly past and cut in between.
		for _, past := range []int{0, 1, 5, 9, len(row.c)} {
			if past > len(row.c) {
				continue
			}
			ahead := row.c[past:]
			if len(ahead) == 0 {
				ahead = []float64{0}
			}
			plan := planOf(first+planner.Day(past), append([]float64{99}, row.c[:past]...), ahead)
			plan.Works, plan.Log = []planner.Work{regulator(row.target)}, []planner.Entry{done(first-1, 1, 0)}
			facts := due(t, plan)
			want := planner.Passage{}
			if row.day > 0 {
				want = planner.Passage{Day: first + planner.Day(row.day) - 1, Known: true}
			}
			if facts.Date() != want || facts.Path != want || facts.Since != first {
				t.Errorf("%s, %d days past: %s (path %s) since %s, want %s since %s", row.name, past,
					written(facts.Date()), written(facts.Path), facts.Since, written(want), first)
			}
			sum := 0.0
			for _, c := range row.c[:past] {
				sum += max(c, 0)
			}
			if facts.Total.Days != past || !within(facts.Total.Total, sum, 1e-6) {
				t.Errorf("%s, %d days past: total %+v, want %g", row.name, past, facts.Total, sum)
			}
			if state := only(t, plan); row.day == 0 && state.Status != planner.NoDate {
				t.Errorf("%s: status %s, want no date", row.name, state.Status)
			}
		}
	}
}

// A count starts the day after the work.
func TestCountStarts(t *testing.T) {
	asOf := date("2024-05-10")
	for _, row := range []struct {
		name  string
		log   []planner.Entry
		edits []planner.Edit
		since string
		total float64
		due   string
	}{
		{"yesterday", []planner.Entry{done(asOf-1, 1, 0)}, nil, "2024-05-10", 0, "2024-05-14"},
		{"today", []planner.Entry{done(asOf, 1, 0)}, nil, "2024-05-11", 0, "2024-05-15"},
		{"two days ago", []planner.Entry{done(asOf-2, 1, 0)}, nil, "2024-05-09", 20, "2024-05-13"},
		{"the newest counts", []planner.Entry{done(asOf-9, 1, 0), done(asOf-2, 1, 0)}, nil, "2024-05-09", 20, "2024-05-13"},
		{"another work does not", []planner.Entry{done(asOf-2, 1, 0), done(asOf-1, 9, 0)}, nil, "2024-05-09", 20, "2024-05-13"},
		{"ahead", []planner.Entry{done(asOf-2, 1, 0)}, []planner.Edit{planner.DoWork{Work: 1, Name: "regulator", Day: asOf + 3}}, "2024-05-14", 0, "2024-05-18"},
		{"ahead, then today", []planner.Entry{done(asOf-2, 1, 0)},
			[]planner.Edit{planner.DoWork{Work: 1, Name: "regulator", Day: asOf + 3}, planner.DoWork{Work: 1, Name: "regulator", Day: asOf}}, "2024-05-14", 0, "2024-05-18"},
		{"long ago", []planner.Entry{done(asOf-3, 1, 0)}, []planner.Edit{planner.DoWork{Work: 1, Name: "regulator", Day: asOf - 5}}, "2024-05-08", 40, "2024-05-12"},
	} {
		plan := planOf(asOf, times(20, 20), times(30, 20))
		plan.Works, plan.Log = []planner.Work{regulator(100)}, row.log
		plan, refusals := planner.Apply(plan, row.edits...)
		if refusals != nil {
			t.Fatalf("%s: %v", row.name, refusals)
		}
		facts := due(t, plan)
		if facts.Since != date(row.since) || facts.Total.Total != row.total || facts.Date() != on(row.due) {
			t.Errorf("%s: since %s, %g, due %s; want %s, %g, %s", row.name, facts.Since, facts.Total.Total, written(facts.Date()), row.since, row.total, row.due)
		}
	}
}

// Where a work stands from morning to morning: target 200 at 20 a day since 1
// May falls due on 10 May; a tenth over it is passed by the total of 240 that
// the record has on the morning of 13 May.
func TestStatus(t *testing.T) {
	daysOf := func(target, latest float64) planner.WorkSettings {
		return planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByDays}, Target: target, Latest: latest}
	}
	withLatest := func(target, latest float64) planner.WorkSettings {
		settings := degreeDays(target)
		settings.Latest = latest
		return settings
	}
	const N, T, D, O = planner.NotYet, planner.DueToday, planner.Due, planner.Overdue
	for _, row := range []struct {
		name     string
		settings planner.WorkSettings
		daily    float64
		want     map[string]planner.Status
	}{
		{"a tenth over", degreeDays(200), 20, map[string]planner.Status{
			"2024-05-01": N, "2024-05-09": N, "2024-05-10": T, "2024-05-11": D, "2024-05-12": D, "2024-05-13": O, "2024-05-30": O}},
		{"at least a day", degreeDays(200), 60, map[string]planner.Status{ // 240 on the first morning due
			"2024-05-03": N, "2024-05-04": T, "2024-05-05": D, "2024-05-06": O}},
		{"own latest", withLatest(200, 300), 20, map[string]planner.Status{
			"2024-05-10": T, "2024-05-13": D, "2024-05-16": D, "2024-05-17": O}},
		{"latest at the target", withLatest(200, 200), 20, map[string]planner.Status{"2024-05-10": T, "2024-05-11": D, "2024-05-12": O}},
		{"latest passed with the target", withLatest(200, 205), 30, map[string]planner.Status{"2024-05-07": T, "2024-05-08": D, "2024-05-09": O}},
		{"days", daysOf(14, 0), 0, map[string]planner.Status{
			"2024-05-13": N, "2024-05-14": T, "2024-05-15": D, "2024-05-16": D, "2024-05-17": O}},
		{"days, to the day", daysOf(14, 14), 0, map[string]planner.Status{"2024-05-14": T, "2024-05-15": D, "2024-05-16": O}},
		{"every day", daysOf(1, 0), 0, map[string]planner.Status{"2024-05-01": T, "2024-05-02": D, "2024-05-03": O}},
	} {
		for text, want := range row.want {
			asOf := date(text)
			plan := planOf(asOf, times(60, row.daily), times(60, row.daily))
			plan.Works, plan.Log = []planner.Work{workOn(greens, 1, "work", row.settings)}, []planner.Entry{done(date("2024-04-30"), 1, 0)}
			if state := only(t, plan); state.Status != want || state.LastDone != date("2024-04-30") {
				t.Errorf("%s, %s: %s, want %s", row.name, text, state.Status, want)
			}
		}
	}
}

func TestNotStarted(t *testing.T) {
	plan := planOf(date("2024-05-10"), times(400, 25), times(30, 25))
	plan.Works = []planner.Work{regulator(10), feed(0)}
	plan.Log = []planner.Entry{done(date("2024-05-01"), 9, 0), done(date("2024-05-02"), 2, 0)} // another work; a feed without nitrogen
	for _, state := range evaluate(t, plan).Works {
		if state.Status != planner.NotStarted || state.Bases != nil || state.Figures(plan.AsOf) != nil {
			t.Errorf("%s: %s with %+v", state.Work.Name, state.Status, state.Bases)
		}
		if _, ok := state.OwnFacts(); ok {
			t.Errorf("%s has figures", state.Work.Name)
		}
	}
}

// The days measure needs no weather at all.
func TestDaysWithoutWeather(t *testing.T) {
	asOf := date("2024-05-10")
	plan := planOf(asOf, nil, times(30, missing))
	plan.Record = planner.Record{}
	plan.Works = []planner.Work{workOn(greens, 1, "cut", planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByDays}, Target: 14})}
	plan.Log = []planner.Entry{done(asOf-10, 1, 0)}
	state := only(t, plan)
	facts, _ := state.OwnFacts()
	if state.Own != planner.NoBasis || facts.Total != (planner.Sum{Total: 9, Days: 9}) || facts.Date() != (planner.Passage{Day: asOf + 4, Known: true}) {
		t.Errorf("%+v, due %s", facts.Total, written(facts.Date()))
	}
	if _, ok := state.OtherFacts(); ok {
		t.Error("days have another mean")
	}
}

func TestOwnMean(t *testing.T) {
	asOf := date("2024-05-10")
	for _, row := range []struct {
		name   string
		chosen planner.Basis
		hourly bool
		want   planner.Basis
	}{
		{"the lead's choice", planner.Midrange, true, planner.Midrange},
		{"the lead's choice, though no hours", planner.Hourly, false, planner.Hourly},
		{"none chosen, hourly readings", "", true, planner.Hourly},
		{"none chosen, no hourly readings", "", false, planner.Midrange},
	} {
		plan := planOf(asOf, times(20, 20), times(30, 20))
		for i := range plan.Record.Facts {
			plan.Record.Facts[i].HasHourly = row.hourly
		}
		settings := degreeDays(200)
		settings.Basis = row.chosen
		plan.Works, plan.Log = []planner.Work{workOn(greens, 1, "regulator", settings)}, []planner.Entry{done(asOf-3, 1, 0)}
		state := only(t, plan)
		own, ok := state.OwnFacts()
		other, okOther := state.OtherFacts()
		if state.Own != row.want || !ok || own.Basis != row.want || !okOther || other.Basis != row.want.Other() {
			t.Errorf("%s: own %s, facts on %s, other on %s; want %s", row.name, state.Own, own.Basis, other.Basis, row.want)
		}
		if standIn := own.Total.StandIn > 0; standIn != (row.chosen == planner.Hourly && !row.hourly) {
			t.Errorf("%s: %+v", row.name, own.Total)
		}
	}
}

// One member gives a bare date.
func TestOneMemberHasNoSpread(t *testing.T) {
	asOf := date("2024-05-10")
	for members, spread := range map[int]bool{1: false, 2: true} {
		rows := make([][]float64, members)
		for i := range rows {
			rows[i] = times(30, 20+float64(i))
		}
		plan := planOf(asOf, times(20, 20), rows...)
		plan.Works, plan.Log = []planner.Work{regulator(200)}, []planner.Entry{done(asOf-3, 1, 0)}
		facts := due(t, plan)
		if facts.SpreadKnown != spread {
			t.Errorf("%d members: spread known %t", members, facts.SpreadKnown)
		}
		if !spread && (facts.Early != facts.Middle || facts.Late != facts.Middle || facts.Path != facts.Middle) {
			t.Errorf("one member: %s, %s, %s", written(facts.Early), written(facts.Middle), written(facts.Late))
		}
	}
}

// never sorts behind every day.
const never = planner.Day(math.MaxInt32)

// slowDates finds each member's date with calc's first passage over its days in
// one row, and takes the nearest ranks from them sorted: ceil(share · count).
func slowDates(since planner.Day, past []float64, members [][]float64, target float64) (early, middle, late planner.Day) {
	var dates []planner.Day
	for _, member := range members {
		var units []float64
		for _, c := range append(slices.Clone(past), member...) {
			units = append(units, max(c, 0))
		}
		day := never
		if n, reached := calc.FirstPassage(0, slices.Values(units), target); reached {
			day = since + planner.Day(n) - 1
		}
		dates = append(dates, day)
	}
	slices.Sort(dates)
	rank := func(tenths int) planner.Day { return dates[(tenths*len(dates)+9)/10-1] }
	return rank(1), rank(5), rank(9)
}

func passageOf(day planner.Day) planner.Passage {
	if day == never {
		return planner.Passage{}
	}
	return planner.Passage{Day: day, Known: true}
}

func TestDatesAgainstSlowDates(t *testing.T) {
	asOf := date("2024-05-10")
	rapid.Check(t, func(t *rapid.T) {
		past := drawRow(t, rapid.IntRange(0, 12).Draw(t, "past"), 0, "past")
		days := rapid.IntRange(1, 40).Draw(t, "ahead")
		members := make([][]float64, rapid.IntRange(1, 23).Draw(t, "members"))
		for i := range members {
			members[i] = drawRow(t, days, 0, "member")
			if i > 0 && rapid.Bool().Draw(t, "tie") {
				members[i] = members[i-1]
			}
		}
		target := drawTemperature(t, 1, 600, "target")
		plan := planOf(asOf, append([]float64{99}, past...), members...)
		since := asOf - planner.Day(len(past))
		plan.Works, plan.Log = []planner.Work{regulator(target)}, []planner.Entry{done(since-1, 1, 0)}
		facts := due(t, plan)
		early, middle, late := slowDates(since, past, members, target)
		if facts.Early != passageOf(early) || facts.Middle != passageOf(middle) || facts.Late != passageOf(late) {
			t.Fatalf("%s, %s, %s; slowly %s, %s, %s", written(facts.Early), written(facts.Middle), written(facts.Late),
				written(passageOf(early)), written(passageOf(middle)), written(passageOf(late)))
		}
		if early > middle || middle > late {
			t.Fatalf("%s, %s, %s are not in order", written(facts.Early), written(facts.Middle), written(facts.Late))
		}
	})
}

// Warmer days ahead never make a count of degree days later, however the count
// and the record lie.
func TestWarmerIsNeverLater(t *testing.T) {
	asOf := date("2024-05-10")
	rapid.Check(t, func(t *rapid.T) {
		method := rapid.SampledFrom([]calc.Method{calc.MethodMean, calc.MethodFlooredExtremes, calc.MethodSingleSine, calc.MethodDoubleTriangle, calc.MethodDegreeHours}).Draw(t, "method")
		settings := planner.WorkSettings{
			Counting: countingBy(method, calc.Thresholds{LowerC: 5, UpperC: 25, Cutoff: rapid.SampledFrom([]calc.Cutoff{calc.CutoffNone, calc.CutoffHorizontal}).Draw(t, "cutoff")}),
			Target:   drawTemperature(t, 1, 200, "target"), Basis: planner.Hourly,
		}
		plan := planOf(asOf, drawRow(t, 12, 20, "past"), drawRow(t, 40, 0, "a"), drawRow(t, 40, 0, "b"), drawRow(t, 40, 0, "c"))
		plan.Works, plan.Log = []planner.Work{workOn(greens, 1, "work", settings)}, []planner.Entry{done(asOf-planner.Day(rapid.IntRange(0, 11).Draw(t, "ago")), 1, 0)}
		warm := planner.Warm{From: asOf + planner.Day(rapid.IntRange(0, 20).Draw(t, "from")), Days: rapid.IntRange(0, 9).Draw(t, "days"), ByC: drawTemperature(t, 0, 10, "by")}
		warmer, refusals := planner.Apply(plan, warm)
		if refusals != nil {
			t.Fatal(refusals)
		}
		before, after := due(t, plan), due(t, warmer)
		for _, pair := range [][2]planner.Passage{{before.Early, after.Early}, {before.Middle, after.Middle}, {before.Late, after.Late}, {before.Path, after.Path}} {
			if pair[0].Known && (!pair[1].Known || pair[1].Day > pair[0].Day) {
				t.Fatalf("%s: %s became %s", warm.Sentence(planner.Celsius), written(pair[0]), written(pair[1]))
			}
		}
	})
}

// A past day that is missing counts as the outlook has it: a date is never late
// for it. The outlook then begins at the gap.
func TestMissingPastDays(t *testing.T) {
	asOf := date("2024-05-20")
	for _, row := range []struct {
		name string
		gone []int // days before asOf
		due  string
		sum  planner.Sum
	}{
		{"none", nil, "2024-05-24", planner.Sum{Total: 100, Days: 5}},
		{"a line", []int{3}, "2024-05-24", planner.Sum{Total: 100, Days: 5, Line: 1}},
		{"yesterday", []int{1}, "2024-05-24", planner.Sum{Total: 80, Days: 5, Missing: 1}},
		{"all five", []int{1, 2, 3, 4, 5}, "2024-05-24", planner.Sum{Days: 5, Missing: 5}},
		{"four in the middle", []int{2, 3, 4, 5}, "2024-05-24", planner.Sum{Total: 20, Days: 5, Missing: 4}},
	} {
		pastC := times(20, 20)
		for _, ago := range row.gone {
			pastC[len(pastC)-ago] = missing
		}
		plan := planOf(asOf, pastC, times(30, 20))
		plan.Outlook = outlookOf(asOf-6, times(36, 20), times(36, 20))
		plan.Outlook.AsOf = asOf
		plan.Works, plan.Log = []planner.Work{regulator(200)}, []planner.Entry{done(asOf-6, 1, 0)}
		facts := due(t, plan)
		if facts.Date() != on(row.due) || facts.Path != on(row.due) || facts.Total != row.sum {
			t.Errorf("%s: due %s, path %s, %+v; want %s, %+v", row.name, written(facts.Date()), written(facts.Path), facts.Total, row.due, row.sum)
		}
	}
}

// Missing days taken from members widen the spread.
func TestMissingPastDaysWiden(t *testing.T) {
	asOf := date("2024-05-20")
	plan := planOf(asOf, append(times(10, 20), times(5, missing)...), times(30, 20))
	plan.Outlook = outlookOf(asOf-6, append(times(6, 10), times(30, 20)...), append(times(6, 30), times(30, 20)...))
	plan.Outlook.AsOf = asOf
	plan.Works, plan.Log = []planner.Work{regulator(200)}, []planner.Entry{done(asOf-6, 1, 0)}
	facts := due(t, plan)
	// Five days at 10 or at 30 leave 150 or 50 to go, at 20 a day.
	if facts.Early != on("2024-05-22") || facts.Late != on("2024-05-27") || facts.Path != on("2024-05-24") {
		t.Errorf("early %s, late %s, path %s", written(facts.Early), written(facts.Late), written(facts.Path))
	}
}

// Losing past days never makes a date later than the same days taken from the
// outlook say.
func TestLosingDaysIsNeverLater(t *testing.T) {
	asOf := date("2024-05-20")
	rapid.Check(t, func(t *rapid.T) {
		pastC := drawRow(t, 15, 40, "past")
		ahead := drawRow(t, 60, 0, "ahead")
		plan := planOf(asOf, pastC, ahead)
		plan.Outlook = outlookOf(asOf-15, append(times(15, 12), ahead...))
		plan.Outlook.AsOf = asOf
		plan.Works, plan.Log = []planner.Work{regulator(drawTemperature(t, 1, 400, "target"))}, []planner.Entry{done(asOf-15, 1, 0)}
		filled := plan
		filled.Record = planner.Record{Facts: slices.Clone(plan.Record.Facts)}
		for i, facts := range filled.Record.Facts {
			if day, _ := plan.Record.Filled(facts.Day); day.Empty() {
				filled.Record.Facts[i] = known(facts.Day, 12)
			}
		}
		got, want := due(t, plan), due(t, filled)
		if got.Date() != want.Date() {
			t.Fatalf("past %v: due %s with days missing, %s with them filled", pastC, written(got.Date()), written(want.Date()))
		}
	})
}

func TestEvaluateRefuses(t *testing.T) {
	plan := planOf(date("2024-05-20"), times(9, 20), times(9, 20))
	for name, change := range map[string]func(*planner.Plan){
		"a surface that is not there": func(p *planner.Plan) { p.Works = []planner.Work{workOn(77, 1, "lost", degreeDays(200))} },
		"an unknown method": func(p *planner.Plan) {
			p.Works = []planner.Work{workOn(greens, 1, "odd", planner.WorkSettings{Counting: countingBy("odd", calc.Thresholds{}), Target: 9})}
		},
		"a work without settings":  func(p *planner.Plan) { p.Works = []planner.Work{{ID: 1, Surface: greens, Name: "empty"}} },
		"a total without settings": func(p *planner.Plan) { p.Totals = []planner.Total{{ID: 1, Name: "empty"}} },
	} {
		bad := plan
		change(&bad)
		if e, err := planner.Evaluate(bad); err == nil {
			t.Errorf("%s: %s", name, fmt.Sprint(e.Figures()))
		}
	}
}
