package sqlite

import (
	"context"
	"database/sql"
	"errors"
	"strings"

	"swardbook/planner"
)

// Team is the handle of one team: all that is kept of it, and nothing of
// another. It is safe for use by several goroutines.
type Team struct {
	db *DB
	id int64
}

// The promises to planner.
var (
	_ planner.Keeper   = (*Team)(nil)
	_ planner.Recorder = (*Team)(nil)
)

// ID is the team's own number, which is never given to another one.
func (t *Team) ID() int64 { return t.id }

// Team returns the team that the platform knows under the outside id, and adds
// it when there is none. Case and surrounding spaces do not count; an empty
// platform or id is a Missing problem.
func (db *DB) Team(ctx context.Context, platform, outsideID string) (*Team, error) {
	platform, outsideID = strings.ToLower(strings.TrimSpace(platform)), strings.ToLower(strings.TrimSpace(outsideID))
	if platform == "" || outsideID == "" {
		return nil, planner.Problemf(planner.Missing, "the team has no name").
			WithHint("Name it, like --team home.")
	}
	const step = "find team"
	id, err := linkedTeam(ctx, db.reader, platform, outsideID)
	if errors.Is(err, sql.ErrNoRows) {
		err = db.write(ctx, step, func(conn *sql.Conn) error {
			id, err = linkedTeam(ctx, conn, platform, outsideID) // somebody may have been first
			if errors.Is(err, sql.ErrNoRows) {
				id, err = addTeam(ctx, conn, platform, outsideID)
			}
			return err
		})
	}
	if err != nil {
		return nil, storeError(db.name, step, err)
	}
	return &Team{db: db, id: id}, nil
}

func linkedTeam(ctx context.Context, on session, platform, outsideID string) (id int64, err error) {
	err = on.QueryRowContext(ctx, `SELECT team FROM team_link WHERE platform = ? AND outside_id = ?`,
		platform, outsideID).Scan(&id)
	return id, err
}

func addTeam(ctx context.Context, on session, platform, outsideID string) (id int64, err error) {
	if err := on.QueryRowContext(ctx, `INSERT INTO team DEFAULT VALUES RETURNING id`).Scan(&id); err != nil {
		return 0, err
	}
	_, err = on.ExecContext(ctx, `INSERT INTO team_link (platform, outside_id, team) VALUES (?, ?, ?)`,
		platform, outsideID, id)
	return id, err
}

// The counters that give no noun's id.
const (
	changeCounter   = "change"
	importCounter   = "import"
	revisionCounter = "revision"
	aheadCounter    = "ahead"
)

// next gives the next number of the kind in the team. Numbers are never given
// twice, not even after what had them is gone.
func next(ctx context.Context, on session, team int64, kind string) (number int64, err error) {
	err = on.QueryRowContext(ctx, `INSERT INTO counter (team, kind, last) VALUES (?, ?, 1)
		ON CONFLICT (team, kind) DO UPDATE SET last = last + 1 RETURNING last`, team, kind).Scan(&number)
	return number, err
}
