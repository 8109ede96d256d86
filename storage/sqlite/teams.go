package sqlite

import (
	"context"
	"database/sql"
	"errors"
	"strings"
	"time"

	"swardbook/planner"
)

// Teams returns the outside ids of the platform's teams that have not left, in
// order.
func (db *DB) Teams(ctx context.Context, platform string) ([]string, error) {
	ids, err := collect(ctx, db.reader, scanText, `SELECT outside_id FROM team_link
		WHERE platform = ? AND team NOT IN (SELECT team FROM team_left) ORDER BY outside_id`, strings.ToLower(platform))
	return ids, storeError(db.name, "list teams", err)
}

func scanText(rows *sql.Rows) (text string, err error) { return text, rows.Scan(&text) }

// Left marks the platform's team as one that left at the time; a mark that is
// there keeps its time, and a team that is not known is no error.
func (db *DB) Left(ctx context.Context, platform, outsideID string, at time.Time) error {
	return db.write(ctx, "mark a team as left", func(conn *sql.Conn) error {
		_, err := conn.ExecContext(ctx, `INSERT INTO team_left (team, at) SELECT team, ? FROM team_link
			WHERE platform = ? AND outside_id = ? ON CONFLICT DO NOTHING`, at.Unix(), strings.ToLower(platform), strings.ToLower(outsideID))
		return err
	})
}

// Back takes the mark off a team that came back.
func (db *DB) Back(ctx context.Context, platform, outsideID string) error {
	return db.write(ctx, "mark a team as back", func(conn *sql.Conn) error {
		_, err := conn.ExecContext(ctx, `DELETE FROM team_left WHERE team IN
			(SELECT team FROM team_link WHERE platform = ? AND outside_id = ?)`, strings.ToLower(platform), strings.ToLower(outsideID))
		return err
	})
}

// EraseLeft takes all that is kept of teams that left before the time out of
// the store, and returns how many.
func (db *DB) EraseLeft(ctx context.Context, before time.Time) (erased int, err error) {
	teams, err := collect(ctx, db.reader, func(rows *sql.Rows) (id int64, err error) { return id, rows.Scan(&id) },
		`SELECT team FROM team_left WHERE at < ?`, before.Unix())
	if err != nil {
		return 0, storeError(db.name, "list teams that left", err)
	}
	for _, id := range teams {
		if err := (&Team{db: db, id: id}).EraseTeam(ctx); err != nil {
			return erased, err
		}
		erased++
	}
	return erased, nil
}

// Note returns what the program noted under the name, "" when nothing.
func (db *DB) Note(ctx context.Context, name string) (note string, err error) {
	err = db.reader.QueryRowContext(ctx, `SELECT note FROM program_note WHERE name = ?`, name).Scan(&note)
	if errors.Is(err, sql.ErrNoRows) {
		return "", nil
	}
	return note, storeError(db.name, "read a note", err)
}

// SetNote notes something for the next run.
func (db *DB) SetNote(ctx context.Context, name, note string) error {
	return db.write(ctx, "keep a note", func(conn *sql.Conn) error {
		_, err := conn.ExecContext(ctx, `INSERT INTO program_note (name, note) VALUES (?, ?)
			ON CONFLICT (name) DO UPDATE SET note = excluded.note`, name, note)
		return err
	})
}

// Lock is the right to be the one program that serves a file.
type Lock struct {
	pool *sql.DB
	conn *sql.Conn
}

// LockServing takes the right to serve the file at the path, or is a Refused
// problem while another program has it. The right ends with Close and with the
// program, however it ends: it is a lock of the operating system on a small
// file beside the database.
func LockServing(ctx context.Context, path string) (*Lock, error) {
	path, err := checkPath(path)
	if err != nil {
		return nil, err
	}
	pool, err := sql.Open(driverName, fileURI(path+".serving")+"?_pragma=busy_timeout(200)&_pragma=journal_mode(DELETE)")
	if err != nil {
		return nil, storeError(path, "lock the store for serving", err)
	}
	conn, err := pool.Conn(ctx)
	if err == nil {
		_, err = conn.ExecContext(ctx, "BEGIN EXCLUSIVE")
	}
	if err != nil {
		err = storeError(path, "lock the store for serving", errors.Join(err, pool.Close()))
		if planner.KindOf(err) == planner.Busy {
			return nil, planner.Problemf(planner.Refused, "another serve is running on %s", path).
				WithHint("Stop that one first; two would post everything twice.").WithCause(err)
		}
		return nil, err
	}
	return &Lock{pool, conn}, nil
}

// Close gives the right back.
func (l *Lock) Close() error { return errors.Join(l.conn.Close(), l.pool.Close()) }
