package planner

import (
	"fmt"
	"slices"

	"swardbook/calc"
)

// DoWork logs a pass of a work on a day, past or ahead.
type DoWork struct {
	Work        WorkID
	Name        string // how the sentence names it
	Day         Day
	NitrogenGM2 float64
	Part        PartID // the part done; 0 for the whole surface
	PartName    string // how the sentence names it
}

// Sentence says what the edit does, like "greens feed done on Mon 1 Jul at 2 g N/m²".
func (d DoWork) Sentence(Units) string {
	text := d.Name
	if d.PartName != "" {
		text += " (" + d.PartName + ")"
	}
	text += " done on " + d.Day.Short()
	if d.NitrogenGM2 > 0 {
		text += fmt.Sprintf(" at %s g N/m²", number(d.NitrogenGM2))
	}
	return text
}

func (d DoWork) apply(plan Plan) (Plan, error) {
	if !slices.ContainsFunc(plan.Works, func(work Work) bool { return work.ID == d.Work }) {
		return plan, errNoSuchWork()
	}
	return LogEntry{Name: d.Name, Entry: Entry{Site: plan.Site.ID, Day: d.Day,
		Passes: []Pass{{Work: d.Work, NitrogenGM2: d.NitrogenGM2, Part: d.Part, Rate: nitrogenRate(d.NitrogenGM2)}}}}.apply(plan)
}

func nitrogenRate(gM2 float64) Rate {
	if gM2 == 0 {
		return Rate{}
	}
	return Rate{Kind: NutrientRate, Value: gM2}
}

// LogEntry logs a whole entry, past or ahead.
type LogEntry struct {
	Entry Entry
	Name  string // how the sentence names it
}

// Sentence says what the edit does, like "tank mix logged on Mon 1 Jul".
func (l LogEntry) Sentence(Units) string {
	return fmt.Sprintf("%s logged on %s", l.Name, l.Entry.Day.Short())
}

func (l LogEntry) apply(plan Plan) (Plan, error) {
	if err := l.Entry.Check(); err != nil {
		return plan, err
	}
	if l.Entry.Day >= plan.Outlook.end() {
		return plan, Problemf(Invalid, "%s is beyond the days ahead", l.Entry.Day.Short())
	}
	plan.Log = withEntry(plan.Log, l.Entry)
	return plan, nil
}

// withEntry puts the entry in its place by day, instead of the one that has its
// id.
func withEntry(log []Entry, entry Entry) []Entry {
	out := make([]Entry, 0, len(log)+1)
	for _, kept := range log {
		if entry.ID == 0 || kept.ID != entry.ID {
			out = append(out, kept)
		}
	}
	at := len(out)
	for at > 0 && out[at-1].Day > entry.Day {
		at--
	}
	return slices.Insert(out, at, entry)
}

// SetLimits gives a work other limits.
type SetLimits struct {
	Work   WorkID
	Name   string // how the sentence names it
	Limits Limits
}

// Sentence says what the edit does, like "greens regulator with at least 10 days
// between, at most 4 times a season".
func (s SetLimits) Sentence(Units) string {
	between := fmt.Sprintf("at least %d %s between", s.Limits.LeastDays, plural(s.Limits.LeastDays, "day"))
	most := fmt.Sprintf("at most %d %s a season", s.Limits.MostTimes, plural(s.Limits.MostTimes, "time"))
	switch {
	case s.Limits.MostTimes == 0:
		return s.Name + " with " + between
	case s.Limits.LeastDays == 0:
		return s.Name + " with " + most
	}
	return s.Name + " with " + between + ", " + most
}

func (s SetLimits) apply(plan Plan) (Plan, error) {
	return plan.withSettings(s.Work, func(settings *WorkSettings) { settings.Limits = s.Limits })
}

// SetTarget gives a work another target, and with it the default latest again.
type SetTarget struct {
	Work   WorkID
	Name   string // how the sentence names it
	Target float64
	Unit   Unit
}

// Sentence says what the edit does, like "greens regulator at 250 °C-days".
func (s SetTarget) Sentence(units Units) string {
	target, unit := units.Show(s.Target, s.Unit)
	return fmt.Sprintf("%s at %s %s", s.Name, number(target), unit)
}

func (s SetTarget) apply(plan Plan) (Plan, error) {
	return plan.withSettings(s.Work, func(settings *WorkSettings) { settings.Target, settings.Latest = s.Target, 0 })
}

// SetSeason has a work rest from the plan's morning on, or be on all year.
type SetSeason struct {
	Work    WorkID
	Name    string // how the sentence names it
	Resting bool
}

// Sentence says what the edit does, like "greens regulator resting".
func (s SetSeason) Sentence(Units) string {
	if s.Resting {
		return s.Name + " resting"
	}
	return s.Name + " on"
}

func (s SetSeason) apply(plan Plan) (Plan, error) {
	return plan.withSettings(s.Work, func(settings *WorkSettings) { settings.Season = WorkSeason{Resting: s.Resting} })
}

// SetRainFree gives a work other rain-free hours.
type SetRainFree struct {
	Work  WorkID
	Name  string // how the sentence names it
	Hours float64
}

// Sentence says what the edit does, like "greens regulator with 6 rain-free
// hours".
func (s SetRainFree) Sentence(Units) string {
	return fmt.Sprintf("%s with %s rain-free hours", s.Name, number(s.Hours))
}

func (s SetRainFree) apply(plan Plan) (Plan, error) {
	return plan.withSettings(s.Work, func(settings *WorkSettings) { settings.RainFreeHours = s.Hours })
}

// SetResult says how the newest entry with a pass of the work turned out, for
// all works of the entry.
type SetResult struct {
	Work   WorkID
	Name   string // how the sentence names it
	Result Result
}

// Sentence says what the edit does, like "the last greens regulator lost".
func (s SetResult) Sentence(Units) string {
	result := string(s.Result)
	if s.Result == Good {
		result = "good"
	}
	return fmt.Sprintf("the last %s %s", s.Name, result)
}

func (s SetResult) apply(plan Plan) (Plan, error) {
	for i := len(plan.Log) - 1; i >= 0; i-- {
		if _, has := plan.Log[i].Of(s.Work); !has {
			continue
		}
		log := slices.Clone(plan.Log)
		log[i].Result, log[i].RainCounts = s.Result, s.Result == Good
		if err := log[i].Check(); err != nil {
			return plan, err
		}
		plan.Log = log
		return plan, nil
	}
	return plan, Problemf(NotFound, "it was never logged").WithHint("Log the last one with /done.")
}

// SetGrass has other grass grow on a surface from the plan's morning on. What is
// set aside for the season and the most nitrogen of a month stay.
type SetGrass struct {
	Surface SurfaceID
	Name    string // how the sentence names it
	Grass   string
	Curve   calc.GrowthCurve
}

// Sentence says what the edit does, like "fairways with warm grass".
func (s SetGrass) Sentence(Units) string { return fmt.Sprintf("%s with %s grass", s.Name, s.Grass) }

func (s SetGrass) apply(plan Plan) (Plan, error) {
	surfaces := slices.Clone(plan.Surfaces)
	for i, surface := range surfaces {
		if surface.ID != s.Surface {
			continue
		}
		turf := surface.Turf.On(plan.AsOf)
		turf.Grass, turf.Curve = s.Grass, s.Curve
		surfaces[i].Turf = surface.Turf.With(plan.AsOf, turf)
		if err := surfaces[i].Check(); err != nil {
			return plan, err
		}
		plan.Surfaces = surfaces
		return plan, nil
	}
	return plan, Problemf(NotFound, "the plan has no such surface")
}

// withSettings changes the settings of a work from the plan's morning on.
func (p Plan) withSettings(id WorkID, change func(*WorkSettings)) (Plan, error) {
	works := slices.Clone(p.Works)
	for i, work := range works {
		if work.ID != id {
			continue
		}
		settings := work.Settings.On(p.AsOf)
		change(&settings)
		if err := settings.check(); err != nil {
			return p, err
		}
		works[i].Settings = work.Settings.With(p.AsOf, settings)
		p.Works = works
		return p, nil
	}
	return p, errNoSuchWork()
}

func errNoSuchWork() error { return Problemf(NotFound, "the plan has no such work") }
