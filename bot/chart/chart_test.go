package chart_test

import (
	"bytes"
	"image/png"
	"math"
	"strings"
	"testing"

	"swardbook/bot/chart"
	"swardbook/bot/reply"
	"swardbook/calc"
	"swardbook/planner"
)

// Quillmere and its weather are invented.

const morning = planner.Day(19885) // 11 June 2024

func day(number planner.Day, c float64) planner.DayFacts {
	return planner.DayFacts{Day: number, HasExtremes: true, HighC: c + 6, LowC: c - 5, HasHourly: true, HourlyC: c}
}

func plan() planner.Plan {
	p := planner.Plan{AsOf: morning, Site: planner.Site{ID: 1, Name: "Quillmere", Units: planner.Fahrenheit}}
	for i := morning - 800; i < morning; i++ {
		p.Record.Facts = append(p.Record.Facts, day(i, 12+8*math.Sin(float64(i)/58)))
	}
	p.Outlook = planner.Outlook{AsOf: morning, Start: morning}
	for _, warmer := range []float64{-3, 0, 4} {
		var member []planner.DayFacts
		for i := range planner.Day(60) {
			member = append(member, day(morning+i, 14+warmer))
		}
		p.Outlook.Members = append(p.Outlook.Members, member)
	}
	p.Outlook.Path = p.Outlook.Members[1]
	p.Surfaces = []planner.Surface{{ID: 1, Site: 1, Name: "greens", Turf: planner.Always(planner.Turf{Curve: calc.CoolSeason()})}}
	p.Works = []planner.Work{{ID: 1, Surface: 1, Name: "regulator", Settings: planner.Always(planner.WorkSettings{
		Counting: planner.Counting{Counts: planner.ByDegreeDays}, Target: 200})}}
	p.Totals = []planner.Total{{ID: 1, Site: 1, Name: "gdd0", Settings: planner.Always(planner.TotalSettings{
		Counting: planner.Counting{Counts: planner.ByDegreeDays}, Start: planner.MonthDay{Month: 3, Day: 1}})}}
	p.Log = []planner.Entry{{Day: morning - 6, Passes: []planner.Pass{{Work: 1}}}}
	return p
}

// drawn refuses a picture that a phone cannot show or a blind reader not hear.
func drawn(t *testing.T, picture reply.Picture, ok bool, err error, words ...string) {
	t.Helper()
	if err != nil || !ok {
		t.Fatalf("no picture: %v", err)
	}
	image, err := png.Decode(bytes.NewReader(picture.PNG))
	if err != nil {
		t.Fatal(err)
	}
	if wide := image.Bounds().Dx(); wide < 720 || wide > 1200 {
		t.Errorf("the picture is %d dots wide", wide)
	}
	for _, word := range words {
		if !strings.Contains(picture.Alt, word) {
			t.Errorf("%q does not say %q", picture.Alt, word)
		}
	}
	if err := reply.Of(picture).Check(); err != nil {
		t.Error(err)
	}
	if ink := inks(image); ink < 3 {
		t.Errorf("in grey the picture has %d inks", ink)
	}
}

func sheetOf(t *testing.T, p planner.Plan) (planner.SheetData, planner.Evaluation) {
	t.Helper()
	evaluation, err := planner.Evaluate(p)
	if err != nil {
		t.Fatal(err)
	}
	data, err := planner.SheetOf(p, evaluation, 0)
	if err != nil {
		t.Fatal(err)
	}
	return data, evaluation
}

// 6 days of 5 left of 200 °C-days at about 14 a day: the what-if is a week
// earlier than as it stands or less; its words name both dates.
func TestRunning(t *testing.T) {
	p := plan()
	warmer, refused := planner.Apply(p, planner.Warm{From: morning, ByC: 5})
	if refused != nil {
		t.Fatal(refused)
	}
	stands, evaluation := sheetOf(t, p)
	whatIf, after := sheetOf(t, warmer)
	state := evaluation.Works[0]
	before, _ := state.OwnFacts()
	then, _ := after.Works[0].OwnFacts()
	picture, ok, err := chart.Running(state, morning, p.Site.Units, stands, whatIf)
	drawn(t, picture, ok, err, "greens regulator", "°F-days", before.Date().Day.Short(), then.Date().Day.Short())
	if _, ok, err := chart.Running(planner.WorkState{}, morning, p.Site.Units, stands, whatIf); ok || err != nil {
		t.Errorf("a work that is not there was drawn: %v", err)
	}
}

// A what-if with another target shows both targets; with the same, one.
func TestTargetOfTheWhatIf(t *testing.T) {
	p := plan()
	stands, evaluation := sheetOf(t, p)
	levels := func(edit planner.Edit) int {
		changed, refused := planner.Apply(p, edit)
		if refused != nil {
			t.Fatal(refused)
		}
		whatIf, _ := sheetOf(t, changed)
		picture, ok, err := chart.Running(evaluation.Works[0], morning, p.Site.Units, stands, whatIf)
		drawn(t, picture, ok, err, "base 32") // 0 °C on a site that shows °F
		image, err := png.Decode(bytes.NewReader(picture.PNG))
		if err != nil {
			t.Fatal(err)
		}
		return levelLines(image)
	}
	same, other := levels(planner.Warm{From: morning, ByC: 5}), levels(planner.SetTarget{Work: 1, Target: 150, Unit: planner.DegreeDays})
	if other != same+1 {
		t.Errorf("%d level lines with another target, %d with the same", other, same)
	}
}

func TestSeason(t *testing.T) {
	p := plan()
	season, err := planner.CompareSeason(p, p.Totals[0])
	if err != nil {
		t.Fatal(err)
	}
	picture, ok, err := chart.Season(p, season)
	drawn(t, picture, ok, err, "gdd0", "2024", "Past years")
}

func TestMeans(t *testing.T) {
	p := plan()
	means := planner.CompareMeans(p.Record, morning-100, morning-1)
	picture, ok, err := chart.Means(p.Record, means, p.Site.Units)
	drawn(t, picture, ok, err, "100 days", "+0.90 °F") // half of 6 less 5 °C is 0.5 °C
	one := planner.CompareMeans(p.Record, morning-1, morning-1)
	picture, ok, err = chart.Means(p.Record, one, p.Site.Units)
	drawn(t, picture, ok, err, "of 1 day,")
	if _, ok, err := chart.Means(planner.Record{}, planner.Means{}, p.Site.Units); ok || err != nil {
		t.Errorf("no day with both means was drawn: %v", err)
	}
}
