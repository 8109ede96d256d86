package planner

// Limits are what the lead types from the label and the local rules. They move
// or flag dates; Swardbook knows no label.
type Limits struct {
	LeastDays int     `json:"least_days,omitempty"` // least days between two passes
	MostTimes int     `json:"most_times,omitempty"` // most passes a season
	MostTotal float64 `json:"most_total,omitempty"` // most given a season, in g N/m², g/m² or mL/m²
}

func (l Limits) check() error {
	if l.LeastDays < 0 || l.LeastDays > 366 || l.MostTimes < 0 || l.MostTimes > 366 || !(l.MostTotal >= 0 && l.MostTotal <= MaxTarget) {
		return Problemf(Invalid, "the limits %d days, %d times, %g cannot be used", l.LeastDays, l.MostTimes, l.MostTotal).
			WithHint("Give them as the label does, like gap:14 most:6.")
	}
	return nil
}

// WorkSeason says when a work is on. The zero value is on all year.
type WorkSeason struct {
	From    MonthDay `json:"from,omitzero"`
	To      MonthDay `json:"to,omitzero"`       // included
	Resting bool     `json:"resting,omitempty"` // the lead says so
	// StartsEmpty takes a nitrogen balance as nothing left when the season is on
	// again; else it goes on from where it was.
	StartsEmpty bool `json:"starts_empty,omitempty"`
}

// On reports whether the work is on.
func (s WorkSeason) On(day Day) bool {
	return !s.Resting && (s.From == MonthDay{} || s.From.until(s.To, day))
}

// Start is the first day of the season that the day lies in; DayMin for a work
// that is on all year.
func (s WorkSeason) Start(day Day) Day {
	if s.From == (MonthDay{}) {
		return DayMin
	}
	return s.From.OnOrBefore(day)
}

// next is the first day after the given one on which the work is on; unknown
// where the lead has it resting.
func (s WorkSeason) next(day Day) Passage {
	if s.Resting || s.From == (MonthDay{}) {
		return Passage{}
	}
	start := s.From.In(day.Year())
	if start <= day {
		start = s.From.In(day.Year() + 1)
	}
	return Passage{start, true}
}

// Origin says where a target comes from. A target does not transfer.
type Origin struct {
	Source     string  `json:"source,omitempty"`
	Ingredient string  `json:"ingredient,omitempty"`
	Grass      string  `json:"grass,omitempty"`
	HeightMM   float64 `json:"height_mm,omitempty"`
}

// SeasonUse is what a work has taken of its limits this season; on a surface
// that is done in parts, what its most treated part has had.
type SeasonUse struct {
	Since Day
	Times int // passes since then, lost ones left out
	// Given is the sum of what they gave: nitrogen (g N/m²) of a work that counts
	// by it, else of the product, by the kind of the newest rate (g/m² or mL/m²;
	// g N/m² where that is all that was said).
	Given float64
}

// seasonUse counts the passes of the work since the season's start: its own,
// else the site's.
func (p Plan) seasonUse(work Work, settings WorkSettings) SeasonUse {
	use := SeasonUse{Since: settings.Season.Start(p.AsOf)}
	if use.Since == DayMin {
		use.Since = p.Site.SeasonStart().OnOrBefore(p.AsOf)
	}
	surface, _ := p.Surface(work.Surface)
	parts := surface.ActiveParts()
	if len(parts) == 0 {
		parts = []Part{{}}
	}
	amount := p.amountOf(work, settings)
	for _, part := range parts {
		times, given := p.usedOn(part, work, use.Since, amount)
		use.Times, use.Given = max(use.Times, times), max(use.Given, given)
	}
	return use
}

// amountOf says how much of what a season's most is of a pass gave.
func (p Plan) amountOf(work Work, settings WorkSettings) func(Pass) float64 {
	if settings.Counts == ByNitrogen {
		return func(pass Pass) float64 { return pass.NitrogenGM2 }
	}
	var kind RateKind
	for _, entry := range p.Log {
		if pass, ok := entry.Of(work.ID); ok && pass.Rate.Value > 0 && entry.Result != Lost {
			kind = pass.Rate.Kind
		}
	}
	return func(pass Pass) float64 {
		if pass.Rate.Kind != kind {
			return 0
		}
		return pass.Rate.Value
	}
}

// usedOn counts what one part of the surface has had since the day.
func (p Plan) usedOn(part Part, work Work, since Day, amount func(Pass) float64) (times int, given float64) {
	for _, entry := range p.Log {
		pass, ok := entry.Of(work.ID)
		if !ok || entry.Day < since || entry.Result == Lost || pass.Part != 0 && pass.Part != part.ID {
			continue
		}
		times++
		given += amount(pass)
	}
	return times, given
}

// full says which limit of the season leaves no further pass; "" when none.
func (u SeasonUse) full(limits Limits) string {
	switch {
	case limits.MostTimes > 0 && u.Times >= limits.MostTimes:
		return "times"
	case limits.MostTotal > 0 && u.Given >= limits.MostTotal:
		return "total"
	}
	return ""
}
