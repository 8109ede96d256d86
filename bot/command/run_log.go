package command

import (
	"context"
	"fmt"
	"slices"
	"strings"

	"swardbook/bot/briefing"
	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) logList() Command {
	return Command{
		Path: "log list", Short: "what was done, newest first; one work with how its intervals ran",
		Long: "With surface and work it also tells how past intervals really ran, in days, degree days and growth days on both means, and the mean of the last five beside the target.",
		Options: []Option{d.surfaceOption(), d.workOption(),
			{Name: "most", Kind: Whole, Range: Between(1, 100), Help: "how many entries; 10 when not given", Example: "20"}, d.siteOption()},
		Examples: []string{"/log list", "/log list surface:greens work:feed"},
		Run:      d.runLogList,
	}
}

func (d Desk) runLogList(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	log, err := v.book.Log(ctx, v.site.ID)
	if err != nil {
		return reply.Reply{}, err
	}
	wanted, err := v.wantedWorks()
	if err != nil {
		return reply.Reply{}, err
	}
	most := 10
	if n, given := v.Values.Whole("most"); given {
		most = n
	}
	r := reply.Reply{Private: true}
	shown := 0
	for _, entry := range slices.Backward(log) {
		lines := v.entryLines(entry, wanted)
		if len(lines) == 0 {
			continue
		}
		if shown++; shown > most {
			r.Add(reply.Textf("Older ones: add most:%d", min(2*most, 100)))
			break
		}
		r.Add(reply.Text(strings.Join(lines, "\n")))
	}
	if shown == 0 {
		r.Add(reply.Text("Nothing is logged yet. Log a pass with /done greens regulator"))
	}
	if len(wanted) == 1 {
		for id := range wanted {
			return r, v.addIntervals(ctx, &r, id)
		}
	}
	return r, nil
}

// wantedWorks are the titles of the works that the options keep, by id; works
// that were dropped are left out.
func (v visit) wantedWorks() (map[planner.WorkID]string, error) {
	surfaceName, hasSurface := v.Values.Text("surface")
	workName, hasWork := v.Values.Text("work")
	if hasSurface {
		if _, err := v.setup.Surface(v.site, surfaceName); err != nil {
			return nil, err
		}
	}
	titles := map[planner.WorkID]string{}
	for _, surface := range v.setup.SurfacesOf(v.site.ID) {
		for _, work := range v.setup.WorksOn(surface.ID) {
			if hasSurface && planner.NameKey(surface.Name) != planner.NameKey(surfaceName) ||
				hasWork && planner.NameKey(work.Name) != planner.NameKey(workName) {
				continue
			}
			titles[work.ID] = surface.Name + " " + work.Name
		}
	}
	if hasWork && len(titles) == 0 {
		return nil, v.noSuchWork(workName)
	}
	return titles, nil
}

// allWorks reports whether no option keeps some works only.
func (v visit) allWorks() bool { return !v.Values.Has("surface") && !v.Values.Has("work") }

func (v visit) entryLines(entry planner.Entry, titles map[planner.WorkID]string) []string {
	var lines []string
	for _, pass := range entry.Passes {
		title, ok := titles[pass.Work]
		if work, surface, known := v.workOf(pass.Work); known && work.Archived && v.allWorks() {
			title, ok = surface.Name+" "+work.Name+" (dropped)", true
		}
		if !ok {
			continue
		}
		if _, surface, ok := v.workOf(pass.Work); ok && pass.Part != 0 {
			title += " (" + surface.PartName(pass.Part) + ")"
		}
		if rate := pass.Rate.Words(); rate != "" {
			title += ", " + rate
		}
		lines = append(lines, title)
	}
	if len(lines) == 0 {
		return nil
	}
	head := fmt.Sprintf("%d: %s %d", entry.ID, entry.Day.Short(), entry.Day.Year())
	if entry.Clock != "" {
		head += " " + entry.Clock
	}
	if entry.By != "" {
		head += ", " + entry.By
	}
	lines = append([]string{head}, lines...)
	if entry.Result != planner.Good {
		lines = append(lines, "result: "+string(entry.Result))
	}
	if entry.RainCounts {
		lines = append(lines, "counts, though it rained")
	}
	if entry.Note != "" {
		lines = append(lines, "\""+entry.Note+"\"")
	}
	return lines
}

func (d Desk) logUndo() Command {
	return Command{
		Path: "log undo", Shared: true, Short: "take an entry back: your newest, or the one with the number",
		Long:     "Crew take their own entries back; a lead anyone's.",
		Options:  []Option{{Name: "entry", Kind: Whole, Range: AtLeast(1), Help: "the entry's number; your newest when not given", Example: "12"}, d.siteOption()},
		Examples: []string{"/log undo", "/log undo entry:12"},
		Run:      d.runLogUndo,
	}
}

func (d Desk) runLogUndo(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	id, _ := v.Values.Whole("entry")
	entry, err := v.book.UndoEntry(ctx, v.stamp(), v.Caller.person(), v.site.ID, planner.EntryID(id), v.Caller.Role >= Lead && id > 0)
	if err != nil {
		return reply.Reply{}, err
	}
	titles, err := v.wantedWorks()
	if err != nil {
		return reply.Reply{}, err
	}
	return reply.Of(reply.Text("Taken back.\n" + strings.Join(v.entryLines(entry, titles), "\n"))), nil
}

// intervalsShown is how many past intervals are shown, and of how many the mean
// is taken.
const intervalsShown = 5

// addIntervals tells how the work's past intervals really ran.
func (v visit) addIntervals(ctx context.Context, r *reply.Reply, id planner.WorkID) error {
	work, surface, ok := v.workOf(id)
	if !ok {
		return nil
	}
	plan, err := v.plan(ctx, v.today)
	if err != nil {
		return err
	}
	intervals, err := planner.PastIntervals(plan, work)
	days, sums, some := planner.MeanInterval(intervals, intervalsShown)
	if err != nil || !some {
		return err
	}
	units := v.site.Units
	text := []string{"How the intervals ran"}
	for _, interval := range intervals[max(0, len(intervals)-intervalsShown):] {
		text = append(text, fmt.Sprintf("%s to %s: %s", briefing.DayMonth(interval.From), briefing.DayMonth(interval.To), briefing.Days(interval.Days)))
		for _, sum := range interval.Sums {
			switch shown := sumText(sum, sum.Sum.Total, units); {
			case sum.Sum.AllStandIn(): // it is the other mean's sum
			case sum.Sum.Missing > 0:
				text = append(text, "  at least "+shown)
			default:
				text = append(text, "  "+shown)
			}
		}
	}
	text = append(text, fmt.Sprintf("mean of the last %d: %s days", min(len(intervals), intervalsShown), briefing.Plain(days)))
	newest := intervals[len(intervals)-1]
	key := "interval." + planner.NameKey(surface.Name) + "." + planner.NameKey(work.Name) + "."
	r.Figures = append(r.Figures, planner.Figure{Key: key + "days", Value: days, Unit: planner.Days, Basis: planner.NoBasis})
	for i, sum := range newest.Sums {
		if sum.Sum.AllStandIn() {
			continue
		}
		text = append(text, "  "+sumText(sum, sums[i], units))
		r.Figures = append(r.Figures, planner.Figure{Key: key + string(sum.Counts) + "." + string(sum.Basis), Value: sums[i], Unit: sum.Unit, Basis: sum.Basis})
	}
	text = append(text, "target: "+settingsText(work.Settings.On(v.today), units))
	r.Add(reply.Text(strings.Join(text, "\n")))
	return nil
}

// sumText is what an interval came to in one measure on one basis.
func sumText(sum planner.IntervalSum, value float64, units planner.Units) string {
	_, unit := units.Show(0, sum.Unit)
	return fmt.Sprintf("%s %s, %s", briefing.Amount(value, sum.Unit, units), unit, sum.Basis.Words())
}

func (d Desk) logAmend() Command {
	return Command{
		Path: "log amend", Shared: true, Short: "correct an entry: day, rate, part, result, note",
		Long: "Crew amend their own entries; a lead anyone's. What it was before stays in the change log.",
		Options: append([]Option{
			{Name: "entry", Kind: Whole, Required: true, Range: AtLeast(1), Help: "the entry's number, as /log list shows it", Example: "12"},
			{Name: "when", Kind: Day, Past: true, Clock: true, Help: "the day it was done, with a time if you like", Example: "yesterday"},
		}, append(passOptions(), d.siteOption())...),
		Examples: []string{"/log amend entry:12 result:doubtful", "/log amend entry:12 rate:2.2 note:\"short of product\""},
		Run:      d.runLogAmend,
	}
}

func (d Desk) runLogAmend(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	id, _ := v.Values.Whole("entry")
	entry, err := v.book.Entry(ctx, v.site.ID, planner.EntryID(id), v.Caller.person(), v.Caller.Role >= Lead)
	if err != nil {
		return reply.Reply{}, err
	}
	if !slices.ContainsFunc(append([]Option{{Name: "when"}}, passOptions()...), func(o Option) bool { return v.Values.Has(o.Name) }) {
		return reply.Reply{}, planner.Problemf(planner.Missing, "What is to be corrected?").WithHint("Like: /log amend entry:%d result:doubtful", id)
	}
	if err := v.fill(&entry); err != nil {
		return reply.Reply{}, err
	}
	if err := v.needsNitrogen(entry); err != nil {
		return reply.Reply{}, err
	}
	plan, before, err := v.evaluate(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	if result, given := v.Values.Text("result"); given && result == "good" {
		entry.RainCounts = plan.RainedOn(entry)
	}
	r, err := v.meaning(plan, before, entry)
	if err != nil {
		return reply.Reply{}, err
	}
	if _, err := v.book.Save(ctx, v.stamp(), entry); err != nil {
		return reply.Reply{}, err
	}
	r.Blocks = append([]reply.Block{reply.Textf("Amended entry %d.", id)}, r.Blocks...)
	return r, nil
}
