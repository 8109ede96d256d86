package planner

import (
	"context"
	"io"
	"time"
)

// Setup is everything a team has set up that is not archived (but for Dropped),
// each list in the order in which it was added.
type Setup struct {
	Sites    []Site
	Stations []Station
	Surfaces []Surface
	Works    []Work
	Dropped  []Work // works that were dropped, of surfaces that were not
	Totals   []Total
	Closed   []Closed
	Posts    []Post
	People   []People
	Channels []Channel
}

// Stamp says who changes something, when, and by which command line.
type Stamp struct {
	At      time.Time
	By      string
	Command string
	Undoes  ChangeID // the change that this one takes back; 0 for none
}

// Change is one row of the change log.
type Change struct {
	ID ChangeID
	Stamp
	Kind   string // of the noun
	Thing  int64  // its id
	Before Noun   // nil when the noun is new
	After  Noun
}

// Keeper keeps the set-up and the work log of one team.
type Keeper interface {
	// Setup returns all that is set up and not archived.
	Setup(ctx context.Context) (Setup, error)
	// Dropped returns the sites, surfaces and works that are archived; surfaces
	// and works only of what is not archived itself. The other lists are empty.
	Dropped(ctx context.Context) (Setup, error)
	// Entries returns the site's log, undone entries left out, by day and then
	// in the order logged.
	Entries(ctx context.Context, site SiteID) ([]Entry, error)
	// Save checks and keeps a noun and its row of the change log in one
	// transaction, and returns the noun with its id. A name in use under the
	// same parent (ignoring case) is a Taken problem, a parent that is not
	// there or is archived a NotFound problem; then nothing is kept.
	Save(ctx context.Context, stamp Stamp, noun Noun) (Noun, error)
	// Changes returns the newest changes, newest first, at most limit; kind
	// limits them to one kind of noun, "" takes all.
	Changes(ctx context.Context, kind string, limit int) ([]Change, error)
}

// Recorder keeps the weather of one team.
type Recorder interface {
	// Record returns the whole weather record of the site: that of its first
	// station by rank, days it lacks from the others (JoinStations). No station
	// or no readings is an empty record.
	Record(ctx context.Context, site SiteID) (Record, error)
	// Revision returns the Revision the record has now, without loading it.
	Revision(ctx context.Context, site SiteID) (int64, error)
	// SaveAhead keeps days ahead typed by hand, issued on the day; they replace
	// earlier ones of the same days from the issue day on. A day with neither
	// high nor low known (Cleared) takes a typed day back.
	SaveAhead(ctx context.Context, stamp Stamp, site SiteID, issued Day, days []HandDay) error
	// Ahead returns the days typed by hand that hold on the day asOf: of each
	// day from asOf on the newest typed on or before asOf, in order, cleared
	// ones left out.
	Ahead(ctx context.Context, site SiteID, asOf Day) ([]HandDay, error)
	// Rain returns what the gauge caught from one time to another, both
	// included, in UTC seconds, by time: that of the site's first station by rank
	// that has any reading of rain in between.
	Rain(ctx context.Context, site SiteID, from, to int64) ([]Rain, error)
}

// Importer reads station files into the record.
type Importer interface {
	// Import reads one file: into the record, or not at all. A file that cannot
	// be used (header not understood, nothing in it, more than 5 % of its rows
	// refused) is a Refused problem and leaves the record as it was. A station
	// that is to be added comes with the file, in the same step: its name in use
	// is a Taken problem.
	Import(ctx context.Context, request ImportRequest) (ImportReport, error)
	// Imports returns the newest imports into the site's stations, newest first,
	// at most limit, withdrawn ones too.
	Imports(ctx context.Context, site SiteID, limit int) ([]Import, error)
	// Withdraw takes an import back: its values leave the record, the values
	// that they replaced come back, and values that a later import gave too
	// stay. With dry nothing is changed and the report says what would be. An
	// import that is not there, or is withdrawn, is a NotFound problem.
	Withdraw(ctx context.Context, stamp Stamp, id ImportID, dry bool) (Withdrawal, error)
	// Export writes all readings and daily readings of a station as a file that
	// Import reads back to the same record.
	Export(ctx context.Context, station StationID, to io.Writer) error
}

// HandDay is one day ahead typed by hand.
type HandDay struct {
	Day     Day
	HighC   float64
	LowC    float64
	Cleared bool
	// What else may be typed, for the evening's post.
	HumidityPercent Optional // relative humidity in the hottest hour
	RainMM          Optional
	WindMS          Optional
}

// Optional is a number that may not be known.
type Optional struct {
	Value float64
	Known bool
}

// CheckHandDay refuses a day ahead that cannot be: one before the day it was
// typed on, impossible temperatures, humidity outside 0 to 100 %, rain or wind
// below 0 or beyond any storm. A cleared day needs no values.
func CheckHandDay(issued Day, day HandDay) error {
	switch {
	case issued < DayMin || day.Day > DayMax:
		return Problemf(Invalid, "a day ahead is outside the years 1700 to 2299")
	case day.Day < issued:
		return Problemf(Invalid, "%s is past.", day.Day.Short()).
			WithHint("Past days come from the station: /weather day or /weather file.")
	case day.Cleared:
		return nil
	}
	if err := (DailyReading{Day: day.Day, HighC: day.HighC, LowC: day.LowC}).Check(); err != nil {
		return Problemf(Invalid, "%s: %v", day.Day.Short(), err).WithCause(err)
	}
	for _, one := range []struct {
		name  string
		value Optional
		most  float64
	}{{"humidity in percent", day.HumidityPercent, 100}, {"rain in mm", day.RainMM, 2000}, {"wind in m/s", day.WindMS, 120}} {
		if one.value.Known && !(one.value.Value >= 0 && one.value.Value <= one.most) {
			return Problemf(Invalid, "%s: %g is no %s", day.Day.Short(), one.value.Value, one.name).WithHint("Give 0 to %g.", one.most)
		}
	}
	return nil
}

// ImportRequest asks to read one station file.
type ImportRequest struct {
	Stamp
	Station StationID
	// New is added with the file when Station is 0: both are kept, or neither.
	New      Station
	FileName string    // as the user named it; kept, never used as a path
	Content  io.Reader // read once, to its end
	Units    Units     // "" lets the header and the values say
	// What may have to be said of a file; all may be empty.
	Clock  string // of times without an offset: standard, wall, utc or an offset like -05:00
	Dates  string // d/m/y, m/d/y or y/m/d; the month of the first report, 2021-07
	Sensor string // which of several in the file counts
	// Progress, when not nil, is called now and then with the rows read so far.
	Progress func(rows int)
}

// ImportReport says what became of a station file.
type ImportReport struct {
	Format  string // "readings" or "daily"
	Units   Units
	Clock   string // how the times were read, in words: "offset in the file", "site standard time"
	Rows    int    // data rows of the file
	New     int    // rows that were not in the record
	Changed int    // rows that replaced another value
	Same    int    // rows already in the record with this value
	Empty   int    // rows whose value the file says is missing
	Refused int    // rows that could not be used
	// Refusals holds the first refused row of each reason and, up to a bound,
	// the rest, in line order.
	Refusals []Refusal
	From, To Day // first and last day of the readings taken; meaningless when none was
	Import   ImportID
	Station  StationID // that it was read into
	// Rain counts the gauge readings that came with the rows; all are 0 when the
	// file has none.
	Rain  RowCounts
	Notes []string // in sentences: what else was found, left out or taken for granted
	// Remembered is what is remembered for the station's next file: "sensor:roof".
	Remembered []string
}

// RowCounts says how values stood to those in the record.
type RowCounts struct {
	New     int // that were not in the record
	Changed int // that replaced another value
	Same    int // in the record with this value
}

// All is the number of values.
func (c RowCounts) All() int { return c.New + c.Changed + c.Same }

// Taken is the number of rows that are in the record after the import.
func (r ImportReport) Taken() int { return r.New + r.Changed + r.Same }

// Refusal is one refused row of a file.
type Refusal struct {
	Line   int    // counted from 1, the header included
	Value  string // the offending value, cut to a sane length
	Reason string // why, in words
	// Alike is how many rows were refused for this reason, this one included; it
	// stands with the first of them, and is 0 with the others.
	Alike int
}
