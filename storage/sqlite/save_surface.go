package sqlite

import (
	"context"
	"database/sql"

	"swardbook/planner"
)

// surfaces keeps planner.Surface.
type surfaces struct{}

var surfaceParts = list[planner.Part]{
	table: "surface_part", parent: "surface", columns: "part, name, share, dropped",
	fields: func(p *planner.Part) []any { return []any{&p.ID, &p.Name, &p.Share, &p.Dropped} },
}

func (surfaces) list(ctx context.Context, on session, team int64, where string, args ...any) ([]planner.Surface, error) {
	turf, err := surfaceTurf.all(ctx, on, team)
	if err != nil {
		return nil, err
	}
	parts, err := surfaceParts.all(ctx, on, team)
	if err != nil {
		return nil, err
	}
	return collect(ctx, on, func(rows *sql.Rows) (surface planner.Surface, err error) {
		err = rows.Scan(&surface.ID, &surface.Site, &surface.Name, &surface.AreaM2, &surface.Archived)
		surface.Turf, surface.Parts = turf[int64(surface.ID)], parts[int64(surface.ID)]
		return surface, err
	}, `SELECT id, site, name, area_m2, archived FROM surface WHERE team = ? AND `+where+` ORDER BY id`,
		append([]any{team}, args...)...)
}

func (surfaces) withID(surface planner.Surface, id int64) planner.Surface {
	surface.ID = planner.SurfaceID(id)
	return surface
}

func (surfaces) write(ctx context.Context, s saving, before, after planner.Surface) error {
	err := s.putNamed(ctx, named{noun: after, name: after.Name, archived: after.Archived,
		parent: "site", was: int64(before.Site), is: int64(after.Site)}, column{"area_m2", after.AreaM2})
	if err != nil {
		return err
	}
	if err := surfaceParts.keep(ctx, s, after.Key(), after.Parts); err != nil {
		return err
	}
	_, err = surfaceTurf.keep(ctx, s, after.Key(), before.Turf, after.Turf)
	return err
}
