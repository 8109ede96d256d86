package command

import (
	"context"
	"fmt"

	"swardbook/bot/briefing"
	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) setupTotal() []Command {
	which := nameOption("which season total", "gdd10", d.names(totalNames))
	counting := countingOptions(planner.ByDegreeDays, planner.ByGrowthDays)
	start := Option{Name: "from", Kind: MonthDay, Help: "start of the season; 1 Jan, or 1 Jul in the south", Example: "03-01"}
	settings := append(counting,
		Option{Name: "grass", Kind: Choice, Choices: []string{"cool", "warm", "cool-f", "warm-f"}, Help: "growth days: of which grass"},
		start)
	add := append([]Option{nameOption("what the total is called", "gdd10", nil)}, settings...)
	// What a total counts stays: another measure or method is another total.
	change := append([]Option{which, newNameOption(),
		{Name: "mark", Kind: Name, Help: "a total that means something, by name", Example: "first spray"},
		{Name: "at", Kind: Target, Range: Between(0, planner.MaxTarget), Help: "with mark: the total; 0 takes the mark away", Example: "120"},
	}, counting[1], counting[2], start)
	return []Command{
		{Path: "setup total add", Short: "add a season total: degree days or growth days since a date", Who: Lead, Options: append(add, d.siteOption()),
			Examples: []string{"/setup total add name:gdd10 base:10 from:03-01", "/setup total add name:growth counts:growth-days grass:cool"}, Run: d.runTotalAdd},
		{Path: "setup total change", Short: "change a season total from today on; older figures stay", Who: Lead, Options: append(change, d.siteOption()),
			Examples: []string{"/setup total change name:gdd10 from:02-15", `/setup total change name:gdd10 mark:"first spray" at:120`}, Run: d.runTotalChange},
		{Path: "setup total drop", Short: "drop a season total", Who: Lead, Asks: true, Options: []Option{which, d.siteOption()},
			Examples: []string{"/setup total drop name:gdd10"}, Run: d.runTotalDrop},
		{Path: "setup total list", Short: "the season totals", Who: Lead, Options: []Option{d.siteOption()}, Examples: []string{"/setup total list"}, Run: d.runTotalList},
	}
}

// totalSettings reads a total's options over its settings before.
func (v visit) totalSettings(settings planner.TotalSettings) (planner.TotalSettings, error) {
	settings.Counting = v.counting(settings.Counting)
	if err := v.checkCounting(settings.Counting); err != nil {
		return settings, err
	}
	if start, given := v.Values.MonthDay("from"); given {
		settings.Start = start
	}
	grass, given := v.Values.Text("grass")
	if settings.Counts != planner.ByGrowthDays {
		if given {
			return settings, v.Invalid("counts", "grass: goes with counts:growth-days")
		}
		return settings, nil
	}
	if given {
		settings.Curve, _ = grassCurve(grass)
	} else if settings.Curve.WidthC == 0 {
		return settings, v.Missing("grass")
	}
	return settings, nil
}

func (d Desk) runTotalAdd(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	settings, err := v.totalSettings(planner.TotalSettings{
		Counting: planner.Counting{Counts: planner.ByDegreeDays}, Start: v.site.SeasonStart()})
	if err != nil {
		return reply.Reply{}, err
	}
	name, _ := v.Values.Text("name")
	total := planner.Total{Site: v.site.ID, Name: name, Settings: planner.Always(settings)}
	return d.kept(ctx, v.stamp(), total, reply.Of(reply.Textf("Added %s: %s.", name, totalText(settings, v.site.Units))))
}

// namedTotal is a visit and the season total that name: names.
func (d Desk) namedTotal(ctx context.Context, req Request) (visit, planner.Total, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return visit{}, planner.Total{}, err
	}
	name, _ := v.Values.Text("name")
	total, err := v.setup.Total(v.site, name)
	return v, total, err
}

func (d Desk) runTotalChange(ctx context.Context, req Request) (reply.Reply, error) {
	v, total, err := d.namedTotal(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	before := total.Settings.On(v.today)
	settings, err := v.totalSettings(before)
	if err != nil {
		return reply.Reply{}, err
	}
	total.Name = renamed(v.Values, total.Name)
	if settings != before {
		total.Settings = total.Settings.With(v.today, settings)
	}
	if err := v.mark(&total, settings); err != nil {
		return reply.Reply{}, err
	}
	return d.kept(ctx, v.stamp(), total, reply.Of(reply.Textf("Changed %s: %s%s.", total.Name, totalText(settings, v.site.Units), marksText(total, settings, v.site.Units))))
}

// mark sets or takes away one mark of a season total.
func (v visit) mark(total *planner.Total, settings planner.TotalSettings) error {
	name, hasMark := v.Values.Text("mark")
	typed, hasAt := v.Values.Degrees("at")
	switch {
	case !hasMark && !hasAt:
		return nil
	case !hasMark:
		return v.Missing("mark")
	case !hasAt:
		return v.Missing("at")
	}
	at := 0.0
	if typed.Value > 0 {
		var err error
		if at, err = v.target(settings.Counting, typed); err != nil {
			return err
		}
	}
	var marks []planner.Mark
	for _, mark := range total.Marks {
		if planner.NameKey(mark.Name) != planner.NameKey(name) {
			marks = append(marks, mark)
		}
	}
	if at > 0 {
		marks = append(marks, planner.Mark{Name: name, At: at})
	}
	total.Marks = marks
	return nil
}

func marksText(total planner.Total, settings planner.TotalSettings, units planner.Units) string {
	text := ""
	for _, mark := range total.Marks {
		at, _ := units.Show(mark.At, unitCounted(settings.Counting))
		text += fmt.Sprintf("; %s at %s", mark.Name, briefing.Plain(at))
	}
	return text
}

func (d Desk) runTotalDrop(ctx context.Context, req Request) (reply.Reply, error) {
	v, total, err := d.namedTotal(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	total.Archived = true
	return d.dropping(ctx, req, v.stamp(), total, "season total "+total.Name, "")
}

func (d Desk) runTotalList(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	var fields reply.Fields
	for _, total := range v.setup.TotalsOf(v.site.ID) {
		fields = append(fields, reply.Field{Name: total.Name, Value: totalText(total.Settings.On(v.today), v.site.Units) + marksText(total, total.Settings.On(v.today), v.site.Units)})
	}
	return listed(fields, "There is no season total yet. Like: /setup total add name:gdd10 base:10 from:03-01"), nil
}

func totalText(settings planner.TotalSettings, units planner.Units) string {
	_, unit := units.Show(0, unitCounted(settings.Counting))
	text := unit + countingText(settings.Counting, units)
	if settings.Counts == planner.ByGrowthDays {
		text += fmt.Sprintf(" (optimum %s %s)", briefing.Plain(units.Temperature(settings.Curve.OptimumC)), units.Degree())
	}
	return text + " since " + settings.Start.String()
}
