package sqlite

import (
	"context"
	"database/sql"
	"database/sql/driver"
	"embed"
	"errors"
	"fmt"
	"net/url"
	"path/filepath"
	"strings"

	_ "modernc.org/sqlite" // the driver "sqlite"
)

const (
	driverName = "sqlite"

	// busyMilliseconds is how long a connection waits for another program to
	// let go of the file before it gives up as busy.
	busyMilliseconds = 5000

	// readers is the most connections that read at a time. They only bound the
	// open files of the program: one read of a record takes milliseconds.
	readers = 4
)

//go:embed migrations/*.sql
var embedded embed.FS

// DB is an open file. It is safe for use by several goroutines, and several
// programs may have the same file open.
type DB struct {
	name string // of the file, without its folder: for people in a chat, too
	// writer has one connection, so that the writers of this program queue up
	// in Go, without a limit of time, and only other programs are waited for
	// by SQLite's busy timeout. Who holds the connection may write, see Merge.
	writer *sql.DB
	reader *sql.DB
	// staging opens a connection for each Stage, for its temporary tables, and
	// takes no lock at BEGIN.
	staging *sql.DB
}

// Open opens the file, making it when it is not there, and brings it to the
// schema of this program; an existing file is first copied to
// path.before-N, N being the schema it is brought to; where that copy is there
// already it stays, and this one is path.before-N.again.
//
// A folder that is not there, a file that is no database or not one of ours,
// and a file of a newer schema are each a *planner.Problem, and the file is
// left as it was.
func Open(ctx context.Context, path string) (*DB, error) {
	all, err := allMigrations()
	if err != nil {
		return nil, fmt.Errorf("open store: %w", err)
	}
	return open(ctx, path, all)
}

// open is Open with the migrations as a parameter.
func open(ctx context.Context, path string, all migrations) (*DB, error) {
	path, err := checkPath(path)
	if err != nil {
		return nil, err
	}
	db, err := connect(path)
	if err != nil {
		return nil, storeError(path, "open store", err)
	}
	if err := migrate(ctx, db.writer, path, all); err != nil {
		return nil, errors.Join(err, db.Close())
	}
	return db, nil
}

// connect makes the three pools; the file is touched when one is first used.
func connect(path string) (*DB, error) {
	writer, err := sql.Open(driverName, dsn(path, "_txlock=immediate"))
	if err != nil {
		return nil, err
	}
	writer.SetMaxOpenConns(1)
	reader, err := sql.Open(driverName, dsn(path, "_pragma=query_only(1)"))
	if err != nil {
		return nil, errors.Join(err, writer.Close())
	}
	reader.SetMaxOpenConns(readers)
	reader.SetMaxIdleConns(readers)
	staging, err := sql.Open(driverName, dsn(path))
	if err != nil {
		return nil, errors.Join(err, writer.Close(), reader.Close())
	}
	// A connection given back is closed, and its temporary tables with it.
	staging.SetMaxIdleConns(-1)
	return &DB{name: filepath.Base(path), writer: writer, reader: reader, staging: staging}, nil
}

// dsn names the file and the settings of a connection. Settings belong here:
// one run through a pool would reach one connection only.
func dsn(path string, more ...string) string {
	settings := append([]string{
		fmt.Sprintf("_pragma=busy_timeout(%d)", busyMilliseconds),
		"_pragma=foreign_keys(1)",
		"_pragma=synchronous(FULL)",
		"_pragma=journal_mode(WAL)",
	}, more...)
	return fileURI(path) + "?" + strings.Join(settings, "&")
}

// lookDSN is a connection that changes nothing of a file, which may not be
// ours: it sets no journal mode and makes no file.
func lookDSN(path string) string {
	return fmt.Sprintf("%s?mode=rw&_pragma=busy_timeout(%d)&_pragma=query_only(1)", fileURI(path), busyMilliseconds)
}

// fileURI writes an absolute path so that no sign in it is read as a setting.
func fileURI(path string) string {
	slashed := filepath.ToSlash(path)
	if !strings.HasPrefix(slashed, "/") {
		slashed = "/" + slashed // a drive letter
	}
	return "file://" + (&url.URL{Path: slashed}).EscapedPath()
}

// Close closes the file. Handles of its teams and stages of them are not
// usable afterwards.
func (db *DB) Close() error {
	return errors.Join(db.staging.Close(), db.reader.Close(), db.writer.Close())
}

// session is what runs statements: a pool or one of its connections.
type session interface {
	ExecContext(ctx context.Context, query string, args ...any) (sql.Result, error)
	QueryContext(ctx context.Context, query string, args ...any) (*sql.Rows, error)
	QueryRowContext(ctx context.Context, query string, args ...any) *sql.Row
}

// write runs do in one transaction that holds the file's write lock from its
// beginning. step names it in errors.
func (db *DB) write(ctx context.Context, step string, do func(*sql.Conn) error) error {
	return db.within(ctx, db.writer, "BEGIN IMMEDIATE", step, do)
}

// read runs do in one transaction that sees one state of the file.
func (db *DB) read(ctx context.Context, step string, do func(*sql.Conn) error) error {
	return db.within(ctx, db.reader, "BEGIN", step, do)
}

func (db *DB) within(ctx context.Context, pool *sql.DB, begin, step string, do func(*sql.Conn) error) error {
	conn, err := pool.Conn(ctx)
	if err != nil {
		return storeError(db.name, step, err)
	}
	defer conn.Close()
	return storeError(db.name, step, transact(ctx, conn, begin, func() error { return do(conn) }))
}

// transact runs do between begin and COMMIT, or takes back all it did.
func transact(ctx context.Context, conn *sql.Conn, begin string, do func() error) error {
	if _, err := conn.ExecContext(ctx, begin); err != nil {
		return err
	}
	committed := false
	defer func() {
		if !committed {
			rollback(ctx, conn)
		}
	}()
	if err := do(); err != nil {
		return err
	}
	if err := ctx.Err(); err != nil {
		return err
	}
	// A COMMIT that is interrupted could be done and reported as not done.
	if _, err := conn.ExecContext(context.WithoutCancel(ctx), "COMMIT"); err != nil {
		return err
	}
	committed = true
	return nil
}

// rollback ends the transaction; a connection on which that does not work is
// not used again (closing it rolls back too).
func rollback(ctx context.Context, conn *sql.Conn) {
	if _, err := conn.ExecContext(context.WithoutCancel(ctx), "ROLLBACK"); err != nil {
		_ = conn.Raw(func(any) error { return driver.ErrBadConn })
	}
}

// collect runs the query and reads each row of it.
func collect[T any](ctx context.Context, on session, scan func(*sql.Rows) (T, error), query string, args ...any) ([]T, error) {
	rows, err := on.QueryContext(ctx, query, args...)
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var all []T
	for rows.Next() {
		one, err := scan(rows)
		if err != nil {
			return nil, err
		}
		all = append(all, one)
	}
	return all, rows.Err()
}
