package planner_test

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"swardbook/calc"
	"swardbook/planner"
	"swardbook/planner/outlook"
)

// simple is a site with one surface and one work that counts days, on a flat
// record of three years, so that every date can be told by hand.
func simple(settings planner.WorkSettings, asOf planner.Day, log ...planner.Entry) planner.Plan {
	var facts []planner.DayFacts
	for day := planner.DayOf(2020, 1, 1); day < asOf; day++ {
		facts = append(facts, planner.DayFacts{Day: day, HasExtremes: true, HighC: 25, LowC: 15, ExtremesFrom: planner.FromStation,
			HasHourly: true, HourlyC: 20, SlotsReal: 24, SlotsWanted: 24})
	}
	record := planner.Record{Facts: facts}
	return planner.Plan{
		Site: planner.Site{ID: 1, Name: "Quillmere", Lat: 40, Units: planner.Celsius}, AsOf: asOf, Record: record,
		Surfaces: []planner.Surface{{ID: 1, Site: 1, Name: "greens",
			Turf:  planner.Always(planner.Turf{Grass: "cool", Curve: calc.CoolSeason(), CeilingGM2: 3}),
			Parts: []planner.Part{{ID: 1, Name: "front nine", Share: 0.5}, {ID: 2, Name: "back nine", Share: 0.5}}}},
		Works:   []planner.Work{{ID: 1, Surface: 1, Name: "regulator", Settings: planner.Always(settings)}},
		Log:     log,
		Outlook: outlook.Simple{}.Outlook(record, nil, asOf),
	}
}

func byDays(target float64) planner.WorkSettings {
	return planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByDays}, Target: target}
}

func doneOn(day planner.Day, change ...func(*planner.Entry)) planner.Entry {
	entry := planner.Entry{Site: 1, Day: day, Passes: []planner.Pass{{Work: 1}}}
	for _, f := range change {
		f(&entry)
	}
	return entry
}

const (
	frontNine planner.PartID = 1
	backNine  planner.PartID = 2
)

func inPart(name planner.PartID) func(*planner.Entry) {
	return func(e *planner.Entry) { e.Passes[0].Part = name }
}

func result(r planner.Result) func(*planner.Entry) { return func(e *planner.Entry) { e.Result = r } }

func june(day int) planner.Day { return planner.DayOf(2023, 6, day) }

func stateOf(t *testing.T, plan planner.Plan) planner.WorkState {
	t.Helper()
	evaluation, err := planner.Evaluate(plan)
	if err != nil {
		t.Fatal(err)
	}
	return evaluation.Works[0]
}

// Each rule of what is in the way of a date; dates told by hand from the rule.
func TestInTheWay(t *testing.T) {
	season := planner.WorkSeason{From: planner.MonthDay{Month: 3, Day: 1}, To: planner.MonthDay{Month: 6, Day: 20}}
	for _, row := range []struct {
		name     string
		settings func(*planner.WorkSettings)
		target   float64
		closed   []planner.Closed
		log      []planner.Entry
		asOf     planner.Day
		status   planner.Status
		date     planner.Day
		check    func(t *testing.T, state planner.WorkState)
	}{
		{name: "no entry", target: 7, asOf: june(10), status: planner.NotStarted},
		{name: "counts from the day after", target: 7, log: []planner.Entry{doneOn(june(5))}, asOf: june(10), status: planner.NotYet, date: june(12)},
		{name: "due on the day", target: 7, log: []planner.Entry{doneOn(june(3))}, asOf: june(10), status: planner.DueToday, date: june(10)},
		{name: "due since yesterday", target: 7, log: []planner.Entry{doneOn(june(2))}, asOf: june(10), status: planner.Due, date: june(9)},
		{name: "a tenth over and a day: overdue", target: 7, log: []planner.Entry{doneOn(june(1))}, asOf: june(10), status: planner.Overdue, date: june(8),
			check: func(t *testing.T, s planner.WorkState) {
				if !s.AskForgotten {
					t.Error("the morning it turns overdue does not ask for a forgotten entry")
				}
			}},
		{name: "asked once", target: 7, log: []planner.Entry{doneOn(june(1))}, asOf: june(11), status: planner.Overdue, date: june(8),
			check: func(t *testing.T, s planner.WorkState) {
				if s.AskForgotten {
					t.Error("asks a second morning")
				}
			}},
		{name: "the lead's latest", target: 7, settings: func(s *planner.WorkSettings) { s.Latest = 12 }, log: []planner.Entry{doneOn(june(1))}, asOf: june(12), status: planner.Due, date: june(8)},
		{name: "least days hold the date", target: 7, settings: func(s *planner.WorkSettings) { s.Limits.LeastDays = 14 }, log: []planner.Entry{doneOn(june(1))}, asOf: june(10), status: planner.NotYet, date: june(15),
			check: func(t *testing.T, s planner.WorkState) {
				if facts, _ := s.OwnFacts(); facts.Middle.Day != june(8) || !facts.Held.Known {
					t.Errorf("count full %v, held %v", facts.Middle, facts.Held)
				}
			}},
		{name: "least days shorter than the count change nothing", target: 7, settings: func(s *planner.WorkSettings) { s.Limits.LeastDays = 3 }, log: []planner.Entry{doneOn(june(5))}, asOf: june(10), status: planner.NotYet, date: june(12)},
		{name: "most times a season", target: 7, settings: func(s *planner.WorkSettings) { s.Limits.MostTimes = 2 }, log: []planner.Entry{doneOn(june(1)), doneOn(june(5))}, asOf: june(10), status: planner.Full, date: june(12)},
		{name: "passes of last year do not count", target: 7, settings: func(s *planner.WorkSettings) { s.Limits.MostTimes = 2 }, log: []planner.Entry{doneOn(planner.DayOf(2022, 12, 31)), doneOn(june(5))}, asOf: june(10), status: planner.NotYet, date: june(12)},
		{name: "two parts are one time", target: 7, settings: func(s *planner.WorkSettings) { s.Limits.MostTimes = 2 }, log: []planner.Entry{doneOn(june(4), inPart(frontNine)), doneOn(june(5), inPart(backNine))}, asOf: june(10), status: planner.NotYet, date: june(11)},
		{name: "closed day", target: 7, closed: []planner.Closed{{Name: "match", From: june(11), To: june(13)}}, log: []planner.Entry{doneOn(june(5))}, asOf: june(10), status: planner.NotYet, date: june(12),
			check: func(t *testing.T, s planner.WorkState) {
				if s.Closed == nil || s.Closed.Why != "match" || s.Closed.Before.Day != june(10) || s.Closed.After.Day != june(14) {
					t.Errorf("closed note %+v", s.Closed)
				}
			}},
		{name: "closed for another work", target: 7, closed: []planner.Closed{{Name: "match", From: june(11), To: june(13), Works: []planner.WorkID{2}}}, log: []planner.Entry{doneOn(june(5))}, asOf: june(10), status: planner.NotYet, date: june(12),
			check: func(t *testing.T, s planner.WorkState) {
				if s.Closed != nil {
					t.Errorf("closed note %+v", s.Closed)
				}
			}},
		{name: "closed every year across the year's end", target: 7, closed: []planner.Closed{{Name: "ordinance", From: planner.DayOf(2019, 10, 1), To: planner.DayOf(2020, 6, 15), Yearly: true}}, log: []planner.Entry{doneOn(june(5))}, asOf: june(10), status: planner.NotYet, date: june(12),
			check: func(t *testing.T, s planner.WorkState) {
				if s.Closed == nil || s.Closed.Before.Known || s.Closed.After.Day != june(16) {
					t.Errorf("closed note %+v", s.Closed)
				}
			}},
		{name: "resting by the lead's word", target: 7, settings: func(s *planner.WorkSettings) { s.Season.Resting = true }, log: []planner.Entry{doneOn(june(1))}, asOf: june(20), status: planner.Resting},
		{name: "out of season", target: 7, settings: func(s *planner.WorkSettings) { s.Season = season }, log: []planner.Entry{doneOn(june(15))}, asOf: june(25), status: planner.Resting,
			check: func(t *testing.T, s planner.WorkState) {
				if s.Resumes.Day != planner.DayOf(2024, 3, 1) {
					t.Errorf("resumes %v", s.Resumes)
				}
			}},
		{name: "date in its rest", target: 7, settings: func(s *planner.WorkSettings) { s.Season = season }, log: []planner.Entry{doneOn(june(17))}, asOf: june(18), status: planner.NotYet, date: june(24),
			check: func(t *testing.T, s planner.WorkState) {
				if !s.RestsThen {
					t.Error("not flagged")
				}
			}},
		{name: "a new season starts unset", target: 7, settings: func(s *planner.WorkSettings) { s.Season = season }, log: []planner.Entry{doneOn(planner.DayOf(2022, 6, 1))}, asOf: june(10), status: planner.NotStarted},
		{name: "lost did not happen", target: 7, log: []planner.Entry{doneOn(june(5)), doneOn(june(8), result(planner.Lost))}, asOf: june(10), status: planner.NotYet, date: june(12)},
		{name: "doubtful keeps the old date beside", target: 7, log: []planner.Entry{doneOn(june(5)), doneOn(june(8), result(planner.Doubtful))}, asOf: june(10), status: planner.NotYet, date: june(15),
			check: func(t *testing.T, s planner.WorkState) {
				if s.Doubted == nil || s.Doubted.Date().Day != june(12) {
					t.Errorf("doubted %+v", s.Doubted)
				}
			}},
		{name: "part done: the old count stands for the rest", target: 7, log: []planner.Entry{doneOn(june(5)), doneOn(june(8), inPart(frontNine))}, asOf: june(10), status: planner.NotYet, date: june(12),
			check: func(t *testing.T, s planner.WorkState) {
				if len(s.Behind) != 1 || s.Behind[0] != "back nine" {
					t.Errorf("behind: %v", s.Behind)
				}
			}},
		{name: "both parts done: from the earliest", target: 7, log: []planner.Entry{doneOn(june(5)), doneOn(june(7), inPart(frontNine)), doneOn(june(9), inPart(backNine))}, asOf: june(10), status: planner.NotYet, date: june(14)},
		{name: "counts from watering in", target: 7, settings: func(s *planner.WorkSettings) { s.WateredIn = true }, log: []planner.Entry{doneOn(june(5), func(e *planner.Entry) { e.Watered = june(7) })}, asOf: june(10), status: planner.NotYet, date: june(14)},
		{name: "watering in does not matter to others", target: 7, log: []planner.Entry{doneOn(june(5), func(e *planner.Entry) { e.Watered = june(7) })}, asOf: june(10), status: planner.NotYet, date: june(12)},
	} {
		t.Run(row.name, func(t *testing.T) {
			settings := byDays(row.target)
			if row.settings != nil {
				row.settings(&settings)
			}
			plan := simple(settings, row.asOf, row.log...)
			plan.Closed = row.closed
			state := stateOf(t, plan)
			if state.Status != row.status {
				t.Errorf("status %q, want %q", state.Status, row.status)
			}
			facts, _ := state.OwnFacts()
			if date := facts.Date(); date.Known != (row.date != 0) || date.Day != row.date && date.Known {
				t.Errorf("date %v, want %v", date, row.date)
			}
			if row.check != nil {
				row.check(t, state)
			}
		})
	}
}

// A feed on a part gives by its share of the area; slow nitrogen comes in even
// daily parts and moves the due date.
func TestNitrogenOfPartsAndSlowFeeds(t *testing.T) {
	settings := planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByNitrogen}, Target: 0}
	feed := func(day planner.Day, amount float64, change ...func(*planner.Entry)) planner.Entry {
		return doneOn(day, append(change, func(e *planner.Entry) { e.Passes[0].NitrogenGM2 = amount })...)
	}
	// At 20 °C growth potential is 1, so 3/30 = 0.1 g N/m² is used each June day.
	whole := stateOf(t, simple(settings, june(10), feed(june(5), 1)))
	part := stateOf(t, simple(settings, june(10), feed(june(5), 1, inPart(frontNine))))
	slow := stateOf(t, simple(settings, june(10), feed(june(5), 1, func(e *planner.Entry) { e.Passes[0].SlowShare, e.Passes[0].SlowWeeks = 0.7, 1 })))
	for _, row := range []struct {
		name  string
		state planner.WorkState
		want  planner.Day
	}{
		{"1 g at 0.1 a day lasts ten days", whole, june(15)},
		{"half of it five", part, june(10)},
		{"0.3 at once and 0.1 a day for a week: 0.3 left after the week", slow, june(15)},
	} {
		facts, _ := row.state.OwnFacts()
		if facts.Date().Day != row.want {
			t.Errorf("%s: %v, want %v", row.name, facts.Date().Day, row.want)
		}
	}
}

func TestClosedCheck(t *testing.T) {
	for _, row := range []struct {
		closed planner.Closed
		ok     bool
	}{
		{planner.Closed{Site: 1, Name: "match", From: june(1), To: june(1)}, true},
		{planner.Closed{Site: 1, Name: "ordinance", From: planner.DayOf(2023, 10, 1), To: planner.DayOf(2024, 3, 31), Yearly: true}, true},
		{planner.Closed{Name: "match", From: june(1), To: june(1)}, false},
		{planner.Closed{Site: 1, Name: "", From: june(1), To: june(1)}, false},
		{planner.Closed{Site: 1, Name: "match", From: june(2), To: june(1)}, false},
		{planner.Closed{Site: 1, Name: "match", From: june(1), To: june(1) + 800}, false},
	} {
		if err := row.closed.Check(); (err == nil) != row.ok {
			t.Errorf("%+v: %v", row.closed, err)
		}
	}
}

// A yearly stretch covers the same month-days in every year.
func TestYearlyClosedDays(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		from := planner.Day(rapid.IntRange(19000, 19360).Draw(t, "from"))
		closed := planner.Closed{Site: 1, Name: "x", From: from, To: from + planner.Day(rapid.IntRange(0, 300).Draw(t, "days")), Yearly: true}
		day := planner.Day(rapid.IntRange(15000, 22000).Draw(t, "day"))
		if _, month, date := day.Date(); month == 2 && date == 29 {
			return
		}
		if closed.Covers(1, day) != closed.Covers(1, day.InYear(day.Year()+1)) {
			t.Fatalf("%s and a year later differ", day)
		}
		if !closed.Covers(1, closed.From) || !closed.Covers(1, closed.To) {
			t.Fatal("its own first or last day is open")
		}
	})
}

func TestPastIntervals(t *testing.T) {
	plan := simple(byDays(7), june(20), doneOn(june(1)), doneOn(june(8)), doneOn(june(10), result(planner.Lost)), doneOn(june(18)))
	intervals, err := planner.PastIntervals(plan, plan.Works[0])
	if err != nil || len(intervals) != 2 {
		t.Fatalf("%+v, %v", intervals, err)
	}
	for i, want := range []struct {
		days      int
		degreeDay float64
		growth    float64
	}{{7, 140, 7}, {10, 200, 10}} { // 20 °C a day above 0 °C, growth potential 1
		if intervals[i].Days != want.days || intervals[i].Sums[0].Sum.Total != want.degreeDay || intervals[i].Sums[2].Sum.Total != want.growth {
			t.Errorf("interval %d: %+v", i, intervals[i])
		}
	}
	// In parts the surface is done once both are, as of the first of them.
	parts := simple(byDays(7), june(20), doneOn(june(1)), doneOn(june(8), inPart(frontNine)), doneOn(june(10), inPart(backNine)),
		doneOn(june(14), inPart(backNine), result(planner.Lost)), doneOn(june(17), inPart(backNine)), doneOn(june(18), inPart(frontNine)))
	inParts, err := planner.PastIntervals(parts, parts.Works[0])
	if err != nil || len(inParts) != 2 || inParts[0].To != june(8) || inParts[1].From != june(8) || inParts[1].To != june(17) {
		t.Errorf("in parts: %+v, %v", inParts, err)
	}
	days, sums, ok := planner.MeanInterval(intervals, 5)
	if !ok || days != 8.5 || sums[0] != 170 {
		t.Errorf("mean %v %v", days, sums)
	}
	if _, _, ok := planner.MeanInterval(nil, 5); ok {
		t.Error("a mean of nothing")
	}
}

func TestMarks(t *testing.T) {
	plan := simple(byDays(7), june(10))
	plan.Totals = []planner.Total{{ID: 1, Site: 1, Name: "warmth", Marks: []planner.Mark{{Name: "first spray", At: 200}, {Name: "past", At: 60}},
		Settings: planner.Always(planner.TotalSettings{Counting: planner.Counting{Counts: planner.ByDegreeDays, Method: calc.MethodMean}, Start: planner.MonthDay{Month: 6, Day: 1}})}}
	figures := figuresOf(t, plan)
	// 20 °C-days a day from 1 June: 200 on the tenth day, 60 on the third.
	for key, want := range map[string]planner.Day{"mark.warmth.first-spray.hourly.date": june(10), "mark.warmth.past.midrange.date": june(3)} {
		if got, ok := figures.Get(key); !ok || planner.Day(got.Value) != want {
			t.Errorf("%s: %v %v, want %v", key, planner.Day(got.Value), ok, want)
		}
	}
}

func TestNextDay(t *testing.T) {
	plan := simple(byDays(7), june(10), doneOn(june(4)))
	plan.Hand = []planner.HandDay{{Day: june(11), HighC: 35, LowC: -4, HumidityPercent: planner.Optional{Value: 50, Known: true}}}
	plan.Outlook = outlook.Simple{}.Outlook(plan.Record, plan.Hand, plan.AsOf)
	tomorrow, err := planner.NextDay(plan)
	if err != nil {
		t.Fatal(err)
	}
	if tomorrow.Day != june(11) || tomorrow.Facts.LowC != -4 || len(tomorrow.Works) != 1 || tomorrow.FrostShare < 0.999 {
		t.Errorf("%+v", tomorrow)
	}
	// 95 °F at 50 % by the US National Weather Service's regression.
	if !tomorrow.HeatIndexC.Known || tomorrow.HeatIndexC.Value < 40 || tomorrow.HeatIndexC.Value > 41.5 || tomorrow.HeatBand != calc.HeatDanger {
		t.Errorf("heat index %+v, %s", tomorrow.HeatIndexC, tomorrow.HeatBand)
	}
	plan.Hand[0].HumidityPercent.Known = false
	if dry, _ := planner.NextDay(plan); dry.HeatIndexC.Known {
		t.Error("a heat index without humidity")
	}
}

// A part keeps its id when it is named again, a dropped one stays for the log,
// and no id is given twice.
func TestWithParts(t *testing.T) {
	surface := planner.Surface{Site: 1, Name: "greens", Turf: planner.Always(planner.Turf{Grass: "cool", Curve: calc.CoolSeason()})}
	surface = surface.WithParts([]planner.Part{{Name: "front nine", Share: 0.5}, {Name: "back nine", Share: 0.5}})
	surface = surface.WithParts([]planner.Part{{Name: "Front Nine", Share: 0.4}, {Name: "nursery", Share: 0.6}})
	want := []planner.Part{{ID: 1, Name: "Front Nine", Share: 0.4}, {ID: 2, Name: "back nine", Share: 0.5, Dropped: true}, {ID: 3, Name: "nursery", Share: 0.6}}
	if fmt.Sprint(surface.Parts) != fmt.Sprint(want) {
		t.Errorf("%+v, want %+v", surface.Parts, want)
	}
	if surface.ShareOf(2) != 0.5 || surface.ShareOf(0) != 1 || surface.PartName(2) != "back nine" || len(surface.ActiveParts()) != 2 {
		t.Error("a dropped part is not known any more, or not dropped")
	}
	if err := surface.Check(); err != nil {
		t.Error(err)
	}
	if again := surface.WithParts(nil).WithParts([]planner.Part{{Name: "practice", Share: 1}}); again.Parts[3].ID != 4 {
		t.Errorf("an id was given twice: %+v", again.Parts)
	}
	surface.Parts[0].Share = 0.5
	if surface.Check() == nil {
		t.Error("shares that make 1.1 were taken")
	}
}

// A work whose station has been dead for weeks is overdue all the same: the
// missing days are taken from the path.
func TestOverdueWithoutReadings(t *testing.T) {
	settings := planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByDegreeDays, Method: calc.MethodMean}, Target: 100}
	plan := simple(settings, june(25), doneOn(june(10)))
	plan.Record = plan.Record.Before(june(12)) // 20 °C a day until then
	plan.Outlook = outlook.Simple{}.Outlook(plan.Record, nil, plan.AsOf)
	state := stateOf(t, plan)
	facts, _ := state.OwnFacts()
	if state.Status != planner.Overdue || facts.Date().Day != june(15) || facts.Total.Total != 20 || facts.Total.Missing != 13 {
		t.Errorf("%s, date %v, total %v with %d missing", state.Status, facts.Date(), facts.Total.Total, facts.Total.Missing)
	}
}

func TestEntryAndSettingsRefuse(t *testing.T) {
	entry := doneOn(june(1))
	for name, change := range map[string]func(*planner.Entry){
		"the same work twice":       func(e *planner.Entry) { e.Passes = append(e.Passes, e.Passes[0]) },
		"no result":                 func(e *planner.Entry) { e.Result = "fine" },
		"watered in before":         func(e *planner.Entry) { e.Watered = june(1) - 1 },
		"watered in much later":     func(e *planner.Entry) { e.Watered = june(1) + 40 },
		"slow without weeks":        func(e *planner.Entry) { e.Passes[0].SlowShare = 0.5 },
		"slow share above 1":        func(e *planner.Entry) { e.Passes[0].SlowShare, e.Passes[0].SlowWeeks = 1.5, 4 },
		"a rate of no kind":         func(e *planner.Entry) { e.Passes[0].Rate = planner.Rate{Kind: "bags", Value: 1} },
		"nitrogen past any pass":    func(e *planner.Entry) { e.Passes[0].NitrogenGM2 = 51 },
		"a work that is not named":  func(e *planner.Entry) { e.Passes[0].Work = 0 },
		"a rate that is no number":  func(e *planner.Entry) { e.Passes[0].Rate = planner.Rate{Kind: planner.MassRate, Value: math.NaN()} },
		"nitrogen that is infinite": func(e *planner.Entry) { e.Passes[0].NitrogenGM2 = math.Inf(1) },
	} {
		bad := entry
		bad.Passes = append([]planner.Pass(nil), entry.Passes...)
		change(&bad)
		if planner.KindOf(bad.Check()) != planner.Invalid || bad.Check() == nil {
			t.Errorf("%s: %v", name, bad.Check())
		}
	}
	if err := entry.Check(); err != nil {
		t.Error(err)
	}
	for name, settings := range map[string]planner.WorkSettings{
		"latest with nitrogen": {Counting: planner.Counting{Counts: planner.ByNitrogen}, Target: 0.2, Latest: 1},
		"a negative gap":       {Counting: planner.Counting{Counts: planner.ByDays}, Target: 3, Limits: planner.Limits{LeastDays: -1}},
		"endless rain-free":    {Counting: planner.Counting{Counts: planner.ByDays}, Target: 3, RainFreeHours: math.Inf(1)},
	} {
		work := planner.Work{Surface: 1, Name: "x", Settings: planner.Always(settings)}
		if work.Check() == nil {
			t.Errorf("%s was taken", name)
		}
	}
}

// What a what-if can change of limits and closed days.
func TestLimitAndClosedEdits(t *testing.T) {
	settings := byDays(7)
	settings.Limits.LeastDays = 14
	plan := simple(settings, june(10), doneOn(june(5)))
	plan.Closed = []planner.Closed{{ID: 1, Site: 1, Name: "match", From: june(12), To: june(12)}}
	changed, refusals := planner.Apply(plan, planner.SetLimits{Work: 1, Name: "greens regulator", Limits: planner.Limits{LeastDays: 3}})
	state := stateOf(t, changed)
	if facts, _ := state.OwnFacts(); len(refusals) > 0 || facts.Date().Day != june(12) || state.Closed == nil {
		t.Errorf("%v: %v, closed %v", refusals, facts.Date(), state.Closed)
	}
	changed, _ = planner.Apply(changed, planner.OpenAll{})
	if state := stateOf(t, changed); state.Closed != nil || len(plan.Closed) != 1 {
		t.Error("still closed, or the plan given was changed")
	}
	for sentence, edit := range map[string]planner.Edit{
		"greens regulator with at least 3 days between": planner.SetLimits{Name: "greens regulator", Limits: planner.Limits{LeastDays: 3}},
		"no day closed":                planner.OpenAll{},
		"tank mix logged on Thu 1 Jun": planner.LogEntry{Name: "tank mix", Entry: doneOn(june(1))},
	} {
		if got := edit.Sentence(planner.Celsius); got != sentence {
			t.Errorf("%q, want %q", got, sentence)
		}
	}
	if _, refusals := planner.Apply(plan, planner.SetLimits{Work: 9}); len(refusals) != 1 {
		t.Error("limits of a work that is not there")
	}
}

// A surface done in parts counts from the earliest of them; what is behind is
// what a round still lacks. By hand from the rule.
func TestRoundsOfParts(t *testing.T) {
	const dropped planner.PartID = 3
	front, back := inPart(frontNine), inPart(backNine)
	for _, row := range []struct {
		name   string
		log    []planner.Entry
		since  planner.Day // counted from the day after
		behind string
	}{
		{"the whole", []planner.Entry{doneOn(june(2))}, june(2), ""},
		{"one part of a round", []planner.Entry{doneOn(june(2)), doneOn(june(5), front)}, june(2), "back nine"},
		{"both parts", []planner.Entry{doneOn(june(2)), doneOn(june(5), front), doneOn(june(6), back)}, june(5), ""},
		{"both on a day", []planner.Entry{doneOn(june(5), back), doneOn(june(5), front)}, june(5), ""},
		{"a round in the other order", []planner.Entry{doneOn(june(5), front), doneOn(june(6), back), doneOn(june(8), back)}, june(5), "front nine"},
		{"a part twice, the other late", []planner.Entry{doneOn(june(2)), doneOn(june(4), front), doneOn(june(6), front)}, june(2), "back nine"},
		{"and then done", []planner.Entry{doneOn(june(2)), doneOn(june(4), front), doneOn(june(6), front), doneOn(june(7), back)}, june(6), ""},
		{"the whole ends a round", []planner.Entry{doneOn(june(4), front), doneOn(june(6))}, june(6), ""},
		{"one part and no more", []planner.Entry{doneOn(june(4), front)}, june(4), "back nine"},
		{"a lost part is not done", []planner.Entry{doneOn(june(2)), doneOn(june(4), front), doneOn(june(5), back, result(planner.Lost))}, june(2), "back nine"},
		{"a part that was dropped", []planner.Entry{doneOn(june(2)), doneOn(june(4), inPart(dropped))}, june(2), ""},
	} {
		plan := simple(byDays(20), june(10), row.log...)
		plan.Surfaces[0].Parts = append(plan.Surfaces[0].Parts, planner.Part{ID: dropped, Name: "nursery", Share: 0.2, Dropped: true})
		state := stateOf(t, plan)
		if got := strings.Join(state.Behind, ", "); state.LastDone != row.since || got != row.behind {
			t.Errorf("%s: since %s, behind %q; want %s, %q", row.name, state.LastDone, got, row.since, row.behind)
		}
	}
}

// A feed that leaves the balance short is due at once; it was logged all the
// same, and is not asked for.
func TestALoggedFeedIsNotAskedFor(t *testing.T) {
	settings := planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByNitrogen}, Basis: planner.Hourly}
	feed := func(day planner.Day) planner.Entry {
		return doneOn(day, func(e *planner.Entry) { e.Passes[0].NitrogenGM2 = 0.5 })
	}
	for asOf := june(21); asOf < june(25); asOf++ {
		state := stateOf(t, simple(settings, asOf, feed(june(1)), feed(june(20)))) // 0.1 g a day is used, all of it by the 11th
		if facts, _ := state.OwnFacts(); facts.Date().Day != june(20) || state.AskForgotten {
			t.Errorf("%s: due %v, asked %v", asOf, facts.Date(), state.AskForgotten)
		}
	}
}
