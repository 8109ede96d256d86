package planner

// ClosedID names closed days for good.
type ClosedID int64

// Closed are days on which named works may not be done: an ordinance, a
// tournament, a match, a renovation, a day without staff.
type Closed struct {
	ID       ClosedID `json:"id"`
	Site     SiteID   `json:"site"`
	Name     string   `json:"name"`            // why
	Works    []WorkID `json:"works,omitempty"` // none means all
	From     Day      `json:"from"`
	To       Day      `json:"to"`               // included
	Yearly   bool     `json:"yearly,omitempty"` // every year from the month and day of From to those of To
	Archived bool     `json:"archived,omitempty"`
}

// Kind returns "closed".
func (Closed) Kind() string { return "closed" }

// Key returns the id of the closed days.
func (c Closed) Key() int64 { return int64(c.ID) }

// longestClosed bounds a stretch of closed days that comes once: two years.
const longestClosed = 731

// Check refuses closed days without a site, a name or a stretch of days.
func (c Closed) Check() error {
	switch {
	case c.Site == 0:
		return Problemf(Invalid, "the closed days have no site")
	case c.From < DayMin || c.To > DayMax || c.To < c.From && !c.Yearly:
		return Problemf(Invalid, "closed days from %s to %s are no stretch of days", c.From, c.To).
			WithHint("Give the first and the last day, like from:2024-07-06 to:2024-07-07.")
	case !c.Yearly && c.To-c.From > longestClosed, c.Yearly && c.To-c.From > 366:
		return Problemf(Invalid, "%d closed days are too many", c.To-c.From+1).
			WithHint("Give at most two years once, or a part of a year with yearly:yes.")
	}
	return CheckName(c.Name)
}

// Covers reports whether the work may not be done on the day.
func (c Closed) Covers(work WorkID, day Day) bool {
	named := len(c.Works) == 0
	for _, id := range c.Works {
		named = named || id == work
	}
	if !named {
		return false
	}
	if !c.Yearly {
		return day >= c.From && day <= c.To
	}
	from, to := monthDayOf(c.From), monthDayOf(c.To)
	return from.until(to, day)
}

func monthDayOf(day Day) MonthDay {
	_, month, date := day.Date()
	return MonthDay{month, date}
}

// until reports whether the day's month and day lie from m to the other, both
// included, across the year's end where the other is earlier.
func (m MonthDay) until(to MonthDay, day Day) bool {
	at := monthDayOf(day).number()
	if m.number() <= to.number() {
		return at >= m.number() && at <= to.number()
	}
	return at >= m.number() || at <= to.number()
}

func (m MonthDay) number() int { return int(m.Month)*100 + m.Day }

// ClosedOn returns what closes the work on the day.
func (p Plan) ClosedOn(work WorkID, day Day) (Closed, bool) {
	for _, closed := range p.Closed {
		if closed.Covers(work, day) {
			return closed, true
		}
	}
	return Closed{}, false
}

// ClosedNote says that a due date is closed, and the open days either side.
type ClosedNote struct {
	Why    string
	Before Passage // the last open day before on which it may be done already
	After  Passage // the first open day after
}

// closedNote looks for open days either side of a date, from the earliest day on
// which the work may be done to a year after.
func (p Plan) closedNote(work WorkID, date, earliest Day) *ClosedNote {
	closed, ok := p.ClosedOn(work, date)
	if !ok {
		return nil
	}
	note := &ClosedNote{Why: closed.Name}
	for day := date - 1; day >= earliest; day-- {
		if _, closed := p.ClosedOn(work, day); !closed {
			note.Before = Passage{day, true}
			break
		}
	}
	for day := date + 1; day <= date+366; day++ {
		if _, closed := p.ClosedOn(work, day); !closed {
			note.After = Passage{day, true}
			break
		}
	}
	return note
}
