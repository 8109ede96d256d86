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
		Path: "log list", Short: "what was done, newest first",
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

func (v visit) entryLines(entry planner.Entry, titles map[planner.WorkID]string) []string {
	var lines []string
	for _, pass := range entry.Passes {
		title, ok := titles[pass.Work]
		if !ok {
			continue
		}
		if pass.NitrogenGM2 > 0 {
			title += fmt.Sprintf(", %s g N/m²", briefing.Digits(pass.NitrogenGM2, planner.NitrogenGM2))
		}
		lines = append(lines, title)
	}
	if len(lines) == 0 {
		return nil
	}
	head := fmt.Sprintf("%d: %s %d", entry.ID, entry.Day.Short(), entry.Day.Year())
	if entry.By != "" {
		head += ", " + entry.By
	}
	lines = append([]string{head}, lines...)
	if entry.Note != "" {
		lines = append(lines, "\""+entry.Note+"\"")
	}
	return lines
}

func (d Desk) logUndo() Command {
	return Command{
		Path: "log undo", Short: "take an entry back: your newest, or the one with the number",
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
	entry, err := v.book.UndoEntry(ctx, v.stamp(), v.site.ID, planner.EntryID(id), v.Caller.Role >= Lead && id > 0)
	if err != nil {
		return reply.Reply{}, err
	}
	titles, err := v.wantedWorks()
	if err != nil {
		return reply.Reply{}, err
	}
	return reply.Of(reply.Text("Taken back.\n" + strings.Join(v.entryLines(entry, titles), "\n"))), nil
}
