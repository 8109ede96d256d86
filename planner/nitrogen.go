package planner

// Feed is nitrogen given to a surface on a day.
type Feed struct {
	Day         Day
	NitrogenGM2 float64
}

// feeds lists the nitrogen given to the surface by any of its works, by day.
func (p Plan) feeds(id SurfaceID) []Feed {
	onSurface := map[WorkID]bool{}
	for _, work := range p.WorksOn(id) {
		onSurface[work.ID] = true
	}
	var feeds []Feed
	for _, entry := range p.Log {
		for _, pass := range entry.Passes {
			if onSurface[pass.Work] && pass.NitrogenGM2 > 0 {
				feeds = append(feeds, Feed{entry.Day, pass.NitrogenGM2})
			}
		}
	}
	return feeds
}

// leftAfterLastFeed is the surface's balance at the end of the day of its
// newest feed: all that was given less what was used since the day after the
// first. Early feeds add up; a feed that came late starts from what was short.
func (p Plan) leftAfterLastFeed(id SurfaceID, use counter) float64 {
	feeds := p.feeds(id)
	if len(feeds) == 0 {
		return 0
	}
	given := 0.0
	for _, feed := range feeds {
		given += feed.NitrogenGM2
	}
	last := feeds[len(feeds)-1].Day
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
