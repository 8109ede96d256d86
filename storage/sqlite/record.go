package sqlite

import (
	"context"
	"database/sql"
	"errors"
	"fmt"

	"swardbook/planner"
)

// firstStation picks the station that gives a site's record: the first by
// rank, then the one added first.
const firstStation = `SELECT id, revision FROM station WHERE team = ?1 AND site = ?2 AND archived = 0 ORDER BY rank, id LIMIT 1`

// Record returns the whole weather record of the site: that of its first
// station by rank, contiguous from the first to the last day of which anything
// is known, the days between without a row as an empty DayFacts. A site
// without a station has an empty record of revision 0, a station without
// readings an empty record of its own revision.
//
// A revision is given to one state of one station's record: another station
// coming first, readings merged and a day rule added each give another one.
func (t *Team) Record(ctx context.Context, site planner.SiteID) (planner.Record, error) {
	const step = "read the record"
	rows, err := t.db.reader.QueryContext(ctx, `WITH first_station AS (`+firstStation+`)
		SELECT first_station.revision, day, `+factColumns+` FROM first_station LEFT JOIN day_fact
		ON day_fact.team = ?1 AND day_fact.station = first_station.id ORDER BY day`, t.id, site)
	if err != nil {
		return planner.Record{}, storeError(step, err)
	}
	defer rows.Close()
	var record planner.Record
	for rows.Next() {
		if err := addFacts(&record, rows); err != nil {
			return planner.Record{}, storeError(step, err)
		}
	}
	if err := rows.Err(); err != nil {
		return planner.Record{}, storeError(step, err)
	}
	return record, nil
}

// addFacts adds the row's day, and an empty one for each day left out before it.
func addFacts(record *planner.Record, rows *sql.Rows) error {
	var row factRow
	if err := row.scan(rows, &record.Revision); err != nil {
		return err
	}
	if !row.day.Valid {
		return nil // a station without readings
	}
	facts, err := row.facts()
	if err != nil {
		return fmt.Errorf("day %d: %w", row.day.Int64, err)
	}
	if last, ok := record.Last(); ok {
		for day := last + 1; day < facts.Day; day++ {
			record.Facts = append(record.Facts, planner.DayFacts{Day: day})
		}
	}
	record.Facts = append(record.Facts, facts)
	return nil
}

// factRow is a row of day_fact as it is stored.
type factRow struct {
	day                sql.NullInt64
	highC, lowC, meanC sql.NullFloat64
	extremesFrom       sql.NullInt64
	published          sql.NullBool
	real, bridged      sql.NullInt64
	wanted             sql.NullInt64
	hoursC             sql.RawBytes
	doubt              sql.NullString
}

func (r *factRow) scan(rows *sql.Rows, revision *int64) error {
	return rows.Scan(revision, &r.day, &r.highC, &r.lowC, &r.extremesFrom, &r.meanC, &r.published,
		&r.real, &r.bridged, &r.wanted, &r.hoursC, &r.doubt)
}

// facts reads the row; what cannot be is an error.
func (r *factRow) facts() (planner.DayFacts, error) {
	day, from := planner.Day(r.day.Int64), planner.Source(r.extremesFrom.Int64)
	switch {
	case int64(day) != r.day.Int64 || day < planner.DayMin || day > planner.DayMax:
		return planner.DayFacts{}, errors.New("it is outside the years 1700 to 2299")
	case int64(from) != r.extremesFrom.Int64 || from > planner.FromAhead:
		return planner.DayFacts{}, fmt.Errorf("source %d of its extremes is not known", r.extremesFrom.Int64)
	}
	hoursC, err := unpackHours(r.hoursC)
	if err != nil {
		return planner.DayFacts{}, err
	}
	if hoursC == nil && r.meanC.Valid && !r.published.Bool {
		return planner.DayFacts{}, errors.New("the hourly values of its 24-hour mean are missing")
	}
	return planner.DayFacts{
		Day: day, HasExtremes: r.highC.Valid, HighC: r.highC.Float64, LowC: r.lowC.Float64, ExtremesFrom: from,
		HasHourly: r.meanC.Valid, HourlyC: r.meanC.Float64, Published: r.published.Bool,
		SlotsReal: int(r.real.Int64), SlotsBridged: int(r.bridged.Int64), SlotsWanted: int(r.wanted.Int64),
		HoursC: hoursC, Doubt: r.doubt.String,
	}, nil
}

// Revision returns the Revision the record has now, without loading it.
func (t *Team) Revision(ctx context.Context, site planner.SiteID) (int64, error) {
	var station, revision int64
	err := t.db.reader.QueryRowContext(ctx, firstStation, t.id, site).Scan(&station, &revision)
	if errors.Is(err, sql.ErrNoRows) {
		return 0, nil
	}
	return revision, storeError("read the revision", err)
}
