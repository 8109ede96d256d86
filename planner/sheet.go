package planner

import (
	"context"
	"encoding/json"
	"fmt"
	"slices"
	"time"

	"swardbook/calc"
)

// SheetID names an issued sheet for good.
type SheetID int64

// Sheet is a weekly sheet as it was issued.
type Sheet struct {
	ID     SheetID
	Site   SiteID
	Form   int // the number of the sheet's form
	AsOf   Day
	Issued time.Time
	By     string
	Inputs []byte // the plan's inputs as issued, JSON
	Engine int    // of the outlook
	// Outlook is what the sheet computes on; its id is 0 for a sheet that was
	// kept without.
	Outlook IssuedOutlook
}

// OutlookID names days ahead as issued for good.
type OutlookID int64

// IssuedOutlook is the days ahead as they were issued.
type IssuedOutlook struct {
	ID       OutlookID
	AsOf     Day
	Issued   time.Time // of the first that was issued with the same path
	Revision int64     // of the weather record
	Sources  string    // where the days come from, in words
	Typed    int       // days typed by hand
	Years    int       // past years among the members
	Seed     int64     // of an engine that draws by chance; 0 for one that does not
	Engine   int
	Start    Day    // of the path
	Path     []byte // JSON of the days, in order
}

// Issue is the outlook as it is kept: its path, the revision of the record it
// stands on, and where the days come from in words.
func (o Outlook) Issue(at time.Time, revision int64, sources string) (IssuedOutlook, error) {
	path, err := json.Marshal(o.Path)
	if err != nil {
		return IssuedOutlook{}, fmt.Errorf("write the days ahead: %w", err)
	}
	return IssuedOutlook{AsOf: o.AsOf, Issued: at, Revision: revision, Sources: sources,
		Typed: o.Typed, Years: o.Years, Engine: o.Engine, Start: o.Start, Path: path}, nil
}

// SheetKeeper keeps the issued sheets of one team.
type SheetKeeper interface {
	// KeepSheet keeps a new sheet and returns it with its id, and its outlook
	// when that has a path: the same site, day, revision, engine and path are
	// kept once and come back with the id, time and words of the first. A site
	// that is not there is a NotFound problem.
	KeepSheet(ctx context.Context, sheet Sheet) (Sheet, error)
	// Sheet returns the issued sheet, or a NotFound problem.
	Sheet(ctx context.Context, id SheetID) (Sheet, error)
}

// SheetData is what a sheet shows: the days it computes on and, day by day,
// what every started work counts. All numbers come from the same counting as
// the due dates.
type SheetData struct {
	Days     []SheetDay
	Works    []SheetWork     // started works only
	Nitrogen []SheetNitrogen // of the surfaces that were fed, as in Evaluation.Nitrogen
}

// SheetNitrogen is the balance of a surface and what it is made of.
type SheetNitrogen struct {
	State  NitrogenState
	Feeds  []Feed
	Season Day        // from which feeds count as given this season
	Uses   []SheetUse // beside State.Bases
}

// SheetUse is the nitrogen that a surface uses on one mean.
type SheetUse struct {
	GM2 []float64 // of each day of the sheet, along the path
	// CarriedGM2 was used between the first feed and the sheet's first day; days
	// missing from the record are left out.
	CarriedGM2 float64
}

// SheetDay is one day of the sheet: the record's, with short gaps on a straight
// line, or the path's where the record has none.
type SheetDay struct {
	Facts DayFacts
	Path  bool // taken from the outlook's path
	// NextLowC is the low of the night after, when it is not that of the
	// sheet's next day.
	NextLowC Optional
}

// SheetWork is one work of the sheet.
type SheetWork struct {
	State  WorkState
	Rate   Rate // of the last pass
	Counts []SheetCount
	// Gap says that days since the last pass are missing from the record: early,
	// middle and late dates then differ inside the past too.
	Gap bool
}

// SheetCount is a work's count on one basis.
type SheetCount struct {
	Due     DueFacts
	Units   []float64 // of each day of the sheet, along the path
	Running []float64 // since the last pass; 0 through it
	// Through is the running total at the end of yesterday, along the path.
	Through float64
	// CarriedGM2 is the nitrogen used between the first feed and the sheet's
	// first day, missing days taken from the path.
	CarriedGM2 float64
	// Curves are the issued running totals of the early, middle and late date,
	// one value for each day of the sheet from the plan's morning on: of each day
	// the highest value so far, at the rank of the date among the members.
	Curves [3][]float64
}

const (
	sheetLookback = 400 // days: a work not done for longer has its sum cut off
	sheetAhead    = 92  // least days ahead that a sheet computes on: a quarter of a year
	sheetBeyond   = 14  // days past the last date of any work
	sheetRoom     = 7   // days before the last pass, to move its date
	sheetFeeds    = 120 // days back to the first feed of a balance; older ones are carried
)

// SheetOf computes the days and counts of a sheet of the plan, at least so many
// days ahead. Works last done more than 400 days ago are left out. A work that
// cannot be counted is an error.
func SheetOf(plan Plan, evaluation Evaluation, ahead int) (SheetData, error) {
	var data SheetData
	first, end := plan.AsOf-14, plan.AsOf+Day(max(ahead, sheetAhead))
	for _, state := range evaluation.Works {
		if len(state.Bases) == 0 || state.LastDone < plan.AsOf-sheetLookback {
			continue
		}
		data.Works = append(data.Works, SheetWork{State: state, Rate: plan.LastRate(state.Work.ID)})
		first = min(first, state.LastDone-sheetRoom)
		for _, facts := range state.Bases {
			for _, date := range []Passage{facts.Path, facts.Late} {
				if !date.Known {
					end = plan.Outlook.end()
				} else {
					end = max(end, date.Day+1+sheetBeyond)
				}
			}
			end = max(end, facts.Held.Day+1+sheetBeyond)
		}
	}
	for _, state := range evaluation.Nitrogen {
		first = min(first, max(state.Since, plan.AsOf-sheetFeeds))
	}
	end = min(end, max(plan.Outlook.end(), plan.AsOf+1))
	data.Days = plan.sheetDays(first, end)
	for i := range data.Works {
		if err := plan.fillSheetWork(&data.Works[i], first, end); err != nil {
			return SheetData{}, err
		}
	}
	for _, state := range evaluation.Nitrogen {
		data.Nitrogen = append(data.Nitrogen, plan.sheetNitrogen(state, first, end))
	}
	return data, nil
}

func (p Plan) sheetNitrogen(state NitrogenState, first, end Day) SheetNitrogen {
	nitrogen := SheetNitrogen{State: state, Feeds: p.feeds(state.Surface, p.balanceSince(state.Surface)),
		Season: p.Site.SeasonStart().OnOrBefore(p.AsOf)}
	for _, facts := range state.Bases {
		c := counter{plan: p, measure: nitrogenUse{state.Surface.Turf.On}, basis: facts.Basis}
		past := c.past(first, p.AsOf)
		var use SheetUse
		for day := first; day < end; day++ {
			use.GM2 = append(use.GM2, c.along(p.Outlook.Path, past, day))
		}
		use.CarriedGM2 = c.past(state.Since+1, first).sum.Total
		nitrogen.Uses = append(nitrogen.Uses, use)
	}
	return nitrogen
}

// sheetDays lists the days of the sheet.
func (p Plan) sheetDays(first, end Day) []SheetDay {
	days := make([]SheetDay, 0, end-first)
	on := func(day Day) (DayFacts, bool) {
		if facts, _ := p.Record.Filled(day); day < p.AsOf && !facts.Empty() {
			return facts, false
		}
		return p.Outlook.at(p.Outlook.Path, day), true
	}
	for day := first; day < end; day++ {
		facts, path := on(day)
		row := SheetDay{Facts: facts, Path: path}
		shown, _ := on(day + 1)
		next := p.Outlook.at(p.Outlook.Path, day+1)
		if !path {
			next = counter{plan: p}.next(day)
		}
		if next.HasExtremes != shown.HasExtremes || next.LowC != shown.LowC || day == end-1 {
			row.NextLowC = Optional{facts.LowC, facts.HasExtremes}
			if next.HasExtremes {
				row.NextLowC.Value = next.LowC
			}
		}
		days = append(days, row)
	}
	return days
}

func (p Plan) fillSheetWork(work *SheetWork, first, end Day) error {
	state := work.State
	measure, err := NewMeasure(state.Settings.Counting, state.Surface.Turf.On)
	if err != nil {
		return err
	}
	var feeds []Feed
	if state.Settings.Counts == ByNitrogen {
		feeds = p.feeds(state.Surface, p.balanceSince(state.Surface))
	}
	for _, facts := range state.Bases {
		c := counter{plan: p, measure: measure, basis: facts.Basis}
		if feeds != nil {
			c.less = releasedOn(feeds)
		}
		count := SheetCount{Due: facts}
		past := c.past(first, p.AsOf)
		work.Gap = work.Gap || c.past(facts.Since, p.AsOf).sum.Missing > 0
		total := 0.0
		for day := first; day < end; day++ {
			units := c.along(p.Outlook.Path, past, day)
			if day >= facts.Since {
				total += units
			}
			if day == p.AsOf-1 {
				count.Through = total
			}
			count.Units, count.Running = append(count.Units, units), append(count.Running, total)
		}
		if len(feeds) > 0 && feeds[0].Day+1 < first {
			count.CarriedGM2 = counter{plan: p, measure: measure, basis: facts.Basis}.throughAlongPath(feeds[0].Day+1, first-1)
		}
		count.Curves = c.sheetCurves(facts.Since, end)
		work.Counts = append(work.Counts, count)
	}
	return nil
}

// sheetCurves are the totals of each day from the morning on at the ranks of
// the early, middle and late date. The j-th earliest date over the members is
// the first day on which the j-th largest of their totals, each taken as its
// highest so far, reaches the target.
func (c counter) sheetCurves(since, end Day) (curves [3][]float64) {
	members := c.plan.Outlook.Members
	if len(members) == 0 {
		return curves
	}
	past := c.past(since, c.plan.AsOf)
	totals, highest := make([]float64, len(members)), make([]float64, len(members))
	for day := min(since, c.plan.AsOf); day < end; day++ {
		for i, member := range members {
			if day >= since {
				totals[i] += c.along(member, past, day)
			}
			if day <= c.plan.AsOf || totals[i] > highest[i] {
				highest[i] = totals[i]
			}
		}
		if day < c.plan.AsOf {
			continue
		}
		sorted := slices.Sorted(slices.Values(highest))
		for i, share := range []float64{0.1, 0.5, 0.9} {
			if rank, err := calc.Rank(share, len(sorted)); err == nil {
				curves[i] = append(curves[i], sorted[len(sorted)-rank])
			}
		}
	}
	return curves
}

// Released is the slow nitrogen of the feed that came on the day, g/m².
func (f Feed) Released(day Day) float64 { return f.released(day) }
