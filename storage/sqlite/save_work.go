package sqlite

import (
	"context"
	"database/sql"

	"swardbook/planner"
)

// works keeps planner.Work.
type works struct{}

func (works) list(ctx context.Context, on session, team int64, where string, args ...any) ([]planner.Work, error) {
	settings, err := workSettings.all(ctx, on, team)
	if err != nil {
		return nil, err
	}
	return collect(ctx, on, func(rows *sql.Rows) (work planner.Work, err error) {
		err = rows.Scan(&work.ID, &work.Surface, &work.Name, &work.Archived)
		work.Settings = settings[int64(work.ID)]
		return work, err
	}, `SELECT id, surface, name, archived FROM work WHERE team = ? AND `+where+` ORDER BY id`,
		append([]any{team}, args...)...)
}

func (works) withID(work planner.Work, id int64) planner.Work {
	work.ID = planner.WorkID(id)
	return work
}

func (works) write(ctx context.Context, s saving, before, after planner.Work) error {
	err := s.putNamed(ctx, named{noun: after, name: after.Name, archived: after.Archived,
		parent: "surface", was: int64(before.Surface), is: int64(after.Surface)})
	if err != nil {
		return err
	}
	_, err = workSettings.keep(ctx, s, after.Key(), before.Settings, after.Settings)
	return err
}
