package sqlite

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"time"

	"github.com/pressly/goose/v3"

	"swardbook/planner"
)

const (
	// versionTable is where the migrations that a file has had are kept.
	versionTable = "schema_version"

	// applicationID marks a file as ours: "SWRD" in the header field that
	// SQLite keeps for it. Files with another mark are refused.
	applicationID = 0x53575244

	// migrationTries bounds how often a migration is tried again that another
	// program, opening the same file, was first with: once for each migration
	// and each of a few other programs, with a pause before the next.
	migrationTries = 40
	migrationPause = 50 * time.Millisecond
	// busyTries bounds how often a file that stays locked through the busy
	// timeout is looked at again: a minute and a half in all.
	busyTries = 18
)

// checkPath returns the absolute path, or says what to do about it.
func checkPath(path string) (string, error) {
	if path == "" {
		return "", planner.Problemf(planner.Missing, "no file is named for the store").
			WithHint("Name one, like swardbook.db.")
	}
	absolute, err := filepath.Abs(path)
	if err != nil {
		return "", fmt.Errorf("open store: %w", err)
	}
	folder := filepath.Dir(absolute)
	info, err := os.Stat(folder)
	if err == nil && !info.IsDir() {
		return "", planner.Problemf(planner.Invalid, "the path %s is a file, not a folder", folder).
			WithHint("Name a file in a folder.")
	}
	if err != nil {
		return "", planner.Problemf(planner.NotFound, "there is no folder %s", folder).
			WithHint("Make the folder first, or name a file in another one.").WithCause(err)
	}
	if info, err := os.Stat(absolute); err == nil && info.IsDir() {
		return "", planner.Problemf(planner.Invalid, "the path %s is a folder", absolute).
			WithHint("Name a file in it, like %s.", filepath.Join(absolute, "swardbook.db"))
	}
	return absolute, nil
}

// migrations are what brings a file from one schema to the next, by number:
// files of SQL, and steps that need Go.
type migrations struct {
	files fs.FS
	steps []*goose.Migration
}

// allMigrations are those of this program.
func allMigrations() (migrations, error) {
	files, err := fs.Sub(embedded, "migrations")
	return migrations{files, []*goose.Migration{daysIntoBlocks()}}, err
}

// migrate brings the file to the newest of the migrations. Another program
// that is at the same may hold it up at any step: it looks again.
func migrate(ctx context.Context, writer *sql.DB, path string, all migrations) error {
	var err error
	for range busyTries {
		if err = migrateOnce(ctx, writer, path, all); planner.KindOf(err) != planner.Busy {
			return err
		}
		select {
		case <-ctx.Done():
			return err
		case <-time.After(migrationPause):
		}
	}
	return err
}

func migrateOnce(ctx context.Context, writer *sql.DB, path string, all migrations) error {
	provider, err := goose.NewProvider(goose.DialectSQLite3, writer, all.files, goose.WithGoMigrations(all.steps...),
		goose.WithTableName(versionTable), goose.WithDisableGlobalRegistry(true), goose.WithLogger(goose.NopLogger()))
	if err != nil {
		return fmt.Errorf("read migrations: %w", err)
	}
	sources := provider.ListSources()
	target := sources[len(sources)-1].Version
	version, err := inspect(ctx, path)
	switch {
	case err != nil:
		return storeError(path, "look at the file", err)
	case version > target:
		return planner.Problemf(planner.Refused, "the file %s was written by a newer program (schema %d, this one knows %d)", path, version, target).
			WithHint("Use the newer program; the file was not changed.")
	case version == target:
		return nil
	case version > 0:
		if err := copyBefore(ctx, writer, path, target); err != nil {
			return storeError(path, "copy the file before migrating", err)
		}
	}
	return storeError(path, "migrate", migrateUp(ctx, writer, provider))
}

// migrateUp applies what is missing. When another program is at the same, one
// of the two finds a table that is already there; it looks again.
func migrateUp(ctx context.Context, writer *sql.DB, provider *goose.Provider) error {
	if _, err := writer.ExecContext(ctx, fmt.Sprintf("PRAGMA application_id = %d", applicationID)); err != nil {
		return err
	}
	var err error
	for range migrationTries {
		if _, err = provider.Up(ctx); err == nil || planner.KindOf(err) == planner.Refused {
			return err
		}
		select {
		case <-ctx.Done():
			return err
		case <-time.After(migrationPause):
		}
	}
	return err
}

// inspect returns the schema version of the file, 0 for a file that is not
// there or has nothing in it, and changes nothing.
func inspect(ctx context.Context, path string) (version int64, err error) {
	if info, err := os.Stat(path); errors.Is(err, fs.ErrNotExist) || err == nil && info.Size() == 0 {
		return 0, nil
	}
	pool, err := sql.Open(driverName, lookDSN(path))
	if err != nil {
		return 0, err
	}
	defer pool.Close()
	var mark, tables, versions int64
	err = pool.QueryRowContext(ctx, `SELECT (SELECT application_id FROM pragma_application_id),
		count(*), coalesce(sum(name = ?), 0) FROM sqlite_schema`, versionTable).Scan(&mark, &tables, &versions)
	if err != nil {
		return 0, err
	}
	if mark != applicationID && (mark != 0 || tables > 0) {
		return 0, planner.Problemf(planner.Refused, "the file %s is a database of another program", path).
			WithHint("Name another file; this one was not changed.")
	}
	if versions == 0 {
		return 0, nil
	}
	err = pool.QueryRowContext(ctx, `SELECT coalesce(max(version_id), 0) FROM `+versionTable+` WHERE is_applied`).Scan(&version)
	return version, err
}

// copyBefore writes a copy of the file beside it, whole or not at all. The first
// copy before a schema stays as it is: a later one, after migrations that stopped
// half-way or of a file that was put back, stands beside it, and is replaced by
// the next.
func copyBefore(ctx context.Context, writer *sql.DB, path string, target int64) error {
	draft, err := os.CreateTemp(filepath.Dir(path), filepath.Base(path)+".copy-*")
	if err != nil {
		return err
	}
	name := draft.Name()
	defer os.Remove(name) // gone already when all went well
	if err := draft.Close(); err != nil {
		return err
	}
	if _, err := writer.ExecContext(ctx, "VACUUM INTO ?", name); err != nil {
		return err
	}
	copied := fmt.Sprintf("%s.before-%d", path, target)
	if _, err := os.Lstat(copied); !errors.Is(err, fs.ErrNotExist) {
		copied += ".again"
	}
	return os.Rename(name, copied)
}
