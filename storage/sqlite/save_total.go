package sqlite

import (
	"context"
	"database/sql"

	"swardbook/planner"
)

// totals keeps planner.Total.
type totals struct{}

var totalMarks = list[planner.Mark]{
	table: "total_mark", parent: "total", columns: "name, at",
	fields: func(m *planner.Mark) []any { return []any{&m.Name, &m.At} },
}

func (totals) list(ctx context.Context, on session, team int64, where string, args ...any) ([]planner.Total, error) {
	settings, err := totalSettings.all(ctx, on, team)
	if err != nil {
		return nil, err
	}
	marks, err := totalMarks.all(ctx, on, team)
	if err != nil {
		return nil, err
	}
	return collect(ctx, on, func(rows *sql.Rows) (total planner.Total, err error) {
		err = rows.Scan(&total.ID, &total.Site, &total.Name, &total.Archived)
		total.Settings, total.Marks = settings[int64(total.ID)], marks[int64(total.ID)]
		return total, err
	}, `SELECT id, site, name, archived FROM total WHERE team = ? AND `+where+` ORDER BY id`,
		append([]any{team}, args...)...)
}

func (totals) withID(total planner.Total, id int64) planner.Total {
	total.ID = planner.TotalID(id)
	return total
}

func (totals) write(ctx context.Context, s saving, before, after planner.Total) error {
	err := s.putNamed(ctx, named{noun: after, name: after.Name, archived: after.Archived,
		parent: "site", was: int64(before.Site), is: int64(after.Site)})
	if err != nil {
		return err
	}
	if err := totalMarks.keep(ctx, s, after.Key(), after.Marks); err != nil {
		return err
	}
	_, err = totalSettings.keep(ctx, s, after.Key(), before.Settings, after.Settings)
	return err
}
