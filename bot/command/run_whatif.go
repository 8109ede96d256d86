package command

import (
	"context"
	"fmt"
	"slices"
	"strings"

	"swardbook/bot/briefing"
	"swardbook/bot/chart"
	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) whatIf() Command {
	return Command{
		Path: "whatif", Short: "as it stands beside what would change", Listed: true,
		Long: "Changes the days ahead, the day a work is done, how the last pass turned out, a target, a limit, the grass, " +
			"and shows the due dates before and after. Nothing is kept. " +
			"Highs and lows stand for the days from warm-from on, today when it is not given.",
		Options: []Option{
			d.surfaceOption(), d.workOption(),
			{Name: "warmer", Kind: Warming, Help: "degrees warmer, below 0 for cooler; at most 30 °C or 54 °F", Example: "3"},
			{Name: "warm-from", Kind: Day, Help: "first day that is warmer; today when not given", Example: "tomorrow"},
			{Name: "warm-days", Kind: Whole, Range: Between(1, 365), Help: "how many days are warmer; all when not given", Example: "7"},
			{Name: "highs", Kind: Numbers, Help: "highs of the days ahead, one a day", Example: "29 30 28"},
			{Name: "lows", Kind: Numbers, Help: "lows of the days ahead, one a day", Example: "18 19 18"},
			{Name: "work-on", Kind: Day, Help: "the work is done on this day", Example: "tomorrow"},
			{Name: "rate", Kind: Text, Help: "with work-on: nitrogen given, g N/m² or with a unit", Example: "2.5"},
			{Name: "part", Kind: Name, Help: "with work-on: the part that is done", Example: "front nine"},
			{Name: "result", Kind: Choice, Choices: []string{"good", string(planner.Doubtful), string(planner.Lost)}, Help: "the last pass turned out so"},
			{Name: "gap", Kind: Whole, Range: Between(0, 366), Help: "another least number of days between two passes", Example: "10"},
			{Name: "most", Kind: Whole, Range: Between(1, 366), Help: "another most of times a season", Example: "4"},
			{Name: "rain-free", Kind: Number, Range: Between(0, 240), Help: "other rain-free hours", Example: "6"},
			{Name: "resting", Kind: Yes, Help: "yes: the work rests from today on; no: it is on all year"},
			{Name: "open", Kind: Yes, Help: "take closed days as open"},
			{Name: "grass", Kind: Choice, Choices: []string{"cool", "warm", "cool-f", "warm-f"}, Help: "other grass on the surface from today on"},
			{Name: "target", Kind: Target, Range: Between(0, planner.MaxTarget), Help: "another target for the work", Example: "250"},
			d.siteOption(),
		},
		Examples: []string{"/whatif warmer:3", "/whatif greens regulator warmer:3 warm-days:7",
			"/whatif surface:greens work:feed work-on:tomorrow rate:2.5", `/whatif highs:"29 30 28" lows:"18 19 18"`},
		Run: d.runWhatIf,
	}
}

func (d Desk) runWhatIf(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	plan, base, err := v.evaluate(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	chosen, err := v.chosen(base.Works)
	if err != nil {
		return reply.Reply{}, err
	}
	edits, err := v.edits(chosen)
	if err != nil {
		return reply.Reply{}, err
	}
	changed, refusals := planner.Apply(plan, edits...)
	if len(refusals) > 0 {
		return reply.Reply{}, refusals[0]
	}
	whatIf, err := planner.Evaluate(changed)
	if err != nil {
		return reply.Reply{}, err
	}
	r := v.sideBySide(chosen, base, whatIf, edits)
	if len(chosen) == 1 {
		if err := addRunning(&r, chosen[0], plan, base, changed, whatIf); err != nil {
			return reply.Reply{}, err
		}
	}
	if day, given, _ := v.Values.Day("work-on", v.today); given {
		after, _ := stateOf(whatIf.Works, chosen[0].Work.ID)
		r.Add(passNotes(chosen[0], day, plan, after.Settings.RainFreeHours)...)
	}
	if v.Values.Has("target") {
		r.Add(reply.Text(strings.TrimPrefix(briefing.OriginLine(chosen[0].Settings.Origin)+"\n"+briefing.TargetCaution, "\n")))
	}
	r.Private = true
	r.Figures = append(base.Figures().Under("base."), whatIf.Figures().Under("whatif.")...)
	return r, nil
}

// addRunning adds the picture of one work's running total, before and after.
func addRunning(r *reply.Reply, state planner.WorkState, plan planner.Plan, base planner.Evaluation, changed planner.Plan, whatIf planner.Evaluation) error {
	stands, err := planner.SheetOf(plan, base, 0)
	if err != nil {
		return err
	}
	after, err := planner.SheetOf(changed, whatIf, 0)
	if err != nil {
		return err
	}
	picture, ok, err := chart.Running(state, plan.AsOf, plan.Site.Units, stands, after)
	if ok {
		r.Add(picture)
	}
	return err
}

// sideBySide tells the dates as it stands and with the edits made.
func (v visit) sideBySide(chosen []planner.WorkState, base, whatIf planner.Evaluation, edits []planner.Edit) reply.Reply {
	sentences := make([]string, 0, len(edits))
	for _, edit := range edits {
		sentences = append(sentences, edit.Sentence(v.site.Units))
	}
	table := reply.Table{Columns: []reply.Column{reply.Left("work"), reply.Right("stands"), reply.Right("what if")}}
	r := reply.Of(reply.Heading("What if"), reply.Text(strings.Join(sentences, "; ")))
	for _, state := range briefing.ByUrgency(chosen) {
		after, _ := stateOf(whatIf.Works, state.Work.ID)
		table.Rows = append(table.Rows, []string{briefing.Title(state), shortDate(state), shortDate(after)})
	}
	r.Add(table)
	if len(chosen) == 1 {
		after, _ := stateOf(whatIf.Works, chosen[0].Work.ID)
		r.Add(reply.Text("As it stands\n"+strings.Join(briefing.Brief(chosen[0], base), "\n")),
			reply.Text("What if\n"+strings.Join(briefing.Brief(after, whatIf), "\n")))
	}
	r.Add(reply.Text(briefing.AheadNote(base.Outlook)), reply.Text(briefing.Caution))
	return r
}

// passNotes say what stands against doing the work on the day.
func passNotes(state planner.WorkState, day planner.Day, plan planner.Plan, rainFreeHours float64) []reply.Block {
	notes := briefing.PassNotes(state, planner.Entry{Day: day}, plan)
	if rainFreeHours > 0 {
		notes = append(notes, briefing.Plain(rainFreeHours)+" rain-free hours after it")
	}
	if len(notes) == 0 {
		return nil
	}
	return []reply.Block{reply.Text(strings.Join(notes, "\n"))}
}

func shortDate(state planner.WorkState) string {
	facts, started := state.OwnFacts()
	switch {
	case state.Status == planner.Resting:
		return "resting"
	case !started:
		return "not started"
	case state.Status == planner.Full:
		return "full"
	}
	return passageText(facts.Date())
}

// passageText is a date without its weekday, for tables.
func passageText(passage planner.Passage) string {
	if !passage.Known {
		return "no date"
	}
	return briefing.DayMonth(passage.Day)
}

// edits reads the changes that the request asks for.
func (v visit) edits(chosen []planner.WorkState) ([]planner.Edit, error) {
	from, err := v.day("warm-from", v.today)
	if err != nil {
		return nil, err
	}
	var edits []planner.Edit
	set, err := v.typedDays(from)
	if err != nil {
		return nil, err
	}
	for _, day := range set {
		edits = append(edits, planner.SetDay{Day: day.Day, HighC: day.HighC, LowC: day.LowC})
	}
	if byC, given := v.differenceC("warmer"); given {
		days, _ := v.Values.Whole("warm-days")
		edits = append(edits, planner.Warm{From: from, Days: days, ByC: byC})
	}
	if open, _ := v.Values.Yes("open"); open {
		edits = append(edits, planner.OpenAll{})
	}
	if grass, given := v.Values.Text("grass"); given {
		onGrass, err := grassEdits(chosen, grass)
		if err != nil {
			return nil, err
		}
		edits = append(edits, onGrass...)
	}
	forWork, err := v.workEdits(chosen)
	if err != nil {
		return nil, err
	}
	if edits = append(edits, forWork...); len(edits) == 0 {
		return nil, planner.Problemf(planner.Missing, "What would change?").
			WithHint("Add one of warmer:3, highs: and lows:, work-on:tomorrow, target:250.\n/whatif warmer:3")
	}
	return edits, nil
}

// grassEdits put other grass on the one surface of the works chosen.
func grassEdits(chosen []planner.WorkState, grass string) ([]planner.Edit, error) {
	surface := chosen[0].Surface
	for _, state := range chosen {
		if state.Surface.ID != surface.ID {
			return nil, planner.Problemf(planner.Missing, "Which surface has other grass?").WithHint("Add surface:%s.", surface.Name)
		}
	}
	curve, _ := grassCurve(grass)
	return []planner.Edit{planner.SetGrass{Surface: surface.ID, Name: surface.Name, Grass: grass, Curve: curve}}, nil
}

// workEdits are the edits of one work, which must then be the only one chosen.
func (v visit) workEdits(chosen []planner.WorkState) ([]planner.Edit, error) {
	for _, option := range []string{"rate", "part"} {
		if v.Values.Has(option) && !v.Values.Has("work-on") {
			return nil, planner.Problemf(planner.Missing, "A %s needs the day the work is done.", option).WithHint("Add work-on:tomorrow.")
		}
	}
	ofOne := []string{"work-on", "target", "gap", "most", "rain-free", "resting", "result"}
	if !slices.ContainsFunc(ofOne, v.Values.Has) {
		return nil, nil
	}
	if len(chosen) != 1 {
		titles := namesOf(chosen, briefing.Title)
		return nil, planner.Problemf(planner.Missing, "Which work?").
			WithHint("Add surface: and work:. There is: %s.", strings.Join(titles, ", "))
	}
	edits, err := v.settingEdits(chosen[0])
	if err != nil {
		return nil, err
	}
	if result, given := v.Values.Text("result"); given {
		edits = append(edits, planner.SetResult{Work: chosen[0].Work.ID, Name: briefing.Title(chosen[0]), Result: planner.Result(strings.TrimPrefix(result, "good"))})
	}
	if v.Values.Has("work-on") {
		pass, err := v.passEdit(chosen[0])
		if err != nil {
			return nil, err
		}
		edits = append(edits, pass)
	}
	return edits, nil
}

// settingEdits are the edits of the work's settings.
func (v visit) settingEdits(state planner.WorkState) ([]planner.Edit, error) {
	id, name := state.Work.ID, briefing.Title(state)
	var edits []planner.Edit
	if typed, given := v.Values.Degrees("target"); given {
		target, err := v.target(state.Settings.Counting, typed)
		if err != nil {
			return nil, err
		}
		edits = append(edits, planner.SetTarget{Work: id, Name: name, Target: target, Unit: state.Unit})
	}
	limits := state.Settings.Limits
	gap, hasGap := v.Values.Whole("gap")
	most, hasMost := v.Values.Whole("most")
	if hasGap {
		limits.LeastDays = gap
	}
	if hasMost {
		limits.MostTimes = most
	}
	if hasGap || hasMost {
		edits = append(edits, planner.SetLimits{Work: id, Name: name, Limits: limits})
	}
	if hours, given := v.Values.Number("rain-free"); given {
		edits = append(edits, planner.SetRainFree{Work: id, Name: name, Hours: hours})
	}
	if resting, given := v.Values.Yes("resting"); given {
		edits = append(edits, planner.SetSeason{Work: id, Name: name, Resting: resting})
	}
	return edits, nil
}

// passEdit is the pass that work-on asks for.
func (v visit) passEdit(state planner.WorkState) (planner.Edit, error) {
	day, err := v.day("work-on", v.today)
	if err != nil {
		return nil, err
	}
	pass := planner.DoWork{Work: state.Work.ID, Name: briefing.Title(state), Day: day}
	if err := v.Values.dotted("rate"); err != nil {
		return nil, err
	}
	if text, given := v.Values.Text("rate"); given {
		rate, err := planner.ParseRate(text, 0, false)
		if err != nil {
			return nil, err
		}
		pass.NitrogenGM2 = rate.NitrogenGM2()
	}
	if part, given := v.Values.Text("part"); given {
		if pass.Part, err = v.partOf(state.Work.ID, part); err != nil {
			return nil, err
		}
		pass.PartName = part
	}
	return pass, nil
}

// typedDays reads highs and lows, one a day from the first day on.
func (v visit) typedDays(first planner.Day) ([]planner.HandDay, error) {
	highs, hasHighs := v.Values.Numbers("highs")
	lows, hasLows := v.Values.Numbers("lows")
	if !hasHighs && !hasLows {
		return nil, nil
	}
	if len(highs) != len(lows) {
		return nil, planner.Problemf(planner.Invalid, "There are %d highs and %d lows.", len(highs), len(lows)).
			WithHint(`Give one of each a day: highs:"29 30 28" lows:"18 19 18"`)
	}
	days := make([]planner.HandDay, len(highs))
	for i := range highs {
		days[i] = planner.HandDay{
			Day:   first + planner.Day(i),
			HighC: v.site.Units.TemperatureC(highs[i]), LowC: v.site.Units.TemperatureC(lows[i]),
		}
		if err := (planner.DailyReading{HighC: days[i].HighC, LowC: days[i].LowC}).Check(); err != nil {
			return nil, planner.Problemf(planner.Invalid, "%s: %v", shortOn(days[i].Day, v.today), err)
		}
	}
	return days, nil
}

// target is a typed target in the unit of what is counted. On a site that
// shows °F a bare number of degree days is asked back: it is often copied from
// a paper in °C.
func (v visit) target(counting planner.Counting, typed Degrees) (float64, error) {
	if counting.Counts != planner.ByDegreeDays {
		return typed.Value, nil
	}
	if typed.Unit == "" && v.site.Units == planner.Fahrenheit {
		return 0, planner.Problemf(planner.Missing, "%g °F-days (= %.0f °C-days), or %g °C-days (= %.0f °F-days)?",
			typed.Value, planner.Fahrenheit.DifferenceC(typed.Value), typed.Value, planner.Fahrenheit.Difference(typed.Value)).
			WithHint("Write target:%gf or target:%gc.", typed.Value, typed.Value)
	}
	return v.unitsOf(typed).DifferenceC(typed.Value), nil
}

func textOr(v Values, option, fallback string) string {
	if text, given := v.Text(option); given {
		return text
	}
	return fallback
}

func counted(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}
