package sqlite

import (
	"bytes"
	"context"
	"database/sql"
	"fmt"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"testing/fstest"

	"github.com/google/go-cmp/cmp"
	"github.com/pressly/goose/v3"

	"swardbook/planner"
)

func TestSettingsHoldOnEveryConnection(t *testing.T) {
	t.Parallel()
	db, _ := newHome(t, filepath.Join(t.TempDir(), "store.db"))
	for _, pool := range []struct {
		name      string
		pool      *sql.DB
		conns     int
		queryOnly string
	}{{"writer", db.writer, 1, "0"}, {"reader", db.reader, readers, "1"}, {"staging", db.staging, 3, "0"}} {
		for i := range pool.conns { // all held at once, so that each is another
			conn, err := pool.pool.Conn(t.Context())
			if err != nil {
				t.Fatal(err)
			}
			defer conn.Close()
			for pragma, want := range map[string]string{
				"foreign_keys": "1", "busy_timeout": "5000", "synchronous": "2", "journal_mode": "wal", "query_only": pool.queryOnly,
			} {
				var got string
				if err := conn.QueryRowContext(t.Context(), "PRAGMA "+pragma).Scan(&got); err != nil || got != want {
					t.Errorf("%s connection %d: %s is %q, %v, want %q", pool.name, i, pragma, got, err, want)
				}
			}
		}
	}
	if stats := db.writer.Stats(); stats.MaxOpenConnections != 1 {
		t.Errorf("the writer may open %d connections", stats.MaxOpenConnections)
	}
}

func TestOpenRefusals(t *testing.T) {
	t.Parallel()
	folder := t.TempDir()
	text := filepath.Join(folder, "notes.txt")
	if err := os.WriteFile(text, []byte(strings.Repeat("cut the greens\n", 500)), 0o600); err != nil {
		t.Fatal(err)
	}
	short := filepath.Join(folder, "short.txt")
	if err := os.WriteFile(short, []byte("cut"), 0o600); err != nil {
		t.Fatal(err)
	}
	foreign := filepath.Join(folder, "foreign.db")
	makeDatabase(t, foreign, "CREATE TABLE bird (name)")
	marked := filepath.Join(folder, "marked.db")
	makeDatabase(t, marked, "PRAGMA application_id = 77")
	newer := filepath.Join(folder, "newer.db")
	openWith(t, newer, withMigration(t, "ALTER TABLE team ADD COLUMN motto TEXT"))
	for _, row := range []struct {
		name, path string
		kind       planner.Kind
		says       string
	}{
		{"no path", "", planner.Missing, "no file is named"},
		{"no folder", filepath.Join(folder, "nowhere", "store.db"), planner.NotFound, "there is no folder " + filepath.Join(folder, "nowhere")},
		{"a file for a folder", filepath.Join(text, "store.db"), planner.Invalid, "the path " + text + " is a file, not a folder"},
		{"a folder", folder, planner.Invalid, "the path " + folder + " is a folder"},
		{"no database", text, planner.Refused, "the file of the store " + text + " is damaged or is no database"},
		{"a few bytes", short, planner.Refused, "is no database"},
		{"another program's tables", foreign, planner.Refused, "the file " + foreign + " is a database of another program"},
		{"another program's mark", marked, planner.Refused, "is a database of another program"},
		{"newer", newer, planner.Refused, fmt.Sprintf("was written by a newer program (schema %d, this one knows %d)", newest(t)+1, newest(t))},
	} {
		t.Run(row.name, func(t *testing.T) {
			before, _ := os.ReadFile(row.path)
			db, err := Open(t.Context(), row.path)
			if err == nil {
				db.Close()
				t.Fatal("Open took it")
			}
			if kind := planner.KindOf(err); kind != row.kind || !strings.Contains(err.Error(), row.says) {
				t.Errorf("Open: %s: %q, want %s: %q", kind, err, row.kind, row.says)
			}
			if after, _ := os.ReadFile(row.path); !bytes.Equal(before, after) {
				t.Error("the file was changed")
			}
		})
	}
	if left, _ := filepath.Glob(filepath.Join(folder, "*-wal")); len(left) > 0 {
		t.Errorf("files were left behind: %v", left)
	}
}

func TestOpenTakes(t *testing.T) {
	t.Parallel()
	folder := t.TempDir()
	empty := filepath.Join(folder, "empty.db")
	if err := os.WriteFile(empty, nil, 0o600); err != nil {
		t.Fatal(err)
	}
	for _, path := range []string{empty, filepath.Join(folder, "50% & what?#&mode=ro.db"), filepath.Join(folder, "Bücher 'neu'.db")} {
		db, home := newHome(t, path)
		if err := db.Close(); err != nil {
			t.Errorf("close %q: %v", path, err)
		}
		if _, err := os.Stat(path); err != nil {
			t.Errorf("the file has another name: %v", err)
		}
		if _, err := home.Setup(t.Context()); err == nil {
			t.Error("a closed store still answers")
		}
		db, home = reopen(t, path)
		if setup, err := home.Setup(t.Context()); err != nil || len(setup.Sites) != 1 {
			t.Errorf("after reopening %q: %+v, %v", path, setup, err)
		}
		db.Close()
	}
	if copies, _ := filepath.Glob(filepath.Join(folder, "*before*")); len(copies) > 0 {
		t.Errorf("a file that needed no migration was copied: %v", copies)
	}
}

func TestMigrationCopiesFirst(t *testing.T) {
	t.Parallel()
	file := filepath.Join(t.TempDir(), "store.db")
	db, home := newHome(t, file)
	want, err := home.Setup(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	db.Close()

	// A migration that fails leaves the file at its version, and a copy.
	if _, err := open(t.Context(), file, withMigration(t, "ALTER TABLE team ADD COLUMN motto TEXT; SELECT nonsense()")); err == nil {
		t.Fatal("a broken migration was applied")
	}
	openWith(t, file, ourMigrations(t)) // not newer than before

	openWith(t, file, withMigration(t, "ALTER TABLE team ADD COLUMN motto TEXT"))
	db, home = reopen(t, fmt.Sprintf("%s.before-%d", file, newest(t)+1))
	if got, err := home.Setup(t.Context()); err != nil || !cmp.Equal(got, want) {
		t.Errorf("the copy holds %+v, %v", got, err)
	}
	db.Close()
	if left, _ := filepath.Glob(file + ".copy-*"); len(left) > 0 {
		t.Errorf("drafts of copies were left behind: %v", left)
	}
}

// A copy that is there is the file as it was before: neither a second try after
// half of the migrations nor a third takes its place.
func TestMigrationKeepsTheFirstCopy(t *testing.T) {
	t.Parallel()
	file := filepath.Join(t.TempDir(), "store.db")
	db, _ := newHome(t, file)
	db.Close()
	target := newest(t) + 2
	half := withMigrations(t, "ALTER TABLE team ADD COLUMN motto TEXT", "SELECT nonsense()")
	for try := range 3 {
		if _, err := open(t.Context(), file, half); err == nil {
			t.Fatal("a broken migration was applied")
		}
		for name, want := range map[string]int{
			fmt.Sprintf("%s.before-%d", file, target):       newest(t),
			fmt.Sprintf("%s.before-%d.again", file, target): newest(t) + 1,
		} {
			version, err := inspect(t.Context(), name)
			if again := strings.HasSuffix(name, ".again"); again && try == 0 {
				want = 0 // there is no such copy yet
			}
			if err != nil || version != int64(want) {
				t.Errorf("after try %d: %s has schema %d, %v, want %d", try+1, filepath.Base(name), version, err, want)
			}
		}
	}
	if left, _ := filepath.Glob(file + ".*"); len(left) != 2 {
		t.Errorf("copies: %v", left)
	}
}

func TestTeams(t *testing.T) {
	t.Parallel()
	db, home := newHome(t, filepath.Join(t.TempDir(), "store.db"))
	for _, row := range []struct {
		platform, name string
		same           bool
	}{{"terminal", "home", true}, {" Terminal ", "\tHOME ", true}, {"discord", "home", false}, {"terminal", "away", false}} {
		team, err := db.Team(t.Context(), row.platform, row.name)
		if err != nil {
			t.Fatal(err)
		}
		if same := team.id == home.id; same != row.same {
			t.Errorf("team %q of %q: the same is %v, want %v", row.name, row.platform, same, row.same)
		}
	}
	for _, row := range [][2]string{{"", "home"}, {"terminal", ""}, {" ", "home"}, {"terminal", " \t"}} {
		if _, err := db.Team(t.Context(), row[0], row[1]); planner.KindOf(err) != planner.Missing {
			t.Errorf("Team(%q, %q): %v, want a Missing problem", row[0], row[1], err)
		}
	}
	ids := make(chan int64)
	for range 8 {
		go func() {
			team, err := db.Team(context.Background(), "terminal", "new")
			if err != nil {
				ids <- 0
				return
			}
			ids <- team.id
		}()
	}
	first := <-ids
	for range 7 {
		if id := <-ids; id != first || id == 0 {
			t.Errorf("a new team asked for at once is both %d and %d", first, id)
		}
	}
}

// Every table's key starts with the team, and every foreign key carries it.
func TestSchemaKeysStartWithTeam(t *testing.T) {
	t.Parallel()
	db, _ := newHome(t, filepath.Join(t.TempDir(), "store.db"))
	tables := texts(t, db, `SELECT name FROM sqlite_schema WHERE type = 'table'
		AND name NOT IN ('team', 'team_link', 'schema_version', 'sqlite_sequence',
		'program_note')`)
	if len(tables) < 15 {
		t.Fatalf("only %d tables are looked at", len(tables))
	}
	for _, table := range tables {
		if key := texts(t, db, fmt.Sprintf(`SELECT name FROM pragma_table_info('%s') WHERE pk = 1`, table)); !cmp.Equal(key, []string{"team"}) {
			t.Errorf("the key of %s starts with %v", table, key)
		}
		if keys := texts(t, db, fmt.Sprintf(`SELECT id FROM pragma_foreign_key_list('%s')`, table)); len(keys) == 0 {
			t.Errorf("%s has no foreign key", table)
		}
		for _, key := range texts(t, db, fmt.Sprintf(`SELECT id FROM pragma_foreign_key_list('%[1]s') EXCEPT
			SELECT id FROM pragma_foreign_key_list('%[1]s') WHERE "from" = 'team' AND ("to" = 'team' OR "table" = 'team')`, table)) {
			t.Errorf("foreign key %s of %s does not carry the team", key, table)
		}
	}
	for _, index := range texts(t, db, `SELECT name FROM sqlite_schema WHERE type = 'index' AND tbl_name NOT IN ('team_link', 'program_note')`) {
		if first := texts(t, db, fmt.Sprintf(`SELECT name FROM pragma_index_info('%s') WHERE seqno = 0`, index)); first[0] != "team" {
			t.Errorf("index %s starts with %v", index, first)
		}
	}
}

func makeDatabase(t *testing.T, path, statement string) {
	t.Helper()
	db, err := sql.Open(driverName, path)
	if err != nil {
		t.Fatal(err)
	}
	defer db.Close()
	if _, err := db.Exec(statement); err != nil {
		t.Fatal(err)
	}
}

func ourMigrations(t *testing.T) migrations {
	t.Helper()
	all, err := allMigrations()
	if err != nil {
		t.Fatal(err)
	}
	return all
}

// newest is the schema of this program.
func newest(t *testing.T) int { return versionOf(t, ourMigrations(t)) }

// versionOf is the number of the last of the migrations.
func versionOf(t *testing.T, all migrations) int {
	t.Helper()
	var last int64
	names, err := fs.Glob(all.files, "*.sql")
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range names {
		version, err := goose.NumericComponent(name)
		if err != nil {
			t.Fatal(err)
		}
		last = max(last, version)
	}
	for _, step := range all.steps {
		last = max(last, step.Version)
	}
	return int(last)
}

// firstMigrations are the program's migrations up to one.
func firstMigrations(t *testing.T, upTo int64) migrations {
	t.Helper()
	all, files := ourMigrations(t), fstest.MapFS{}
	names, err := fs.Glob(all.files, "*.sql")
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range names {
		data, err := fs.ReadFile(all.files, name)
		if err != nil {
			t.Fatal(err)
		}
		if version, err := goose.NumericComponent(name); err == nil && version <= upTo {
			files[name] = &fstest.MapFile{Data: data}
		}
	}
	return migrations{files, slices.DeleteFunc(all.steps, func(step *goose.Migration) bool { return step.Version > upTo })}
}

// withMigration is the program's migrations and one more.
func withMigration(t *testing.T, statements string) migrations { return withMigrations(t, statements) }

// withMigrations is the program's migrations and some more.
func withMigrations(t *testing.T, more ...string) migrations {
	t.Helper()
	all := firstMigrations(t, math.MaxInt64)
	for i, statements := range more {
		next := fmt.Sprintf("%05d_more.sql", newest(t)+1+i)
		all.files.(fstest.MapFS)[next] = &fstest.MapFile{Data: []byte("-- +goose Up\n" + statements + ";\n")}
	}
	return all
}

func openWith(t *testing.T, path string, all migrations) {
	t.Helper()
	db, err := open(t.Context(), path, all)
	if err != nil {
		t.Fatal(err)
	}
	if err := db.Close(); err != nil {
		t.Fatal(err)
	}
}
