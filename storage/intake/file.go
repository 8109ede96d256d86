package intake

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"strings"
	"time"
	"unicode"
	"unicode/utf8"

	"swardbook/planner"
)

// The two things a station file holds, as File.Format names them.
const (
	Readings = "readings" // one temperature at one time a row
	Daily    = "daily"    // a day's high and low a row
)

// How the times of a file were read, as File.Clock says it.
const (
	ClockOffset = "offset in the file"
	ClockSite   = "site standard time"
	ClockWall   = "the clock on the wall, with summer time"
	ClockUTC    = "UTC" // or UTC+05:30
	ClockMixed  = "offset in the file, site standard time where there is none"
	ClockDates  = "dates only"
)

// Site is what intake needs to know of the site.
type Site struct {
	// OffsetSeconds is the site's standard time, east of UTC positive; times
	// written without an offset are in it, all year.
	OffsetSeconds int
	// Zone is where the site's clocks on the wall change; nil when it is not
	// known.
	Zone *time.Location
}

// How is what the file does not say by itself, and somebody did. All of it may
// be left empty.
type How struct {
	// Units is the unit of a file whose header names none.
	Units planner.Units
	// Clock is how times without an offset are read: standard, wall, utc, or an
	// offset like -05:00.
	Clock string
	// Dates is the order of dates in figures: d/m/y, m/d/y or y/m/d; of reports
	// that give the day of the month alone it is the month of the first, 2021-07.
	Dates string
	// Sensor names the one that counts of several in a file.
	Sensor string
	// UsualSensor and UsualDates are what was said of an earlier file of the
	// station: they answer a question, and are ignored where there is none.
	UsualSensor, UsualDates string
	// OnWallBefore says that an earlier file of the station was read on the clock
	// on the wall: one that does not show which clock it runs on then says so.
	OnWallBefore bool
	// Stopped, when not nil, ends the reading with its error, which comes back
	// wrapped.
	Stopped func() error
}

// Row is one data row of a file that can be used.
type Row struct {
	Line  int  // counted from 1, the header included; of a row over several lines its first
	Daily bool // Day holds the row, else Reading does
	// Empty rows hold no value: the file says that it is missing. Only the time
	// or the day is filled in.
	Empty   bool
	Reading planner.Reading
	Day     planner.DailyReading
	// HasRain says that the row's gauge reading is known, of an empty row too.
	HasRain bool
	Rain    planner.Rain
}

// RowError is a row that cannot be used. Reading goes on after it. Its Reason
// is one of a fixed set of sentences, without the value, so that rows can be
// counted by it.
type RowError struct {
	planner.Refusal
}

// Error names the line, the value and the reason.
func (e *RowError) Error() string {
	return fmt.Sprintf("line %d: %q: %s", e.Line, e.Value, e.Reason)
}

// File is an open station file.
type File struct {
	Format string        // Readings or Daily
	Units  planner.Units // of the file; rows are in °C all the same
	// Sensor and Dates are what was said, or remembered, and was needed: to be
	// remembered for the station. Empty when the file needed no telling.
	Sensor, Dates string
	// Notes says in sentences what else was found, left out or taken for granted.
	Notes []string

	rows  rowSource
	spool *spool
}

// Close gives back what the open file holds. It may be called twice.
func (f *File) Close() error { return f.spool.Close() }

// rowSource is what a format gives back: the rows after the header.
type rowSource interface {
	next() (Row, error)
	clock() string
}

// format is one kind of station file.
type format struct {
	name string
	// recognise looks at the file's first bytes, at most headBytes of them.
	recognise func(head []byte) bool
	open      func(src *spool, site Site, how How) (*File, error)
}

// formats is the table of formats, asked in order; the last takes what is left.
var formats = []format{
	{name: "this program's own export", recognise: recogniseExport, open: openExport},
	{name: "GHCN-Daily, a month a line", recognise: recogniseDly, open: openDly},
	{name: "GHCN-Daily, a value a line", recognise: recogniseByStation, open: openByStation},
	{name: "ISD-Lite", recognise: recogniseISDLite, open: openISDLite},
	{name: "METAR reports", recognise: recogniseMETAR, open: openMETAR},
	{name: "observations of a service, GeoJSON", recognise: recogniseObservations, open: openObservations},
	{name: "CSV with a header", recognise: func([]byte) bool { return true }, open: openCSV},
}

const headerHint = "A first line that works, with commas: time,temp_c for readings, or date,high_c,low_c for daily highs and lows."

// Open reads a station file up to its first data row: plain, gzip or a zip of
// one file. It must be closed. The whole content is read, into a temporary file
// when it is long, as what its dates, clock and unit are can only be told by
// all of it. A file that is not understood, empty, binary, packed beyond
// measure, has a line over 1 MiB, or needs a question answered (see How) is a
// planner.Problem of the kind Refused, its hint naming the answers; a read
// error comes back wrapped.
func Open(content io.Reader, site Site, how How) (*File, error) {
	if how.Units != "" && how.Units != planner.Celsius && how.Units != planner.Fahrenheit {
		return nil, planner.Problemf(planner.Invalid, "units %q are not known", how.Units).
			WithHint("Use units:c or units:f, or leave them out where the header names the unit.")
	}
	if site.OffsetSeconds < -maxOffsetSeconds || site.OffsetSeconds > maxOffsetSeconds {
		return nil, planner.Problemf(planner.Invalid, "an offset of %d seconds from UTC is not on earth", site.OffsetSeconds)
	}
	src, err := unpack(content)
	if err != nil {
		return nil, err
	}
	src.stopped = how.Stopped
	file, err := openFormat(src, site, how)
	if err != nil {
		return nil, errors.Join(err, src.Close())
	}
	file.spool = src
	return file, nil
}

func openFormat(src *spool, site Site, how How) (*File, error) {
	lines, head, err := src.lines()
	if err != nil {
		return nil, err
	}
	if bytes.IndexByte(head[:min(len(head), binaryBytes)], 0) >= 0 {
		return nil, planner.Problemf(planner.Refused, "the file is not a text file").
			WithHint("Save it as CSV (comma separated, UTF-8) and send that.")
	}
	if len(bytes.TrimSpace(head)) == 0 && lines.atEnd() {
		return nil, planner.Problemf(planner.Refused, "the file is empty").WithHint("%s", headerHint)
	}
	for _, format := range formats {
		if format.recognise(head) {
			return format.open(src, site, how)
		}
	}
	return nil, planner.Problemf(planner.Internal, "no format takes the file")
}

// Next returns the next row. io.EOF ends the file; a *RowError is a row that
// cannot be used, after which reading goes on; any other error ends it.
func (f *File) Next() (Row, error) { return f.rows.next() }

// Clock says in words how the times of the rows read so far were read: one of
// ClockOffset, ClockSite, ClockMixed and ClockDates; "" before the first time.
func (f *File) Clock() string { return f.rows.clock() }

// IsRowError returns the refused row in the error, if it is one.
func IsRowError(err error) (*RowError, bool) {
	var row *RowError
	ok := errors.As(err, &row)
	return row, ok
}

// longestValue is how much of an offending value is shown, in characters:
// enough to find it, little enough for a phone.
const longestValue = 60

// cut makes a value from a file fit to be shown: printable characters alone, as
// a terminal would obey others, and at most longestValue of them.
func cut(value []byte) string {
	// No character is longer than 4 bytes, so the rest cannot be shown.
	shown := value[:min(len(value), utf8.UTFMax*(longestValue+1))]
	text := strings.Map(func(r rune) rune {
		if !unicode.IsPrint(r) {
			return utf8.RuneError
		}
		return r
	}, string(shown))
	if runes := []rune(text); len(runes) > longestValue {
		return string(runes[:longestValue-1]) + "…"
	}
	return text
}
