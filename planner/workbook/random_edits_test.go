package workbook_test

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"testing"

	"github.com/xuri/excelize/v2"

	"swardbook/planner"
)

// randomEdit changes one input of the plan at random, and says which cell takes
// which value, and which work it is about.
func randomEdit(r *rand.Rand, plan planner.Plan) (planner.Plan, put, planner.WorkID) {
	work := plan.Works[r.IntN(len(plan.Works))]
	id, settings := work.ID, work.Settings.On(plan.AsOf)
	name := func(what string) string { return fmt.Sprintf("in_w%d_%s", id, what) }
	unit := map[planner.Counts]planner.Unit{planner.ByDegreeDays: planner.DegreeDays}[settings.Counts]
	kind := r.IntN(4)
	switch {
	case kind == 0:
		target := settings.Target * float64(int(30+170*r.Float64())) / 100
		shown, _ := plan.Site.Units.Show(target, unit)
		return with(plan, id, func(s *planner.WorkSettings) { s.Target = target }), put{name("target"), shown}, id
	case kind == 1:
		gap := r.IntN(70)
		return with(plan, id, func(s *planner.WorkSettings) { s.Limits.LeastDays = gap }), put{name("gap"), gap}, id
	case settings.Counts != planner.ByNitrogen:
		day := plan.AsOf - 70 + planner.Day(r.IntN(75))
		return moved(plan, id, day), put{name("last"), float64(day) + 25569}, id
	}
	var rows int
	for _, entry := range plan.Log {
		if _, ok := entry.Of(id); ok {
			rows++
		}
	}
	row := r.IntN(rows)
	change := func(of func(*planner.Entry)) planner.Plan {
		plan.Log = slices.Clone(plan.Log)
		at := 0
		for i := range plan.Log {
			if _, ok := plan.Log[i].Of(id); !ok {
				continue
			}
			if at == row {
				plan.Log[i].Passes = slices.Clone(plan.Log[i].Passes)
				of(&plan.Log[i])
			}
			at++
		}
		slices.SortStableFunc(plan.Log, func(a, b planner.Entry) int { return int(a.Day - b.Day) })
		return plan
	}
	if kind == 2 {
		quick := float64(int(20*r.Float64())) / 10
		return change(func(e *planner.Entry) {
			slow := e.Passes[0].NitrogenGM2 * e.Passes[0].SlowShare
			e.Passes[0].NitrogenGM2, e.Passes[0].SlowShare = quick+slow, slow/(quick+slow)
		}), put{fmt.Sprintf("log_quick+%d", row), quick}, id
	}
	day := plan.AsOf - 70 + planner.Day(r.IntN(70))
	return change(func(e *planner.Entry) { e.Day = day }), put{fmt.Sprintf("log_date+%d", row), float64(day) + 25569}, id
}

// uncomplicated is the plan with surfaces done as a whole, works that are on all
// year and counted, passes that went well, and one work that feeds: then a cell of
// the log is a pass of a work, and what is edited is what Evaluate is told.
func uncomplicated(t *testing.T, plan planner.Plan) planner.Plan {
	plan.Surfaces, plan.Works, plan.Log = slices.Clone(plan.Surfaces), slices.Clone(plan.Works), slices.Clone(plan.Log)
	for i := range plan.Surfaces {
		plan.Surfaces[i].Parts = nil
	}
	byNitrogen := func(work planner.Work) bool { return work.Settings.On(plan.AsOf).Counts == planner.ByNitrogen }
	feeds := plan.Works[slices.IndexFunc(plan.Works, byNitrogen)]
	plan.Works = slices.DeleteFunc(plan.Works, func(work planner.Work) bool { return byNitrogen(work) && work.ID != feeds.ID })
	for i, entry := range plan.Log {
		plan.Log[i].Result, plan.Log[i].Watered, plan.Log[i].Passes = planner.Good, 0, slices.Clone(entry.Passes)
		for j := range entry.Passes {
			plan.Log[i].Passes[j].Part, plan.Log[i].Passes[j].Share = 0, 0
			if entry.Passes[j].Work != feeds.ID {
				plan.Log[i].Passes[j] = planner.Pass{Work: entry.Passes[j].Work}
			}
		}
	}
	for i, work := range plan.Works {
		plan.Works[i].Settings = slices.Clone(work.Settings)
		for j := range work.Settings {
			s := &plan.Works[i].Settings[j].Value
			s.Season, s.WateredIn, s.Limits = planner.WorkSeason{}, false, planner.Limits{LeastDays: s.Limits.LeastDays}
		}
	}
	counted := inputOf(t, plan, 1).Data.Works
	plan.Works = slices.DeleteFunc(plan.Works, func(work planner.Work) bool {
		return !slices.ContainsFunc(counted, func(one planner.SheetWork) bool { return one.State.Work.ID == work.ID })
	})
	return plan
}

// Of random plans, with any input of any work changed, every date is that of
// Evaluate of the same edit, or asks the bot; no other work asks.
func TestRandomEditsAreHonest(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("recalculates in LibreOffice with SWARDBOOK_SLOW=1")
	}
	t.Parallel()
	type trial struct {
		issued, edited planner.Plan
		work           planner.WorkID
		put            put
	}
	var trials []trial
	var books [][]byte
	for number := range uint64(slowPlans() / 2) {
		plan := withRates(uncomplicated(t, randomPlan(1000+number)))
		edited, edit, id := randomEdit(rand.New(rand.NewPCG(number, 1)), plan)
		trials = append(trials, trial{plan, edited, id, edit})
		books = append(books, changedBook(t, build(t, plan), []put{edit}))
	}
	exact, asked := 0, 0
	for first := 0; first < len(books); first += 20 {
		for i, computed := range recalculated(t, books[first:min(first+20, len(books))]) {
			trial := trials[first+i]
			days := inputOf(t, trial.issued, 1).Data.Days
			e, a := honestOrAsks(t, fmt.Sprintf("plan %d, %s to %v", 1000+first+i, trial.put.at, trial.put.value), open(t, computed), trial.edited, trial.work, days[len(days)-1].Facts.Day)
			exact, asked = exact+e, asked+a
		}
	}
	t.Logf("%d dates are told, %d ask the bot", exact, asked)
	if exact < 2*asked {
		t.Errorf("%d dates are told, %d ask the bot", exact, asked)
	}
}

// honestOrAsks is honest, but leaves open whether the one work asks; it counts
// the dates of that work.
func honestOrAsks(t *testing.T, name string, file *excelize.File, plan planner.Plan, edited planner.WorkID, lastDay planner.Day) (exact, asked int) {
	t.Helper()
	row := 4
	for _, work := range inputOf(t, plan, 1).Data.Works {
		for _, count := range work.Counts {
			row++
			due := count.Due
			passages := map[string]planner.Passage{"O": due.Middle, "Q": due.Date()}
			if due.SpreadKnown {
				passages["N"], passages["P"] = due.Early, due.Late
			}
			for col, want := range passages {
				text := "beyond this sheet"
				if want.Known && want.Day <= lastDay {
					text = fmt.Sprint(int(want.Day) + 25569)
				}
				got, err := file.GetCellValue("works and log", fmt.Sprintf("%s%d", col, row), excelize.Options{RawCellValue: true})
				switch {
				case err != nil:
					t.Fatal(err)
				case got == text:
					exact++
				case got == "ask the bot" && work.State.Work.ID == edited:
					asked++
				default:
					t.Errorf("%s: %s, %s: %s%d is %q, want %q", name, work.State.Work.Name, due.Basis.Words(), col, row, got, text)
				}
			}
		}
	}
	return exact, asked
}
