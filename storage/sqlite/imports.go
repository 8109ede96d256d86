package sqlite

import (
	"bufio"
	"context"
	"database/sql"
	"errors"
	"io"
	"strconv"
	"time"

	"swardbook/planner"
)

// noteSame keeps which values of the record the file said again: as stretches
// of keys in which it said every value that the record has. Without it a
// withdrawn import would take values along that a later file gave too.
func (m *merge) noteSame(ctx context.Context, t weatherTable, rows staged) error {
	if rows.kept == rows.changed {
		return nil
	}
	// Gaps and islands: within a run of rows alike, the number among all rows
	// and the number among rows alike grow together.
	_, err := m.on.ExecContext(ctx, t.expand(`INSERT INTO import_same (team, import, kind, first_key, last_key)
		SELECT ?1, ?2, 'NAME', min(KEY), max(KEY) FROM (
			SELECT KEY, same, row_number() OVER (ORDER BY KEY) - row_number() OVER (PARTITION BY same ORDER BY KEY) AS island FROM (
				SELECT kept.KEY, staged.KEY IS NOT NULL AND NOT {differs} AS same
				FROM NAME AS kept LEFT JOIN temp.staged_NAME AS staged ON staged.KEY = kept.KEY
				WHERE kept.team = ?1 AND kept.station = ?3 AND kept.KEY BETWEEN ?4 AND ?5))
		WHERE same GROUP BY island`), m.team, m.report.ImportID, m.station, rows.first, rows.last)
	return err
}

const importColumns = `id, station, file_name, at, who, new, changed, same, refused, withdrawn IS NOT NULL`

func scanImport(rows *sql.Rows) (planner.Import, error) {
	var one planner.Import
	var at int64
	err := rows.Scan(&one.ID, &one.Station, &one.FileName, &at, &one.By, &one.New, &one.Changed, &one.Same, &one.Refused, &one.Withdrawn)
	one.At = time.Unix(at, 0).UTC()
	return one, err
}

// Imports returns the newest imports into the site's stations, newest first, at
// most limit (none when it is 0 or less), withdrawn ones and those of dropped
// stations too.
func (t *Team) Imports(ctx context.Context, site planner.SiteID, limit int) ([]planner.Import, error) {
	imports, err := collect(ctx, t.db.reader, scanImport, `SELECT `+importColumns+` FROM import
		WHERE team = ?1 AND station IN (SELECT id FROM station WHERE team = ?1 AND site = ?2) ORDER BY id DESC LIMIT ?3`,
		t.id, site, max(0, limit))
	return imports, storeError(t.db.name, "read the imports", err)
}

// Remembered returns the sensor and the order of dates that were last said of a
// file of the station; "" for what never was.
func (t *Team) Remembered(ctx context.Context, station planner.StationID) (sensor, dates string, err error) {
	newest := `(SELECT COLUMN FROM import WHERE team = ?1 AND station = ?2 AND COLUMN <> '' AND withdrawn IS NULL ORDER BY id DESC LIMIT 1)`
	column := func(name string) string { return "coalesce(" + replaceColumn(newest, name) + ", '')" }
	err = t.db.reader.QueryRowContext(ctx, `SELECT `+column("sensor")+`, `+column("dates"), t.id, station).Scan(&sensor, &dates)
	return sensor, dates, storeError(t.db.name, "read what is remembered of the station", err)
}

// ReadOn reports whether a file of the station that is not withdrawn was read on
// the clock, as its import says it.
func (t *Team) ReadOn(ctx context.Context, station planner.StationID, clock string) (found bool, err error) {
	err = t.db.reader.QueryRowContext(ctx, `SELECT EXISTS (SELECT 1 FROM import
		WHERE team = ? AND station = ? AND clock = ? AND withdrawn IS NULL)`, t.id, station, clock).Scan(&found)
	return found, storeError(t.db.name, "read how the station's files were read", err)
}

// ExportStation writes all readings and daily readings of the station, after the
// header, in the form of the program's own export: times in UTC, values in °C in
// full. A station that is not there is a NotFound problem.
func (t *Team) ExportStation(ctx context.Context, station planner.StationID, header string, to io.Writer) error {
	const step = "export a station"
	out := bufio.NewWriter(to)
	out.WriteString(header + "\n")
	err := t.db.read(ctx, step, func(conn *sql.Conn) error {
		if _, err := one(ctx, conn, t.id, stations{}, int64(station)); err != nil {
			return err
		}
		if err := exportReadings(ctx, conn, t.id, station, out); err != nil {
			return err
		}
		return exportDaily(ctx, conn, t.id, station, out)
	})
	if err != nil {
		return err
	}
	return out.Flush()
}

func exportReadings(ctx context.Context, on session, team int64, station planner.StationID, out *bufio.Writer) error {
	// Readings with their rain, then rain without a reading.
	for _, query := range []string{
		`SELECT reading.at, c, mm FROM reading LEFT JOIN rain USING (team, station, at) WHERE reading.team = ? AND reading.station = ? ORDER BY reading.at`,
		`SELECT at, NULL, mm FROM rain WHERE team = ? AND station = ?
			AND NOT EXISTS (SELECT 1 FROM reading WHERE reading.team = rain.team AND reading.station = rain.station AND reading.at = rain.at) ORDER BY at`,
	} {
		rows, err := on.QueryContext(ctx, query, team, station)
		if err != nil {
			return err
		}
		if err := errors.Join(writeReadings(rows, out), rows.Close()); err != nil {
			return err
		}
	}
	return nil
}

func writeReadings(rows *sql.Rows, out *bufio.Writer) error {
	var line []byte
	known := func(value sql.NullFloat64) {
		if line = append(line, ','); value.Valid {
			line = strconv.AppendFloat(line, value.Float64, 'g', -1, 64)
		}
	}
	for rows.Next() {
		var at int64
		var c, rainMM sql.NullFloat64
		if err := rows.Scan(&at, &c, &rainMM); err != nil {
			return err
		}
		line = time.Unix(at, 0).UTC().AppendFormat(line[:0], time.RFC3339)
		known(c)
		line = append(line, ",,,"...)
		known(rainMM)
		if _, err := out.Write(append(line, '\n')); err != nil {
			return err
		}
	}
	return rows.Err()
}

func exportDaily(ctx context.Context, on session, team int64, station planner.StationID, out *bufio.Writer) error {
	rows, err := on.QueryContext(ctx, `SELECT day, high_c, low_c, mean_c FROM daily WHERE team = ? AND station = ? ORDER BY day`, team, station)
	if err != nil {
		return err
	}
	defer rows.Close()
	var line []byte
	for rows.Next() {
		var day planner.Day
		var highC, lowC float64
		var meanC sql.NullFloat64
		if err := rows.Scan(&day, &highC, &lowC, &meanC); err != nil {
			return err
		}
		line = append(append(line[:0], day.String()...), ",,"...)
		line = append(strconv.AppendFloat(line, highC, 'g', -1, 64), ',')
		line = append(strconv.AppendFloat(line, lowC, 'g', -1, 64), ',')
		if meanC.Valid {
			line = strconv.AppendFloat(line, meanC.Float64, 'g', -1, 64)
		}
		if _, err := out.Write(append(line, ",\n"...)); err != nil {
			return err
		}
	}
	return rows.Err()
}
