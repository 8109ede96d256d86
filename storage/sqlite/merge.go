package sqlite

import (
	"context"
	"database/sql"
	"encoding/hex"

	"swardbook/planner"
)

// ImportAbout is what is kept of a file beside its readings.
type ImportAbout struct {
	FileName string
	SHA256   string // of the file's content: 64 hexadecimal digits
	Units    planner.Units
	Clock    string // how the times were read, in words
	Format   string // "readings" or "daily"
	Rows     int    // data rows of the file
	Empty    int    // rows whose value the file says is missing
	Refused  int    // rows that could not be used
	Sensor   string // what was said of the file and is remembered; "" for nothing
	Dates    string
}

// MergeReport says what a merge did.
type MergeReport struct {
	ImportID int64
	Station  planner.StationID // that has the readings; a new one's id
	// RowCounts counts rows of readings and days; rows repeated in the file are
	// among Same.
	planner.RowCounts
	Rain planner.RowCounts
	// From and To are the first and last day of the readings, in the site's
	// day rule; zero when there was none.
	From, To planner.Day
}

// Merge puts the staged rows into the station's record in one transaction: the
// station, when it is a new one, the import, the readings, the values they replace, the day facts of the days they
// touch and of the days beside them, the record's revision (when anything
// changed) and a row of the change log. On an error nothing is kept, and Merge
// may be tried again; after a merge the Stage can only be closed.
//
// While another goroutine writes, Merge waits as long as ctx lets it; another
// program that does not let go of the file for 5 s is a Busy problem. A station
// or site dropped since is a NotFound problem.
func (s *Stage) Merge(ctx context.Context, stamp planner.Stamp, about ImportAbout) (MergeReport, error) {
	const step = "merge an import"
	if s.conn == nil || s.merged {
		return MergeReport{}, storeError(s.team.db.name, step, errDone)
	}
	if sum, err := hex.DecodeString(about.SHA256); err != nil || len(sum) != 32 {
		return MergeReport{}, planner.Problemf(planner.Internal, "%q is not the SHA-256 of a file", about.SHA256)
	}
	if err := s.settle(); err != nil {
		return MergeReport{}, storeError(s.team.db.name, step, err)
	}
	// Who holds the writer's connection is the one writer of this program.
	turn, err := s.team.db.writer.Conn(ctx)
	if err != nil {
		return MergeReport{}, storeError(s.team.db.name, step, err)
	}
	defer turn.Close()
	m := merge{on: s.conn, team: s.team.id, station: s.station, fresh: s.fresh, stamp: stamp, about: about, repeated: s.repeated}
	if err := transact(ctx, s.conn, "BEGIN IMMEDIATE", func() error { return m.run(ctx) }); err != nil {
		return MergeReport{}, storeError(s.team.db.name, step, err)
	}
	s.merged = true
	return m.report, nil
}

// settle writes the rows that are left and ends the transaction on the
// temporary tables.
func (s *Stage) settle() error {
	if !s.open {
		return nil
	}
	ctx := context.Background()
	for _, rows := range []*batch{s.readings, s.rain} {
		if err := rows.flush(ctx); err != nil {
			return err
		}
	}
	if _, err := s.conn.ExecContext(ctx, "COMMIT"); err != nil {
		return err
	}
	s.open = false
	return nil
}

// merge is one merge under way.
type merge struct {
	on       *sql.Conn
	team     int64
	station  planner.StationID
	fresh    planner.Station // to be added when station is 0
	stamp    planner.Stamp
	about    ImportAbout
	repeated int
	report   MergeReport
}

func (m *merge) run(ctx context.Context) error {
	if m.station == 0 {
		added, err := saveOn(ctx, m.on, m.team, m.stamp, stations{}, m.fresh)
		if err != nil {
			return err
		}
		m.station = added.ID
	}
	m.report.Station = m.station
	station, err := openStation(ctx, m.on, m.team, m.station)
	if err != nil {
		return err
	}
	site, err := one(ctx, m.on, m.team, sites{}, int64(station.Site))
	if err != nil {
		return err
	}
	cutter, err := newCutter(m.on, m.team, m.station, site)
	if err != nil {
		return err
	}
	m.report.RowCounts = planner.RowCounts{Same: m.repeated}
	var rows [len(weatherTables)]staged
	for i, table := range weatherTables {
		if rows[i], err = m.count(ctx, table); err != nil {
			return err
		}
		counts := &m.report.RowCounts
		if !table.facts {
			counts = &m.report.Rain
		}
		rows[i].addTo(counts)
	}
	m.report.From, m.report.To = daysOf(rows[0], rows[1], cutter)
	if err := m.addImport(ctx); err != nil {
		return err
	}
	for i, table := range weatherTables {
		if err := m.noteSame(ctx, table, rows[i]); err != nil {
			return err
		}
		if err := m.move(ctx, table, rows[i]); err != nil {
			return err
		}
	}
	if m.report.New+m.report.Changed == 0 {
		return nil
	}
	if err := m.rebuild(ctx, cutter, rows); err != nil {
		return err
	}
	return bumpRevision(ctx, m.on, m.team, m.station)
}

// daysOf returns the first and last day of the staged rows.
func daysOf(readings, daily staged, c *cutter) (first, last planner.Day) {
	if readings.rows > 0 {
		first, last = c.dayOf(readings.first), c.dayOf(readings.last)
	}
	if daily.rows == 0 {
		return first, last
	}
	if readings.rows == 0 {
		return planner.Day(daily.first), planner.Day(daily.last)
	}
	return min(first, planner.Day(daily.first)), max(last, planner.Day(daily.last))
}

// dayOf returns the day that a reading belongs to: the first whose window
// holds it, for where the rule changes two may.
func (c *cutter) dayOf(at int64) planner.Day {
	around := utcDay(at)
	for day := around - touchDays; day <= around+touchDays; day++ {
		w := c.rules.On(day).Window(c.zone, day)
		if at < w.End || at == w.End && w.FirstSlot == 1 {
			return day
		}
	}
	return around
}

// mergeNote is what the change log keeps of an import.
type mergeNote struct {
	Station planner.StationID `json:"station"`
	File    string            `json:"file"`
	SHA256  string            `json:"sha256"`
	New     int               `json:"new"`
	Changed int               `json:"changed"`
	Same    int               `json:"same"`
}

func (m *merge) addImport(ctx context.Context) (err error) {
	if m.report.ImportID, err = next(ctx, m.on, m.team, importCounter); err != nil {
		return err
	}
	r, a := m.report, m.about
	change, err := log(ctx, m.on, m.team, m.stamp, logged{kind: kindImport, thing: r.ImportID,
		after: mergeNote{m.station, a.FileName, a.SHA256, r.New, r.Changed, r.Same}})
	if err != nil {
		return err
	}
	_, err = m.on.ExecContext(ctx, `INSERT INTO import (team, id, station, change, file_name, sha256, units, clock, format,
		at, who, rows, new, changed, same, empty, refused, sensor, dates) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
		m.team, r.ImportID, m.station, change, a.FileName, a.SHA256, a.Units, a.Clock, a.Format,
		m.stamp.At.Unix(), m.stamp.By, a.Rows, r.New, r.Changed, r.Same, a.Empty, a.Refused, a.Sensor, a.Dates)
	return err
}

// rebuild builds the facts of all days that a new or changed row touches.
func (m *merge) rebuild(ctx context.Context, c *cutter, rows [len(weatherTables)]staged) error {
	var touched []planner.Day
	for i, table := range weatherTables {
		if !table.facts {
			continue
		}
		days, err := m.touched(ctx, table, rows[i])
		if err != nil {
			return err
		}
		touched = append(touched, days...)
	}
	for _, days := range spans(touched) {
		if err := c.rebuild(ctx, days); err != nil {
			return err
		}
	}
	return nil
}
