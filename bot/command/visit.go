package command

import (
	"context"
	"time"

	"swardbook/planner"
)

// Desk answers commands from the team's book.
type Desk struct {
	Book *planner.Book
	// Data exports and erases; nil where that is not offered.
	Data planner.DataKeeper
	// Posts tells what became of posts; nil where nothing is posted.
	Posts planner.PostLedger
	// Sheets keeps the sheets that are issued; nil where none are.
	Sheets planner.SheetKeeper
	// Version is what /help says the program is.
	Version string
}

// visit is one command at one site: what most handlers need first.
type visit struct {
	Request
	book  *planner.Book
	setup planner.Setup
	site  planner.Site
	zone  *time.Location
	today planner.Day // the site's day, by the clock on its wall
}

// siteOption is the option that names the site; with one site it is not needed.
func (d Desk) siteOption() Option {
	return Option{Name: "site", Kind: Name, Help: "which site; not needed with one", Example: "Quillmere",
		Complete: d.names(func(v visit) []string { return namesOf(v.setup.Sites, func(s planner.Site) string { return s.Name }) })}
}

// visit loads the set-up and finds the site the request names.
func (d Desk) visit(ctx context.Context, req Request) (visit, error) {
	setup, err := d.Book.Setup(ctx)
	if err != nil {
		return visit{}, err
	}
	name, _ := req.Values.Text("site")
	site, err := setup.Site(name)
	if err != nil {
		return visit{}, err
	}
	zone, err := site.Location()
	if err != nil {
		return visit{}, err
	}
	return visit{req, d.Book, setup, site, zone, req.TodayAt(zone)}, nil
}

// plan loads the site's plan for the morning asOf.
func (v visit) plan(ctx context.Context, asOf planner.Day) (planner.Plan, error) {
	return v.book.Plan(ctx, v.site, asOf, v.today)
}

// evaluate loads and evaluates this morning's plan.
func (v visit) evaluate(ctx context.Context) (planner.Plan, planner.Evaluation, error) {
	plan, err := v.plan(ctx, v.today)
	if err != nil {
		return planner.Plan{}, planner.Evaluation{}, err
	}
	evaluation, err := planner.Evaluate(plan)
	return plan, evaluation, err
}

// stamp says who changes something, when and by which line.
func (r Request) stamp(zone *time.Location) planner.Stamp {
	return planner.Stamp{At: r.NowAt(zone), By: r.Caller.Name, Command: r.Line}
}

// person is who gave the command, as one who logs.
func (c Caller) person() planner.Person { return planner.Person{ID: c.ID, Name: c.Name} }

func (v visit) stamp() planner.Stamp { return v.Request.stamp(v.zone) }

// day is the value of a Day option, or the fallback.
func (v visit) day(option string, fallback planner.Day) (planner.Day, error) {
	day, given, err := v.Values.Day(option, v.today)
	if err != nil || given {
		return day, err
	}
	return fallback, nil
}

// dayOver is the value of a Day option about what is over, if it was given; a
// day ahead of today is refused.
func (v visit) dayOver(option string) (day planner.Day, given bool, err error) {
	day, given, err = v.Values.Day(option, v.today)
	if err == nil && given && day > v.today {
		err = planner.Problemf(planner.Invalid, "%s: %s is ahead of today", option, shortOn(day, v.today)).
			WithHint("Give it when it is done: leave %s: out now, and amend the entry then.", option)
	}
	return day, given, err
}

// clockOver refuses the time behind the value of a Day option when it is still
// ahead today.
func (v visit) clockOver(option string, day planner.Day) error {
	clock, given := v.Values.Clock(option)
	now := v.NowAt(v.zone)
	if hour, minute := clockParts(clock); !given || day != v.today || 60*hour+minute <= 60*now.Hour()+now.Minute() {
		return nil
	}
	return planner.Problemf(planner.Invalid, "%s is still ahead", clock).
		WithHint("It is %s at %s. Log it when it is done, or leave the time out.", now.Format("15:04"), v.site.Name)
}

// zoneOf is the site's zone; nil, which is UTC, where it has none that is known.
func zoneOf(site planner.Site) *time.Location {
	zone, err := site.Location()
	if err != nil {
		return nil
	}
	return zone
}

// unitsOf is the unit that was typed with a number of degrees, else the site's.
func (v visit) unitsOf(typed Degrees) planner.Units {
	if typed.Unit != "" {
		return typed.Unit
	}
	return v.site.Units
}

// temperatureC is the value of a Temperature option in °C.
func (v visit) temperatureC(option string) (float64, bool) {
	typed, given := v.Values.Degrees(option)
	return v.unitsOf(typed).TemperatureC(typed.Value), given
}

// differenceC is the value of a Warming option in °C.
func (v visit) differenceC(option string) (float64, bool) {
	typed, given := v.Values.Degrees(option)
	return v.unitsOf(typed).DifferenceC(typed.Value), given
}

// names makes a completion from what a visit knows; it offers nothing where
// the visit fails.
func (d Desk) names(list func(visit) []string) func(context.Context, Request, string) []string {
	return func(ctx context.Context, req Request, prefix string) []string {
		v, err := d.visit(ctx, req)
		if err != nil {
			return nil
		}
		var fitting []string
		for _, name := range list(v) {
			if hasPrefixFold(name, prefix) && len(fitting) < 25 {
				fitting = append(fitting, name)
			}
		}
		return fitting
	}
}

func hasPrefixFold(name, prefix string) bool {
	key, begin := planner.NameKey(name), planner.NameKey(prefix)
	return len(begin) <= len(key) && key[:len(begin)] == begin
}

func namesOf[T any](list []T, name func(T) string) []string {
	names := make([]string, len(list))
	for i, one := range list {
		names[i] = name(one)
	}
	return names
}

func surfaceNames(v visit) []string {
	return namesOf(v.setup.SurfacesOf(v.site.ID), func(s planner.Surface) string { return s.Name })
}

func workNames(v visit) []string {
	seen := map[string]bool{}
	var names []string
	for _, work := range v.setup.WorksOf(v.site.ID) {
		if !seen[planner.NameKey(work.Name)] {
			seen[planner.NameKey(work.Name)] = true
			names = append(names, work.Name)
		}
	}
	return names
}
