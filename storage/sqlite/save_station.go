package sqlite

import (
	"context"
	"database/sql"

	"swardbook/planner"
)

// stations keeps planner.Station.
type stations struct{}

func (stations) list(ctx context.Context, on session, team int64, where string, args ...any) ([]planner.Station, error) {
	return collect(ctx, on, func(rows *sql.Rows) (station planner.Station, err error) {
		err = rows.Scan(&station.ID, &station.Site, &station.Name, &station.Rank, &station.Archived)
		return station, err
	}, `SELECT id, site, name, rank, archived FROM station WHERE team = ? AND `+where+` ORDER BY id`,
		append([]any{team}, args...)...)
}

func (stations) withID(station planner.Station, id int64) planner.Station {
	station.ID = planner.StationID(id)
	return station
}

func (stations) write(ctx context.Context, s saving, before, after planner.Station) error {
	err := s.putNamed(ctx, named{noun: after, name: after.Name, archived: after.Archived,
		parent: "site", was: int64(before.Site), is: int64(after.Site)}, column{"rank", after.Rank})
	if err != nil || before == after {
		return err
	}
	return bumpRevision(ctx, s.on, s.team, after.ID)
}
