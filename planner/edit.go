package planner

import "fmt"

// Edit is one change of a plan, as a what-if asks for it. It prints itself as
// a sentence.
type Edit interface {
	// Sentence says what the edit does, temperatures in the units.
	Sentence(Units) string
	// apply returns the plan changed; a plan it cannot change is a *Problem.
	// The plan given is left as it was.
	apply(Plan) (Plan, error)
}

// Apply makes the edits in order and returns the plan changed, beside the
// edits that were refused and why; the plan given is left as it was.
func Apply(plan Plan, edits ...Edit) (Plan, []error) {
	var refusals []error
	for _, edit := range edits {
		changed, err := edit.apply(plan)
		if err != nil {
			refusals = append(refusals, fmt.Errorf("%s: %w", edit.Sentence(plan.Site.Units), err))
			continue
		}
		plan = changed
	}
	return plan, refusals
}

// Warm makes days ahead warmer, or cooler when ByC is below 0, on the path and
// on every member.
type Warm struct {
	From Day
	Days int // 0 means to the end of the days ahead
	ByC  float64
}

// Sentence says what the edit does, like "3 °C warmer for 5 days from Mon 1 Jul".
func (w Warm) Sentence(units Units) string {
	by, than := units.Difference(w.ByC), "warmer"
	if by < 0 {
		by, than = -by, "cooler"
	}
	span := "from " + w.From.Short() + " on"
	if w.Days > 0 {
		span = fmt.Sprintf("for %d %s from %s", w.Days, plural(w.Days, "day"), w.From.Short())
	}
	return fmt.Sprintf("%s %s %s %s", number(by), units.Degree(), than, span)
}

// maxWarmC bounds what a what-if may add to a temperature.
const maxWarmC = 30

func (w Warm) apply(plan Plan) (Plan, error) {
	if !(w.ByC >= -maxWarmC && w.ByC <= maxWarmC) {
		return plan, Problemf(Invalid, "%s °C warmer is no weather", number(w.ByC)).
			WithHint("Give -%d to %d °C (-%s to %s °F).", maxWarmC, maxWarmC, number(Fahrenheit.Difference(maxWarmC)), number(Fahrenheit.Difference(maxWarmC)))
	}
	if w.Days < 0 {
		return plan, Problemf(Invalid, "%d days cannot be warmer", w.Days).WithHint("Give 1 or more; leave it out for all days ahead.")
	}
	if w.From < plan.AsOf {
		return plan, Problemf(Invalid, "%s is past: its weather is known", w.From.Short()).WithHint("Change days from today on.")
	}
	end := plan.Outlook.end()
	if w.From >= end {
		return plan, Problemf(Invalid, "%s is not among the days ahead", w.From.Short())
	}
	if w.Days > 0 && w.Days < int(end-w.From) {
		end = w.From + Day(w.Days)
	}
	return plan.withAhead(func(day DayFacts) DayFacts {
		if day.Day < w.From || day.Day >= end {
			return day
		}
		return day.Warmer(w.ByC)
	}), nil
}

// SetDay puts a day ahead at a high and a low, on the path and every member.
type SetDay struct {
	Day   Day
	HighC float64
	LowC  float64
}

// Sentence says what the edit does, like "Mon 1 Jul at 29/18 °C".
func (s SetDay) Sentence(units Units) string {
	return fmt.Sprintf("%s at %s/%s %s", s.Day.Short(), number(units.Temperature(s.HighC)), number(units.Temperature(s.LowC)), units.Degree())
}

func (s SetDay) apply(plan Plan) (Plan, error) {
	if err := (DailyReading{Day: s.Day, HighC: s.HighC, LowC: s.LowC}).Check(); err != nil {
		return plan, Problemf(Invalid, "%v", err)
	}
	if s.Day < plan.AsOf || s.Day >= plan.Outlook.end() {
		return plan, Problemf(Invalid, "%s is not among the days ahead", s.Day.Short())
	}
	return plan.withAhead(func(day DayFacts) DayFacts {
		if day.Day != s.Day {
			return day
		}
		return HandDay{Day: s.Day, HighC: s.HighC, LowC: s.LowC}.Facts()
	}), nil
}

// Facts is the day as it was typed: high, low and their mean, no hours.
func (h HandDay) Facts() DayFacts {
	return DayFacts{Day: h.Day, HasExtremes: true, HighC: h.HighC, LowC: h.LowC, ExtremesFrom: FromHand}
}

// withAhead maps every day ahead, path and members.
func (p Plan) withAhead(change func(DayFacts) DayFacts) Plan {
	mapped := func(days []DayFacts) []DayFacts {
		out := make([]DayFacts, len(days))
		for i, day := range days {
			out[i] = change(day)
		}
		return out
	}
	outlook := p.Outlook
	outlook.Path = mapped(outlook.Path)
	outlook.Members = make([][]DayFacts, len(p.Outlook.Members))
	for i, member := range p.Outlook.Members {
		outlook.Members[i] = mapped(member)
	}
	p.Outlook = outlook
	return p
}

// OpenAll takes closed days as open.
type OpenAll struct{}

// Sentence says what the edit does.
func (OpenAll) Sentence(Units) string { return "no day closed" }

func (OpenAll) apply(plan Plan) (Plan, error) {
	plan.Closed = nil
	return plan, nil
}
