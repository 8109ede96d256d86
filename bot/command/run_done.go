package command

import (
	"context"
	"slices"
	"strconv"
	"strings"
	"unicode"

	"swardbook/bot/briefing"
	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) done() Command {
	return Command{
		Path: "done", Short: "log what was done: one pass over one or more surfaces", Listed: true, Asks: true, Shared: true,
		Long: "Several surfaces and works in one entry are one pass, such as a tank mix. The count starts again the day after. " +
			"It shows what the entry will mean and asks once; /log undo takes it back. This log is not the legal spray record.",
		Options: append([]Option{
			{Name: "surfaces", Kind: Names, Required: true, Help: "where it was done", Example: "greens", Complete: d.names(surfaceNames)},
			{Name: "works", Kind: Names, Required: true, Help: "what was done", Example: "regulator", Complete: d.names(workNames)},
			{Name: "when", Kind: Day, Past: true, Clock: true, Help: "the day it was done, with a time if you like; today when not given", Example: "today 06:10"},
		}, append(passOptions(), d.siteOption())...),
		Examples: []string{"/done greens regulator", "/done surfaces:greens works:feed when:yesterday rate:2.5",
			`/done greens,tees feed when:"today 06:10" rate:"14 g/m2" n:21`},
		Run: d.runDone,
	}
}

// passOptions say what an entry holds beyond where, what and when; logging and
// amending share them.
func passOptions() []Option {
	return []Option{
		{Name: "rate", Kind: Text, Help: "nitrogen in g/m², or with a unit; product with n:", Example: "2.5"},
		{Name: "n", Kind: Number, Range: Between(0, 82), Help: "nitrogen percent of the product that rate: is an amount of", Example: "21"},
		{Name: "slow", Kind: Number, Range: Between(0, 100), Help: "percent of the nitrogen that comes slowly", Example: "40"},
		{Name: "weeks", Kind: Number, Range: Between(1, 52), Help: "with slow: over how many weeks it comes", Example: "8"},
		{Name: "part", Kind: Name, Help: "the part of the surface that was done; the whole when not given", Example: "front nine"},
		{Name: "result", Kind: Choice, Choices: []string{"good", string(planner.Doubtful), string(planner.Lost)}, Help: "doubtful keeps the old due date beside the new; lost did not happen"},
		{Name: "watered", Kind: Day, Past: true, Help: "the day it was watered in, where the count waits for that", Example: "today"},
		{Name: "note", Kind: Text, Help: "anything worth keeping", Example: "wind from the west"},
	}
}

func (d Desk) runDone(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	entry, err := v.entry()
	if err != nil {
		return reply.Reply{}, err
	}
	plan, before, err := v.evaluate(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	r, err := v.meaning(plan, before, entry)
	if err != nil {
		return reply.Reply{}, err
	}
	if v.Ask {
		when := entry.Day.String()
		if entry.Clock != "" {
			when += " " + entry.Clock
		}
		r.Private = true
		r.Confirm = &reply.Confirm{Question: "Log this?", Line: v.LineWith("when", when)}
		return r, nil
	}
	entry.RainCounts = entry.RainCounts || plan.RainedOn(entry) // it was asked
	kept, err := v.book.Save(ctx, v.stamp(), entry)
	if err != nil {
		return reply.Reply{}, err
	}
	id := strconv.FormatInt(kept.Key(), 10)
	r.Blocks = append([]reply.Block{reply.Text("Logged as entry " + id + ".")}, r.Blocks...)
	r.Add(reply.Actions{{Label: "Undo", Line: Line("log undo", Pair{"entry", id})}, {Label: "Due", Line: "/due"}})
	return r, nil
}

// entry builds the entry that the request describes.
func (v visit) entry() (planner.Entry, error) {
	entry := planner.Entry{Site: v.site.ID, Day: v.today, By: v.Caller.Name, ByID: v.Caller.ID, At: v.stamp().At}
	surfaces, _ := v.Values.Names("surfaces")
	works, _ := v.Values.Names("works")
	for _, surfaceName := range surfaces {
		surface, err := v.setup.Surface(v.site, surfaceName)
		if err != nil {
			return entry, err
		}
		for _, workName := range works {
			work, err := v.setup.Work(surface, workName)
			if err != nil {
				return entry, err
			}
			entry.Passes = append(entry.Passes, planner.Pass{Work: work.ID})
		}
	}
	if err := v.fill(&entry); err != nil {
		return entry, err
	}
	return entry, v.needsNitrogen(entry)
}

// fill reads the options of an entry over what it holds.
func (v visit) fill(entry *planner.Entry) error {
	day, err := v.day("when", entry.Day)
	if err != nil {
		return err
	}
	if day > v.today {
		return planner.Problemf(planner.Invalid, "%s is ahead of today.", shortOn(day, v.today)).
			WithHint("Log it when it is done. To see what it would mean: /whatif work-on:%s", day)
	}
	if v.Values.Has("when") {
		if err := v.clockOver("when", day); err != nil {
			return err
		}
		entry.Day = day
		entry.Clock, _ = v.Values.Clock("when")
		entry.RainCounts = false
	}
	if watered, given, err := v.dayOver("watered"); err != nil {
		return err
	} else if given {
		entry.Watered = watered
	}
	if result, given := v.Values.Text("result"); given {
		entry.Result = planner.Result(strings.TrimPrefix(result, "good"))
		entry.RainCounts = false // said anew below, where it rained
	}
	entry.Note = textOr(v.Values, "note", entry.Note)
	if err := v.fillPasses(entry.Passes); err != nil {
		return err
	}
	return entry.Check()
}

// fillPasses reads rate, slow share and part into the passes.
func (v visit) fillPasses(passes []planner.Pass) error {
	nPercent, hasN := v.Values.Number("n")
	slow, hasSlow := v.Values.Number("slow")
	weeks, hasWeeks := v.Values.Number("weeks")
	text, hasRate := v.Values.Text("rate")
	if err := v.Values.dotted("rate"); err != nil {
		return err
	}
	if hasRate && len(distinctWorks(passes, v.setup.Works)) > 1 {
		return planner.Problemf(planner.Invalid, "Which of the works had that rate?").WithHint("Log the feed on a line of its own.")
	}
	switch {
	case hasN && !hasRate:
		return v.Missing("rate")
	case hasSlow && slow > 0 && !hasWeeks:
		return v.Missing("weeks")
	case hasWeeks && !hasSlow:
		return v.Missing("slow")
	}
	part, hasPart := v.Values.Text("part")
	for i := range passes {
		if hasRate {
			rate, err := planner.ParseRate(text, nPercent, hasN)
			if err != nil {
				return err
			}
			if bare := !hasN && !strings.ContainsFunc(text, unicode.IsLetter); bare && !v.countsNitrogen(passes[i].Work) {
				return planner.Problemf(planner.Missing, "%s of what?", text).
					WithHint("Product by volume: rate:\"%[1]s L/ha\". By mass, with its nitrogen percent: rate:\"%[1]s g/m2\" n:0. Nitrogen: rate:\"%[1]s gN/m2\".", text)
			}
			passes[i].Rate, passes[i].NitrogenGM2 = rate, rate.NitrogenGM2()
		}
		if hasSlow {
			passes[i].SlowShare, passes[i].SlowWeeks = slow/100, weeks
		}
		if hasPart {
			known, err := v.partOf(passes[i].Work, part)
			if err != nil {
				return err
			}
			_, surface, _ := v.workOf(passes[i].Work)
			passes[i].Part, passes[i].Share = known, surface.ShareOf(known)
		}
	}
	return nil
}

// distinctWorks are the names of the works that the passes are of.
func distinctWorks(passes []planner.Pass, works []planner.Work) map[string]bool {
	names := map[string]bool{}
	for _, pass := range passes {
		for _, work := range works {
			if work.ID == pass.Work {
				names[planner.NameKey(work.Name)] = true
			}
		}
	}
	return names
}

// partOf is the part of the work's surface with the name; one that it does not
// have is a problem.
func (v visit) partOf(id planner.WorkID, name string) (planner.PartID, error) {
	_, surface, _ := v.workOf(id)
	parts := surface.ActiveParts()
	for _, part := range parts {
		if planner.NameKey(part.Name) == planner.NameKey(name) {
			return part.ID, nil
		}
	}
	names := namesOf(parts, func(p planner.Part) string { return p.Name })
	problem := planner.Problemf(planner.NotFound, "%s has no part %q.", surface.Name, name)
	if len(names) == 0 {
		return 0, problem.WithHint("A lead names the parts:\n%s", Line("setup surface change", Pair{"name", surface.Name}, Pair{"parts", "front nine,back nine"}))
	}
	return 0, problem.WithHint("It has: %s.", strings.Join(names, ", "))
}

// workOf finds a work, dropped ones too, and its surface by the work's id.
func (v visit) workOf(id planner.WorkID) (planner.Work, planner.Surface, bool) {
	for _, work := range slices.Concat(v.setup.Works, v.setup.Dropped) {
		if work.ID != id {
			continue
		}
		for _, surface := range v.setup.Surfaces {
			if surface.ID == work.Surface {
				return work, surface, true
			}
		}
	}
	return planner.Work{}, planner.Surface{}, false
}

// countsNitrogen reports whether the work counts by nitrogen today.
func (v visit) countsNitrogen(id planner.WorkID) bool {
	work, _, _ := v.workOf(id)
	return work.Settings.On(v.today).Counts == planner.ByNitrogen
}

// needsNitrogen asks for the nitrogen of a work that counts by it.
func (v visit) needsNitrogen(entry planner.Entry) error {
	for _, pass := range entry.Passes {
		switch {
		case pass.NitrogenGM2 > 0 || !v.countsNitrogen(pass.Work):
			continue
		case pass.Rate == planner.Rate{}:
			return v.Missing("rate")
		}
		work, _, _ := v.workOf(pass.Work)
		return planner.Problemf(planner.Missing, "%s counts nitrogen, and %s says none.", work.Name, pass.Rate.Words()).
			WithHint("Say the nitrogen it gave, like rate:\"0.5 gN/m2\"; of a liquid it is its litres by its density and nitrogen percent.")
	}
	return nil
}

// meaning says what an entry does to counts, dates, limits and the balance.
func (v visit) meaning(plan planner.Plan, before planner.Evaluation, entry planner.Entry) (reply.Reply, error) {
	asked := entry
	asked.RainCounts = true // with the pass, once
	changed, refusals := planner.Apply(plan, planner.LogEntry{Entry: asked, Name: "the entry"})
	if len(refusals) > 0 {
		return reply.Reply{}, refusals[0]
	}
	after, err := planner.Evaluate(changed)
	if err != nil {
		return reply.Reply{}, err
	}
	r := reply.Of()
	for _, pass := range entry.Passes {
		work, surface, _ := v.workOf(pass.Work)
		lines := passLines(surface, work, entry, pass, v.today)
		if was, ok := stateOf(before.Works, pass.Work); ok {
			lines = append(lines, briefing.PassNotes(was, entry, plan)...)
			if note := briefing.RainNote(was.Settings, entry, plan); note != "" {
				lines = append(lines, note)
			}
		}
		if is, ok := stateOf(after.Works, pass.Work); ok && entry.Result != planner.Lost {
			lines = append(lines, nextLines(is, v.today)...)
			r.Figures = append(r.Figures, is.Figures(v.today)...)
		}
		r.Add(reply.Text(strings.Join(lines, "\n")))
	}
	for _, state := range after.Nitrogen {
		if givesNitrogen(entry, state.Surface, plan) {
			r.Add(reply.Text(briefing.NitrogenLine(state, after.Works)))
			r.Figures = append(r.Figures, state.Figures()...)
		}
	}
	return r, nil
}

func givesNitrogen(entry planner.Entry, surface planner.Surface, plan planner.Plan) bool {
	for _, work := range plan.WorksOn(surface.ID) {
		if pass, ok := entry.Of(work.ID); ok && pass.NitrogenGM2 > 0 {
			return true
		}
	}
	return false
}

// passLines say what was done where, at what rate and how much of it.
func passLines(surface planner.Surface, work planner.Work, entry planner.Entry, pass planner.Pass, today planner.Day) []string {
	title := surface.Name + " " + work.Name
	if part := surface.PartName(pass.Part); part != "" {
		title += " (" + part + ")"
	}
	when := shortOn(entry.Day, today)
	if entry.Clock != "" {
		when += " " + entry.Clock
	}
	lines := []string{title + ", " + when}
	if words := pass.Rate.Words(); words != "" {
		lines = append(lines, words)
		if total := pass.Rate.Over(surface.AreaM2 * surface.ShareOf(pass.Part)); total != "" {
			lines = append(lines, total)
		}
	}
	if pass.SlowShare > 0 {
		lines = append(lines, briefing.Plain(100*pass.SlowShare)+" % of it over "+briefing.Plain(pass.SlowWeeks)+" weeks")
	}
	if entry.Result != planner.Good {
		lines = append(lines, "result: "+string(entry.Result))
	}
	return lines
}

// nextLines say what the count does after the entry.
func nextLines(state planner.WorkState, today planner.Day) []string {
	facts, started := state.OwnFacts()
	if !started {
		return []string{"next: " + briefing.When(state, today)}
	}
	lines := []string{"counts from " + shortOn(facts.Since, today), "next: " + briefing.When(state, today)}
	if sure := briefing.HowSure(facts, today); sure != "" {
		lines = append(lines, sure)
	}
	return append(lines, briefing.InTheWay(state)...)
}

func stateOf(states []planner.WorkState, id planner.WorkID) (planner.WorkState, bool) {
	for _, state := range states {
		if state.Work.ID == id {
			return state, true
		}
	}
	return planner.WorkState{}, false
}
