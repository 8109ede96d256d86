package sqlite

import (
	"cmp"
	"context"
	"database/sql"
	"errors"
	"fmt"
	"slices"

	"swardbook/planner"
)

// Record returns the whole weather record of the site: that of its stations by
// rank, then in the order added, joined by planner.JoinStations; contiguous from
// the first to the last day of which anything is known, the days between without
// a row as an empty DayFacts. A site without a station has an empty record of
// revision 0, stations without readings an empty record of their revision.
//
// A revision is given to one state of a site's record: a station added, dropped,
// renamed or ranked anew, readings merged or withdrawn and a day rule added each
// give another one.
func (t *Team) Record(ctx context.Context, site planner.SiteID) (planner.Record, error) {
	var record planner.Record
	err := t.db.read(ctx, "read the record", func(conn *sql.Conn) (err error) {
		if record.Revision, err = siteRevision(ctx, conn, t.id, site); err != nil {
			return err
		}
		open, err := ranked(ctx, conn, t.id, site)
		if err != nil {
			return err
		}
		var stations []planner.StationFacts
		for _, station := range open {
			facts, err := stationFacts(ctx, conn, t.id, station.ID)
			if err != nil {
				return fmt.Errorf("station %s: %w", station.Name, err)
			}
			stations = append(stations, planner.StationFacts{Name: station.Name, Facts: facts})
		}
		record.Facts = planner.JoinStations(stations)
		return nil
	})
	if err != nil {
		return planner.Record{}, err
	}
	return record, nil
}

// ranked lists the site's stations by rank, then in the order added.
func ranked(ctx context.Context, on session, team int64, site planner.SiteID) ([]planner.Station, error) {
	open, err := stations{}.list(ctx, on, team, `site = ? AND archived = 0`, site)
	slices.SortStableFunc(open, func(a, b planner.Station) int { return cmp.Compare(a.Rank, b.Rank) })
	return open, err
}

// Rain returns what the gauge caught from one time to another, both included,
// in UTC seconds, by time: that of the site's first station by rank that has any
// reading of rain in between.
func (t *Team) Rain(ctx context.Context, site planner.SiteID, from, to int64) (rain []planner.Rain, err error) {
	err = t.db.read(ctx, "read the rain", func(conn *sql.Conn) error {
		open, err := ranked(ctx, conn, t.id, site)
		for i := 0; err == nil && len(rain) == 0 && i < len(open); i++ {
			rain, err = collect(ctx, conn, func(rows *sql.Rows) (one planner.Rain, err error) {
				err = rows.Scan(&one.At, &one.MM)
				return one, err
			}, `SELECT at, mm FROM rain WHERE team = ? AND station = ? AND at BETWEEN ? AND ? ORDER BY at`, t.id, open[i].ID, from, to)
		}
		return err
	})
	return rain, err
}

// siteRevision is the newest revision of the site's stations, dropped ones
// too: numbers are never given twice, so that it moves with every one of them.
func siteRevision(ctx context.Context, on session, team int64, site planner.SiteID) (revision int64, err error) {
	err = on.QueryRowContext(ctx, `SELECT coalesce(max(revision), 0) FROM station WHERE team = ? AND site = ?`, team, site).Scan(&revision)
	return revision, err
}

// stationFacts reads the facts of one station, and an empty day for each that
// is left out between two.
func stationFacts(ctx context.Context, on session, team int64, station planner.StationID) ([]planner.DayFacts, error) {
	rows, err := on.QueryContext(ctx, `SELECT day, `+factColumns+` FROM day_fact WHERE team = ? AND station = ? ORDER BY day`, team, station)
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var all []planner.DayFacts
	for rows.Next() {
		var row factRow
		if err := row.scan(rows); err != nil {
			return nil, err
		}
		facts, err := row.facts()
		if err != nil {
			return nil, fmt.Errorf("day %d: %w", row.day.Int64, err)
		}
		for n := len(all); n > 0 && all[n-1].Day+1 < facts.Day; n++ {
			all = append(all, planner.DayFacts{Day: all[n-1].Day + 1})
		}
		all = append(all, facts)
	}
	return all, rows.Err()
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

func (r *factRow) scan(rows *sql.Rows) error {
	return rows.Scan(&r.day, &r.highC, &r.lowC, &r.extremesFrom, &r.meanC, &r.published,
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
	revision, err := siteRevision(ctx, t.db.reader, t.id, site)
	return revision, storeError(t.db.name, "read the revision", err)
}
