package workbook_test

import (
	"math/rand/v2"
	"slices"
	"testing"

	"swardbook/calc"
	"swardbook/planner"
	"swardbook/planner/workbook"
)

// Quillmere, its surfaces, works, people and weather are invented.

// maker makes one invented plan out of its number.
type maker struct {
	*rand.Rand
	number uint64
	plan   planner.Plan
}

func (m *maker) plain() bool { return m.number%4 == 0 }

// in says yes once in so many times.
func (m *maker) in(times int) bool { return m.IntN(times) == 0 }

// randomPlan is an invented plan: what it holds comes from the number. The
// methods and cutoffs go round with the number, so that a run of plans has all
// of them. Every fourth is plain: in °C, both means, no long gap.
func randomPlan(number uint64) planner.Plan {
	m := &maker{Rand: rand.New(rand.NewPCG(number, 5)), number: number}
	m.site()
	m.weather()
	m.surfaces()
	m.works()
	m.closed()
	slices.SortStableFunc(m.plan.Log, func(a, b planner.Entry) int { return int(a.Day - b.Day) })
	return m.plan
}

// site sets the site and the morning: one in six stands shortly after a 29
// February, one in six shortly after a year's end.
func (m *maker) site() {
	m.plan.Site = planner.Site{ID: 1, Name: "Quillmere & Co", Lat: 40, Zone: "Europe/Dublin", Units: planner.Celsius}
	if m.IntN(3) > 0 && !m.plain() {
		m.plan.Site.Units = planner.Fahrenheit
	}
	if m.in(3) {
		m.plan.Site.Lat = -40
	}
	switch m.IntN(6) {
	case 0:
		m.plan.AsOf = planner.DayOf(2024, 3, 3) + planner.Day(m.IntN(20))
	case 1:
		m.plan.AsOf = planner.DayOf(2024, 1, 3) + planner.Day(m.IntN(30))
	default:
		m.plan.AsOf = planner.DayOf(2023, 6, 11) + planner.Day(m.IntN(700))
	}
}

// typed is a temperature with one decimal in the site's unit, in °C.
func (m *maker) typed(from, span float64) float64 {
	units := m.plan.Site.Units
	return units.TemperatureC(float64(int(10*units.Temperature(from+span*m.Float64()))) / 10)
}

// means says which means a record has.
type means int

const (
	bothMeans means = iota
	hourlyOnly
	extremesOnly
)

// weatherOn is an invented day in °C.
func weatherOn(r *rand.Rand, day planner.Day) planner.DayFacts {
	return (&maker{Rand: r}).day(day, bothMeans)
}

// day is an invented day; now and then one mean is not known.
func (m *maker) day(day planner.Day, has means) planner.DayFacts {
	low := m.typed(-6, 26)
	facts := planner.DayFacts{Day: day, HasExtremes: true, LowC: low, HighC: low, ExtremesFrom: planner.FromStation, SlotsWanted: 24, SlotsReal: 24}
	if !m.in(20) { // else a day of one temperature
		facts.HighC = max(low, m.typed(low, 18))
	}
	facts.HasHourly, facts.HourlyC = true, facts.LowC+(facts.HighC-facts.LowC)*float64(m.IntN(101))/100
	switch lacks := m.IntN(10); {
	case has == extremesOnly || has == bothMeans && lacks == 0:
		facts.HasHourly, facts.HourlyC = false, 0
	case has == hourlyOnly || lacks == 1:
		facts.HasExtremes, facts.HighC, facts.LowC = false, 0, 0
	case lacks == 2:
		for range 24 {
			facts.HoursC = append(facts.HoursC, facts.LowC+(facts.HighC-facts.LowC)*m.Float64())
		}
	}
	return facts
}

// weather makes the record with its gaps, and the days ahead: they begin on the
// first day that is missing and that no straight line fills.
func (m *maker) weather() {
	p := &m.plan
	has := bothMeans
	if m.in(3) && !m.plain() {
		has = []means{hourlyOnly, extremesOnly}[m.IntN(2)]
	}
	length := 60 + m.IntN(100)
	if m.plain() {
		length = 120
	}
	for day := p.AsOf - planner.Day(length); day < p.AsOf; day++ {
		p.Record.Facts = append(p.Record.Facts, m.day(day, has))
	}
	lose := func(at, days int) {
		for i := at; i < min(at+days, length); i++ {
			p.Record.Facts[i] = planner.DayFacts{Day: p.Record.Facts[i].Day}
		}
	}
	if m.in(2) {
		lose(length-5-m.IntN(50), 1+m.IntN(3))
	}
	if m.in(2) && !m.plain() {
		lose(length-5-m.IntN(45), 4+m.IntN(5))
	}
	if m.in(6) && !m.plain() {
		lose(length-1, 1)
	}
	reach := length
	if m.in(3) && !m.plain() { // works may have been done before the station stood
		reach += 40
	}
	start := p.AsOf
	for day := p.AsOf - planner.Day(reach); day < p.AsOf; day++ {
		if facts, _ := p.Record.Filled(day); facts.Empty() {
			start = day
			break
		}
	}
	ahead := 60 + m.IntN(60)
	days := func() (days []planner.DayFacts) {
		for day := start; day < p.AsOf+planner.Day(ahead); day++ {
			days = append(days, m.day(day, has))
		}
		return days
	}
	p.Outlook = planner.Outlook{AsOf: p.AsOf, Start: start, Path: days(), Engine: 1}
	for range []int{1, 3, 10}[m.IntN(3)] {
		p.Outlook.Members = append(p.Outlook.Members, days())
	}
	for i := range m.IntN(6) { // days ahead typed by hand stand in all of them
		low := m.typed(2, 14)
		at, facts := int(p.AsOf-start)+i, planner.HandDay{Day: p.AsOf + planner.Day(i), HighC: max(low, m.typed(low, 14)), LowC: low}.Facts()
		p.Outlook.Path[at] = facts
		for _, member := range p.Outlook.Members {
			member[at] = facts
		}
		p.Outlook.Typed++
	}
}

// surfaces grow every curve in turn, and change it by date; one is done in
// parts.
func (m *maker) surfaces() {
	held := calc.WarmSeason()
	held.HeldAbove = true
	curves := []calc.GrowthCurve{calc.CoolSeason(), calc.WarmSeason(), calc.CoolSeasonF(), calc.WarmSeasonF(), held, {OptimumC: 14, WidthC: 4, HeldAbove: true}}
	for id := 1; id <= 2+m.IntN(3); id++ {
		turf := func() planner.Turf {
			return planner.Turf{Curve: curves[m.IntN(len(curves))], CeilingGM2: float64(m.IntN(5)), BudgetGM2: float64(m.IntN(2) * 20)}
		}
		grown := planner.Always(turf()).With(m.plan.AsOf-10, turf())
		if m.in(2) {
			grown = grown.With(m.plan.AsOf+9, turf())
		}
		surface := planner.Surface{ID: planner.SurfaceID(id), Site: 1, Name: []string{"=greens", "pitch", "tees", "+rough"}[id-1], Turf: grown, AreaM2: float64(m.IntN(2) * 5200)}
		if id == 2 {
			surface.Parts = []planner.Part{{ID: 1, Name: "front", Share: 0.6}, {ID: 2, Name: "back", Share: 0.4}}
		}
		m.plan.Surfaces = append(m.plan.Surfaces, surface)
	}
}

// methodCutoffs are all pairs of a method and a cutoff that it takes.
func methodCutoffs() (pairs []planner.Counting) {
	for _, method := range calc.Methods() {
		for _, cutoff := range method.Cutoffs() {
			pairs = append(pairs, planner.Counting{Counts: planner.ByDegreeDays, Method: method, Thresholds: calc.Thresholds{Cutoff: cutoff}})
		}
	}
	return pairs
}

// works adds works of every measure.
func (m *maker) works() {
	countings := []planner.Counting{{Counts: planner.ByDays}, {Counts: planner.ByGrowthDays}, {Counts: planner.ByNitrogen}, {Counts: planner.ByNitrogen}}
	pairs := methodCutoffs()
	for i := range uint64(4) {
		counting := pairs[(4*m.number+i)%uint64(len(pairs))]
		counting.Thresholds.LowerC = m.typed(-2, 14)
		counting.Thresholds.UpperC = m.typed(counting.Thresholds.LowerC+1, 20)
		if m.in(2) { // as a work stands that never said how
			if counting.Method == calc.MethodMean {
				counting.Method = ""
			}
			if counting.Thresholds.Cutoff == calc.CutoffNone {
				counting.Thresholds.Cutoff = ""
			}
		}
		countings = append(countings, counting)
	}
	for i, counting := range countings {
		surface := m.plan.Surfaces[(i+i/4)%len(m.plan.Surfaces)]
		work := planner.Work{ID: planner.WorkID(i + 1), Surface: surface.ID, Name: "work " + string(rune('a'+i)), Settings: planner.Always(m.settings(counting))}
		if m.in(4) {
			other := work.Settings[0].Value
			other.Target *= 2
			work.Settings = planner.Always(other).With(m.plan.AsOf-5, work.Settings[0].Value)
		}
		m.plan.Works = append(m.plan.Works, work)
		m.passes(work, surface, counting.Counts == planner.ByNitrogen)
	}
}

// settings gives a counting its target, mean, limits and season.
func (m *maker) settings(counting planner.Counting) planner.WorkSettings {
	s := planner.WorkSettings{Counting: counting, Basis: []planner.Basis{planner.Hourly, planner.Midrange, ""}[m.IntN(3)], WateredIn: m.in(4)}
	switch counting.Counts {
	case planner.ByDays:
		s.Target = float64(4 + m.IntN(40))
	case planner.ByGrowthDays:
		s.Target = float64(2 + m.IntN(20))
	case planner.ByNitrogen:
		s.Target = []float64{0, 0.2, 1, 6}[m.IntN(4)]
	default:
		s.Target = m.plan.Site.Units.DifferenceC(float64(50 + 10*m.IntN(60)))
	}
	if m.in(6) && counting.Counts != planner.ByNitrogen {
		s.Latest = 1.5 * s.Target
	}
	if m.in(3) {
		s.Limits.LeastDays = 5 + m.IntN(60)
	}
	if m.in(5) {
		s.Limits.MostTimes = 1 + m.IntN(3)
	}
	if m.in(5) {
		s.Limits.MostTotal = float64(1 + m.IntN(6))
	}
	day := func(day planner.Day) planner.MonthDay {
		_, month, date := day.Date()
		return planner.MonthDay{Month: month, Day: date}
	}
	switch m.IntN(12) {
	case 0:
		s.Season.Resting = true
	case 1: // not begun
		s.Season.From, s.Season.To = day(m.plan.AsOf+9), day(m.plan.AsOf+90)
	case 2, 3, 4:
		s.Season.From, s.Season.To = day(m.plan.AsOf-planner.Day(m.IntN(90))), day(m.plan.AsOf+planner.Day(m.IntN(60)))
		s.Season.StartsEmpty = m.in(2)
	}
	return s
}

// passes logs the work: most were done in the last weeks, some never, some more
// than 400 days ago, some are taken as done on a day ahead.
func (m *maker) passes(work planner.Work, surface planner.Surface, feed bool) {
	notes := []string{"", "=1+1", "+1", "-2+3", "@x", "\tround the back", "after rain & wind <good>"}
	p := &m.plan
	day := func() planner.Day { return p.AsOf - 1 - planner.Day(m.IntN(70)) }
	switch m.IntN(20) {
	case 0:
		return
	case 1:
		day = func() planner.Day { return p.AsOf - 430 }
	case 2:
		day = func() planner.Day { return p.AsOf + planner.Day(m.IntN(12)) }
	case 3, 4, 5:
		if first := p.Record.Facts[0].Day; p.Outlook.Start < first {
			day = func() planner.Day { return first - 3 - planner.Day(m.IntN(20)) }
		}
	}
	for range 1 + m.IntN(3) {
		entry := planner.Entry{ID: planner.EntryID(len(p.Log) + 1), Site: 1, Day: day(), By: "Ann", Note: notes[m.IntN(len(notes))]}
		pass := planner.Pass{Work: work.ID}
		if len(surface.Parts) > 0 {
			pass.Part = planner.PartID(m.IntN(len(surface.Parts) + 1))
		}
		if feed || m.in(6) {
			pass.Rate = planner.Rate{Kind: planner.NutrientRate, Value: 0.5 + float64(m.IntN(30))/10}
			pass.NitrogenGM2 = pass.Rate.NitrogenGM2()
			if m.in(2) {
				pass.SlowShare, pass.SlowWeeks = []float64{0.4, 1}[m.IntN(2)], []float64{3.5, 8, 0.4}[m.IntN(3)]
			}
		}
		if m.in(3) {
			entry.Watered = entry.Day + planner.Day(m.IntN(4))
		}
		entry.Result = []planner.Result{planner.Doubtful, planner.Lost, "", "", "", "", "", ""}[m.IntN(8)]
		entry.Passes = []planner.Pass{pass}
		p.Log = append(p.Log, entry)
	}
}

// closed closes days for all works, for some, and every year.
func (m *maker) closed() {
	p := &m.plan
	if m.in(2) {
		p.Closed = append(p.Closed, planner.Closed{ID: 1, Site: 1, Name: "match", From: p.AsOf + 2, To: p.AsOf + 2 + planner.Day(m.IntN(20))})
	}
	if m.in(2) {
		p.Closed = append(p.Closed, planner.Closed{ID: 2, Site: 1, Name: "=ordinance", Works: []planner.WorkID{3}, From: planner.DayOf(2020, 11, 15), To: planner.DayOf(2020, 2, 15), Yearly: true})
	}
}

// inputOf is what the plan's workbook is written from.
func inputOf(t testing.TB, plan planner.Plan, weeks int) workbook.Input {
	t.Helper()
	evaluation, err := planner.Evaluate(plan)
	if err != nil {
		t.Fatal(err)
	}
	data, err := planner.SheetOf(plan, evaluation, 7*weeks)
	if err != nil {
		t.Fatal(err)
	}
	return workbook.Input{ID: 7, Plan: plan, Evaluation: evaluation, Data: data, Weeks: weeks, Ahead: "Days ahead: past years.", Caution: "Label and local rules come first."}
}

func build(t testing.TB, plan planner.Plan) []byte {
	t.Helper()
	return written(t, inputOf(t, plan, 1))
}

func written(t testing.TB, input workbook.Input) []byte {
	t.Helper()
	content, err := workbook.Build(input)
	if err != nil {
		t.Fatal(err)
	}
	return content
}

// randomInput is what the random plan's workbook is written from: one to eight
// weeks, on either paper.
func randomInput(t testing.TB, number uint64) workbook.Input {
	t.Helper()
	input := inputOf(t, randomPlan(number), 1+int(number%8))
	input.Letter = number%2 == 1
	return input
}
