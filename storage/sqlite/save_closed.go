package sqlite

import (
	"context"
	"database/sql"

	"swardbook/planner"
)

// closedDays keeps planner.Closed.
type closedDays struct{}

var closedWorks = list[planner.WorkID]{
	table: "closed_work", parent: "closed", columns: "work",
	fields: func(work *planner.WorkID) []any { return []any{work} },
}

func (closedDays) list(ctx context.Context, on session, team int64, where string, args ...any) ([]planner.Closed, error) {
	works, err := closedWorks.all(ctx, on, team)
	if err != nil {
		return nil, err
	}
	return collect(ctx, on, func(rows *sql.Rows) (closed planner.Closed, err error) {
		err = rows.Scan(&closed.ID, &closed.Site, &closed.Name, &closed.From, &closed.To, &closed.Yearly, &closed.Archived)
		closed.Works = works[int64(closed.ID)]
		return closed, err
	}, `SELECT id, site, name, from_day, to_day, yearly, archived FROM closed WHERE team = ? AND `+where+` ORDER BY id`,
		append([]any{team}, args...)...)
}

func (closedDays) withID(closed planner.Closed, id int64) planner.Closed {
	closed.ID = planner.ClosedID(id)
	return closed
}

func (closedDays) write(ctx context.Context, s saving, before, after planner.Closed) error {
	err := s.putNamed(ctx, named{noun: after, name: after.Name, archived: after.Archived,
		parent: "site", was: int64(before.Site), is: int64(after.Site)},
		column{"from_day", after.From}, column{"to_day", after.To}, column{"yearly", after.Yearly})
	if err != nil {
		return err
	}
	for _, work := range after.Works {
		err := mustExist(ctx, s.on, "work", int64(work), `SELECT 1 FROM work JOIN surface
			ON surface.team = work.team AND surface.id = work.surface
			WHERE work.team = ? AND work.id = ? AND surface.site = ?`, s.team, work, after.Site)
		if err != nil {
			return err
		}
	}
	return closedWorks.keep(ctx, s, after.Key(), after.Works)
}
