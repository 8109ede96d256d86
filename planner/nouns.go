package planner

import (
	"time"

	"swardbook/calc"
)

// Ids never change and are never given twice inside a team: renaming keeps
// them, dropping archives them. Zero means "not kept yet".
type (
	// SiteID names a site for good.
	SiteID int64
	// StationID names a weather station for good.
	StationID int64
	// SurfaceID names a surface for good.
	SurfaceID int64
	// WorkID names a work for good.
	WorkID int64
	// TotalID names a season total for good.
	TotalID int64
	// EntryID names an entry of the work log for good.
	EntryID int64
	// ChangeID numbers the change log.
	ChangeID int64
)

// Dated is a setting that moves figures: its values, each valid from a day,
// oldest first. Values are added, never replaced, so that an old figure can
// be computed again.
type Dated[T any] []From[T]

// From is one value of a Dated setting and the first day it holds.
type From[T any] struct {
	Day   Day `json:"from"`
	Value T   `json:"value"`
}

// On returns the value that holds on the day; before the first one's day the
// first holds. The zero value comes back when there is none.
func (d Dated[T]) On(day Day) (value T) {
	for i, from := range d {
		if i == 0 || from.Day <= day {
			value = from.Value
		}
	}
	return value
}

// With returns the setting with one more value, valid from the day; of two
// values of one day the later added holds.
func (d Dated[T]) With(day Day, value T) Dated[T] {
	at := len(d)
	for at > 0 && d[at-1].Day > day {
		at--
	}
	out := make(Dated[T], 0, len(d)+1)
	out = append(out, d[:at]...)
	out = append(out, From[T]{Day: day, Value: value})
	return append(out, d[at:]...)
}

// Always is a setting with one value that holds on every day.
func Always[T any](value T) Dated[T] { return Dated[T]{{Day: DayMin, Value: value}} }

// Site is one course or ground.
type Site struct {
	ID       SiteID         `json:"id"`
	Name     string         `json:"name"`
	Lat      float64        `json:"lat"` // degrees, north positive
	Lon      float64        `json:"lon"` // degrees, east positive
	Zone     string         `json:"zone"`
	Units    Units          `json:"units"`
	Rules    Dated[DayRule] `json:"rules"`
	Archived bool           `json:"archived,omitempty"`
}

// SeasonStart is where a season total starts when nothing else is said: 1
// January north of the equator, 1 July south of it.
func (s Site) SeasonStart() MonthDay {
	if s.Lat < 0 {
		return MonthDay{Month: time.July, Day: 1}
	}
	return MonthDay{Month: time.January, Day: 1}
}

// Location loads the site's time zone.
func (s Site) Location() (*time.Location, error) {
	zone, err := time.LoadLocation(s.Zone)
	if err != nil || s.Zone == "" || s.Zone == "Local" { // the last two are the machine's, not the site's
		return nil, Problemf(Invalid, "the zone %q is not known", s.Zone).
			WithHint("Zones are written like America/New_York or Europe/Dublin.")
	}
	return zone, nil
}

// Station is where readings come from. Of a site's stations the first by rank
// gives the record.
type Station struct {
	ID       StationID `json:"id"`
	Site     SiteID    `json:"site"`
	Name     string    `json:"name"`
	Rank     int       `json:"rank"` // 1 is first
	Archived bool      `json:"archived,omitempty"`
}

// Surface is a kind of turf managed as one: greens, tees, pitch 2.
type Surface struct {
	ID       SurfaceID   `json:"id"`
	Site     SiteID      `json:"site"`
	Name     string      `json:"name"`
	Turf     Dated[Turf] `json:"turf"`
	AreaM2   float64     `json:"area_m2,omitempty"` // 0 when the lead has not said
	Parts    []Part      `json:"parts,omitempty"`   // none: the surface is done as a whole
	Archived bool        `json:"archived,omitempty"`
}

// Turf is what grows on a surface: it may change by date (overseeding), and
// each day uses its own.
type Turf struct {
	Grass string           `json:"grass"` // cool, warm, cool-f, warm-f or own
	Curve calc.GrowthCurve `json:"curve"`
	// CeilingGM2 is the most nitrogen the surface uses in a month of perfect
	// growing weather, g N/m²; 0 when the lead has not said.
	CeilingGM2 float64 `json:"ceiling_g_m2,omitempty"`
	// BudgetGM2 is the nitrogen set aside for a season, g N/m²; 0 when not said.
	BudgetGM2 float64 `json:"budget_g_m2,omitempty"`
}

// Counts says by what a work or a season total counts.
type Counts string

// The four measures.
const (
	ByDays       Counts = "days"
	ByDegreeDays Counts = "degree-days"
	ByGrowthDays Counts = "growth-days"
	ByNitrogen   Counts = "nitrogen"
)

// Counting is what is counted and how.
type Counting struct {
	Counts     Counts          `json:"counts"`
	Method     calc.Method     `json:"method,omitempty"`    // degree days only
	Thresholds calc.Thresholds `json:"thresholds,omitzero"` // degree days only, °C
}

// Work is what comes round again on a surface: a feed, a regulator spray, a
// cut.
type Work struct {
	ID       WorkID              `json:"id"`
	Surface  SurfaceID           `json:"surface"`
	Name     string              `json:"name"`
	Settings Dated[WorkSettings] `json:"settings"`
	Archived bool                `json:"archived,omitempty"`
}

// WorkSettings are the settings of a work that move its figures.
type WorkSettings struct {
	Counting
	// Target is the running total at which the work falls due, in the unit of
	// what it counts. A work that counts by nitrogen falls due when the balance
	// is down to Target, the lead's reserve in g N/m² (0 or more).
	Target float64 `json:"target"`
	// Basis is the work's own mean; empty until the first weather file says
	// whether the site has hourly readings.
	Basis Basis `json:"basis,omitempty"`
	// Latest is the total past which the work is overdue, once a day has gone by
	// since it fell due; 0 asks for the default, a tenth over the target. A work
	// that counts by nitrogen has the default.
	Latest float64    `json:"latest,omitempty"`
	Limits Limits     `json:"limits,omitzero"`
	Season WorkSeason `json:"season,omitzero"`
	Origin Origin     `json:"origin,omitzero"`
	// WateredIn says that the count starts the day after the work was watered
	// in, not the day after it was done.
	WateredIn bool `json:"watered_in,omitempty"`
	// RainFreeHours is how long after the work rain puts it in question.
	RainFreeHours float64 `json:"rain_free_hours,omitempty"`
}

// Total is a season total: a running total since a start date.
type Total struct {
	ID       TotalID              `json:"id"`
	Site     SiteID               `json:"site"`
	Name     string               `json:"name"`
	Settings Dated[TotalSettings] `json:"settings"`
	Marks    []Mark               `json:"marks,omitempty"`
	Archived bool                 `json:"archived,omitempty"`
}

// TotalSettings are the settings of a season total that move its figures.
type TotalSettings struct {
	Counting
	Curve calc.GrowthCurve `json:"curve,omitzero"` // growth days only
	Start MonthDay         `json:"start"`
}

// Mark is a total that means something to the lead: "first spray" at 120.
type Mark struct {
	Name string  `json:"name"`
	At   float64 `json:"at"` // in the unit of the season total
}

// Result says how an entry turned out.
type Result string

// The results of an entry.
const (
	Good     Result = ""         // it counts
	Doubtful Result = "doubtful" // it counts, and the old due date stands beside the new
	Lost     Result = "lost"     // it did not happen
)

// Entry is one pass of the work log: what was done, where, when, at what rate,
// by whom.
type Entry struct {
	ID     EntryID   `json:"id"`
	Site   SiteID    `json:"site"`
	Day    Day       `json:"day"`
	Passes []Pass    `json:"passes"`
	By     string    `json:"by"` // who logged it, for people
	At     time.Time `json:"at"` // when it was logged
	// ByID is the same by the id that never changes; empty in entries from before
	// it was kept.
	ByID   string `json:"by_id,omitempty"`
	Note   string `json:"note,omitempty"`
	Result Result `json:"result,omitempty"`
	// Clock is when on the day it was done, in words like "06:10"; empty when
	// not said.
	Clock   string `json:"clock,omitempty"`
	Watered Day    `json:"watered,omitempty"` // when it was watered in; 0 when not said
	// RainCounts says that it counts although it rained within the rain-free
	// hours: it is not asked again.
	RainCounts bool `json:"rain_counts,omitempty"`
	Undone     bool `json:"undone,omitempty"`
}

// Pass is one work done in an entry.
type Pass struct {
	Work WorkID `json:"work"`
	// NitrogenGM2 is the nitrogen given, g N/m²; 0 when none was.
	NitrogenGM2 float64 `json:"nitrogen_g_m2,omitempty"`
	Rate        Rate    `json:"rate,omitzero"`        // as it was said
	Part        PartID  `json:"part,omitempty"`       // the part done; 0 for the whole surface
	Share       float64 `json:"share,omitempty"`      // of the part in the area when it was logged; 0 when not said
	SlowShare   float64 `json:"slow_share,omitempty"` // of the nitrogen, 0 to 1
	SlowWeeks   float64 `json:"slow_weeks,omitempty"` // over which the slow share comes
}

// LoggedBy reports whether it is the person's own entry: by the id; by the name
// where the entry has no id.
func (e Entry) LoggedBy(person Person) bool {
	if e.ByID != "" {
		return e.ByID == person.ID
	}
	return e.By != "" && e.By == person.Name
}

// Of returns the entry's pass of the work.
func (e Entry) Of(work WorkID) (Pass, bool) {
	for _, pass := range e.Passes {
		if pass.Work == work {
			return pass, true
		}
	}
	return Pass{}, false
}

// Noun is one thing that is kept: Site, Station, Surface, Work, Total, Closed,
// Entry, Post, People or Channel, by value. A noun with id 0 is new; dropping one means keeping it archived
// (an Entry: undone).
type Noun interface {
	// Kind is the noun's word: site, station, surface, work, total, closed, entry,
	// post, people, channel.
	Kind() string
	// Key is the noun's id, 0 when it is not kept yet.
	Key() int64
	// Check refuses a noun that must not be kept, as a *Problem.
	Check() error
}

// Kind returns "site".
func (Site) Kind() string { return "site" }

// Kind returns "station".
func (Station) Kind() string { return "station" }

// Kind returns "surface".
func (Surface) Kind() string { return "surface" }

// Kind returns "work".
func (Work) Kind() string { return "work" }

// Kind returns "total".
func (Total) Kind() string { return "total" }

// Kind returns "entry".
func (Entry) Kind() string { return "entry" }

// Key returns the site's id.
func (s Site) Key() int64 { return int64(s.ID) }

// Key returns the station's id.
func (s Station) Key() int64 { return int64(s.ID) }

// Key returns the surface's id.
func (s Surface) Key() int64 { return int64(s.ID) }

// Key returns the work's id.
func (w Work) Key() int64 { return int64(w.ID) }

// Key returns the total's id.
func (t Total) Key() int64 { return int64(t.ID) }

// Key returns the entry's id.
func (e Entry) Key() int64 { return int64(e.ID) }

// Check refuses a site without a usable name, place, zone, units or day rule.
func (s Site) Check() error {
	if err := CheckName(s.Name); err != nil {
		return err
	}
	if !(s.Lat >= -90 && s.Lat <= 90) || !(s.Lon >= -180 && s.Lon <= 180) {
		return Problemf(Invalid, "the place %g, %g is not on earth", s.Lat, s.Lon).
			WithHint("lat is -90 to 90 (south negative), lon -180 to 180 (west negative).")
	}
	if s.Units != Celsius && s.Units != Fahrenheit {
		return Problemf(Invalid, "units %q are not known", s.Units).WithHint("Use units:c or units:f.")
	}
	if len(s.Rules) == 0 {
		return Problemf(Invalid, "the site has no day rule")
	}
	for _, rule := range s.Rules {
		if err := rule.Value.Check(); err != nil {
			return err
		}
	}
	_, err := s.Location()
	return err
}

// Check refuses a station without a usable name, site or rank.
func (s Station) Check() error {
	if s.Site == 0 {
		return Problemf(Invalid, "the station has no site")
	}
	if s.Rank < 1 {
		return Problemf(Invalid, "rank %d is not a rank", s.Rank).WithHint("1 is first.")
	}
	return CheckName(s.Name)
}

// Check refuses a surface without a usable name, site or turf.
func (s Surface) Check() error {
	if s.Site == 0 || len(s.Turf) == 0 {
		return Problemf(Invalid, "the surface needs a site and a grass")
	}
	for _, turf := range s.Turf {
		if _, err := turf.Value.Curve.Potential(0); err != nil {
			return Problemf(Invalid, "the growth curve of %s cannot be used", s.Name).WithCause(err)
		}
		if !(turf.Value.BudgetGM2 >= 0 && turf.Value.BudgetGM2 <= 100) {
			return Problemf(Invalid, "%g g N/m² is no budget of a season", turf.Value.BudgetGM2).WithHint("Give 0 to 100 g N/m².")
		}
		if !(turf.Value.CeilingGM2 >= 0 && turf.Value.CeilingGM2 <= 20) {
			return Problemf(Invalid, "%g g N/m² a month is not a ceiling", turf.Value.CeilingGM2).
				WithHint("Usual figures are 3 (cool-season) and 4 (warm-season) g N/m² a month: common practice.")
		}
	}
	if !(s.AreaM2 >= 0 && s.AreaM2 <= 1e7) {
		return Problemf(Invalid, "an area of %g m² cannot be used", s.AreaM2).WithHint("Give square metres, like area:5200.")
	}
	if err := s.checkParts(); err != nil {
		return err
	}
	return CheckName(s.Name)
}

// Check refuses a work without a usable name, surface, measure or target.
func (w Work) Check() error {
	if w.Surface == 0 || len(w.Settings) == 0 {
		return Problemf(Invalid, "the work needs a surface and a target")
	}
	for _, settings := range w.Settings {
		if err := settings.Value.check(); err != nil {
			return err
		}
	}
	return CheckName(w.Name)
}

func (s WorkSettings) check() error {
	if err := s.Counting.check(); err != nil {
		return err
	}
	if s.Counts == ByNitrogen {
		if !(s.Target >= 0 && s.Target <= 50) {
			return Problemf(Invalid, "a reserve of %g g N/m² cannot be used", s.Target).WithHint("Give 0 to 50 g N/m².")
		}
	} else if !(s.Target > 0 && s.Target <= MaxTarget) {
		return Problemf(Invalid, "a target of %s cannot be used", number(s.Target)).
			WithHint("Give a number above 0, at most %d, like target:200.", MaxTarget)
	}
	if s.Latest != 0 && s.Counts == ByNitrogen {
		return Problemf(Invalid, "latest does not go with nitrogen").WithHint("A feed is overdue a tenth past what was there.")
	}
	if s.Latest > MaxTarget {
		return Problemf(Invalid, "latest %s cannot be used", number(s.Latest)).WithHint("Give at most %d.", MaxTarget)
	}
	if s.Latest != 0 && !(s.Latest >= s.Target) {
		return Problemf(Invalid, "latest %g is before the target %g", s.Latest, s.Target).
			WithHint("Latest is the total past which the work is overdue.")
	}
	if err := s.Limits.check(); err != nil {
		return err
	}
	if !(s.RainFreeHours >= 0 && s.RainFreeHours <= 240) {
		return Problemf(Invalid, "%g rain-free hours cannot be used", s.RainFreeHours).WithHint("Give 0 to 240, as the label says.")
	}
	switch s.Basis {
	case "", Hourly, Midrange:
		return nil
	}
	return Problemf(Invalid, "%q is not a mean", s.Basis).WithHint("Use mean:hourly or mean:midrange.")
}

// MaxTarget bounds targets, latest totals and marks: no interval is longer than
// a decade of hot days.
const MaxTarget = 100000

func (c Counting) check() error {
	if _, err := NewMeasure(c, nil); err != nil {
		return Problemf(Invalid, "cannot count this way: %v", err).WithCause(err)
	}
	return nil
}

// Check refuses a season total without a usable name, site or measure.
func (t Total) Check() error {
	if t.Site == 0 || len(t.Settings) == 0 {
		return Problemf(Invalid, "the total needs a site and a measure")
	}
	for _, settings := range t.Settings {
		if start := settings.Value.Start; !start.ofYear() {
			return Problemf(Invalid, "a season cannot start on %s", start).WithHint("Write MM-DD, like from:03-01.")
		}
		if c := settings.Value.Counts; c != ByDegreeDays && c != ByGrowthDays {
			return Problemf(Invalid, "a season total cannot count %s", c).WithHint("Use counts:degree-days or counts:growth-days.")
		}
		if err := settings.Value.Counting.check(); err != nil {
			return err
		}
		if _, err := settings.Value.Curve.Potential(0); settings.Value.Counts == ByGrowthDays && err != nil {
			return Problemf(Invalid, "the growth curve of %s cannot be used", t.Name).WithCause(err)
		}
	}
	for _, mark := range t.Marks {
		if err := CheckName(mark.Name); err != nil {
			return err
		}
		if !(mark.At > 0 && mark.At <= MaxTarget) {
			return Problemf(Invalid, "a mark at %s cannot be used", number(mark.At)).
				WithHint("Give a total above 0, at most %d, like mark:\"first spray\" at:120.", MaxTarget)
		}
	}
	return CheckName(t.Name)
}

const (
	// WordGM2 is the most nitrogen of one pass that is taken at its word, g N/m²;
	// a bare number above it is most often an amount of product.
	WordGM2 = 5
	// maxPassGM2 is the most nitrogen of one pass: 500 kg/ha, more than turf is
	// given in a year (common practice).
	maxPassGM2 = 50
)

// Check refuses an entry without a site, a day or a work, and nitrogen that
// cannot have been given.
func (e Entry) Check() error {
	if e.Site == 0 || len(e.Passes) == 0 {
		return Problemf(Invalid, "the entry names no work")
	}
	if e.Day < DayMin || e.Day > DayMax {
		return Problemf(Invalid, "the day %d is outside the years 1700 to 2299", e.Day)
	}
	if e.Result != Good && e.Result != Doubtful && e.Result != Lost {
		return Problemf(Invalid, "%q is not a result", e.Result).WithHint("Use result:good, result:doubtful or result:lost.")
	}
	if e.Watered != 0 && (e.Watered < e.Day || e.Watered > e.Day+31) {
		return Problemf(Invalid, "watered in on %s does not go with %s", e.Watered, e.Day).WithHint("Watering in comes on the day or in the month after.")
	}
	seen := map[WorkID]bool{}
	for _, pass := range e.Passes {
		if seen[pass.Work] {
			return Problemf(Invalid, "the entry names the same work twice").WithHint("Log a second pass as an entry of its own.")
		}
		seen[pass.Work] = true
		if err := pass.check(); err != nil {
			return err
		}
	}
	return nil
}

func (p Pass) check() error {
	if p.Work == 0 {
		return Problemf(Invalid, "the entry names no work")
	}
	if err := p.Rate.Check(); err != nil {
		return err
	}
	if !(p.SlowShare >= 0 && p.SlowShare <= 1 && p.SlowWeeks >= 0 && p.SlowWeeks <= 52) || p.SlowShare > 0 && p.SlowWeeks == 0 {
		return Problemf(Invalid, "a slow share of %g over %g weeks cannot be used", p.SlowShare, p.SlowWeeks).
			WithHint("Give its percent and its weeks, like slow:40 weeks:8.")
	}
	if !(p.NitrogenGM2 >= 0 && p.NitrogenGM2 <= maxPassGM2) {
		return tooMuchNitrogen(p.NitrogenGM2)
	}
	return nil
}
