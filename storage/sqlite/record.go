package sqlite

import (
	"cmp"
	"context"
	"database/sql"
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
		firstBlock, lastBlock := everyBlock()
		for _, station := range open {
			facts, err := keptDays(ctx, conn, t.id, station.ID, firstBlock, lastBlock)
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

// Revision returns the Revision the record has now, without loading it.
func (t *Team) Revision(ctx context.Context, site planner.SiteID) (int64, error) {
	revision, err := siteRevision(ctx, t.db.reader, t.id, site)
	return revision, storeError(t.db.name, "read the revision", err)
}
