package command

import (
	"context"
	"fmt"

	"swardbook/bot/briefing"
	"swardbook/bot/reply"
	"swardbook/calc"
	"swardbook/planner"
)

// countingOptions say what is counted and how.
func countingOptions(counts ...planner.Counts) []Option {
	return []Option{
		{Name: "counts", Kind: Choice, Choices: words(counts), Help: "what is counted"},
		{Name: "base", Kind: Temperature, Help: "degree days: base, 0 °C when not given", Example: "0"},
		{Name: "upper", Kind: Temperature, Help: "degree days: upper limit", Example: "30"},
		{Name: "cutoff", Kind: Choice, Choices: words(calc.Cutoffs()), Help: "degree days: what the limit does"},
		{Name: "method", Kind: Choice, Choices: words(calc.Methods()), Help: "degree days: method; /help formulas"},
	}
}

// limitOptions are what the label, the season and the target's paper say.
func limitOptions() []Option {
	return []Option{
		{Name: "gap", Kind: Whole, Range: Between(0, 366), Help: "least days between two passes, as the label says", Example: "14"},
		{Name: "most", Kind: Whole, Range: Between(0, 366), Help: "most passes a season", Example: "6"},
		{Name: "most-total", Kind: Number, Range: Between(0, planner.MaxTarget), Help: "most given a season, in g N/m², g/m² or mL/m²", Example: "18"},
		{Name: "on-from", Kind: MonthDay, Help: "first day of its season; on all year when not given", Example: "03-15"},
		{Name: "on-to", Kind: MonthDay, Help: "last day of its season", Example: "10-31"},
		{Name: "resting", Kind: Yes, Help: "it rests until you say no"},
		{Name: "starts-empty", Kind: Yes, Help: "a nitrogen balance starts each season with nothing left"},
		{Name: "watered-in", Kind: Yes, Help: "the count starts after it was watered in"},
		{Name: "rain-free", Kind: Number, Range: Between(0, 240), Help: "hours without rain that the label wants after it", Example: "4"},
		{Name: "source", Kind: Text, Help: "where the target comes from", Example: "label"},
		{Name: "ingredient", Kind: Text, Help: "the active ingredient the target was found with", Example: "the label's"},
		{Name: "of-grass", Kind: Text, Help: "the grass the target was found on", Example: "bentgrass"},
		{Name: "height", Kind: Number, Range: Between(0, 200), Help: "the height of cut the target was found at, mm", Example: "3.2"},
	}
}

// limits reads the limit options over the settings before.
func (v visit) limits(settings *planner.WorkSettings) error {
	whole := func(option string, into *int) {
		if n, given := v.Values.Whole(option); given {
			*into = n
		}
	}
	amount := func(option string, into *float64) {
		if n, given := v.Values.Number(option); given {
			*into = n
		}
	}
	yes := func(option string, into *bool) {
		if said, given := v.Values.Yes(option); given {
			*into = said
		}
	}
	whole("gap", &settings.Limits.LeastDays)
	whole("most", &settings.Limits.MostTimes)
	amount("most-total", &settings.Limits.MostTotal)
	yes("resting", &settings.Season.Resting)
	yes("starts-empty", &settings.Season.StartsEmpty)
	yes("watered-in", &settings.WateredIn)
	amount("rain-free", &settings.RainFreeHours)
	settings.Origin.Source = textOr(v.Values, "source", settings.Origin.Source)
	settings.Origin.Ingredient = textOr(v.Values, "ingredient", settings.Origin.Ingredient)
	settings.Origin.Grass = textOr(v.Values, "of-grass", settings.Origin.Grass)
	amount("height", &settings.Origin.HeightMM)
	from, hasFrom := v.Values.MonthDay("on-from")
	to, hasTo := v.Values.MonthDay("on-to")
	if hasFrom {
		settings.Season.From = from
	}
	if hasTo {
		settings.Season.To = to
	}
	if (settings.Season.From == planner.MonthDay{}) != (settings.Season.To == planner.MonthDay{}) {
		return v.Missing("on-from", "on-to")
	}
	return nil
}

func words[T ~string](list []T) []string {
	return namesOf(list, func(one T) string { return string(one) })
}

// counting reads the counting options over what was counted before.
func (v visit) counting(c planner.Counting) planner.Counting {
	c.Counts = planner.Counts(textOr(v.Values, "counts", string(c.Counts)))
	if c.Counts != planner.ByDegreeDays {
		return planner.Counting{Counts: c.Counts}
	}
	if c.Method == "" {
		c.Method, c.Thresholds.Cutoff = calc.MethodMean, calc.CutoffNone
	}
	c.Method = calc.Method(textOr(v.Values, "method", string(c.Method)))
	if baseC, given := v.temperatureC("base"); given {
		c.Thresholds.LowerC = baseC
	}
	if upperC, given := v.temperatureC("upper"); given {
		c.Thresholds.UpperC, c.Thresholds.Cutoff = upperC, calc.CutoffHorizontal
	}
	c.Thresholds.Cutoff = calc.Cutoff(textOr(v.Values, "cutoff", string(c.Thresholds.Cutoff)))
	if c.Thresholds.Cutoff == calc.CutoffNone {
		c.Thresholds.UpperC = 0
	}
	return c
}

// leastBaseF is the lowest base in °F that is taken at its word on a site that
// shows °F: a lower one is most often copied from a paper in °C (common
// practice: bases run from 0 to 10 °C, 32 to 50 °F).
const leastBaseF = 25

// checkCounting refuses options that do not go with what is counted, rather
// than dropping them silently.
func (v visit) checkCounting(c planner.Counting) error {
	for _, option := range []string{"base", "upper", "cutoff", "method"} {
		if c.Counts != planner.ByDegreeDays && v.Values.Has(option) {
			return v.Invalid("counts", "%s: goes with counts:degree-days, not %s", option, c.Counts)
		}
	}
	if c.Counts == planner.ByDegreeDays && c.Thresholds.Cutoff != calc.CutoffNone && v.Values.Has("upper") && c.Thresholds.UpperC <= c.Thresholds.LowerC {
		return v.Invalid("upper", "it is not above the base, %s %s", briefing.Plain(v.site.Units.Temperature(c.Thresholds.LowerC)), v.site.Units.Degree())
	}
	if typed, given := v.Values.Degrees("base"); given && typed.Unit == "" && v.site.Units == planner.Fahrenheit && typed.Value < leastBaseF {
		return planner.Problemf(planner.Missing, "Base %[1]g °F (= %.1[2]f °C), or %[1]g °C (= %.0[3]f °F)?", typed.Value,
			planner.Fahrenheit.TemperatureC(typed.Value), planner.Fahrenheit.Temperature(typed.Value)).
			WithHint("Write base:%gf or base:%gc.", typed.Value, typed.Value)
	}
	if v.Values.Has("cutoff") && c.Thresholds.Cutoff != calc.CutoffNone && c.Thresholds.UpperC == 0 && !v.Values.Has("upper") {
		return v.Missing("upper")
	}
	return nil
}

func (d Desk) setupWork() []Command {
	which := nameOption("which work", "regulator", d.workOption().Complete)
	counting := countingOptions(planner.ByDays, planner.ByDegreeDays, planner.ByGrowthDays, planner.ByNitrogen)
	settings := []Option{
		{Name: "target", Kind: Target, Range: Between(0, planner.MaxTarget), Help: "total at which it falls due; nitrogen: the reserve left", Example: "200"},
		{Name: "mean", Kind: Choice, Choices: []string{string(planner.Hourly), string(planner.Midrange)}, Help: "24-hour or high/low mean"},
		{Name: "latest", Kind: Target, Range: Between(0, planner.MaxTarget), Help: "total past which it is overdue", Example: "230"},
	}
	add := []Option{required(d.surfaceOption()), nameOption("what the work is called", "regulator", nil), required(counting[0])}
	add = append(append(append(add, settings...), counting[1:]...), freshOption())
	change := []Option{required(d.surfaceOption()), which, newNameOption()}
	// What a work counts stays: another measure or method is another work.
	change = append(append(append(change, settings...), counting[1:3]...), limitOptions()...)
	return []Command{
		{Path: "setup work add", Short: "add a work: a feed, a regulator spray, a cut", Who: Lead, Options: append(add, d.siteOption()),
			Long: briefing.TargetCaution + " Swardbook plans dates and prescribes no product and no rate.",
			Examples: []string{"/setup work add surface:greens name:regulator counts:degree-days base:0 target:200",
				"/setup work add surface:greens name:feed counts:nitrogen", "/setup work add surface:pitch name:cut counts:days target:3"}, Run: d.runWorkAdd},
		{Path: "setup work change", Long: "Limits are what the label and your rules say: they move or flag dates.",
			Short: "change a work, its limits and season, from today on", Who: Lead, Options: append(change, d.siteOption()),
			Examples: []string{"/setup work change surface:greens name:regulator target:220"}, Run: d.runWorkChange},
		{Path: "setup work drop", Short: "drop a work; the log is kept", Who: Lead, Asks: true, Options: []Option{required(d.surfaceOption()), which, d.siteOption()},
			Examples: []string{"/setup work drop surface:greens name:regulator"}, Run: d.runWorkDrop},
		d.workRestore(),
		{Path: "setup work list", Short: "the works, what they count and when they fall due", Who: Lead, Options: []Option{d.siteOption()},
			Examples: []string{"/setup work list"}, Run: d.runWorkList},
	}
}

// workSettings reads a work's options over its settings before.
func (v visit) workSettings(settings planner.WorkSettings, surface planner.Surface) (planner.WorkSettings, error) {
	before := settings.Counting
	settings.Counting = v.counting(settings.Counting)
	if err := v.checkCounting(settings.Counting); err != nil {
		return settings, err
	}
	for _, read := range []func(*planner.WorkSettings) error{
		func(s *planner.WorkSettings) error { return v.targets(s, before) }, v.limits, v.ownMean,
	} {
		if err := read(&settings); err != nil {
			return settings, err
		}
	}
	if settings.Counts == planner.ByNitrogen && surface.Turf.On(v.today).CeilingGM2 == 0 {
		return settings, planner.Problemf(planner.Missing, "How much nitrogen can %s use in a month?", surface.Name).
			WithHint("Usual figures are 3 (cool-season) and 4 (warm-season) g N/m² a month: common practice.\n%s",
				Line("setup surface change", Pair{"name", surface.Name}, Pair{"ceiling", "3"}, Pair{"from", "2000-01-01"}))
	}
	return settings, nil
}

// targets reads the target and the latest. A work that counts something else
// than before must be given a target, but for a nitrogen reserve, which may be 0;
// a new target takes the old latest with it.
func (v visit) targets(settings *planner.WorkSettings, before planner.Counting) error {
	target, given := v.Values.Degrees("target")
	if !given && before.Counts != settings.Counts && settings.Counts != planner.ByNitrogen {
		return v.Missing("target")
	}
	var err error
	if given {
		settings.Latest = 0
		if settings.Target, err = v.target(settings.Counting, target); err != nil {
			return err
		}
	}
	if latest, given := v.Values.Degrees("latest"); given {
		settings.Latest, err = v.target(settings.Counting, latest)
	}
	return err
}

// ownMean reads which mean the work stands on.
func (v visit) ownMean(settings *planner.WorkSettings) error {
	if !settings.StandsOnMean() && v.Values.Has("mean") {
		return v.Invalid("counts", "mean: does not go with what this work counts")
	}
	if settings.Basis = planner.Basis(textOr(v.Values, "mean", string(settings.Basis))); !settings.StandsOnMean() {
		settings.Basis = ""
	}
	return nil
}

func (d Desk) runWorkAdd(ctx context.Context, req Request) (reply.Reply, error) {
	v, surface, err := d.namedSurface(ctx, req, "surface")
	if err != nil {
		return reply.Reply{}, err
	}
	name, _ := v.Values.Text("name")
	dropped, err := d.Book.Dropped(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	if err := askFresh(req, v.setup.WorksOn(surface.ID), dropped.WorksOn(surface.ID), workName, "work",
		func(w planner.Work) string { return v.restoreWork(surface, w) }); err != nil {
		return reply.Reply{}, err
	}
	settings, err := v.workSettings(planner.WorkSettings{}, surface)
	if err != nil {
		return reply.Reply{}, err
	}
	if settings.Basis == "" && settings.StandsOnMean() {
		if settings.Basis, err = v.book.DefaultMean(ctx, v.site.ID); err != nil {
			return reply.Reply{}, err
		}
	}
	said := reply.Of(reply.Textf("Added %s %s: %s.", surface.Name, name, settingsText(settings, v.site.Units)))
	if settings.Counts == planner.ByDegreeDays || settings.Counts == planner.ByGrowthDays {
		said.Add(reply.Text(briefing.TargetCaution))
	}
	if settings.Counts == planner.ByGrowthDays {
		said.Add(reply.Text("For a growth regulator count degree days: growth days do not tell how fast it wears off."))
	}
	said.Add(reply.Textf("Next, log the last one:\n%s", Line("done", Pair{"surfaces", surface.Name}, Pair{"works", name}, Pair{"when", "yesterday"})))
	return d.kept(ctx, v.stamp(), planner.Work{Surface: surface.ID, Name: name, Settings: planner.Always(settings)}, said)
}

// namedWork is a visit, and the surface and work that surface: and name: name.
func (d Desk) namedWork(ctx context.Context, req Request) (visit, planner.Surface, planner.Work, error) {
	v, surface, err := d.namedSurface(ctx, req, "surface")
	if err != nil {
		return visit{}, planner.Surface{}, planner.Work{}, err
	}
	name, _ := v.Values.Text("name")
	work, err := v.setup.Work(surface, name)
	return v, surface, work, err
}

func (d Desk) runWorkChange(ctx context.Context, req Request) (reply.Reply, error) {
	v, surface, work, err := d.namedWork(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	before := work.Settings.On(v.today)
	settings, err := v.workSettings(before, surface)
	if err != nil {
		return reply.Reply{}, err
	}
	work.Name = renamed(v.Values, work.Name)
	if settings != before {
		work.Settings = work.Settings.With(v.today, settings)
	}
	return d.kept(ctx, v.stamp(), work, reply.Of(reply.Textf("Changed %s %s: %s.", surface.Name, work.Name, settingsText(settings, v.site.Units))))
}

func (d Desk) runWorkDrop(ctx context.Context, req Request) (reply.Reply, error) {
	v, surface, work, err := d.namedWork(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	work.Archived = true
	return d.dropping(ctx, req, v.stamp(), work, surface.Name+" "+work.Name, "")
}

func (d Desk) runWorkList(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	var fields reply.Fields
	for _, surface := range v.setup.SurfacesOf(v.site.ID) {
		for _, work := range v.setup.WorksOn(surface.ID) {
			fields = append(fields, reply.Field{Name: surface.Name + " " + work.Name, Value: settingsText(work.Settings.On(v.today), v.site.Units)})
		}
	}
	dropped, err := d.Book.Dropped(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	var gone []string
	for _, surface := range v.setup.SurfacesOf(v.site.ID) {
		for _, work := range dropped.WorksOn(surface.ID) {
			gone = append(gone, v.restoreWork(surface, work))
		}
	}
	list := listed(fields, "There is no work yet. Like: /setup work add surface:greens name:regulator counts:degree-days base:0 target:200")
	return withDropped(list, gone), nil
}

// settingsText says what a work counts, its target and its mean.
func settingsText(settings planner.WorkSettings, units planner.Units) string {
	unit := unitCounted(settings.Counting)
	target, unitName := units.Show(settings.Target, unit)
	text := fmt.Sprintf("every %s %s", briefing.Plain(target), unitName)
	switch {
	case settings.Counts == planner.ByNitrogen:
		text = fmt.Sprintf("when %s %s are left", briefing.Plain(target), unitName)
	case settings.Counts == planner.ByDays && target == 1:
		text = "every day"
	}
	text += countingText(settings.Counting, units)
	if settings.Latest > 0 {
		latest, _ := units.Show(settings.Latest, unit)
		text += fmt.Sprintf(", overdue past %s", briefing.Plain(latest))
	}
	text += limitsText(settings)
	switch {
	case settings.Basis != "":
		text += ", " + settings.Basis.Words()
	case settings.StandsOnMean():
		text += ", on the 24-hour mean if the station gives hourly readings"
	}
	return text
}

// limitsText says limits, season and origin in words.
func limitsText(settings planner.WorkSettings) string {
	text := ""
	add := func(given bool, format string, args ...any) {
		if given {
			text += ", " + fmt.Sprintf(format, args...)
		}
	}
	limits, season := settings.Limits, settings.Season
	add(limits.LeastDays > 0, "%d days between", limits.LeastDays)
	add(limits.MostTimes > 0, "at most %d times a season", limits.MostTimes)
	add(limits.MostTotal > 0, "at most %s given a season", briefing.Plain(limits.MostTotal))
	add(season.From != planner.MonthDay{}, "on from %s to %s", season.From, season.To)
	add(season.StartsEmpty, "starting empty")
	add(season.Resting, "resting")
	add(settings.WateredIn, "counts from watering in")
	add(settings.RainFreeHours > 0, "%s rain-free hours", briefing.Plain(settings.RainFreeHours))
	origin := briefing.OriginLine(settings.Origin)
	add(origin != "", "%s", origin)
	return text
}

func unitCounted(counting planner.Counting) planner.Unit {
	measure, err := planner.NewMeasure(counting, nil)
	if err != nil {
		return planner.Days
	}
	return measure.Unit()
}

// countingText adds base, upper limit and method to a count of degree days.
func countingText(counting planner.Counting, units planner.Units) string {
	if counting.Counts != planner.ByDegreeDays {
		return ""
	}
	text := " " + briefing.Base(counting, units)
	if counting.Thresholds.Cutoff != calc.CutoffNone && counting.Thresholds.Cutoff != "" {
		text += fmt.Sprintf(", upper limit %s (%s)", briefing.Plain(units.Temperature(counting.Thresholds.UpperC)), counting.Thresholds.Cutoff)
	}
	if counting.Method != calc.MethodMean {
		text += ", " + string(counting.Method)
	}
	return text
}
