package briefing_test

import (
	"strings"
	"testing"
	"unicode/utf8"

	"swardbook/bot/briefing"
	"swardbook/planner"
)

func june(day int) planner.Day { return planner.DayOf(2024, 6, day) }

func on(day int) planner.Passage { return planner.Passage{Day: june(day), Known: true} }

// state is greens regulator on the 24-hour mean, 182 of 200 °C-days.
func state(status planner.Status, own, other planner.Passage, change ...func(*planner.WorkState)) planner.WorkState {
	s := planner.WorkState{
		Surface: planner.Surface{ID: 1, Name: "greens"}, Work: planner.Work{ID: 1, Name: "regulator"},
		Settings: planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByDegreeDays}, Target: 200},
		Unit:     planner.DegreeDays, Status: status, Own: planner.Hourly,
		Bases: []planner.DueFacts{
			{Basis: planner.Hourly, Target: 200, Total: planner.Sum{Total: 182.4, Days: 9}, Early: own, Middle: own, Late: own, SpreadKnown: true},
			{Basis: planner.Midrange, Target: 200, Total: planner.Sum{Total: 188, Days: 9}, Early: other, Middle: other, Late: other, SpreadKnown: true},
		},
	}
	for _, f := range change {
		f(&s)
	}
	return s
}

func TestBrief(t *testing.T) {
	evaluation := planner.Evaluation{Site: planner.Site{Name: "Quillmere", Units: planner.Celsius}, AsOf: june(11),
		Nitrogen: []planner.NitrogenState{{Surface: planner.Surface{ID: 1}, Bases: []planner.NitrogenFacts{{Basis: planner.Hourly, LeftGM2: -0.3}}}}}
	missing := evaluation
	missing.Nitrogen = []planner.NitrogenState{{Surface: planner.Surface{ID: 1}, Bases: []planner.NitrogenFacts{{Basis: planner.Hourly, LeftGM2: -0.3, Used: planner.Sum{Missing: 2}}}}}
	byNitrogen := func(s *planner.WorkState) {
		s.Settings, s.Unit = planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByNitrogen}, Target: 0.2}, planner.NitrogenGM2
	}
	held := func(s *planner.WorkState) { s.Settings.Limits.LeastDays, s.Bases[0].Held = 14, on(13) }
	spread := func(early, late int) func(*planner.WorkState) {
		return func(s *planner.WorkState) { s.Bases[0].Early, s.Bases[0].Late = on(early), on(late) }
	}
	for _, row := range []struct {
		name  string
		state planner.WorkState
		want  string
	}{
		{"both means agree", state(planner.NotYet, on(13), on(13)), "greens regulator: Thu 13 Jun|in 2 days|182 of 200 °C-days base 0|24-hour mean"},
		{"the other mean differs", state(planner.NotYet, on(13), on(12), spread(12, 15)), "greens regulator: Thu 13 Jun|in 2 days, likely 12 to 15 Jun|182 of 200 °C-days base 0|24-hour mean; high/low: 12 Jun"},
		{"across a month", state(planner.NotYet, on(30), on(30), func(s *planner.WorkState) {
			s.Bases[0].Early, s.Bases[0].Late = on(28), planner.Passage{Day: planner.DayOf(2024, 7, 3), Known: true}
		}), "greens regulator: Sun 30 Jun|in 19 days, likely 28 Jun to 3 Jul|182 of 200 °C-days base 0|24-hour mean"},
		{"no spread", state(planner.NotYet, on(13), on(13), func(s *planner.WorkState) { s.Bases[0].SpreadKnown = false }), "greens regulator: Thu 13 Jun|in 2 days, no spread known|182 of 200 °C-days base 0|24-hour mean"},
		{"late unknown", state(planner.NotYet, on(13), on(13), func(s *planner.WorkState) { s.Bases[0].Late = planner.Passage{} }), "greens regulator: Thu 13 Jun|in 2 days, 13 Jun at the earliest|182 of 200 °C-days base 0|24-hour mean"},
		{"today", state(planner.DueToday, on(11), on(11)), "greens regulator: due today|182 of 200 °C-days base 0, today should fill it|24-hour mean"},
		{"due", state(planner.Due, on(10), on(10)), "greens regulator: due|since Mon 10 Jun, 1 day ago|182 of 200 °C-days base 0|24-hour mean"},
		{"overdue", state(planner.Overdue, on(7), on(7), func(s *planner.WorkState) { s.AskForgotten = true }), "greens regulator: OVERDUE|since Fri 7 Jun, 4 days ago|182 of 200 °C-days base 0|24-hour mean|was it done on or about 7 Jun and not logged?"},
		{"no date", state(planner.NoDate, planner.Passage{}, planner.Passage{}), "greens regulator: no date|not within a year|182 of 200 °C-days base 0|24-hour mean"},
		{"days missing", state(planner.NotYet, on(13), on(13), func(s *planner.WorkState) { s.Bases[0].Total.Missing = 2 }), "greens regulator: Thu 13 Jun|in 2 days|at least 182 of 200 °C-days base 0|24-hour mean|2 days missing"},
		{"not started", state(planner.NotStarted, planner.Passage{}, planner.Passage{}, func(s *planner.WorkState) { s.Bases = nil }), "greens regulator: not started|log the last one with /done"},
		{"resting", state(planner.Resting, planner.Passage{}, planner.Passage{}, func(s *planner.WorkState) { s.Bases = nil; s.Resumes = on(30) }), "greens regulator: resting|on again Sun 30 Jun"},
		{"nitrogen short", state(planner.Due, on(10), on(10), byNitrogen), "greens regulator: due|since Mon 10 Jun, 1 day ago|0.30 g N/m² short, reserve 0.2|24-hour mean"},
		{"held by the least days", state(planner.NotYet, on(12), on(12), held, spread(11, 12)), "greens regulator: Thu 13 Jun|in 2 days|182 of 200 °C-days base 0|24-hour mean; high/low: 12 Jun|count full 12 Jun; your 14-day gap holds it to Thu 13 Jun"},
		{"held until today", state(planner.DueToday, on(8), on(8), func(s *planner.WorkState) { s.Settings.Limits.LeastDays, s.Bases[0].Held = 14, on(11) }),
			"greens regulator: due today|182 of 200 °C-days base 0|24-hour mean; high/low: 8 Jun|count full 8 Jun; your 14-day gap holds it to Tue 11 Jun"},
		{"far ahead of what is known", state(planner.NotYet, planner.Passage{Day: june(11) + 31, Known: true}, planner.Passage{Day: june(11) + 31, Known: true},
			func(s *planner.WorkState) { s.Bases[0].SpreadKnown = false }), "greens regulator: Fri 12 Jul|in 31 days, a mere guess so far ahead|182 of 200 °C-days base 0|24-hour mean"},
		{"due since another year", state(planner.Overdue, planner.Passage{Day: planner.DayOf(2023, 12, 30), Known: true}, planner.Passage{Day: planner.DayOf(2023, 12, 30), Known: true}),
			"greens regulator: OVERDUE|since Sat 30 Dec 2023, 164 days ago|182 of 200 °C-days base 0|24-hour mean"},
	} {
		if got := strings.Join(briefing.Brief(row.state, evaluation), "|"); got != row.want {
			t.Errorf("%s:\n%s\nwant\n%s", row.name, got, row.want)
		}
	}
	if got := briefing.Brief(state(planner.Due, on(10), on(10), byNitrogen), missing)[2]; got != "0.30 g N/m² short at least, reserve 0.2" {
		t.Errorf("with days missing: %q", got)
	}
}

// On a site that shows °F the same count is told in °F-days, nothing subtracted.
func TestBriefInFahrenheit(t *testing.T) {
	evaluation := planner.Evaluation{Site: planner.Site{Units: planner.Fahrenheit}, AsOf: june(11)}
	lines := briefing.Brief(state(planner.NotYet, on(13), on(13)), evaluation)
	if lines[2] != "328 of 360 °F-days base 32" {
		t.Errorf("%q", lines[2])
	}
}

func TestByUrgency(t *testing.T) {
	states := []planner.WorkState{state(planner.Resting, planner.Passage{}, planner.Passage{}), state(planner.NotYet, on(20), on(20)),
		state(planner.DueToday, on(11), on(11)), state(planner.NotYet, on(13), on(13)), state(planner.Overdue, on(1), on(1)),
		state(planner.NotStarted, planner.Passage{}, planner.Passage{}), state(planner.Due, on(10), on(10))}
	var got []string
	for _, s := range briefing.ByUrgency(states) {
		got = append(got, string(s.Status))
	}
	if want := "overdue,due,today,not yet,not yet,not started,resting"; strings.Join(got, ",") != want {
		t.Errorf("%s, want %s", strings.Join(got, ","), want)
	}
}

func TestDigits(t *testing.T) {
	for _, row := range []struct {
		value float64
		unit  planner.Unit
		want  string
	}{{18.704, planner.DegreesC, "18.7"}, {-0.04, planner.DegreesC, "0.0"}, {-0.4, planner.DegreeDays, "0"}, {199.5, planner.DegreeDays, "200"},
		{1.234, planner.NitrogenGM2, "1.23"}, {0.995, planner.GrowthDays, "1.0"}, {-12.34, planner.DegreesC, "-12.3"}} {
		if got := briefing.Digits(row.value, row.unit); got != row.want {
			t.Errorf("%v %s: %q, want %q", row.value, row.unit, got, row.want)
		}
	}
	for value, want := range map[float64]string{200: "200", 0.3: "0.3", 31.111: "31.11", -0.001: "0"} {
		if got := briefing.Plain(value); got != want {
			t.Errorf("%v: %q, want %q", value, got, want)
		}
	}
}

func TestCorrectionLine(t *testing.T) {
	corrections := []planner.Correction{{Key: "due.greens.regulator.hourly.total", Was: 188, Is: 196, Unit: planner.DegreeDays},
		{Key: "yesterday.hourly_mean_c", Was: 18, Is: 19, Unit: planner.DegreesC}}
	if got, want := briefing.CorrectionLine(june(5), corrections[:1], planner.Celsius), "Wed corrected: greens regulator 188 to 196, late readings"; got != want {
		t.Errorf("%q, want %q", got, want)
	}
	if got, want := briefing.CorrectionLine(june(5), corrections, planner.Celsius), "Wed corrected: greens regulator 188 to 196 and 1 more, late readings"; got != want {
		t.Errorf("%q, want %q", got, want)
	}
	if got := briefing.CorrectionLine(june(5), nil, planner.Celsius); got != "" {
		t.Errorf("%q", got)
	}
}

// The evening says frost and heat, and never that a day is good for anything.
func TestEvening(t *testing.T) {
	plan := planner.Plan{Site: planner.Site{Name: "Quillmere", Units: planner.Celsius}, AsOf: june(10)}
	cold := planner.Tomorrow{Day: june(11), Facts: planner.DayFacts{HasExtremes: true, HighC: 9, LowC: -2}, HoursBelowZero: 4.2, FrostShare: 0.3, SpreadKnown: true, Years: 30}
	for _, row := range []struct {
		name     string
		tomorrow planner.Tomorrow
		want     []string
		not      []string
	}{
		{"frost", cold, []string{"about 4 hours below 0 °C (3 of 10 years)", "off frozen turf", "Nothing falls due"}, []string{"Heat", "good"}},
		{"nothing known", planner.Tomorrow{Day: june(11)}, []string{"Nothing is known of tomorrow's weather"}, []string{"Frost", "Heat"}},
		{"white frost", planner.Tomorrow{Day: june(11), Facts: planner.DayFacts{HasExtremes: true, HighC: 9, LowC: 2}, WhiteFrostShare: 0.6, SpreadKnown: true, Years: 10},
			[]string{"Frost possible (6 of 10 years)"}, []string{"below 0 °C ("}},
		{"frost in one of few years", planner.Tomorrow{Day: june(11), Facts: planner.DayFacts{HasExtremes: true, HighC: 9, LowC: 2}, WhiteFrostShare: 2. / 3, SpreadKnown: true, Years: 3},
			[]string{"Frost possible (2 of 3 years)"}, nil},
		{"heat", planner.Tomorrow{Day: june(11), Facts: planner.DayFacts{HasExtremes: true, HighC: 35, LowC: 20}, HeatBand: "danger",
			HeatIndexC: planner.Optional{Value: 41, Known: true}, HumidityPercent: planner.Optional{Value: 50, Known: true}, RainMM: planner.Optional{Value: 4, Known: true}},
			[]string{"41.0 °C in shade: danger", "employer", "humidity", "rain"}, []string{"Frost", "wind"}},
	} {
		r := briefing.Evening(row.tomorrow, plan)
		var text strings.Builder
		for _, block := range r.Blocks {
			text.WriteString(strings.TrimSpace(strings.Join(strings.Fields(asText(block)), " ")) + "\n")
		}
		for _, want := range row.want {
			if !strings.Contains(text.String(), want) {
				t.Errorf("%s: no %q in\n%s", row.name, want, text.String())
			}
		}
		for _, not := range row.not {
			if strings.Contains(text.String(), not) {
				t.Errorf("%s: %q in\n%s", row.name, not, text.String())
			}
		}
	}
}

func TestTitlesFitAPhone(t *testing.T) {
	evaluation := planner.Evaluation{Site: planner.Site{Units: planner.Celsius}, AsOf: june(11)}
	for _, line := range briefing.Brief(state(planner.NotYet, on(13), on(12)), evaluation) {
		if utf8.RuneCountInString(line) > 34 {
			t.Errorf("%q has %d columns", line, utf8.RuneCountInString(line))
		}
	}
}

// What is told of the rain after a pass: what the gauge knows, and no more.
func TestRainNote(t *testing.T) {
	pass := planner.Entry{Day: june(3), Clock: "06:10"}
	at := func(minutes int64, mm float64) planner.Rain {
		return planner.Rain{At: int64(june(3))*86400 + 5*3600 + 600 + 60*minutes, MM: mm} // 05:10 UTC is 06:10 on the wall
	}
	dry := []planner.Rain{at(60, 0), at(120, 0), at(180, 0), at(240, 0)}
	needs := planner.WorkSettings{RainFreeHours: 4}
	for _, row := range []struct {
		name     string
		settings planner.WorkSettings
		entry    planner.Entry
		rain     []planner.Rain
		want     string
	}{
		{"rain", needs, pass, []planner.Rain{at(40, 1.8), at(60, 0)}, "1.8 mm fell 40 min after: still count it?\nif not, say result:doubtful or result:lost"},
		{"a little, late", needs, pass, []planner.Rain{at(170, 0.03)}, "under 0.1 mm fell 3 h after: still count it?\nif not, say result:doubtful or result:lost"},
		{"dry", needs, pass, dry, "no rain in its 4 rain-free hours"},
		{"dry so far", needs, pass, dry[:3], "4 rain-free hours: if it rained sooner, amend it with result:doubtful or lost"},
		{"no gauge", needs, pass, nil, "4 rain-free hours: if it rained sooner, amend it with result:doubtful or lost"},
		{"no time", needs, planner.Entry{Day: june(3)}, dry, "4 rain-free hours: say the time, and the rain is looked up, as in when:\"today 06:10\""},
		{"it was said", needs, planner.Entry{Day: june(3), Clock: "06:10", Result: planner.Doubtful}, []planner.Rain{at(40, 1.8)}, ""},
		{"it counts", needs, planner.Entry{Day: june(3), Clock: "06:10", RainCounts: true}, []planner.Rain{at(40, 1.8)}, ""},
		{"no rain-free hours", planner.WorkSettings{}, pass, []planner.Rain{at(40, 1.8)}, ""},
	} {
		plan := planner.Plan{Site: planner.Site{Zone: "Europe/Dublin"}, Rain: row.rain}
		if got := briefing.RainNote(row.settings, row.entry, plan); got != row.want {
			t.Errorf("%s: %q, want %q", row.name, got, row.want)
		}
	}
}
