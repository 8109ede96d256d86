package planner

import "slices"

// Feed is nitrogen given to a surface on a day, by its share of the area.
type Feed struct {
	Day      Day
	QuickGM2 float64 // there at once
	SlowGM2  float64 // comes in a straight line over the weeks after
	Weeks    float64
}

// released is how much of the slow nitrogen came on the day: an even share on
// each day of the weeks that follow (common practice).
func (f Feed) released(day Day) float64 {
	span := 7 * f.Weeks
	if after := float64(day - f.Day); f.SlowGM2 > 0 && span > 0 && after > 0 {
		return f.SlowGM2 * (min(after, span) - min(after-1, span)) / span
	}
	return 0
}

// feeds lists the nitrogen given to the surface by any of its works, by day,
// from the day since on, those of works dropped since too. Lost passes are left
// out.
func (p Plan) feeds(surface Surface, since Day) []Feed {
	onSurface := map[WorkID]bool{}
	for _, work := range slices.Concat(p.Works, p.Dropped) {
		onSurface[work.ID] = work.Surface == surface.ID
	}
	var feeds []Feed
	for _, entry := range p.Log {
		if entry.Result == Lost || entry.Day < since {
			continue
		}
		for _, pass := range entry.Passes {
			if !onSurface[pass.Work] || pass.NitrogenGM2 <= 0 {
				continue
			}
			given := pass.NitrogenGM2 * pass.shareOf(surface)
			feeds = append(feeds, Feed{entry.Day, given * (1 - pass.SlowShare), given * pass.SlowShare, pass.SlowWeeks})
		}
	}
	return feeds
}

// releasedOn is the slow nitrogen of all feeds that came on the day.
func releasedOn(feeds []Feed) func(Day) float64 {
	return func(day Day) float64 {
		total := 0.0
		for _, feed := range feeds {
			total += feed.released(day)
		}
		return total
	}
}

// leftAfterLast is the balance at the end of the day of the newest feed: all
// that was there by then less what was used since the day after the first.
// Early feeds add up; a feed that came late starts from what was short.
func (use counter) leftAfterLast(feeds []Feed) float64 {
	if len(feeds) == 0 {
		return 0
	}
	last := feeds[len(feeds)-1].Day
	given := 0.0
	for _, feed := range feeds {
		given += feed.QuickGM2
	}
	return given - use.throughAlongPath(feeds[0].Day+1, last)
}

// throughAlongPath sums the days from first through last; days ahead and long
// gaps are taken from the path.
func (c counter) throughAlongPath(first, last Day) float64 {
	past := c.past(first, last+1)
	total := 0.0
	for day := first; day <= last; day++ {
		total += c.along(c.plan.Outlook.Path, past, day)
	}
	return total
}

// NitrogenState is a surface's nitrogen balance through yesterday.
type NitrogenState struct {
	Surface Surface
	Since   Day // the day of the first feed counted
	// GivenGM2 is all that was given since, quick and slow; SlowToComeGM2 the
	// part of it that has not come yet.
	GivenGM2, SlowToComeGM2 float64
	// SeasonGivenGM2 is what was given this season, BudgetGM2 what the lead has
	// set aside for it (0 when not said).
	SeasonGivenGM2, BudgetGM2 float64
	Bases                     []NitrogenFacts
}

// NitrogenFacts is a balance on one mean: left = given − still to come − used.
type NitrogenFacts struct {
	Basis   Basis
	Used    Sum // g N/m²
	LeftGM2 float64
}

// nitrogen is the balance of a surface that was fed; ok is false for others.
func (p Plan) nitrogen(surface Surface) (state NitrogenState, ok bool) {
	feeds := p.feeds(surface, p.balanceSince(surface))
	if len(feeds) == 0 {
		return NitrogenState{}, false
	}
	state = NitrogenState{Surface: surface, Since: feeds[0].Day, BudgetGM2: surface.Turf.On(p.AsOf).BudgetGM2}
	season := p.Site.SeasonStart().OnOrBefore(p.AsOf)
	quick := 0.0
	for _, feed := range feeds {
		state.GivenGM2 += feed.QuickGM2 + feed.SlowGM2
		quick += feed.QuickGM2
		state.SlowToComeGM2 += feed.SlowGM2
		if feed.Day >= season {
			state.SeasonGivenGM2 += feed.QuickGM2 + feed.SlowGM2
		}
	}
	released := releasedOn(feeds)
	came := 0.0
	for day := state.Since + 1; day < p.AsOf; day++ {
		came += released(day)
	}
	state.SlowToComeGM2 -= came
	for _, basis := range bothMeans() {
		used := counter{plan: p, measure: nitrogenUse{surface.Turf.On}, basis: basis}.past(state.Since+1, p.AsOf).sum
		state.Bases = append(state.Bases, NitrogenFacts{basis, used, quick + came - used.Total})
	}
	return state, true
}

// balanceSince is the day from which the surface's feeds count: that on which a
// work that counts by nitrogen and starts empty was last on again, else always.
func (p Plan) balanceSince(surface Surface) Day {
	since := DayMin
	for _, work := range p.WorksOn(surface.ID) {
		if settings := work.Settings.On(p.AsOf); settings.Counts == ByNitrogen && settings.Season.StartsEmpty {
			since = max(since, work.onSince(p.AsOf))
		}
	}
	return since
}

// Figures lists the balance.
func (n NitrogenState) Figures() Figures {
	key := "nitrogen." + NameKey(n.Surface.Name) + "."
	amount := func(name string, value float64, basis Basis) Figure {
		return Figure{Key: key + name, Value: value, Unit: NitrogenGM2, Basis: basis}
	}
	f := Figures{amount("given", n.GivenGM2, NoBasis), amount("slow_to_come", n.SlowToComeGM2, NoBasis),
		amount("season_given", n.SeasonGivenGM2, NoBasis)}
	if n.BudgetGM2 > 0 {
		f = append(f, amount("budget", n.BudgetGM2, NoBasis))
	}
	for _, facts := range n.Bases {
		f = append(f, amount(string(facts.Basis)+".used", facts.Used.Total, facts.Basis),
			amount(string(facts.Basis)+".left", facts.LeftGM2, facts.Basis))
	}
	return f
}
