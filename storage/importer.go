package storage

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"hash"
	"io"
	"time"

	"swardbook/planner"
	"swardbook/storage/intake"
	"swardbook/storage/sqlite"
)

const (
	// mostRefusedPercent is the share of a file's rows that may be refused and
	// the rest still be taken; a file with more is likely misread as a whole.
	// Rows whose value the file itself says is missing are not counted.
	mostRefusedPercent = 5
	// progressRows is how often the progress is told, in rows.
	progressRows = 10_000
	// checkRows is how often it is looked whether somebody stopped the import.
	checkRows = 1_000
)

// Importer reads station files into the record of one team.
type Importer struct {
	team *sqlite.Team
}

var _ planner.Importer = (*Importer)(nil)

// NewImporter returns the importer of the team.
func NewImporter(team *sqlite.Team) *Importer { return &Importer{team: team} }

// Import reads one station file into the record, or refuses it whole and keeps
// nothing. It is refused (a planner.Problem of the kind Refused, naming the
// commonest reasons with line and value) when its header is not understood,
// when no row can be taken, and when more than 5 % of its rows are refused,
// rows that the file says are empty not counted. A row that gives another value
// for a time or day given before is refused, the first stands; one that gives
// the same value counts as Same.
//
// Times without an offset are read as the file itself shows, as the request
// says, or in the standard time that the site's day rule has on the day of the
// request. A station that is to be added is added in the step that merges the
// file, or not at all. A sensor and an order of dates that were said of a file are
// remembered for the station's next. A station that is not there is a NotFound
// problem. Progress is called every 10,000 rows. The context stops the reading
// between two reads of the content and every 1,000 rows, with nothing kept. The
// same file again changes nothing.
func (i *Importer) Import(ctx context.Context, request planner.ImportRequest) (planner.ImportReport, error) {
	site, err := i.site(ctx, request)
	if err != nil {
		return planner.ImportReport{}, err
	}
	sum := sha256.New()
	how := intake.How{Units: request.Units, Clock: request.Clock, Dates: request.Dates, Sensor: request.Sensor, Stopped: ctx.Err}
	if how.UsualSensor, how.UsualDates, err = i.team.Remembered(ctx, request.Station); err != nil {
		return planner.ImportReport{}, err
	}
	if how.OnWallBefore, err = i.team.ReadOn(ctx, request.Station, intake.ClockWall); err != nil {
		return planner.ImportReport{}, err
	}
	file, err := intake.Open(hashed(ctx, request.Content, sum), site, how)
	if err != nil {
		return planner.ImportReport{}, err
	}
	// A temporary file that cannot be given back is no reason to refuse.
	defer func() { _ = file.Close() }()
	stage, err := i.stage(ctx, request)
	if err != nil {
		return planner.ImportReport{}, fmt.Errorf("open the stage: %w", err)
	}
	// Nothing hangs on how closing goes: unmerged rows are not in the record,
	// merged ones are.
	defer func() { _ = stage.Close() }()

	run := run{file: file, stage: stage, progress: request.Progress}
	if err := run.readAll(ctx); err != nil {
		return planner.ImportReport{}, err
	}
	if err := run.judge(request.FileName); err != nil {
		return planner.ImportReport{}, err
	}
	merged, err := stage.Merge(ctx, request.Stamp, sqlite.ImportAbout{
		FileName: request.FileName,
		SHA256:   hex.EncodeToString(sum.Sum(nil)),
		Units:    file.Units,
		Clock:    file.Clock(),
		Format:   file.Format,
		Rows:     run.rows,
		Empty:    run.empty,
		Refused:  run.refusals.count,
		Sensor:   file.Sensor,
		Dates:    file.Dates,
	})
	if err != nil {
		return planner.ImportReport{}, fmt.Errorf("merge the file: %w", err)
	}
	return run.report(merged), nil
}

// stage opens a stage for the station, or for one that comes with the file.
func (i *Importer) stage(ctx context.Context, request planner.ImportRequest) (*sqlite.Stage, error) {
	if request.Station == 0 {
		return i.team.StageNew(ctx, request.New)
	}
	return i.team.Stage(ctx, request.Station)
}

// site finds the station's site and its standard time.
func (i *Importer) site(ctx context.Context, request planner.ImportRequest) (intake.Site, error) {
	setup, err := i.team.Setup(ctx)
	if err != nil {
		return intake.Site{}, fmt.Errorf("find the station: %w", err)
	}
	id := request.New.Site
	for _, station := range setup.Stations {
		if station.ID == request.Station {
			id = station.Site
		}
	}
	for _, site := range setup.Sites {
		if site.ID == id {
			rule := site.Rules.On(planner.DayIn(request.At, time.UTC))
			zone, err := site.Location()
			return intake.Site{OffsetSeconds: rule.OffsetSeconds, Zone: zone}, err
		}
	}
	return intake.Site{}, planner.Problemf(planner.NotFound, "there is no station number %d", request.Station).
		WithHint("Add one with /setup station add, or see /setup station list.")
}

// readerFunc is a function that reads.
type readerFunc func(p []byte) (int, error)

func (f readerFunc) Read(p []byte) (int, error) { return f(p) }

// hashed reads the content, hashes what is read, and stops when the context
// does.
func hashed(ctx context.Context, content io.Reader, sum hash.Hash) io.Reader {
	tee := io.TeeReader(content, sum)
	return readerFunc(func(p []byte) (int, error) {
		if err := ctx.Err(); err != nil {
			return 0, err
		}
		return tee.Read(p)
	})
}

// run is one file on its way into the stage.
type run struct {
	file     *intake.File
	stage    *sqlite.Stage
	progress func(rows int)
	rows     int // data rows, refused and empty ones included
	empty    int
	refusals refusals
}

// taken is the number of rows in the stage.
func (r *run) taken() int { return r.rows - r.empty - r.refusals.count }

func (r *run) readAll(ctx context.Context) error {
	for {
		row, err := r.file.Next()
		if errors.Is(err, io.EOF) {
			return nil
		}
		if err := r.take(row, err); err != nil {
			return err
		}
		r.rows++
		if r.rows%checkRows == 0 && ctx.Err() != nil {
			return fmt.Errorf("stopped after %d rows: %w", r.rows, ctx.Err())
		}
		if r.progress != nil && r.rows%progressRows == 0 {
			r.progress(r.rows)
		}
	}
}

// take does with a row, or with the error that came instead of one, what it
// asks for.
func (r *run) take(row intake.Row, err error) error {
	refused, isRow := intake.IsRowError(err)
	switch {
	case isRow:
		r.refusals.add(refused.Reason, refused.Refusal)
		return nil
	case err != nil:
		return err
	}
	if row.HasRain {
		if err := r.stage.AddRain(row.Line, row.Rain); err != nil {
			return fmt.Errorf("stage the rain of line %d: %w", row.Line, err)
		}
	}
	if row.Empty {
		r.empty++
		return nil
	}
	return r.add(row)
}

// add puts a row on the stage; one that contradicts an earlier row is refused.
func (r *run) add(row intake.Row) error {
	var err error
	if row.Daily {
		err = r.stage.AddDaily(row.Line, row.Day)
	} else {
		err = r.stage.AddReading(row.Line, row.Reading)
	}
	var repeat *sqlite.RepeatError
	if errors.As(err, &repeat) {
		r.refusals.add("another value for a time or day given before", planner.Refusal{
			Line:   row.Line,
			Value:  rowText(row),
			Reason: fmt.Sprintf("line %d gives another value for the same time, and stands", repeat.First),
		})
		return nil
	}
	if err != nil {
		return fmt.Errorf("stage line %d: %w", row.Line, err)
	}
	return nil
}

// rowText writes a row that was read; in °C and UTC, as it is no longer known
// how the file writes it.
func rowText(row intake.Row) string {
	if row.Daily {
		return fmt.Sprintf("%s, high %.1f °C, low %.1f °C", row.Day.Day, row.Day.HighC, row.Day.LowC)
	}
	return fmt.Sprintf("%s, %.1f °C", time.Unix(row.Reading.At, 0).UTC().Format("2006-01-02 15:04:05 UTC"), row.Reading.C)
}

// judge refuses the file whole, or lets it be merged.
func (r *run) judge(fileName string) error {
	held, refused := r.rows-r.empty, r.refusals.count
	switch {
	case r.rows == 0:
		return planner.Problemf(planner.Refused, "%q holds a header and no rows", fileName).
			WithHint("Send a file with at least one row of values.")
	case held == 0:
		return planner.Problemf(planner.Refused, "all %d rows of %q say that their value is missing", r.rows, fileName).
			WithHint("Check that the temperatures are in the file.")
	case r.taken() == 0 || refused*100 > mostRefusedPercent*held:
		return planner.Problemf(planner.Refused, "%d of %d rows of %q cannot be used: %s", refused, held, fileName, r.refusals.worst()).
			WithHint("Nothing was kept. Correct these rows and send the file again; up to %d %% of a file's rows may be unusable.", mostRefusedPercent)
	}
	return nil
}

func (r *run) report(merged sqlite.MergeReport) planner.ImportReport {
	return planner.ImportReport{
		Format:   r.file.Format,
		Units:    r.file.Units,
		Clock:    r.file.Clock(),
		Rows:     r.rows,
		New:      merged.New,
		Changed:  merged.Changed,
		Same:     merged.Same,
		Empty:    r.empty,
		Refused:  r.refusals.count,
		Refusals: r.refusals.list(),
		From:     merged.From,
		To:       merged.To,
		Import:   planner.ImportID(merged.ImportID),
		Station:  merged.Station,
		Rain:     merged.Rain,
		Notes:    r.file.Notes,

		Remembered: remembered(r.file),
	}
}

// remembered is what of the file is taken for granted with the next one, as it
// would be typed.
func remembered(file *intake.File) (words []string) {
	if file.Sensor != "" {
		words = append(words, fmt.Sprintf("sensor:%q", file.Sensor))
	}
	if file.Dates != "" {
		words = append(words, "dates:"+file.Dates)
	}
	return words
}

// Imports returns the newest imports into the site's stations, newest first.
func (i *Importer) Imports(ctx context.Context, site planner.SiteID, limit int) ([]planner.Import, error) {
	return i.team.Imports(ctx, site, limit)
}

// Withdraw takes an import back, or says what that would do.
func (i *Importer) Withdraw(ctx context.Context, stamp planner.Stamp, id planner.ImportID, dry bool) (planner.Withdrawal, error) {
	return i.team.Withdraw(ctx, stamp, id, dry)
}

// Export writes the station's readings and daily readings in the form that
// Import reads back to the same record.
func (i *Importer) Export(ctx context.Context, station planner.StationID, to io.Writer) error {
	return i.team.ExportStation(ctx, station, intake.ExportHeader, to)
}
