package workbook_test

import (
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"testing"

	"github.com/xuri/excelize/v2"

	"swardbook/calc"
	"swardbook/planner"
)

// typing is one edit as testdata/edit.py types it.
type typing map[string]any

func into(name string, value any) typing { return typing{"name": name, "value": value} }

func ofWork(id planner.WorkID, input string, value any) typing {
	return into(fmt.Sprintf("in_w%d_%s", id, input), value)
}

func onDay(name string, day planner.Day, value any) typing {
	return typing{"name": name, "day": serial(day), "value": value}
}

func inRow(name string, row int, value any) typing {
	return typing{"name": name, "row": row, "value": value}
}

func rows(what, name string, at typing) typing {
	edit := typing{"name": name, "rows": what}
	for key, value := range at {
		edit[key] = value
	}
	return edit
}

func serial(day planner.Day) int { return int(day) + 25569 }

// The works of the edited plans. None is named after what it does: a row is
// found by its number.
const (
	meanWork     = planner.WorkID(1) // degree days of the mean
	sineWork     = planner.WorkID(2) // single sine under an upper limit
	growthWork   = planner.WorkID(3)
	feedWork     = planner.WorkID(4)
	daysWork     = planner.WorkID(5)
	twoSinesWork = planner.WorkID(6) // double sine; its count starts after the gap
)

var byWeather = []planner.WorkID{meanWork, sineWork, growthWork, feedWork, twoSinesWork}

// edited is a plan whose sheet is edited: every measure, ten members. With gap
// five days of the record are missing.
func edited(units planner.Units, gap bool) planner.Plan {
	m := &maker{Rand: rand.New(rand.NewPCG(77, 6))}
	p := &m.plan
	p.AsOf = planner.DayOf(2024, 6, 11)
	p.Site = planner.Site{ID: 1, Name: "Quillmere", Lat: 40, Zone: "Europe/Dublin", Units: units}
	for day := p.AsOf - 120; day < p.AsOf; day++ {
		p.Record.Facts = append(p.Record.Facts, weatherOn(m.Rand, day))
	}
	for _, day := range []planner.Day{p.AsOf - 6, p.AsOf + 5} { // these are edited: they have all
		if day < p.AsOf {
			p.Record.Facts[day-p.AsOf+120] = planner.DayFacts{Day: day, HasExtremes: true, HighC: 21, LowC: 9, HasHourly: true, HourlyC: 14.5, ExtremesFrom: planner.FromStation}
		}
	}
	start := p.AsOf
	if gap {
		start = p.AsOf - 12
		for i := range 5 {
			p.Record.Facts[108+i] = planner.DayFacts{Day: start + planner.Day(i)}
		}
	}
	days := func() (days []planner.DayFacts) {
		for day := start; day < p.AsOf+110; day++ {
			days = append(days, weatherOn(m.Rand, day))
		}
		return days
	}
	p.Outlook = planner.Outlook{AsOf: p.AsOf, Start: start, Path: days(), Engine: 1}
	for range 10 {
		p.Outlook.Members = append(p.Outlook.Members, days())
	}
	warm := calc.WarmSeason()
	warm.HeldAbove = true
	p.Surfaces = []planner.Surface{
		{ID: 1, Site: 1, Name: "greens", Turf: planner.Always(planner.Turf{Curve: calc.CoolSeason(), CeilingGM2: 3}).With(p.AsOf-10, planner.Turf{Curve: calc.CoolSeasonF(), CeilingGM2: 3.5})},
		{ID: 2, Site: 1, Name: "pitch", Turf: planner.Always(planner.Turf{Curve: warm, CeilingGM2: 4})},
	}
	degrees := func(method calc.Method, base, upper float64, cutoff calc.Cutoff) planner.Counting {
		return planner.Counting{Counts: planner.ByDegreeDays, Method: method, Thresholds: calc.Thresholds{LowerC: base, UpperC: upper, Cutoff: cutoff}}
	}
	work := func(id planner.WorkID, surface planner.SurfaceID, target float64, basis planner.Basis, counting planner.Counting) {
		p.Works = append(p.Works, planner.Work{ID: id, Surface: surface, Name: "work " + string(rune('a'+int(id))),
			Settings: planner.Always(planner.WorkSettings{Counting: counting, Target: target, Basis: basis})})
	}
	work(meanWork, 1, 300, planner.Hourly, degrees(calc.MethodMean, 0, 0, ""))
	work(sineWork, 2, 240, "", degrees(calc.MethodSingleSine, 5, 20, calc.CutoffHorizontal))
	work(growthWork, 1, 14, planner.Midrange, planner.Counting{Counts: planner.ByGrowthDays})
	work(feedWork, 1, 0.2, planner.Hourly, planner.Counting{Counts: planner.ByNitrogen})
	work(daysWork, 2, 30, "", planner.Counting{Counts: planner.ByDays})
	work(twoSinesWork, 2, 120, "", degrees(calc.MethodDoubleSine, 5, 0, ""))
	for id, ago := range map[planner.WorkID]planner.Day{meanWork: 25, sineWork: 35, growthWork: 20, daysWork: 18, twoSinesWork: 4} {
		p.Log = append(p.Log, planner.Entry{ID: planner.EntryID(id), Site: 1, Day: p.AsOf - ago, Passes: []planner.Pass{{Work: id}}})
	}
	feed := func(ago planner.Day, gM2, slow, weeks float64) {
		p.Log = append(p.Log, planner.Entry{ID: planner.EntryID(100 - ago), Site: 1, Day: p.AsOf - ago,
			Passes: []planner.Pass{{Work: feedWork, NitrogenGM2: gM2, SlowShare: slow, SlowWeeks: weeks}}})
	}
	feed(30, 1.6, 0.25, 8)
	feed(15, 1.5, 0, 0)
	slices.SortFunc(p.Log, func(a, b planner.Entry) int { return int(a.Day - b.Day) })
	return *p
}

// trial is what is typed into the sheet of a plan, and the same change of the
// plan.
type trial struct {
	name  string
	typed []typing
	// change is the same in the plan: edits where there are such, else by hand.
	change  func(*planner.Plan) []planner.Edit
	without []planner.Day // days whose rows are deleted
	// asks are the works whose early, middle and late date must ask the bot;
	// mayAsk those that may. All others must tell the date, and whatever is told
	// must be right.
	asks, mayAsk []planner.WorkID
	// then is typed after the book was saved, closed and opened again.
	then *trial
}

// settings changes the settings of a work by hand.
func settings(p *planner.Plan, id planner.WorkID, change func(*planner.WorkSettings)) {
	for i := range p.Works {
		if p.Works[i].ID == id {
			change(&p.Works[i].Settings[0].Value)
		}
	}
}

// pass moves or changes the work's newest pass but so many.
func pass(p *planner.Plan, id planner.WorkID, before int, change func(*planner.Entry, *planner.Pass)) {
	for i := len(p.Log) - 1; i >= 0; i-- {
		if p.Log[i].Passes[0].Work != id {
			continue
		}
		if before == 0 {
			change(&p.Log[i], &p.Log[i].Passes[0])
			break
		}
		before--
	}
	slices.SortFunc(p.Log, func(a, b planner.Entry) int { return int(a.Day - b.Day) })
}

func movedBy(id planner.WorkID, by planner.Day) func(*planner.Plan) []planner.Edit {
	return func(p *planner.Plan) []planner.Edit {
		pass(p, id, 0, func(entry *planner.Entry, _ *planner.Pass) { entry.Day += by })
		return nil
	}
}

func setDay(day planner.Day, high, low float64) func(*planner.Plan) []planner.Edit {
	return func(p *planner.Plan) []planner.Edit {
		t := p.Site.Units.TemperatureC
		return []planner.Edit{planner.SetDay{Day: day, HighC: t(high), LowC: t(low)}}
	}
}

func setTarget(id planner.WorkID, shown float64, unit planner.Unit) func(*planner.Plan) []planner.Edit {
	return func(p *planner.Plan) []planner.Edit {
		if unit == planner.DegreeDays {
			shown = p.Site.Units.DifferenceC(shown)
		}
		return []planner.Edit{planner.SetTarget{Work: id, Target: shown, Unit: unit}}
	}
}

func bySettings(id planner.WorkID, change func(*planner.WorkSettings, planner.Units)) func(*planner.Plan) []planner.Edit {
	return func(p *planner.Plan) []planner.Edit {
		settings(p, id, func(s *planner.WorkSettings) { change(s, p.Site.Units) })
		return nil
	}
}

func byTurf(surface, turf int, change func(*planner.Turf, planner.Units)) func(*planner.Plan) []planner.Edit {
	return func(p *planner.Plan) []planner.Edit {
		change(&p.Surfaces[surface].Turf[turf].Value, p.Site.Units)
		return nil
	}
}

func byFeed(before int, change func(*planner.Entry, *planner.Pass)) func(*planner.Plan) []planner.Edit {
	return func(p *planner.Plan) []planner.Edit {
		pass(p, feedWork, before, change)
		return nil
	}
}

func byRecord(day planner.Day, change func(*planner.DayFacts, planner.Units)) func(*planner.Plan) []planner.Edit {
	return func(p *planner.Plan) []planner.Edit {
		change(&p.Record.Facts[day-p.Record.Facts[0].Day], p.Site.Units)
		return nil
	}
}

func together(changes ...func(*planner.Plan) []planner.Edit) func(*planner.Plan) []planner.Edit {
	return func(p *planner.Plan) (edits []planner.Edit) {
		for _, change := range changes {
			edits = append(edits, change(p)...)
		}
		return edits
	}
}

// split gives a feed its quick and slow nitrogen.
func split(quick, slow float64) func(*planner.Entry, *planner.Pass) {
	return func(_ *planner.Entry, pass *planner.Pass) {
		pass.NitrogenGM2, pass.SlowShare = quick+slow, slow/(quick+slow)
	}
}

// trials are typed into the sheets of plans in °C and °F; the numbers are in
// the site's unit.
func trials(p planner.Plan) []trial {
	now, fahrenheit := p.AsOf, p.Site.Units == planner.Fahrenheit
	unit := func(c, f float64) float64 {
		if fahrenheit {
			return f
		}
		return c
	}
	warm := []typing{onDay("d_high", now+2, unit(33.5, 92.5)), onDay("d_low", now+2, unit(21, 70)), onDay("d_mean", now+2, nil)}
	return []trial{
		{name: "nothing", change: together()},
		{name: "another target", typed: []typing{ofWork(meanWork, "target", unit(400, 777))}, change: setTarget(meanWork, unit(400, 777), planner.DegreeDays)},
		{name: "a target that is reached already", typed: []typing{ofWork(meanWork, "target", 100)}, change: setTarget(meanWork, 100, planner.DegreeDays)},
		{name: "targets of other measures", typed: []typing{ofWork(growthWork, "target", 9.5), ofWork(feedWork, "target", 0), ofWork(daysWork, "target", 45)},
			change: together(setTarget(growthWork, 9.5, planner.GrowthDays), setTarget(feedWork, 0, planner.NitrogenGM2), setTarget(daysWork, 45, planner.Days))},
		{name: "a later last date", typed: []typing{ofWork(meanWork, "last", serial(now-19))}, change: movedBy(meanWork, 6)},
		{name: "an earlier last date", typed: []typing{ofWork(meanWork, "last", serial(now-33)), ofWork(daysWork, "last", serial(now-20))}, change: together(movedBy(meanWork, -8), movedBy(daysWork, -2))},
		{name: "a last date ahead", typed: []typing{ofWork(meanWork, "last", serial(now+3)), ofWork(daysWork, "last", serial(now+1))},
			change: together(movedBy(meanWork, 28), movedBy(daysWork, 19)), mayAsk: []planner.WorkID{meanWork, daysWork}},
		{name: "least days between", typed: []typing{ofWork(meanWork, "gap", 80), ofWork(growthWork, "gap", 3)},
			change: func(*planner.Plan) []planner.Edit {
				return []planner.Edit{planner.SetLimits{Work: meanWork, Limits: planner.Limits{LeastDays: 80}}, planner.SetLimits{Work: growthWork, Limits: planner.Limits{LeastDays: 3}}}
			}},
		{name: "a warm day ahead", typed: warm, change: setDay(now+2, unit(33.5, 92.5), unit(21, 70)), asks: byWeather},
		{name: "a past day's mean", typed: []typing{onDay("d_mean", now-6, unit(18.2, 66.5))}, asks: byWeather,
			change: byRecord(now-6, func(f *planner.DayFacts, units planner.Units) { f.HourlyC = units.TemperatureC(unit(18.2, 66.5)) })},
		{name: "a past day's mean cleared", typed: []typing{onDay("d_mean", now-6, nil)}, asks: byWeather,
			change: byRecord(now-6, func(f *planner.DayFacts, _ planner.Units) { f.HasHourly, f.HourlyC = false, 0 })},
		{name: "a past day's high and low cleared", typed: []typing{onDay("d_high", now-6, nil), onDay("d_low", now-6, nil)}, asks: byWeather,
			change: byRecord(now-6, func(f *planner.DayFacts, _ planner.Units) { f.HasExtremes, f.HighC, f.LowC = false, 0, 0 })},
		{name: "another base", typed: []typing{ofWork(meanWork, "base", unit(4, 50))}, asks: []planner.WorkID{meanWork},
			change: bySettings(meanWork, func(s *planner.WorkSettings, u planner.Units) { s.Thresholds.LowerC = u.TemperatureC(unit(4, 50)) })},
		{name: "another upper limit", typed: []typing{ofWork(sineWork, "upper", unit(16, 64))}, asks: []planner.WorkID{sineWork},
			change: bySettings(sineWork, func(s *planner.WorkSettings, u planner.Units) { s.Thresholds.UpperC = u.TemperatureC(unit(16, 64)) })},
		{name: "another optimum and width", typed: []typing{into("in_s1_t2_optimum", unit(18, 62)), into("in_s1_t2_width", unit(7, 9.5))}, asks: []planner.WorkID{growthWork, feedWork},
			change: byTurf(0, 1, func(turf *planner.Turf, u planner.Units) {
				turf.Curve.OptimumC, turf.Curve.WidthC = u.TemperatureC(unit(18, 62)), u.DifferenceC(unit(7, 9.5))
			})},
		{name: "another ceiling", typed: []typing{into("in_s1_t2_ceiling", 2.5)}, asks: []planner.WorkID{feedWork}, mayAsk: []planner.WorkID{growthWork},
			change: byTurf(0, 1, func(turf *planner.Turf, _ planner.Units) { turf.CeilingGM2 = 2.5 })},
		{name: "what a feed gave at once", typed: []typing{inRow("log_quick", 1, 2.25), inRow("log_quick", 0, 1)},
			change: together(byFeed(0, split(2.25, 0)), byFeed(1, split(1, 0.4)))},
		{name: "what a feed gives slowly", typed: []typing{inRow("log_slow", 0, 1.1)}, asks: []planner.WorkID{feedWork}, change: byFeed(1, split(1.2, 1.1))},
		{name: "the newest feed's date", typed: []typing{inRow("log_date", 1, serial(now-11))},
			change: byFeed(0, func(entry *planner.Entry, _ *planner.Pass) { entry.Day += 4 })},
		{name: "a slow feed's date", typed: []typing{inRow("log_date", 0, serial(now-33))}, asks: []planner.WorkID{feedWork},
			change: byFeed(1, func(entry *planner.Entry, _ *planner.Pass) { entry.Day -= 3 })},
		{name: "a row put in among the feeds", typed: []typing{rows("insert", "log_date", typing{"row": 1})}, change: together()},
		{name: "two days' weather swapped", typed: []typing{onDay("d_high", now+2, unit(30, 86)), onDay("d_low", now+2, unit(10, 50)), onDay("d_mean", now+2, nil),
			onDay("d_high", now+30, unit(12, 54)), onDay("d_low", now+30, unit(4, 39)), onDay("d_mean", now+30, nil)}, asks: byWeather,
			change: together(setDay(now+2, unit(30, 86), unit(10, 50)), setDay(now+30, unit(12, 54), unit(4, 39)))},
		{name: "rows put in among the days", typed: []typing{rows("insert", "d_date", typing{"day": serial(now - 8)}), rows("insert", "d_date", typing{"day": serial(now + 8)}),
			ofWork(meanWork, "target", unit(400, 777))}, change: setTarget(meanWork, unit(400, 777), planner.DegreeDays)},
		{name: "rows put in above the works", typed: []typing{rows("insert", "in_w1_target", nil), rows("insert", "in_w3_target", nil),
			ofWork(sineWork, "target", 150)}, change: setTarget(sineWork, 150, planner.DegreeDays)},
		{name: "a past day's row deleted", typed: []typing{rows("delete", "d_date", typing{"day": serial(now - 3)})}, without: []planner.Day{now - 3}, change: together(),
			asks: append([]planner.WorkID{daysWork}, byWeather...)},
		{name: "the row of a day ahead deleted", typed: []typing{rows("delete", "d_date", typing{"day": serial(now + 3)})}, without: []planner.Day{now + 3}, change: together(),
			asks: append([]planner.WorkID{daysWork}, byWeather...)},
		{name: "many at once, saved between", typed: []typing{ofWork(meanWork, "target", 260), ofWork(meanWork, "gap", 20), inRow("log_quick", 1, 1.9), ofWork(growthWork, "last", serial(now-16))},
			change: together(setTarget(meanWork, 260, planner.DegreeDays), byFeed(0, split(1.9, 0)), movedBy(growthWork, 4),
				bySettings(meanWork, func(s *planner.WorkSettings, _ planner.Units) { s.Limits.LeastDays = 20 })),
			then: &trial{name: "then more", typed: append([]typing{rows("insert", "d_date", typing{"day": serial(now + 1)}), ofWork(sineWork, "base", unit(7, 45))}, warm...), asks: byWeather,
				change: together(setDay(now+2, unit(33.5, 92.5), unit(21, 70)),
					bySettings(sineWork, func(s *planner.WorkSettings, u planner.Units) { s.Thresholds.LowerC = u.TemperatureC(unit(7, 45)) }))}},
	}
}

// gapTrials are typed into the sheet of a plan with days missing from its
// record: the dates of all works but two rest on members in the past too.
func gapTrials(p planner.Plan) []trial {
	now := p.AsOf
	gone := []planner.WorkID{meanWork, sineWork, growthWork, feedWork}
	return []trial{
		{name: "nothing", change: together()},
		{name: "targets", typed: []typing{ofWork(meanWork, "target", 400), ofWork(twoSinesWork, "target", 150), ofWork(feedWork, "target", 0)}, asks: []planner.WorkID{meanWork, feedWork},
			change: together(setTarget(meanWork, 400, planner.DegreeDays), setTarget(twoSinesWork, 150, planner.DegreeDays), setTarget(feedWork, 0, planner.NitrogenGM2))},
		{name: "a last date", typed: []typing{ofWork(meanWork, "last", serial(now-19)), ofWork(twoSinesWork, "last", serial(now-5))}, asks: []planner.WorkID{meanWork}, change: together(movedBy(meanWork, 6), movedBy(twoSinesWork, -1))},
		{name: "a last date after the gap", typed: []typing{ofWork(meanWork, "last", serial(now-2))}, mayAsk: []planner.WorkID{meanWork}, change: movedBy(meanWork, 23)},
		{name: "least days between", typed: []typing{ofWork(meanWork, "gap", 80)},
			change: bySettings(meanWork, func(s *planner.WorkSettings, _ planner.Units) { s.Limits.LeastDays = 80 })},
		{name: "a last date before the gap", typed: []typing{ofWork(twoSinesWork, "last", serial(now-20))}, asks: []planner.WorkID{twoSinesWork}, change: movedBy(twoSinesWork, -16)},
		{name: "what a feed gave at once", typed: []typing{inRow("log_quick", 1, 2.25)}, asks: []planner.WorkID{feedWork}, change: byFeed(0, split(2.25, 0))},
		{name: "another base", typed: []typing{ofWork(meanWork, "base", 4)}, asks: []planner.WorkID{meanWork},
			change: bySettings(meanWork, func(s *planner.WorkSettings, _ planner.Units) { s.Thresholds.LowerC = 4 })},
		{name: "a warm day ahead", typed: []typing{onDay("d_high", now+2, 33.5), onDay("d_low", now+2, 21), onDay("d_mean", now+2, nil)}, change: setDay(now+2, 33.5, 21), asks: byWeather},
		{name: "rows put in", typed: []typing{rows("insert", "d_date", typing{"day": serial(now - 10)}), rows("insert", "in_w2_target", nil)}, change: together()},
		{name: "many, saved between", typed: []typing{ofWork(daysWork, "target", 45)}, change: setTarget(daysWork, 45, planner.Days),
			then: &trial{name: "then more", typed: []typing{ofWork(growthWork, "target", 20)}, change: setTarget(growthWork, 20, planner.GrowthDays), mayAsk: gone, asks: []planner.WorkID{growthWork}}},
	}
}

// job is what is typed into one workbook, step by step, as testdata/edit.py
// takes it: after each step the book is saved, closed and opened again.
type job struct {
	Source string `json:"source"`
	Steps  []step `json:"steps"`
}

type step struct {
	Target string   `json:"target"`
	Edits  []typing `json:"edits"`
}

// typeAll does the jobs in one LibreOffice.
func typeAll(t *testing.T, dir string, jobs []job) {
	t.Helper()
	text, err := json.Marshal(jobs)
	if err != nil {
		t.Fatal(err)
	}
	list := filepath.Join(dir, "jobs.json")
	if err := os.WriteFile(list, text, 0o644); err != nil {
		t.Fatal(err)
	}
	if said, err := exec.Command("/usr/bin/python3", "testdata/edit.py", list).CombinedOutput(); err != nil {
		t.Fatalf("%v: %s", err, said)
	}
}

// typed is a workbook after edits typed through LibreOffice.
func typed(t *testing.T, book []byte, edits []map[string]any) *excelize.File {
	t.Helper()
	dir := t.TempDir()
	in, out := filepath.Join(dir, "in.xlsx"), filepath.Join(dir, "out.xlsx")
	if err := os.WriteFile(in, book, 0o644); err != nil {
		t.Fatal(err)
	}
	var all []typing
	for _, edit := range edits {
		all = append(all, edit)
	}
	typeAll(t, dir, []job{{in, []step{{out, all}}}})
	content, err := os.ReadFile(out)
	if err != nil {
		t.Fatal(err)
	}
	return open(t, content)
}

// A sheet that was edited and saved by LibreOffice still says which it is, takes
// the same inputs only, and holds what was typed.
func TestWhatAnOfficeSavesBack(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("types edits in LibreOffice with SWARDBOOK_SLOW=1")
	}
	t.Parallel()
	book := build(t, edited(planner.Celsius, false))
	file := typed(t, book, []map[string]any{{"name": "in_w1_target", "value": 412.5}, {"sheet": "days", "cell": "B9", "value": 24.5}, {"sheet": "days", "insert": 20}})
	const id = "swardbook-sheet-7-form-1"
	if props, err := file.GetCustomProps(); err != nil || len(props) != 1 || props[0].Value != id {
		t.Errorf("custom properties %v, %v", props, err)
	}
	read := func(name string) string {
		sheet, cell := gridOf(t, book).named(t, name)
		text, err := file.GetCellValue(sheet, cell, excelize.Options{RawCellValue: true})
		if err != nil {
			t.Fatal(err)
		}
		return text
	}
	if got := read("wb_id"); got != id {
		t.Errorf("the id reads %q", got)
	}
	if got := read("in_w1_target"); got != "412.5" {
		t.Errorf("the target reads %q", got)
	}
	if got, err := file.GetCellValue("days", "B9"); err != nil || got != "24.5" {
		t.Errorf("the high reads %q, %v", got, err)
	}
	for _, sheet := range []string{"days", "works and log"} {
		if rules, err := file.GetDataValidations(sheet); err != nil || len(rules) == 0 || !rules[0].ShowErrorMessage {
			t.Errorf("%s takes anything: %v", sheet, err)
		}
	}
}

// After edits typed through LibreOffice the figures are those of Evaluate with
// the same edits, and where the sheet cannot know them it says so.
func TestEditsInLibreOffice(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("types edits in LibreOffice with SWARDBOOK_SLOW=1")
	}
	t.Parallel()
	dir := t.TempDir()
	var jobs []job
	sets := []struct {
		name   string
		plan   func() planner.Plan
		trials []trial
	}{
		{"°C", func() planner.Plan { return edited(planner.Celsius, false) }, trials(edited(planner.Celsius, false))},
		{"°F", func() planner.Plan { return edited(planner.Fahrenheit, false) }, trials(edited(planner.Fahrenheit, false))},
		{"gap", func() planner.Plan { return edited(planner.Celsius, true) }, gapTrials(edited(planner.Celsius, true))},
	}
	saved := func(set, trial, step int) string {
		return filepath.Join(dir, fmt.Sprintf("s%d-t%d-%d.xlsx", set, trial, step))
	}
	for i, set := range sets {
		source := filepath.Join(dir, fmt.Sprintf("s%d.xlsx", i))
		if err := os.WriteFile(source, build(t, set.plan()), 0o644); err != nil {
			t.Fatal(err)
		}
		for j := range set.trials {
			one := job{Source: source}
			for k, trial := 0, &set.trials[j]; trial != nil; k, trial = k+1, trial.then {
				one.Steps = append(one.Steps, step{saved(i, j, k), append([]typing{}, trial.typed...)})
			}
			jobs = append(jobs, one)
		}
	}
	typeAll(t, dir, jobs)
	for i, set := range sets {
		issued := inputOf(t, set.plan(), 1).Data
		for j := range set.trials {
			plan := set.plan()
			var edits []planner.Edit
			for k, trial := 0, &set.trials[j]; trial != nil; k, trial = k+1, trial.then {
				content, err := os.ReadFile(saved(i, j, k))
				if err != nil {
					t.Fatal(err)
				}
				edits = append(edits, trial.change(&plan)...)
				t.Run(fmt.Sprintf("%s/%s", set.name, trial.name), func(t *testing.T) {
					compareEdited(t, gridOf(t, content), plan, edits, issued, *trial)
				})
			}
		}
	}
}

// compareEdited holds every count of an edited sheet against the plan edited
// alike.
func compareEdited(t *testing.T, g grid, plan planner.Plan, edits []planner.Edit, issued planner.SheetData, trial trial) {
	t.Helper()
	changed, refused := planner.Apply(plan, edits...)
	if len(refused) > 0 {
		t.Fatal(refused)
	}
	data := inputOf(t, changed, 1).Data
	if len(data.Works) != len(issued.Works) {
		t.Fatalf("%d works, issued with %d", len(data.Works), len(issued.Works))
	}
	end := issued.Days[len(issued.Days)-1].Facts.Day
	for _, work := range data.Works {
		id := work.State.Work.ID
		if len(trial.without) > 0 {
			leaveOut(t, changed, data, &work, trial.without)
		}
		for c := range work.Counts {
			heldTo(t, g, plan, work, c, end, slices.Contains(trial.asks, id), slices.Contains(trial.mayAsk, id))
		}
	}
}

// leaveOut takes the rows of days out of a work's count: their units are gone,
// and a day before one of them takes its own low for the next night's.
func leaveOut(t *testing.T, plan planner.Plan, data planner.SheetData, work *planner.SheetWork, days []planner.Day) {
	t.Helper()
	surface := work.State.Surface
	measure, err := planner.NewMeasure(work.State.Settings.Counting, surface.Turf.On)
	if err != nil {
		t.Fatal(err)
	}
	for c := range work.Counts {
		count := &work.Counts[c]
		total := 0.0
		count.Through, count.Due.Path = 0, planner.Passage{}
		for i, day := range data.Days {
			units := count.Units[i]
			if slices.Contains(days, day.Facts.Day+1) && work.State.Settings.Method == calc.MethodDoubleSine {
				units, _ = measure.Units(day.Facts, planner.DayFacts{}, count.Due.Basis)
			}
			if day.Facts.Day < count.Due.Since || slices.Contains(days, day.Facts.Day) {
				continue
			}
			total += units
			if day.Facts.Day < plan.AsOf {
				count.Through = total
			}
			if !count.Due.Path.Known && calc.Reached(total, count.Due.Target) {
				count.Due.Path = planner.Passage{Day: day.Facts.Day, Known: true}
			}
		}
	}
}

// heldTo compares one count of a work in the sheet with its figures.
func heldTo(t *testing.T, g grid, plan planner.Plan, work planner.SheetWork, c int, end planner.Day, asks, mayAsk bool) {
	t.Helper()
	const sheet = "works and log"
	state, due := work.State, work.Counts[c].Due
	_, cell := g.named(t, fmt.Sprintf("in_w%d_target", state.Work.ID))
	row, heads := rowNumber(cell)+c, g.rowThat(t, sheet, "surface")
	read := func(head string) gridCell {
		return g.at(sheet, fmt.Sprintf("%s%d", g.headed(t, sheet, heads, head), row))
	}
	what := fmt.Sprintf("work %d, %s", state.Work.ID, due.Basis.Words())
	number := func(head string, want float64) {
		t.Helper()
		if got, ok := read(head).number(); !ok || math.Abs(got-want) > 1e-9 {
			t.Errorf("%s: %s is %q, want %.12g", what, head, read(head).text, want)
		}
	}
	show := func(value float64) float64 { shown, _ := plan.Site.Units.Show(value, state.Unit); return shown }
	number("total through yesterday", show(work.Counts[c].Through))
	number("target of this count", show(due.Target))
	asked := read("middle").text == "ask the bot"
	if asks && !asked || !asks && !mayAsk && asked {
		t.Errorf("%s: the middle date is %q; it must ask the bot: %v", what, read("middle").text, asks)
	}
	told := due.Date()
	dates := map[string]planner.Passage{"date on the path": due.Path, "early": due.Early, "middle": due.Middle, "late": due.Late, "due": told}
	if due.Middle.Day > end {
		dates["due"] = planner.Passage{}
	}
	for head, want := range dates {
		text := "beyond this sheet"
		if want.Known && (want.Day <= end || head == "due") {
			text = fmt.Sprint(serial(want.Day))
		}
		if asked && head != "date on the path" {
			text = "ask the bot"
		}
		if got := read(head); got.text != text {
			t.Errorf("%s: %s is %q, want %q", what, head, got.text, text)
		}
	}
	if want := dates["due"]; want.Known && !asked {
		number("days until", float64(want.Day-plan.AsOf))
	} else if got := read("days until"); got.text != "" {
		t.Errorf("%s: days until is %q, want none", what, got.text)
	}
	if due.Basis == state.Own {
		firstSheet(t, g, state, read)
	}
}

// firstSheet compares the key numbers of the first sheet with those of the
// sheet that it reads them from.
func firstSheet(t *testing.T, g grid, state planner.WorkState, read func(string) gridCell) {
	t.Helper()
	row, heads := g.rowThat(t, "week", state.Surface.Name+" "+state.Work.Name), g.rowThat(t, "week", "work")
	for head, other := range map[string]string{"total": "total through yesterday", "target": "target of this count", "due": "due", "days until": "days until", "early": "early", "late": "late"} {
		got, want := g.at("week", fmt.Sprintf("%s%d", g.headed(t, "week", heads, head), row)), read(other)
		if got.text != want.text {
			t.Errorf("work %d: the first sheet's %s is %q, the works' %q", state.Work.ID, head, got.text, want.text)
		}
	}
}
