package sqlite

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"math"

	"swardbook/planner"
)

// stagedRows is how many readings one INSERT puts into the temporary table:
// more gain little, and SQLite bounds the values of a statement.
const stagedRows = 200

// Stage is a file on its way into a station's record: a temporary table on a
// connection of its own. Nothing of it is in the record, and nobody is kept
// from writing, before Merge. A Stage is for one goroutine.
type Stage struct {
	team    *Team
	station planner.StationID
	fresh   planner.Station // added with the merge when station is 0
	conn    *sql.Conn       // nil once closed

	open     bool // a transaction on the temporary tables is open
	merged   bool
	readings *batch
	rain     *batch
	reading  *sql.Stmt // one reading, checked
	daily    *sql.Stmt // one daily reading, checked
	newest   int64     // the latest time taken so far
	repeated int       // rows that say again what an earlier one said
}

// RepeatError is a row of a file whose time, or day, an earlier row had with
// another value. The earlier one stands.
type RepeatError struct {
	Line  int // of the row
	First int // of the row that stands
}

// Error names both lines.
func (e *RepeatError) Error() string {
	return fmt.Sprintf("line %d has another value for the time of line %d", e.Line, e.First)
}

// errDone is the mistake of using a Stage that is closed or merged.
var errDone = errors.New("the stage is closed or merged")

// The temporary tables. A row's line is kept to say which row stands.
const stagedTables = `
	CREATE TEMP TABLE staged_reading (at INTEGER PRIMARY KEY, c REAL NOT NULL, line INTEGER NOT NULL) STRICT;
	CREATE TEMP TABLE staged_daily (day INTEGER PRIMARY KEY, high_c REAL NOT NULL, low_c REAL NOT NULL, mean_c REAL, line INTEGER NOT NULL) STRICT;
	CREATE TEMP TABLE staged_rain (at INTEGER PRIMARY KEY, mm REAL NOT NULL) STRICT;
	BEGIN`

// Stage begins to take in a file for the station. A station that the team does
// not have, or that is archived or of an archived site, is a NotFound problem.
// The Stage must be closed.
func (t *Team) Stage(ctx context.Context, station planner.StationID) (*Stage, error) {
	if _, err := openStation(ctx, t.db.reader, t.id, station); err != nil {
		return nil, storeError(t.db.name, beginImport, err)
	}
	return t.newStage(ctx, Stage{station: station})
}

// StageNew is Stage for a station that is added with the file, in one step:
// Merge adds both or nothing. A station that cannot be is an Invalid problem, a
// site that is not there a NotFound one; a name in use is one at the merge.
func (t *Team) StageNew(ctx context.Context, station planner.Station) (*Stage, error) {
	if err := station.Check(); err != nil {
		return nil, err
	}
	err := mustExist(ctx, t.db.reader, "site", int64(station.Site), `SELECT 1 FROM site WHERE team = ? AND id = ? AND archived = 0`, t.id, station.Site)
	if err != nil {
		return nil, storeError(t.db.name, beginImport, err)
	}
	station.ID = 0
	return t.newStage(ctx, Stage{fresh: station})
}

const beginImport = "begin an import"

// newStage opens the stage on a connection of its own.
func (t *Team) newStage(ctx context.Context, stage Stage) (*Stage, error) {
	conn, err := t.db.staging.Conn(ctx)
	if err != nil {
		return nil, storeError(t.db.name, beginImport, err)
	}
	stage.team, stage.conn, stage.newest = t, conn, math.MinInt64
	if err := stage.prepare(ctx); err != nil {
		return nil, errors.Join(storeError(t.db.name, beginImport, err), stage.Close())
	}
	return &stage, nil
}

// openStation returns the station, or a NotFound problem.
func openStation(ctx context.Context, on session, team int64, id planner.StationID) (planner.Station, error) {
	found, err := stations{}.list(ctx, on, team, siteOpen+` AND id = ?`, id)
	if err != nil {
		return planner.Station{}, err
	}
	if len(found) == 0 {
		return planner.Station{}, notFound("station", int64(id))
	}
	return found[0], nil
}

// prepare makes the tables and leaves a transaction open, which locks nothing:
// it touches only the temporary tables.
func (s *Stage) prepare(ctx context.Context) (err error) {
	if _, err := s.conn.ExecContext(ctx, stagedTables); err != nil {
		return err
	}
	s.open = true
	if s.readings, err = newBatch(ctx, s.conn, stagedRows, `INSERT INTO temp.staged_reading (at, c, line) VALUES`, 3); err != nil {
		return err
	}
	if s.rain, err = newBatch(ctx, s.conn, stagedRows, `INSERT OR IGNORE INTO temp.staged_rain (at, mm) VALUES`, 2); err != nil {
		return err
	}
	if s.reading, err = s.conn.PrepareContext(ctx, `INSERT INTO temp.staged_reading (at, c, line)
		VALUES (?, ?, ?) ON CONFLICT DO NOTHING`); err != nil {
		return err
	}
	s.daily, err = s.conn.PrepareContext(ctx, `INSERT INTO temp.staged_daily (day, high_c, low_c, mean_c, line)
		VALUES (?, ?, ?, ?, ?) ON CONFLICT DO NOTHING`)
	return err
}

// AddReading takes one reading of the file. One whose time an earlier row had
// is a repeat: with the same value it counts as such, with another it is a
// *RepeatError and not taken. A value that is no temperature and a time outside
// the years 1700 to 2299 are an Invalid problem and not taken. Any other error
// ends the import.
//
// Readings in order of time are taken fastest.
func (s *Stage) AddReading(line int, r planner.Reading) error {
	// Staged statements run without the caller's context: each is short and
	// waits for nobody.
	ctx := context.Background()
	if !s.open {
		return errDone
	}
	if err := planner.CheckTemperature(r.C); err != nil {
		return invalidRow(line, err)
	}
	if err := checkTime(line, r.At); err != nil {
		return err
	}
	if r.At > s.newest {
		s.newest = r.At
		return storeError(s.team.db.name, "stage readings", s.readings.add(ctx, r.At, r.C, int64(line)))
	}
	if err := s.readings.flush(ctx); err != nil {
		return storeError(s.team.db.name, "stage readings", err)
	}
	return s.addChecked(ctx, line, s.reading, []any{r.At, r.C, line},
		`SELECT line, c = ?2 FROM temp.staged_reading WHERE at = ?1`, r.At, r.C)
}

func checkTime(line int, at int64) error {
	if day := floorDiv(at, secondsPerDay); day < int64(planner.DayMin) || day > int64(planner.DayMax) {
		return invalidRow(line, fmt.Errorf("the time is outside the years 1700 to 2299"))
	}
	return nil
}

// AddRain takes what the gauge caught by the time of a row. A second value for
// a time is left out: the first stands. A value that no gauge shows and a time
// outside the years 1700 to 2299 are an Invalid problem and not taken. Any other
// error ends the import.
func (s *Stage) AddRain(line int, r planner.Rain) error {
	if !s.open {
		return errDone
	}
	if err := planner.CheckRain(r.MM); err != nil {
		return invalidRow(line, err)
	}
	if err := checkTime(line, r.At); err != nil {
		return err
	}
	return storeError(s.team.db.name, "stage rain", s.rain.add(context.Background(), r.At, r.MM))
}

// AddDaily takes one daily reading of the file, as AddReading does; a repeat is
// one of the same day.
func (s *Stage) AddDaily(line int, d planner.DailyReading) error {
	if !s.open {
		return errDone
	}
	if err := d.Check(); err != nil {
		return invalidRow(line, err)
	}
	if d.Day < planner.DayMin || d.Day > planner.DayMax {
		return invalidRow(line, fmt.Errorf("the day is outside the years 1700 to 2299"))
	}
	meanC := sql.NullFloat64{Float64: d.MeanC, Valid: d.HasMean}
	return s.addChecked(context.Background(), line, s.daily, []any{d.Day, d.HighC, d.LowC, meanC, line},
		`SELECT line, high_c = ?2 AND low_c = ?3 AND mean_c IS ?4 FROM temp.staged_daily WHERE day = ?1`,
		d.Day, d.HighC, d.LowC, meanC)
}

// addChecked inserts one row. Where one stands already, standing asks for its
// line and whether it says the same.
func (s *Stage) addChecked(ctx context.Context, line int, insert *sql.Stmt, row []any, standing string, key ...any) error {
	const step = "stage a row"
	result, err := insert.ExecContext(ctx, row...)
	if err != nil {
		return storeError(s.team.db.name, step, err)
	}
	if n, err := result.RowsAffected(); err != nil || n == 1 {
		return storeError(s.team.db.name, step, err)
	}
	var first int
	var same bool
	if err := s.conn.QueryRowContext(ctx, standing, key...).Scan(&first, &same); err != nil {
		return storeError(s.team.db.name, step, err)
	}
	if !same {
		return &RepeatError{Line: line, First: first}
	}
	s.repeated++
	return nil
}

func invalidRow(line int, cause error) error {
	return planner.Problemf(planner.Invalid, "line %d: %v", line, cause).WithCause(cause)
}

// Close drops the temporary tables with their connection. It may be called at
// any time, after Merge and twice.
func (s *Stage) Close() error {
	s.open = false
	if s.conn == nil {
		return nil
	}
	conn := s.conn
	s.conn = nil
	// A connection with a statement left open keeps its memory after it is closed.
	var wrong []error
	for _, rows := range []*batch{s.readings, s.rain} {
		if rows != nil && rows.full != nil {
			wrong = append(wrong, rows.close())
		}
	}
	for _, statement := range []*sql.Stmt{s.reading, s.daily} {
		if statement != nil {
			wrong = append(wrong, statement.Close())
		}
	}
	return errors.Join(append(wrong, conn.Close())...)
}
