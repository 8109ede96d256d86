package command

import (
	"context"
	"strings"
	"testing"

	"swardbook/bot/briefing"
	text "swardbook/bot/reply/plain"
	"swardbook/calc"
	"swardbook/planner"
)

// Cautions stand exactly where work can hurt someone, and nowhere else. A row
// is a reply, what it must say and what it must not.
func TestCautions(t *testing.T) {
	work := func(counts planner.Counts, status planner.Status) planner.WorkState {
		date := planner.Passage{Day: 19880, Known: true}
		return planner.WorkState{Surface: planner.Surface{Name: "greens"}, Work: planner.Work{Name: "work"}, Status: status, Own: planner.Hourly,
			Settings: planner.WorkSettings{Counting: planner.Counting{Counts: counts}}, Unit: planner.DegreeDays,
			Bases: []planner.DueFacts{{Basis: planner.Hourly, Middle: date, Early: date, Late: date}}}
	}
	morning := func(lowC float64, works ...planner.WorkState) string {
		return text.Text(briefing.Morning(planner.Evaluation{AsOf: 19880, Works: works, Site: planner.Site{Name: "Quillmere", Units: planner.Celsius},
			Yesterday: planner.Yesterday{DayFacts: planner.DayFacts{HasExtremes: true, HighC: 20, LowC: lowC}}}), 1000)
	}
	evening := func(lowC float64, band calc.HeatBand) string {
		return text.Text(briefing.Evening(planner.Tomorrow{Facts: planner.DayFacts{HasExtremes: true, HighC: 30, LowC: lowC},
			HeatIndexC: planner.Optional{Value: 40, Known: band != ""}, HeatBand: band}, planner.Plan{Site: planner.Site{Units: planner.Celsius}}), 1000)
	}
	help := func(topic string) string {
		table := Desk{}.Table(nil)
		r, err := table.Run(context.Background(), Request{Line: "/help topic:\"" + topic + "\"", Caller: Caller{Role: Lead}})
		if err != nil {
			t.Fatal(err)
		}
		return text.Text(r, 1000)
	}
	const (
		label   = "Label, local rules"
		feed    = "No feed on frozen"
		frost   = "white with frost"
		traffic = "off frozen turf"
		heat    = "Water, rest, shade"
		record  = "not the legal spray record"
	)
	all := []string{label, feed, frost, traffic, heat, record}
	for _, row := range []struct {
		name, told string
		says       []string
	}{
		{"nothing due", morning(10, work(planner.ByDegreeDays, planner.NotYet)), nil},
		{"a regulator due", morning(10, work(planner.ByDegreeDays, planner.Due)), []string{label}},
		{"a regulator overdue", morning(10, work(planner.ByDegreeDays, planner.Overdue)), []string{label}},
		{"a feed due today", morning(10, work(planner.ByNitrogen, planner.DueToday)), []string{label, feed}},
		{"a feed not yet", morning(10, work(planner.ByNitrogen, planner.NotYet)), nil},
		{"a cold night", morning(2.9, work(planner.ByDegreeDays, planner.NotYet)), []string{frost, traffic}},
		{"a mild night", morning(3, work(planner.ByDegreeDays, planner.NotYet)), nil},
		{"frost tomorrow", evening(-1, ""), []string{traffic}},
		{"heat tomorrow", evening(20, calc.HeatDanger), []string{heat}},
		{"a mild day tomorrow", evening(10, ""), nil},
		{"how to log", help("done"), []string{record}},
		{"the page of cautions", help("cautions"), []string{feed, record, traffic}},
		{"the page of words", help("words"), nil},
	} {
		for _, caution := range all {
			want := false
			for _, said := range row.says {
				want = want || said == caution
			}
			if got := strings.Contains(row.told, caution); got != want {
				t.Errorf("%s: %q said %v, want %v:\n%s", row.name, caution, got, want, row.told)
			}
		}
	}
	cautions := help("cautions")
	for _, must := range []string{"prescribes no product and no rate", "re-entry times are the law", "fertiliser ordinances", "licensed applicator",
		"does not transfer", "temperature only", "away from the turf", "employer and the local code"} {
		if !strings.Contains(cautions, must) {
			t.Errorf("the page of cautions lacks %q", must)
		}
	}
	if long := (Desk{}).setupWork()[0].Long; !strings.Contains(long, "does not transfer") {
		t.Errorf("/setup work add: %s", long)
	}
}
