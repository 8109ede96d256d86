package command

import (
	"context"
	"slices"
	"strings"

	"swardbook/bot/reply"
	"swardbook/planner"
)

// What was dropped is kept. Whoever adds something of its name is asked whether
// it shall be taken up again, as it would look empty otherwise.

// freshOption answers that question.
func freshOption() Option {
	return Option{Name: "fresh", Kind: Yes, Help: "yes: an empty one, though one of that name was dropped"}
}

// lastNamed is the one dropped last of those with the name.
func lastNamed[T any](dropped []T, nameOf func(T) string, name string) (found T, some bool) {
	for _, one := range slices.Backward(dropped) {
		if planner.NameKey(nameOf(one)) == planner.NameKey(name) {
			return one, true
		}
	}
	return found, false
}

func siteName(site planner.Site) string          { return site.Name }
func surfaceName(surface planner.Surface) string { return surface.Name }
func workName(work planner.Work) string          { return work.Name }

// askFresh asks whether what was dropped shall be taken up again, unless that
// is answered, or one of the name stands, which is said when it is kept.
func askFresh[T any](req Request, standing, dropped []T, nameOf func(T) string, what string, restore func(T) string) error {
	name, _ := req.Values.Text("name")
	if fresh, _ := req.Values.Yes("fresh"); fresh {
		return nil
	}
	one, some := lastNamed(dropped, nameOf, name)
	if _, stands := lastNamed(standing, nameOf, name); !some || stands {
		return nil
	}
	return planner.Problemf(planner.Missing, "A %s %s was dropped; its history is kept. Take it up again, or start an empty one?", what, nameOf(one)).
		WithHint("%s\n%s", restore(one), req.LineWith("fresh", "yes"))
}

// noneDropped is the problem of nothing dropped under the name.
func noneDropped[T any](what, name string, dropped []T, nameOf func(T) string) error {
	problem := planner.Problemf(planner.NotFound, "No %s %q was dropped.", what, name)
	if len(dropped) == 0 {
		return problem.WithHint("Nothing is to be taken up again.")
	}
	return problem.WithHint("Dropped were: %s.", strings.Join(namesOf(dropped, nameOf), ", "))
}

// withDropped adds what was dropped to a list, and the lines that take it up
// again.
func withDropped(list reply.Reply, restore []string) reply.Reply {
	if len(restore) > 0 {
		list.Add(reply.Textf("Dropped, with history kept. To take up again:\n%s", strings.Join(restore, "\n")))
	}
	return list
}

// siteLine is a command about the site; of a team's only site it need not say
// so.
func (v visit) siteLine(path string, pairs ...Pair) string {
	if len(v.setup.Sites) > 1 {
		pairs = append(pairs, Pair{"site", v.site.Name})
	}
	return Line(path, pairs...)
}

func restoreSite(site planner.Site) string {
	return Line("setup site restore", Pair{"name", site.Name})
}

func (v visit) restoreSurface(surface planner.Surface) string {
	return v.siteLine("setup surface restore", Pair{"name", surface.Name})
}

func (v visit) restoreWork(surface planner.Surface, work planner.Work) string {
	return v.siteLine("setup work restore", Pair{"surface", surface.Name}, Pair{"name", work.Name})
}

// droppedNames completes what was dropped.
func (d Desk) droppedNames(list func(planner.Setup) []string) func(context.Context, Request, string) []string {
	return func(ctx context.Context, _ Request, prefix string) []string {
		dropped, err := d.Book.Dropped(ctx)
		if err != nil {
			return nil
		}
		names := slices.DeleteFunc(list(dropped), func(name string) bool { return !hasPrefixFold(name, prefix) })
		return names[:min(len(names), 25)]
	}
}

func (d Desk) siteRestore() Command {
	site := nameOption("which dropped site", "Quillmere", d.droppedNames(func(s planner.Setup) []string { return namesOf(s.Sites, siteName) }))
	return Command{Path: "setup site restore", Short: "take a dropped site up again, with record and log", Who: Lead,
		Options: []Option{site}, Examples: []string{"/setup site restore name:Quillmere"}, Run: d.runSiteRestore}
}

func (d Desk) surfaceRestore() Command {
	surface := nameOption("which dropped surface", "greens", d.droppedNames(func(s planner.Setup) []string { return namesOf(s.Surfaces, surfaceName) }))
	return Command{Path: "setup surface restore", Short: "take a dropped surface up again, with its works", Who: Lead,
		Options: []Option{surface, d.siteOption()}, Examples: []string{"/setup surface restore name:greens"}, Run: d.runSurfaceRestore}
}

func (d Desk) workRestore() Command {
	work := nameOption("which dropped work", "regulator", d.droppedNames(func(s planner.Setup) []string { return namesOf(s.Works, workName) }))
	return Command{Path: "setup work restore", Short: "take a dropped work up again, with its log", Who: Lead,
		Options: []Option{required(d.surfaceOption()), work, d.siteOption()}, Examples: []string{"/setup work restore surface:greens name:regulator"}, Run: d.runWorkRestore}
}

// runSiteRestore takes a site up again. Its posts go on from their next time:
// the days in between were none of theirs.
func (d Desk) runSiteRestore(ctx context.Context, req Request) (reply.Reply, error) {
	dropped, err := d.Book.Dropped(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	name, _ := req.Values.Text("name")
	site, some := lastNamed(dropped.Sites, siteName, name)
	if !some {
		return reply.Reply{}, noneDropped("site", name, dropped.Sites, siteName)
	}
	zone, err := site.Location()
	if err != nil {
		return reply.Reply{}, err
	}
	v := visit{Request: req, site: site, zone: zone, today: req.TodayAt(zone)}
	site.Archived = false
	if _, err := d.Book.Save(ctx, v.stamp(), site); err != nil {
		return reply.Reply{}, err
	}
	setup, err := d.Book.Setup(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	for _, post := range setup.Posts {
		if post.Site != site.ID {
			continue
		}
		post.From = v.nextTime(post)
		if _, err := d.Book.Save(ctx, v.stamp(), post); err != nil {
			return reply.Reply{}, err
		}
	}
	return reply.Of(reply.Textf("Taken up again: %s, with all that was under it.", site.Name)), nil
}

func (d Desk) runSurfaceRestore(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	dropped, err := d.Book.Dropped(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	name, _ := v.Values.Text("name")
	surface, some := lastNamed(dropped.SurfacesOf(v.site.ID), surfaceName, name)
	if !some {
		return reply.Reply{}, noneDropped("surface", name, dropped.SurfacesOf(v.site.ID), surfaceName)
	}
	surface.Archived = false
	return d.kept(ctx, v.stamp(), surface, reply.Of(reply.Textf("Taken up again: %s, with its works.", surface.Name)))
}

func (d Desk) runWorkRestore(ctx context.Context, req Request) (reply.Reply, error) {
	v, surface, err := d.namedSurface(ctx, req, "surface")
	if err != nil {
		return reply.Reply{}, err
	}
	dropped, err := d.Book.Dropped(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	name, _ := v.Values.Text("name")
	work, some := lastNamed(dropped.WorksOn(surface.ID), workName, name)
	if !some {
		return reply.Reply{}, noneDropped("work", name, dropped.WorksOn(surface.ID), workName)
	}
	work.Archived = false
	return d.kept(ctx, v.stamp(), work, reply.Of(reply.Textf("Taken up again: %s %s, with its log.", surface.Name, work.Name)))
}

// siteOrDropped is the site that the request names, one that was dropped too,
// and its visit.
func (d Desk) siteOrDropped(ctx context.Context, req Request) (visit, error) {
	v, err := d.visit(ctx, req)
	name, given := req.Values.Text("site")
	if !given || planner.KindOf(err) != planner.NotFound {
		return v, err
	}
	dropped, wrong := d.Book.Dropped(ctx)
	if wrong != nil {
		return v, wrong
	}
	site, some := lastNamed(dropped.Sites, siteName, name)
	if !some {
		return v, err
	}
	zone, wrong := site.Location()
	if wrong != nil {
		return v, wrong
	}
	return visit{Request: req, book: d.Book, site: site, zone: zone, today: req.TodayAt(zone)}, nil
}
