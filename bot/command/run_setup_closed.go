package command

import (
	"context"
	"fmt"

	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) setupClosed() []Command {
	which := nameOption("which closed days", "tournament", d.names(func(v visit) []string {
		return namesOf(v.setup.ClosedOf(v.site.ID), func(c planner.Closed) string { return c.Name })
	}))
	days := []Option{
		{Name: "to", Kind: Day, Help: "last closed day; the first when not given", Example: "2024-07-07"},
		{Name: "works", Kind: Names, Help: "which works are closed, by name; all when not given", Example: "feed", Complete: d.names(workNames)},
		{Name: "yearly", Kind: Yes, Help: "every year from that month and day to the other"},
		d.siteOption(),
	}
	first := Option{Name: "from", Kind: Day, Help: "first closed day", Example: "2024-07-06"}
	return []Command{
		{Path: "setup closed add", Short: "close days: an ordinance, a tournament, a match, no staff", Who: Lead,
			Options: append([]Option{nameOption("why they are closed", "tournament", nil), required(first)}, days...),
			Examples: []string{"/setup closed add name:tournament from:2024-07-06 to:2024-07-07",
				"/setup closed add name:\"phosphorus ordinance\" from:2024-06-01 to:2024-09-30 works:feed yearly:yes"}, Run: d.runClosedAdd},
		{Path: "setup closed change", Short: "change closed days", Who: Lead, Options: append([]Option{which, newNameOption(), first}, days...),
			Examples: []string{"/setup closed change name:tournament to:2024-07-08"}, Run: d.runClosedChange},
		{Path: "setup closed drop", Short: "open closed days again", Who: Lead, Asks: true, Options: []Option{which, d.siteOption()},
			Examples: []string{"/setup closed drop name:tournament"}, Run: d.runClosedDrop},
		{Path: "setup closed list", Short: "the closed days", Who: Lead, Options: []Option{d.siteOption()},
			Examples: []string{"/setup closed list"}, Run: d.runClosedList},
	}
}

// closedFrom reads the options of closed days over what they were.
func (v visit) closedFrom(closed planner.Closed) (planner.Closed, error) {
	from, err := v.day("from", closed.From)
	if err != nil {
		return closed, err
	}
	if closed.To == 0 || closed.To < from {
		closed.To = from
	}
	if closed.To, err = v.day("to", closed.To); err != nil {
		return closed, err
	}
	closed.From = from
	if yearly, given := v.Values.Yes("yearly"); given {
		closed.Yearly = yearly
	}
	if names, given := v.Values.Names("works"); given {
		closed.Works = nil
		for _, name := range names {
			found := false
			for _, work := range v.setup.WorksOf(v.site.ID) {
				if planner.NameKey(work.Name) == planner.NameKey(name) {
					closed.Works, found = append(closed.Works, work.ID), true
				}
			}
			if !found {
				return closed, v.noSuchWork(name)
			}
		}
	}
	return closed, nil
}

func (v visit) closedText(closed planner.Closed) string {
	text := closed.From.Short() + " " + fmt.Sprint(closed.From.Year())
	if closed.To != closed.From {
		text += " to " + closed.To.Short() + " " + fmt.Sprint(closed.To.Year())
	}
	if closed.Yearly {
		text = "every year " + closed.From.String()[5:] + " to " + closed.To.String()[5:]
	}
	if len(closed.Works) == 0 {
		return text + ", all works"
	}
	for _, id := range closed.Works {
		if work, surface, ok := v.workOf(id); ok {
			text += ", " + surface.Name + " " + work.Name
		}
	}
	return text
}

func (d Desk) runClosedAdd(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	closed := planner.Closed{Site: v.site.ID}
	closed.Name, _ = v.Values.Text("name")
	if closed, err = v.closedFrom(closed); err != nil {
		return reply.Reply{}, err
	}
	return d.kept(ctx, v.stamp(), closed, reply.Of(reply.Textf("Closed for %s: %s.", closed.Name, v.closedText(closed))))
}

// namedClosed is a visit and the closed days that name: names.
func (d Desk) namedClosed(ctx context.Context, req Request) (visit, planner.Closed, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return visit{}, planner.Closed{}, err
	}
	name, _ := v.Values.Text("name")
	closed, err := v.setup.ClosedDays(v.site, name)
	return v, closed, err
}

func (d Desk) runClosedChange(ctx context.Context, req Request) (reply.Reply, error) {
	v, closed, err := d.namedClosed(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	closed.Name = renamed(v.Values, closed.Name)
	if closed, err = v.closedFrom(closed); err != nil {
		return reply.Reply{}, err
	}
	return d.kept(ctx, v.stamp(), closed, reply.Of(reply.Textf("Changed. Closed for %s: %s.", closed.Name, v.closedText(closed))))
}

func (d Desk) runClosedDrop(ctx context.Context, req Request) (reply.Reply, error) {
	v, closed, err := d.namedClosed(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	closed.Archived = true
	return d.dropping(ctx, req, v.stamp(), closed, closed.Name, "")
}

func (d Desk) runClosedList(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	var fields reply.Fields
	for _, closed := range v.setup.ClosedOf(v.site.ID) {
		fields = append(fields, reply.Field{Name: closed.Name, Value: v.closedText(closed)})
	}
	return listed(fields, "No day is closed. Like: /setup closed add name:tournament from:2024-07-06 to:2024-07-07"), nil
}
