package planner

import "fmt"

// Evaluation is every figure of a plan on its morning.
type Evaluation struct {
	Site      Site
	AsOf      Day
	Yesterday Yesterday
	Totals    []TotalState
	Works     []WorkState
	Nitrogen  []NitrogenState // of the surfaces that were fed
	Closed    []Closed        // what is closed on the morning's own day
	Outlook   Outlook
}

// Yesterday is the last day of the record and what grew on it.
type Yesterday struct {
	DayFacts
	Growth []GrowthFacts // one per surface
}

// GrowthFacts is a surface's growth potential on one day, 0 to 1.
type GrowthFacts struct {
	Surface Surface
	Means   map[Basis]float64 // on each mean that the day has
	// Hours is the mean of the growth potential of each hour, a figure of its
	// own; HasHours says that the day has its hours.
	Hours    float64
	HasHours bool
}

// TotalState is a season total through yesterday.
type TotalState struct {
	Total    Total
	Settings TotalSettings
	Start    Day
	Unit     Unit
	Bases    []TotalFacts
	Marks    []MarkState
}

// MarkState says when a season total reaches a mark.
type MarkState struct {
	Mark  Mark
	Bases []DueFacts // one per basis of the total
}

// TotalFacts is a season total on one basis.
type TotalFacts struct {
	Basis Basis
	Sum   Sum
}

// Evaluate computes all figures of the plan. It is pure: the same plan gives
// the same figures. A plan whose works or totals cannot be counted (an unknown
// method, a surface that is not there) is an error; missing weather is not: it
// is labelled in the figures.
func Evaluate(plan Plan) (Evaluation, error) {
	e := Evaluation{Site: plan.Site, AsOf: plan.AsOf, Outlook: plan.Outlook, Yesterday: plan.yesterday()}
	for _, total := range plan.Totals {
		state, err := plan.evaluateTotal(total)
		if err != nil {
			return Evaluation{}, err
		}
		e.Totals = append(e.Totals, state)
	}
	for _, work := range plan.Works {
		state, err := plan.evaluateWork(work)
		if err != nil {
			return Evaluation{}, err
		}
		e.Works = append(e.Works, state)
	}
	for _, surface := range plan.Surfaces {
		if state, ok := plan.nitrogen(surface); ok {
			e.Nitrogen = append(e.Nitrogen, state)
		}
	}
	e.Closed = closedOnDay(plan.Closed, plan.AsOf)
	return e, nil
}

func (p Plan) yesterday() Yesterday {
	y := Yesterday{DayFacts: p.Record.At(p.AsOf - 1)}
	for _, surface := range p.Surfaces {
		y.Growth = append(y.Growth, growthOn(surface, y.DayFacts))
	}
	return y
}

func growthOn(surface Surface, day DayFacts) GrowthFacts {
	curve := surface.Turf.On(day.Day).Curve
	growth := GrowthFacts{Surface: surface, Means: map[Basis]float64{}}
	for _, basis := range bothMeans() {
		if meanC, known := day.Mean(basis); known {
			if gp, err := curve.Potential(meanC); err == nil {
				growth.Means[basis] = gp
			}
		}
	}
	if day.HoursC != nil {
		if gp, err := curve.PotentialOverHours(day.HoursC); err == nil {
			growth.Hours, growth.HasHours = gp, true
		}
	}
	return growth
}

func (p Plan) evaluateTotal(total Total) (TotalState, error) {
	settings := total.Settings.On(p.AsOf)
	state := TotalState{Total: total, Settings: settings, Start: settings.Start.OnOrBefore(p.AsOf)}
	measure, err := settings.measure()
	if err != nil {
		return TotalState{}, fmt.Errorf("total %s: %w", total.Name, err)
	}
	state.Unit = measure.Unit()
	for _, basis := range measure.Bases() {
		c := counter{plan: p, measure: measure, basis: basis}
		state.Bases = append(state.Bases, TotalFacts{basis, c.past(state.Start, p.AsOf).sum})
	}
	for _, mark := range total.Marks {
		reaching := MarkState{Mark: mark}
		for _, basis := range measure.Bases() {
			c := counter{plan: p, measure: measure, basis: basis}
			reaching.Bases = append(reaching.Bases, c.due(state.Start, mark.At))
		}
		state.Marks = append(state.Marks, reaching)
	}
	return state, nil
}

// measure returns the measure that the total counts by.
func (s TotalSettings) measure() (Measure, error) {
	return NewMeasure(s.Counting, func(Day) Turf { return Turf{Curve: s.Curve} })
}

// On returns the total on the basis.
func (t TotalState) On(basis Basis) (TotalFacts, bool) {
	for _, facts := range t.Bases {
		if facts.Basis == basis {
			return facts, true
		}
	}
	return TotalFacts{}, false
}

// Figures lists every figure of the evaluation, in the order of a briefing.
func (e Evaluation) Figures() Figures {
	figures := e.Yesterday.figures()
	for _, total := range e.Totals {
		figures = append(figures, total.figures()...)
		for _, mark := range total.Marks {
			figures = append(figures, mark.Figures(total, e.AsOf)...)
		}
	}
	for _, work := range e.Works {
		figures = append(figures, work.Figures(e.AsOf)...)
	}
	for _, nitrogen := range e.Nitrogen {
		figures = append(figures, nitrogen.Figures()...)
	}
	return figures
}

func (y Yesterday) figures() Figures {
	f := Figures{{Key: "yesterday.date", Value: float64(y.Day), Unit: Date, Basis: NoBasis}}
	if y.HasExtremes {
		f = append(f,
			Figure{Key: "yesterday.high_c", Value: y.HighC, Unit: DegreesC, Basis: Extremes},
			Figure{Key: "yesterday.low_c", Value: y.LowC, Unit: DegreesC, Basis: Extremes})
	}
	f = append(f, Figure{Key: "yesterday.readings", Value: float64(y.SlotsReal), Unit: Count, Basis: Readings})
	for _, basis := range bothMeans() {
		if meanC, known := y.Mean(basis); known {
			f = append(f, Figure{Key: fmt.Sprintf("yesterday.%s_mean_c", basis), Value: meanC, Unit: DegreesC, Basis: basis})
		}
	}
	for _, growth := range y.Growth {
		key := "yesterday.growth_potential." + NameKey(growth.Surface.Name) + "."
		for _, basis := range bothMeans() {
			if gp, ok := growth.Means[basis]; ok {
				f = append(f, Figure{Key: key + string(basis), Value: gp, Unit: Share, Basis: basis})
			}
		}
		if growth.HasHours {
			f = append(f, Figure{Key: key + "hours", Value: growth.Hours, Unit: Share, Basis: Readings})
		}
	}
	return f
}

func (t TotalState) figures() Figures {
	var f Figures
	for _, facts := range t.Bases {
		f = append(f, Figure{
			Key: fmt.Sprintf("total.%s.%s", NameKey(t.Total.Name), facts.Basis), Value: facts.Sum.Total,
			Unit: t.Unit, Basis: facts.Basis, Notes: facts.Sum.Notes(),
		})
	}
	return f
}

// Figures lists the work's figures, each basis under its own keys. A work that
// is not started has none.
func (w WorkState) Figures(asOf Day) Figures {
	var f Figures
	for _, facts := range w.Bases {
		key := fmt.Sprintf("due.%s.%s.%s.", NameKey(w.Surface.Name), NameKey(w.Work.Name), facts.Basis)
		notes := facts.Total.Notes()
		f = append(f,
			Figure{Key: key + "total", Value: facts.Total.Total, Unit: w.Unit, Basis: facts.Basis, Notes: notes},
			Figure{Key: key + "target", Value: facts.Target, Unit: w.Unit, Basis: facts.Basis},
			Figure{Key: key + "since", Value: float64(facts.Since), Unit: Date, Basis: facts.Basis})
		f = append(f, facts.dates(key, asOf)...)
	}
	if w.Rain != nil {
		key := fmt.Sprintf("due.%s.%s.rain_mm", NameKey(w.Surface.Name), NameKey(w.Work.Name))
		f = append(f, Figure{Key: key, Value: w.Rain.MM, Unit: Millimetres, Basis: NoBasis})
	}
	return f
}

// dates lists the dates of a count under the key.
func (d DueFacts) dates(key string, asOf Day) Figures {
	var f Figures
	if date := d.Date(); date.Known {
		f = append(f, Figure{Key: key + "days_until", Value: float64(date.Day - asOf), Unit: Days, Basis: d.Basis})
	}
	for _, named := range []struct {
		name string
		at   Passage
	}{{"date", d.Date()}, {"early", d.Early}, {"middle", d.Middle}, {"late", d.Late}, {"path", d.Path}} {
		if named.at.Known {
			f = append(f, Figure{Key: key + named.name, Value: float64(named.at.Day), Unit: Date, Basis: d.Basis})
		}
	}
	return f
}

// Figures lists the dates of the mark, each basis under its own keys.
func (m MarkState) Figures(total TotalState, asOf Day) Figures {
	var f Figures
	for _, facts := range m.Bases {
		key := fmt.Sprintf("mark.%s.%s.%s.", NameKey(total.Total.Name), NameKey(m.Mark.Name), facts.Basis)
		f = append(f, facts.dates(key, asOf)...)
	}
	return f
}

// Notes says in words what the sum rests on; nil when every day is there on its
// own basis.
func (s Sum) Notes() []string {
	var notes []string
	for _, part := range []struct {
		days int
		what string
	}{
		{s.Missing, "missing"},
		{s.StandIn, "on the other mean"},
		{s.Other, "from another station"},
		{s.Line, "on a straight line"},
	} {
		if part.days > 0 {
			notes = append(notes, fmt.Sprintf("%d %s %s", part.days, plural(part.days, "day"), part.what))
		}
	}
	return notes
}

func plural(n int, word string) string {
	if n == 1 {
		return word
	}
	return word + "s"
}
