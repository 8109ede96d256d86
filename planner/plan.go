package planner

// Outlook is every day ahead: one path, which sheets compute on, and members,
// whose spread says how sure a date is.
type Outlook struct {
	AsOf Day // the first day ahead
	// Start is the first day that path and members cover: AsOf, or the first
	// day before it that is missing from the record and too long a gap for a
	// straight line, so that a date never runs late for missing days.
	Start Day
	Path  []DayFacts
	// Members are as long as Path; there is at least one. With a single member
	// no spread is known.
	Members [][]DayFacts
	Typed   int // days from AsOf on that were typed by hand
	Years   int // past years among the members; 0 when the last days stand for all
	// Engine is the number of the engine that made it, kept with what is issued.
	Engine int
}

// SpreadKnown reports whether early and late dates mean anything.
func (o Outlook) SpreadKnown() bool { return len(o.Members) > 1 }

// end is the day after the last day covered.
func (o Outlook) end() Day { return o.Start + Day(len(o.Path)) }

// at returns a day of the path or of a member; an empty day outside it.
func (o Outlook) at(days []DayFacts, day Day) DayFacts {
	if i := int(day - o.Start); i >= 0 && i < len(days) {
		return days[i]
	}
	return DayFacts{Day: day}
}

// Ahead makes the days ahead of a record.
type Ahead interface {
	// Outlook returns the days ahead of the day asOf, from the record up to
	// the day before and from days typed by hand. An empty record with nothing
	// typed gives days of which nothing is known.
	Outlook(record Record, hand []HandDay, asOf Day) Outlook
}

// Plan is all that figures are computed from: one site on one morning.
type Plan struct {
	Site     Site
	AsOf     Day // figures stand on readings up to the day before
	Record   Record
	Surfaces []Surface
	Works    []Work // of all surfaces
	Dropped  []Work // works of the surfaces that were dropped: what they gave stays given
	Totals   []Total
	Closed   []Closed
	Log      []Entry // by day, undone entries left out
	Outlook  Outlook
	Hand     []HandDay // days ahead as typed, with what the outlook does not hold
	Rain     []Rain    // gauge readings since some days ago, by time; may be empty
}

// Surface returns the surface with the id.
func (p Plan) Surface(id SurfaceID) (Surface, bool) {
	for _, surface := range p.Surfaces {
		if surface.ID == id {
			return surface, true
		}
	}
	return Surface{}, false
}

// WorksOn returns the works of the surface.
func (p Plan) WorksOn(id SurfaceID) []Work {
	var works []Work
	for _, work := range p.Works {
		if work.Surface == id {
			works = append(works, work)
		}
	}
	return works
}
