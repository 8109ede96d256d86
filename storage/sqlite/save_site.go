package sqlite

import (
	"context"
	"database/sql"

	"swardbook/planner"
)

// sites keeps planner.Site.
type sites struct{}

func (sites) list(ctx context.Context, on session, team int64, where string, args ...any) ([]planner.Site, error) {
	rules, err := siteRules.all(ctx, on, team)
	if err != nil {
		return nil, err
	}
	return collect(ctx, on, func(rows *sql.Rows) (planner.Site, error) {
		var site planner.Site
		err := rows.Scan(&site.ID, &site.Name, &site.Lat, &site.Lon, &site.Zone, &site.Units, &site.Archived)
		site.Rules = rules[int64(site.ID)]
		return site, err
	}, `SELECT id, name, lat, lon, zone, units, archived FROM site WHERE team = ? AND `+where+` ORDER BY id`,
		append([]any{team}, args...)...)
}

func (sites) withID(site planner.Site, id int64) planner.Site {
	site.ID = planner.SiteID(id)
	return site
}

func (sites) write(ctx context.Context, s saving, before, after planner.Site) error {
	err := s.putNamed(ctx, named{noun: after, name: after.Name, archived: after.Archived},
		column{"lat", after.Lat}, column{"lon", after.Lon}, column{"zone", after.Zone}, column{"units", after.Units})
	if err != nil {
		return err
	}
	added, err := siteRules.keep(ctx, s, after.Key(), before.Rules, after.Rules)
	if err != nil || before.ID == 0 {
		return err
	}
	from, moved := factsMovedFrom(before, after, added)
	if !moved {
		return nil
	}
	return s.recut(ctx, after, from)
}

// factsMovedFrom says from which day on the site's days are cut otherwise than
// before: the first day of the oldest rule added, or every day when that rule
// is now the first one, which also holds before its day, or when the zone, in
// which civil days are cut, is another.
func factsMovedFrom(before, after planner.Site, added planner.Dated[planner.DayRule]) (from planner.Day, moved bool) {
	if before.Zone != after.Zone {
		return planner.DayMin, true
	}
	if len(added) == 0 {
		return 0, false
	}
	if added[0].Day < before.Rules[0].Day {
		return planner.DayMin, true
	}
	return added[0].Day, true
}

// recut builds the day facts of all the site's stations again, archived ones
// included: they may come back.
func (s saving) recut(ctx context.Context, site planner.Site, from planner.Day) error {
	all, err := stations{}.list(ctx, s.on, s.team, "site = ?", site.ID)
	if err != nil {
		return err
	}
	for _, station := range all {
		cutter, err := newCutter(s.on, s.team, station.ID, site)
		if err != nil {
			return err
		}
		days, err := cutter.daysWithReadings(ctx)
		if err != nil {
			return err
		}
		days.first = max(days.first, from)
		if err := cutter.rebuild(ctx, days); err != nil {
			return err
		}
		if err := bumpRevision(ctx, s.on, s.team, station.ID); err != nil {
			return err
		}
	}
	return nil
}

// bumpRevision gives the station's record a number that no record had.
func bumpRevision(ctx context.Context, on session, team int64, station planner.StationID) error {
	revision, err := next(ctx, on, team, revisionCounter)
	if err != nil {
		return err
	}
	_, err = on.ExecContext(ctx, `UPDATE station SET revision = ? WHERE team = ? AND id = ?`, revision, team, station)
	return err
}
