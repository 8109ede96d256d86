package workbook_test

import (
	"bytes"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"swardbook/calc"
	"swardbook/planner"
)

// The works of the edited plan, by their ids.
const (
	byDegrees planner.WorkID = iota + 1
	byGrowth
	byNitrogen
	byDays
)

// editedPlan is an invented plan with seven past years as members, one work of
// each measure, three feeds, one of them partly slow, and no gap in the record.
func editedPlan() planner.Plan {
	plan := randomPlan(8)
	for number := uint64(8); len(plan.Outlook.Members) < 3; number += 4 {
		plan = randomPlan(number)
	}
	plan.Closed = nil
	r := rand.New(rand.NewPCG(8, 9))
	for range 30 { // the record goes back before the sheet's first day
		plan.Record.Facts = append([]planner.DayFacts{weatherOn(r, plan.Record.Facts[0].Day-1)}, plan.Record.Facts...)
	}
	settings := []planner.WorkSettings{
		{Counting: planner.Counting{Counts: planner.ByDegreeDays, Method: calc.MethodMean,
			Thresholds: calc.Thresholds{LowerC: 4, UpperC: 40, Cutoff: calc.CutoffHorizontal}}, Target: 300, Basis: planner.Hourly},
		{Counting: planner.Counting{Counts: planner.ByGrowthDays}, Target: 9, Basis: planner.Midrange},
		{Counting: planner.Counting{Counts: planner.ByNitrogen}, Target: 0.2, Basis: planner.Hourly},
		{Counting: planner.Counting{Counts: planner.ByDays}, Target: 40},
	}
	plan.Works, plan.Log = nil, nil
	for i, of := range settings {
		plan.Works = append(plan.Works, planner.Work{ID: planner.WorkID(i + 1), Surface: 1, Name: "work " + string(rune('a'+i)), Settings: planner.Always(of)})
	}
	plan.Surfaces = plan.Surfaces[:1]
	plan.Surfaces[0].Turf = planner.Always(planner.Turf{Curve: calc.GrowthCurve{OptimumC: 15, WidthC: 8}, CeilingGM2: 3})
	feed := func(ago planner.Day, pass planner.Pass) planner.Entry {
		pass.Work = byNitrogen
		return planner.Entry{Day: plan.AsOf - ago, Passes: []planner.Pass{pass}}
	}
	plan.Log = []planner.Entry{
		feed(50, planner.Pass{NitrogenGM2: 1}),
		feed(30, planner.Pass{NitrogenGM2: 2, SlowShare: 0.5, SlowWeeks: 4}),
		{Day: plan.AsOf - 25, Passes: []planner.Pass{{Work: byDegrees}, {Work: byGrowth}, {Work: byDays}}},
		feed(10, planner.Pass{NitrogenGM2: 1.5}),
	}
	return plan
}

// moved is the plan with the work's last pass on another day.
func moved(plan planner.Plan, work planner.WorkID, day planner.Day) planner.Plan {
	var log []planner.Entry
	for _, entry := range plan.Log {
		entry.Passes = slices.DeleteFunc(slices.Clone(entry.Passes), func(pass planner.Pass) bool { return pass.Work == work && work != byNitrogen })
		if len(entry.Passes) > 0 {
			log = append(log, entry)
		}
	}
	log = append(log, planner.Entry{Day: day, Passes: []planner.Pass{{Work: work}}})
	slices.SortStableFunc(log, func(a, b planner.Entry) int { return int(a.Day - b.Day) })
	plan.Log = log
	return plan
}

// fed is the plan with its feeds changed; the oldest is the first.
func fed(plan planner.Plan, change func(feeds []*planner.Entry)) planner.Plan {
	plan.Log = slices.Clone(plan.Log)
	var feeds []*planner.Entry
	for i := range plan.Log {
		if _, ok := plan.Log[i].Of(byNitrogen); ok {
			plan.Log[i].Passes = slices.Clone(plan.Log[i].Passes)
			feeds = append(feeds, &plan.Log[i])
		}
	}
	change(feeds)
	slices.SortStableFunc(plan.Log, func(a, b planner.Entry) int { return int(a.Day - b.Day) })
	return plan
}

// with is the plan with a work's settings changed.
func with(plan planner.Plan, work planner.WorkID, change func(*planner.WorkSettings)) planner.Plan {
	plan.Works = slices.Clone(plan.Works)
	at := slices.IndexFunc(plan.Works, func(one planner.Work) bool { return one.ID == work })
	settings := plan.Works[at].Settings.On(plan.AsOf)
	change(&settings)
	plan.Works[at].Settings = planner.Always(settings)
	return plan
}

func turfed(plan planner.Plan, change func(*planner.Turf)) planner.Plan {
	plan.Surfaces = slices.Clone(plan.Surfaces)
	turf := plan.Surfaces[0].Turf.On(plan.AsOf)
	change(&turf)
	plan.Surfaces[0].Turf = planner.Always(turf)
	return plan
}

// put writes a value into the cell of a name, or of "sheet!cell"; nil clears it.
type put struct {
	at    string
	value any
}

func put1(at string, value any) []put { return []put{{at, value}} }

// cellOf is the sheet and the cell of a name; +n is n rows on.
func cellOf(t *testing.T, file *excelize.File, at string, down int) (sheet, cell string) {
	t.Helper()
	for _, name := range file.GetDefinedName() {
		if name.Name == at {
			at = name.RefersTo
		}
	}
	var col string
	var row int
	for i := range at {
		if at[i] == '!' {
			sheet = at[:i]
			if sheet[0] == '\'' {
				sheet = sheet[1 : len(sheet)-1]
			}
			rest := at[i+1:]
			if rest[0] == '$' {
				rest = rest[1:]
			}
			for rest[0] >= 'A' && rest[0] <= 'Z' {
				col, rest = col+rest[:1], rest[1:]
			}
			if rest[0] == '$' {
				rest = rest[1:]
			}
			if _, err := fmt.Sscanf(rest, "%d", &row); err != nil {
				t.Fatalf("%s: %v", at, err)
			}
			return sheet, fmt.Sprintf("%s%d", col, row+down)
		}
	}
	t.Fatalf("no cell %s", at)
	return "", ""
}

// changedBook is the book with values put into its cells, not yet computed.
func changedBook(t *testing.T, book []byte, puts []put) []byte {
	t.Helper()
	file := open(t, book)
	for _, put := range puts {
		at, down := put.at, 0
		for i := range at {
			if at[i] == '+' {
				down, _ = strconv.Atoi(at[i+1:])
				at = at[:i]
				break
			}
		}
		sheet, cell := cellOf(t, file, at, down)
		if err := file.SetCellValue(sheet, cell, put.value); err != nil {
			t.Fatal(err)
		}
	}
	var out bytes.Buffer
	if err := file.Write(&out); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

// honest holds the cells of every work against Evaluate of the same edits: each
// date is the same or asks the bot, and asks only where the trial says so.
func honest(t *testing.T, name string, file *excelize.File, plan planner.Plan, asking []planner.WorkID, firstRow int, lastDay planner.Day) {
	t.Helper()
	read := func(col string, row int) string {
		text, err := file.GetCellValue("works and log", fmt.Sprintf("%s%d", col, row), excelize.Options{RawCellValue: true})
		if err != nil {
			t.Fatal(err)
		}
		return text
	}
	row := firstRow
	for _, work := range inputOf(t, plan, 1).Data.Works {
		for _, count := range work.Counts {
			due := count.Due
			ask := slices.Contains(asking, work.State.Work.ID)
			for col, want := range map[string]planner.Passage{"N": due.Early, "O": due.Middle, "P": due.Late, "Q": due.Date()} {
				text := "beyond this sheet"
				if want.Known && want.Day <= lastDay {
					text = fmt.Sprint(int(want.Day) + 25569)
				}
				if ask {
					text = "ask the bot"
				}
				if got := read(col, row); got != text {
					t.Errorf("%s: %s, %s: %s%d is %q, want %q", name, work.State.Work.Name, due.Basis.Words(), col, row, got, text)
				}
			}
			if got := read("K", row); got != "ask the bot" {
				if total, err := strconv.ParseFloat(got, 64); err != nil || math.Abs(total-count.Through) > 1e-9 {
					t.Errorf("%s: %s: total %q, want %g", name, work.State.Work.Name, got, count.Through)
				}
			}
			row++
		}
	}
	honestNitrogen(t, name, file, plan)
}

// honestNitrogen holds the balances against Evaluate of the same edits; what is
// used and left may ask the bot.
func honestNitrogen(t *testing.T, name string, file *excelize.File, plan planner.Plan) {
	t.Helper()
	for _, state := range inputOf(t, plan, 1).Data.Nitrogen {
		for i, facts := range state.State.Bases {
			for col, want := range map[string]float64{"B": float64(state.State.Since) + 25569, "C": state.State.GivenGM2, "D": state.State.SlowToComeGM2,
				"F": facts.Used.Total, "G": facts.LeftGM2, "H": state.State.SeasonGivenGM2} {
				got, err := file.GetCellValue("nitrogen", fmt.Sprintf("%s%d", col, 3+i), excelize.Options{RawCellValue: true})
				if err != nil {
					t.Fatal(err)
				}
				if asks := (col == "F" || col == "G") && strings.HasPrefix(name, "carried, asking: "); asks != (got == "ask the bot") {
					t.Errorf("%s: nitrogen %s%d is %q", name, col, 3+i, got)
				} else if value, err := strconv.ParseFloat(got, 64); !asks && (err != nil || math.Abs(value-want) > 1e-9) {
					t.Errorf("%s: nitrogen %s%d is %q, want %g", name, col, 3+i, got, want)
				}
			}
		}
	}
}

// Early, middle, late and due are those of Evaluate of the same edits, or ask
// the bot; with nothing changed they never ask. The rows are every input there
// is; what asks stands in them by the policy at the workbook's askText.
func TestDatesAreHonestAfterEdits(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("recalculates in LibreOffice with SWARDBOOK_SLOW=1")
	}
	t.Parallel()
	plan := editedPlan()
	gap := withGap(plan)
	old := fed(plan, func(f []*planner.Entry) { f[0].Day = plan.AsOf - 127 }) // before the sheet's first day
	beforeGap := moved(gap, byDegrees, gap.AsOf-12)
	date := func(day planner.Day) float64 { return float64(day) + 25569 }
	all := []planner.WorkID{byDegrees, byGrowth, byNitrogen}
	first := inputOf(t, plan, 1).Data.Days[0].Facts.Day
	onDay := func(name string, day planner.Day) string { return fmt.Sprintf("%s+%d", name, int(day-first)) }
	ahead := plan.Outlook.Path[slices.IndexFunc(plan.Outlook.Path, func(f planner.DayFacts) bool { return f.Day > plan.AsOf+1 && f.HasExtremes && f.HasHourly })]
	past := plan.Record.At(plan.AsOf - 3)
	noMean := plan.Outlook.Path[slices.IndexFunc(plan.Outlook.Path, func(f planner.DayFacts) bool { return !f.HasHourly })].Day
	colder := plan
	colder.Record.Facts = slices.Clone(plan.Record.Facts)
	colder.Record.Facts[past.Day-colder.Record.Facts[0].Day].LowC = -9
	trials := []struct {
		name string
		book planner.Plan // as issued
		puts []put
		plan planner.Plan // Evaluate's, with the same edits
		asks []planner.WorkID
	}{
		{"nothing", plan, nil, plan, nil},
		{"nothing, with a gap", gap, nil, gap, nil},
		{"target", plan, put1("in_w1_target", 180), with(plan, byDegrees, func(s *planner.WorkSettings) { s.Target = 180 }), nil},
		{"target reached long ago", plan, put1("in_w2_target", 0.5), with(plan, byGrowth, func(s *planner.WorkSettings) { s.Target = 0.5 }), nil},
		{"target beyond the sheet", plan, put1("in_w1_target", 9000), with(plan, byDegrees, func(s *planner.WorkSettings) { s.Target = 9000 }), nil},
		{"target with a gap", gap, put1("in_w1_target", 180), with(gap, byDegrees, func(s *planner.WorkSettings) { s.Target = 180 }), []planner.WorkID{byDegrees}},
		{"reserve", plan, put1("in_w3_target", 0.5), with(plan, byNitrogen, func(s *planner.WorkSettings) { s.Target = 0.5 }), nil},
		{"least days between", plan, put1("in_w1_gap", 60), with(plan, byDegrees, func(s *planner.WorkSettings) { s.Limits.LeastDays = 60 }), nil},
		{"last later", plan, put1("in_w1_last", date(plan.AsOf-9)), moved(plan, byDegrees, plan.AsOf-9), nil},
		{"last earlier", plan, put1("in_w2_last", date(plan.AsOf-33)), moved(plan, byGrowth, plan.AsOf-33), nil},
		{"last before the sheet", plan, put1("in_w2_last", date(first-9)), moved(plan, byGrowth, first-9), []planner.WorkID{byGrowth}},
		{"last on the morning", plan, put1("in_w1_last", date(plan.AsOf)), moved(plan, byDegrees, plan.AsOf), []planner.WorkID{byDegrees}},
		{"last ahead", plan, put1("in_w4_last", date(plan.AsOf+3)), moved(plan, byDays, plan.AsOf+3), []planner.WorkID{byDays}},
		{"last with a gap", gap, put1("in_w1_last", date(gap.AsOf-24)), moved(gap, byDegrees, gap.AsOf-24), []planner.WorkID{byDegrees}},
		{"last back over a gap", beforeGap, put1("in_w1_last", date(gap.AsOf-25)), moved(beforeGap, byDegrees, gap.AsOf-25), []planner.WorkID{byDegrees}},
		{"base", plan, put1("in_w1_base", 6), with(plan, byDegrees, func(s *planner.WorkSettings) { s.Thresholds.LowerC = 6 }), []planner.WorkID{byDegrees}},
		{"upper limit that no day of the path reaches", plan, put1("in_w1_upper", 39), with(plan, byDegrees, func(s *planner.WorkSettings) { s.Thresholds.UpperC = 39 }), []planner.WorkID{byDegrees}},
		{"optimum", plan, put1("in_s1_t1_optimum", 16), turfed(plan, func(t *planner.Turf) { t.Curve.OptimumC = 16 }), []planner.WorkID{byGrowth, byNitrogen}},
		{"width", plan, put1("in_s1_t1_width", 7), turfed(plan, func(t *planner.Turf) { t.Curve.WidthC = 7 }), []planner.WorkID{byGrowth, byNitrogen}},
		{"ceiling", plan, put1("in_s1_t1_ceiling", 3.5), turfed(plan, func(t *planner.Turf) { t.CeilingGM2 = 3.5 }), []planner.WorkID{byGrowth, byNitrogen}},
		{"area", plan, put1("in_s1_area", 777), plan, nil},
		{"quick of a feed", plan, put1("log_quick+0", 1.8), fed(plan, func(f []*planner.Entry) { f[0].Passes[0].NitrogenGM2 = 1.8 }), nil},
		{"a feed that gave nothing", plan, put1("log_quick+0", 0), fed(plan, func(f []*planner.Entry) { f[0].Passes[0].NitrogenGM2 = 0 }), nil},
		{"slow of a feed", plan, put1("log_slow+1", 1.2), fed(plan, func(f []*planner.Entry) { f[1].Passes[0].NitrogenGM2, f[1].Passes[0].SlowShare = 2.2, 1.2/2.2 }), []planner.WorkID{byNitrogen}},
		{"weeks of a feed", plan, put1("log_days+1", 35), fed(plan, func(f []*planner.Entry) { f[1].Passes[0].SlowWeeks = 5 }), []planner.WorkID{byNitrogen}},
		{"a slow feed a day on", plan, put1("log_date+1", date(plan.AsOf-29)), fed(plan, func(f []*planner.Entry) { f[1].Day = plan.AsOf - 29 }), []planner.WorkID{byNitrogen}},
		{"first feed a week on", plan, put1("log_date+0", date(plan.AsOf-43)), fed(plan, func(f []*planner.Entry) { f[0].Day = plan.AsOf - 43 }), nil},
		{"newest feed two days back", plan, put1("log_date+2", date(plan.AsOf-12)), fed(plan, func(f []*planner.Entry) { f[2].Day = plan.AsOf - 12 }), nil},
		{"newest feed on the morning", plan, put1("log_date+2", date(plan.AsOf)), fed(plan, func(f []*planner.Entry) { f[2].Day = plan.AsOf }), []planner.WorkID{byNitrogen}},
		{"carried, asking: first feed before the sheet", plan, put1("log_date+0", date(first-20)), fed(plan, func(f []*planner.Entry) { f[0].Day = first - 20 }), []planner.WorkID{byNitrogen}},
		{"carried: nothing", old, nil, old, nil},
		{"carried: quick of the first feed", old, put1("log_quick+0", 1.7), fed(old, func(f []*planner.Entry) { f[0].Passes[0].NitrogenGM2 = 1.7 }), nil},
		{"carried: slow of the first feed", old, put1("log_slow+0", 0.6), fed(old, func(f []*planner.Entry) {
			f[0].Passes[0].NitrogenGM2, f[0].Passes[0].SlowShare, f[0].Passes[0].SlowWeeks = 1.6, 0.6/1.6, 1.0/7
		}), nil},
		{"carried: first feed into the sheet", old, put1("log_date+0", date(old.AsOf-60)), fed(old, func(f []*planner.Entry) { f[0].Day = old.AsOf - 60 }), nil},
		{"carried, asking: first feed a day on", old, put1("log_date+0", date(old.AsOf-126)), fed(old, func(f []*planner.Entry) { f[0].Day = old.AsOf - 126 }), []planner.WorkID{byNitrogen}},
		{"carried, asking: optimum", old, put1("in_s1_t1_optimum", 16), turfed(old, func(t *planner.Turf) { t.Curve.OptimumC = 16 }), []planner.WorkID{byGrowth, byNitrogen}},
		{"text for a date", plan, put1("in_w1_last", "yesterday"), plan, []planner.WorkID{byDegrees}},
		{"a high ahead", plan, put1(onDay("d_high", ahead.Day), ahead.HighC+4), plan, all},
		{"a past low", plan, put1(onDay("d_low", past.Day), -9), colder, all},
		{"a mean typed as 0", plan, put1(onDay("d_mean", noMean), 0), plan, all},
		{"two days exchanged", plan, []put{
			{onDay("d_high", plan.AsOf+2), plan.Outlook.Path[3].HighC}, {onDay("d_low", plan.AsOf+2), plan.Outlook.Path[3].LowC}, {onDay("d_mean", plan.AsOf+2), plan.Outlook.Path[3].HourlyC},
			{onDay("d_high", plan.AsOf+3), plan.Outlook.Path[2].HighC}, {onDay("d_low", plan.AsOf+3), plan.Outlook.Path[2].LowC}, {onDay("d_mean", plan.AsOf+3), plan.Outlook.Path[2].HourlyC},
		}, plan, all},
		{"a day cleared", plan, []put{{onDay("d_high", plan.AsOf+1), nil}, {onDay("d_low", plan.AsOf+1), nil}, {onDay("d_mean", plan.AsOf+1), nil}}, plan, all},
	}
	var books [][]byte
	for _, trial := range trials {
		books = append(books, changedBook(t, build(t, trial.book), trial.puts))
	}
	for i, computed := range recalculated(t, books) {
		trial := trials[i]
		issued := inputOf(t, trial.book, 1).Data.Days
		honest(t, trial.name, open(t, computed), trial.plan, trial.asks, 5, issued[len(issued)-1].Facts.Day)
	}
}

// Rows put in and taken out, through LibreOffice itself, break nothing.
func TestRowsPutInAndTakenOut(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("types edits in LibreOffice with SWARDBOOK_SLOW=1")
	}
	t.Parallel()
	plan := editedPlan()
	book := build(t, plan)
	days := inputOf(t, plan, 1).Data.Days
	ahead := int(plan.AsOf+4-days[0].Facts.Day) + 2 // rows are counted from 0 here
	_, feeds := cellOf(t, open(t, book), "log_quick", 0)
	var feed int
	if _, err := fmt.Sscanf(feeds, "D%d", &feed); err != nil {
		t.Fatal(err)
	}
	without := fed(plan, func(f []*planner.Entry) { f[0].Passes[0].NitrogenGM2 = 0 })
	fewer := plan
	fewer.Works = plan.Works[1:]
	for _, trial := range []struct {
		name  string
		typed []map[string]any
		plan  planner.Plan
		asks  []planner.WorkID
		first int // row of the works
	}{
		{"above the works", []map[string]any{{"sheet": "works and log", "insert": 3}, {"sheet": "works and log", "insert": 0}}, plan, nil, 7},
		{"above the days, among them and among the feeds", []map[string]any{{"sheet": "days", "insert": 0}, {"sheet": "days", "insert": ahead}, {"sheet": "works and log", "insert": feed}}, plan, nil, 5},
		{"a feed out", []map[string]any{{"sheet": "works and log", "delete": feed - 1}}, without, nil, 5},
		{"a day ahead out", []map[string]any{{"sheet": "days", "delete": ahead}}, plan, []planner.WorkID{byDegrees, byGrowth, byNitrogen, byDays}, 5},
		{"a work out", []map[string]any{{"sheet": "works and log", "delete": 4}}, fewer, nil, 6},
	} {
		file := typed(t, book, trial.typed)
		honest(t, trial.name, file, trial.plan, trial.asks, trial.first, days[len(days)-1].Facts.Day)
		rows, err := file.GetRows("week", excelize.Options{RawCellValue: true})
		if err != nil {
			t.Fatal(err)
		}
		for r, row := range rows {
			for c, text := range row {
				if strings.HasPrefix(text, "#") && trial.name != "a work out" || strings.HasPrefix(text, "#") && r > 9 {
					t.Errorf("%s: week row %d column %d is %s", trial.name, r+1, c+1, text)
				}
			}
		}
	}
}

// withGap is the plan with eight days of the record missing, twenty days ago:
// too many for a straight line, so that each member fills them by itself.
func withGap(plan planner.Plan) planner.Plan {
	start := plan.AsOf - 20
	plan.Record.Facts = slices.Clone(plan.Record.Facts)
	for day := start; day < start+8; day++ {
		plan.Record.Facts[day-plan.Record.Facts[0].Day] = planner.DayFacts{Day: day}
	}
	fill := func(days []planner.DayFacts) []planner.DayFacts {
		var all []planner.DayFacts
		for i := range 20 {
			day := days[(7*i+int(100*days[0].LowC))%len(days)]
			day.Day = start + planner.Day(i)
			all = append(all, day)
		}
		return append(all, days...)
	}
	outlook := plan.Outlook
	outlook.Start, outlook.Path = start, fill(outlook.Path)
	outlook.Members = nil
	for _, member := range plan.Outlook.Members {
		outlook.Members = append(outlook.Members, fill(member))
	}
	plan.Outlook = outlook
	return plan
}
