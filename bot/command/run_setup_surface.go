package command

import (
	"context"
	"fmt"
	"strings"

	"swardbook/bot/briefing"
	"swardbook/bot/reply"
	"swardbook/calc"
	"swardbook/planner"
)

// The grass types that have a published growth curve; "own" takes optimum and
// width.
const ownGrass = "own"

func grassCurve(grass string) (calc.GrowthCurve, bool) {
	switch grass {
	case "cool":
		return calc.CoolSeason(), true
	case "warm":
		return calc.WarmSeason(), true
	case "cool-f":
		return calc.CoolSeasonF(), true
	case "warm-f":
		return calc.WarmSeasonF(), true
	}
	return calc.GrowthCurve{}, false
}

func grassOptions() []Option {
	return []Option{
		{Name: "grass", Kind: Choice, Choices: []string{"cool", "warm", "cool-f", "warm-f", ownGrass},
			Help: "cool- or warm-season; -f: the formula's °F pair; own: optimum and width"},
		{Name: "optimum", Kind: Temperature, Help: "with grass:own: temperature of best growth", Example: "22"},
		{Name: "width", Kind: Warming, Help: "with grass:own: width of the curve, degrees", Example: "6"},
		{Name: "held", Kind: Yes, Help: "warm-season: held above the optimum"},
		{Name: "area", Kind: Number, Range: Between(0, 1e7), Help: "area, m²", Example: "5200"},
		{Name: "parts", Kind: Text, Help: "parts done apart, with shares if they differ", Example: "front nine,back nine"},
		{Name: "budget", Kind: Number, Range: Between(0, 100), Help: "nitrogen set aside for a season, g N/m²", Example: "18"},
		{Name: "ceiling", Kind: Number, Range: Between(0, 20), Help: "most nitrogen used in a month, g N/m²", Example: "3"},
	}
}

func (d Desk) setupSurface() []Command {
	which := nameOption("which surface", "greens", d.surfaceOption().Complete)
	add := append([]Option{nameOption("what the surface is called", "greens", nil)}, grassOptions()...)
	add[1].Required = true
	add = append(add, freshOption())
	change := append([]Option{which, newNameOption()}, grassOptions()...)
	change = append(change, Option{Name: "from", Kind: Day, Past: true, Help: "first day of another grass or ceiling; today when not given", Example: "2013-10-01"})
	return []Command{
		{Path: "setup surface add", Short: "add a surface: a kind of turf managed as one", Who: Lead, Options: append(add, d.siteOption()),
			Examples: []string{"/setup surface add name:greens grass:cool", "/setup surface add name:fairways grass:warm ceiling:4"}, Run: d.runSurfaceAdd},
		{Path: "setup surface change", Short: "change a surface; each day keeps the grass it had", Who: Lead, Options: append(change, d.siteOption()),
			Examples: []string{"/setup surface change name:fairways grass:cool from:2013-10-01"}, Run: d.runSurfaceChange},
		{Path: "setup surface drop", Short: "drop a surface and its works; the log is kept", Who: Lead, Asks: true,
			Options: []Option{which, d.siteOption()}, Examples: []string{"/setup surface drop name:greens"}, Run: d.runSurfaceDrop},
		d.surfaceRestore(),
		{Path: "setup surface list", Short: "the surfaces and their grass", Who: Lead, Options: []Option{d.siteOption()},
			Examples: []string{"/setup surface list"}, Run: d.runSurfaceList},
	}
}

// turf reads the grass options over what grew before.
func (v visit) turf(turf planner.Turf) (planner.Turf, error) {
	grass, given := v.Values.Text("grass")
	if given {
		curve, published := grassCurve(grass)
		if !published && (!v.Values.Has("optimum") || !v.Values.Has("width")) {
			return turf, v.Missing("optimum", "width")
		}
		turf.Grass, turf.Curve = grass, curve
	}
	if optimumC, given := v.temperatureC("optimum"); given {
		turf.Curve.OptimumC = optimumC
	}
	if widthC, given := v.differenceC("width"); given {
		turf.Curve.WidthC = widthC
	}
	if turf.Grass != ownGrass && (v.Values.Has("optimum") || v.Values.Has("width")) {
		return turf, v.Invalid("grass", "optimum and width go with grass:own")
	}
	if held, given := v.Values.Yes("held"); given {
		if held && (turf.Grass == "cool" || turf.Grass == "cool-f") {
			return turf, v.Invalid("held", "growth is held above the optimum for warm-season grass only")
		}
		turf.Curve.HeldAbove = held
	}
	if budget, given := v.Values.Number("budget"); given {
		turf.BudgetGM2 = budget
	}
	if ceiling, given := v.Values.Number("ceiling"); given {
		turf.CeilingGM2 = ceiling
	}
	return turf, nil
}

// areaAndParts reads a surface's area and parts: "front nine,back nine" are
// equal parts, "front nine 0.6,back nine 0.4" are not.
func (v visit) areaAndParts(surface *planner.Surface) error {
	if area, given := v.Values.Number("area"); given {
		surface.AreaM2 = area
	}
	text, given := v.Values.Text("parts")
	if !given {
		return nil
	}
	if planner.NameKey(text) == "none" {
		*surface = surface.WithParts(nil)
		return nil
	}
	var parts []planner.Part
	names := splitNames(text)
	shared := 0
	for _, name := range names {
		part := planner.Part{Name: name, Share: 1 / float64(len(names))}
		if at := strings.LastIndexByte(name, ' '); at > 0 {
			if share, _, ok := readNumber(name[at+1:]); ok && share > 0 && share < 1 {
				part = planner.Part{Name: name[:at], Share: share}
				shared++
			}
		}
		parts = append(parts, part)
	}
	if shared > 0 && shared < len(names) {
		return v.Invalid("parts", "some parts have a share and some have none")
	}
	*surface = surface.WithParts(parts)
	return nil
}

func turfText(turf planner.Turf, units planner.Units) string {
	text := fmt.Sprintf("%s grass, optimum %s %s, width %s", turf.Grass, briefing.Plain(units.Temperature(turf.Curve.OptimumC)),
		units.Degree(), briefing.Plain(units.Difference(turf.Curve.WidthC)))
	if turf.Curve.HeldAbove {
		text += ", held above"
	}
	if turf.BudgetGM2 > 0 {
		text += fmt.Sprintf(", %s g N/m² a season", briefing.Plain(turf.BudgetGM2))
	}
	if turf.CeilingGM2 > 0 {
		text += fmt.Sprintf(", at most %s g N/m² a month", briefing.Plain(turf.CeilingGM2))
	}
	return text
}

// areaText is the surface's area and its parts.
func areaText(surface planner.Surface) string {
	text := ""
	if surface.AreaM2 > 0 {
		text += fmt.Sprintf(", %s m²", briefing.Plain(surface.AreaM2))
	}
	for _, part := range surface.ActiveParts() {
		text += fmt.Sprintf(", %s (%s %%)", part.Name, briefing.Plain(100*part.Share))
	}
	return text
}

func (d Desk) runSurfaceAdd(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	name, _ := v.Values.Text("name")
	dropped, err := d.Book.Dropped(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	if err := askFresh(req, v.setup.SurfacesOf(v.site.ID), dropped.SurfacesOf(v.site.ID), surfaceName, "surface", v.restoreSurface); err != nil {
		return reply.Reply{}, err
	}
	turf, err := v.turf(planner.Turf{})
	if err != nil {
		return reply.Reply{}, err
	}
	surface := planner.Surface{Site: v.site.ID, Name: name, Turf: planner.Always(turf)}
	if err := v.areaAndParts(&surface); err != nil {
		return reply.Reply{}, err
	}
	base, target := "0", "200"
	if v.site.Units == planner.Fahrenheit { // the same count
		base, target = "32f", "360f"
	}
	return d.kept(ctx, v.stamp(), surface, reply.Of(reply.Textf("Added %s: %s.", name, turfText(turf, v.site.Units)),
		reply.Textf("Next:\n%s", Line("setup work add", Pair{"surface", name}, Pair{"name", "regulator"},
			Pair{"counts", "degree-days"}, Pair{"base", base}, Pair{"target", target}))))
}

// namedSurface is a visit and the surface that the option names.
func (d Desk) namedSurface(ctx context.Context, req Request, option string) (visit, planner.Surface, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return visit{}, planner.Surface{}, err
	}
	name, _ := v.Values.Text(option)
	surface, err := v.setup.Surface(v.site, name)
	return v, surface, err
}

func (d Desk) runSurfaceChange(ctx context.Context, req Request) (reply.Reply, error) {
	v, surface, err := d.namedSurface(ctx, req, "name")
	if err != nil {
		return reply.Reply{}, err
	}
	from, err := v.day("from", v.today)
	if err != nil {
		return reply.Reply{}, err
	}
	surface.Name = renamed(v.Values, surface.Name)
	before := surface.Turf.On(from)
	turf, err := v.turf(before)
	if err != nil {
		return reply.Reply{}, err
	}
	if err := v.areaAndParts(&surface); err != nil {
		return reply.Reply{}, err
	}
	said := reply.Of(reply.Textf("Changed %s.", surface.Name))
	if turf != before {
		surface.Turf = surface.Turf.With(from, turf)
		said.Add(reply.Textf("From %s on: %s.", from, turfText(turf, v.site.Units)))
	}
	return d.kept(ctx, v.stamp(), surface, said)
}

func (d Desk) runSurfaceDrop(ctx context.Context, req Request) (reply.Reply, error) {
	v, surface, err := d.namedSurface(ctx, req, "name")
	if err != nil {
		return reply.Reply{}, err
	}
	surface.Archived = true
	return d.dropping(ctx, req, v.stamp(), surface, surface.Name, " with its works")
}

func (d Desk) runSurfaceList(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	var fields reply.Fields
	for _, surface := range v.setup.SurfacesOf(v.site.ID) {
		fields = append(fields, reply.Field{Name: surface.Name, Value: turfText(surface.Turf.On(v.today), v.site.Units) + areaText(surface)})
	}
	dropped, err := d.Book.Dropped(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	list := listed(fields, "There is no surface yet. Like: /setup surface add name:greens grass:cool")
	return withDropped(list, namesOf(dropped.SurfacesOf(v.site.ID), v.restoreSurface)), nil
}
