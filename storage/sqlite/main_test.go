package sqlite

import (
	"bufio"
	"context"
	"database/sql/driver"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"modernc.org/sqlite"

	"swardbook/calc"
	"swardbook/planner"
)

// childVariable makes the test binary do one of children instead of its tests.
const childVariable = "SWARDBOOK_TEST_CHILD"

// children are what another program on the same file does.
var children = map[string]func(ctx context.Context, path string) error{
	"open":  childOpens,
	"write": childWrites,
	"merge": childMerges,
}

func TestMain(m *testing.M) {
	name := os.Getenv(childVariable)
	if name == "" {
		os.Exit(m.Run())
	}
	if err := children[name](context.Background(), os.Args[len(os.Args)-1]); err != nil {
		fmt.Println(err)
		os.Exit(1)
	}
}

// patience is after what time another program counts as hanging, and is killed.
const patience = 5 * time.Minute

// waitsLong lets a connection wait for another program for as long as a busy
// machine takes.
const waitsLong = "PRAGMA busy_timeout = 300000"

// child is the test binary as another program.
func child(t *testing.T, name, path string) *exec.Cmd {
	t.Helper()
	ctx, cancel := context.WithTimeout(t.Context(), patience)
	t.Cleanup(cancel)
	cmd := exec.CommandContext(ctx, os.Args[0], path)
	cmd.Env = append(os.Environ(), childVariable+"="+name)
	return cmd
}

// startUntil starts the program, waits until it says the word, and returns what
// else it says.
func startUntil(t *testing.T, cmd *exec.Cmd, word string) *bufio.Reader {
	t.Helper()
	out, err := cmd.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	said := bufio.NewReader(out)
	if line, err := said.ReadString('\n'); line != word+"\n" {
		t.Fatalf("the other program said %q, %v, want %q", line, err, word)
	}
	return said
}

const childSaves = 25

func childOpens(ctx context.Context, path string) error {
	db, err := Open(ctx, path)
	if err != nil {
		return err
	}
	return db.Close()
}

func childWrites(ctx context.Context, path string) error {
	db, err := Open(ctx, path)
	if err != nil {
		return err
	}
	team, err := db.Team(ctx, "terminal", "home")
	if err != nil {
		return err
	}
	if _, err := db.writer.ExecContext(ctx, waitsLong); err != nil {
		return err
	}
	fmt.Println("writing")
	for i := range childSaves {
		if _, err := team.Save(ctx, stamp, surface(fmt.Sprintf("child %d", i))); err != nil {
			return err
		}
	}
	return db.Close()
}

// childMerges merges crashReadings, and comes to a halt where a trigger calls
// stop_here, or behind the merge.
func childMerges(ctx context.Context, path string) error {
	sqlite.MustRegisterScalarFunction("stop_here", 0, func(*sqlite.FunctionContext, []driver.Value) (driver.Value, error) {
		fmt.Println("stopped")
		select {}
	})
	db, err := Open(ctx, path)
	if err != nil {
		return err
	}
	team, err := db.Team(ctx, "terminal", "home")
	if err != nil {
		return err
	}
	s, err := team.Stage(ctx, 1)
	if err != nil {
		return err
	}
	// With few pages in memory, part of the merge is in the files long before
	// it is done, as with a long one.
	if _, err := s.conn.ExecContext(ctx, "PRAGMA main.cache_size = 10"); err != nil {
		return err
	}
	for i, reading := range crashReadings(1) {
		if err := s.AddReading(i, reading); err != nil {
			return err
		}
	}
	if _, err := s.Merge(ctx, stamp, testAbout); err != nil {
		return err
	}
	fmt.Println("stopped")
	select {}
}

const crashHours = 8000

func crashReadings(addC float64) []planner.Reading {
	var readings []planner.Reading
	for hour := range crashHours {
		readings = append(readings, planner.Reading{At: int64(hour) * 3600, C: float64(hour%240)/10 + addC})
	}
	return readings
}

func TestMergeSurvivesCrash(t *testing.T) {
	for _, at := range []struct {
		name, trigger string
		done          bool
	}{
		{"a value replaced", "AFTER INSERT ON replaced_reading WHEN new.at = 3600 * 3900", false},
		{"a reading", "AFTER INSERT ON reading WHEN new.at = 3600 * 7900", false},
		{"the day facts", "AFTER INSERT ON day_block WHEN new.block = 4", false},
		{"the last step", "AFTER UPDATE OF revision ON station", false},
		{"behind it", "", true},
	} {
		t.Run(at.name, func(t *testing.T) {
			t.Parallel()
			path := filepath.Join(t.TempDir(), "store.db")
			db, home := newHome(t, path)
			if _, err := merged(t.Context(), home, crashReadings(0)[:crashHours/2]); err != nil {
				t.Fatal(err)
			}
			before := dump(t, db)
			if at.trigger != "" {
				exec1(t, db, "CREATE TRIGGER crash "+at.trigger+" BEGIN SELECT stop_here(); END")
			}
			if err := db.Close(); err != nil {
				t.Fatal(err)
			}
			killWhenStopped(t, child(t, "merge", path))
			if log, err := os.Stat(path + "-wal"); err != nil || log.Size() < 1<<15 {
				t.Errorf("little was written before the crash: the check checks little (%v)", err)
			}
			db, home = reopen(t, path)
			exec1(t, db, "DROP TRIGGER IF EXISTS crash")
			after := dump(t, db)
			if same := cmp.Equal(before, after); same == at.done {
				t.Errorf("after the crash the file is unchanged: %v, want %v", same, !at.done)
			}
			report, err := merged(t.Context(), home, crashReadings(1))
			if err != nil {
				t.Fatalf("merge after the crash: %v", err)
			}
			if got := report.Same == crashHours; got != at.done {
				t.Errorf("the merge after the crash found %+v", report)
			}
			for _, check := range []string{"PRAGMA integrity_check", "PRAGMA foreign_key_check"} {
				if rows := texts(t, db, check); len(rows) > 0 && rows[0] != "ok" {
					t.Errorf("%s: %v", check, rows)
				}
			}
		})
	}
}

// killWhenStopped starts the program, waits until it says that it has stopped,
// and kills it.
func killWhenStopped(t *testing.T, cmd *exec.Cmd) {
	t.Helper()
	startUntil(t, cmd, "stopped")
	if err := cmd.Process.Kill(); err != nil {
		t.Fatal(err)
	}
	if err := cmd.Wait(); err == nil {
		t.Fatal("the other program ended by itself")
	}
}

func TestTwoProgramsWrite(t *testing.T) {
	t.Parallel()
	path := filepath.Join(t.TempDir(), "store.db")
	db, home := newHome(t, path)
	exec1(t, db, waitsLong)
	other := child(t, "write", path)
	said := startUntil(t, other, "writing")
	for i := range childSaves {
		if _, err := home.Save(t.Context(), stamp, surface(fmt.Sprintf("parent %d", i))); err != nil {
			t.Errorf("save beside another program: %v", err)
		}
	}
	complaint, _ := said.ReadString('\n')
	if err := other.Wait(); err != nil {
		t.Errorf("the other program: %v: %s", err, complaint)
	}
	setup, err := home.Setup(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	if got, want := len(setup.Surfaces), 2*childSaves; got != want {
		t.Errorf("%d surfaces are kept of %d", got, want)
	}
}

func TestProgramsOpenNewFile(t *testing.T) {
	t.Parallel()
	for range 3 {
		path := filepath.Join(t.TempDir(), "store.db")
		var others []*exec.Cmd
		for range 4 {
			other := child(t, "open", path)
			out := &strings.Builder{}
			other.Stdout = out
			if err := other.Start(); err != nil {
				t.Fatal(err)
			}
			others = append(others, other)
		}
		for _, other := range others {
			if err := other.Wait(); err != nil {
				t.Errorf("one of several programs that open a new file: %v: %s", err, other.Stdout)
			}
		}
	}
}

// What the tests of this package share ----------------------------------------

var stamp = planner.Stamp{At: time.Unix(1717477567, 0), By: "Robin", Command: "/setup"}

func surface(name string) planner.Surface {
	return planner.Surface{Site: 1, Name: name, Turf: planner.Always(planner.Turf{Grass: "cool", Curve: calc.CoolSeason()})}
}

// newHome makes a file with a team that has site 1 and station 1.
func newHome(t testing.TB, path string) (*DB, *Team) {
	t.Helper()
	db, home := reopen(t, path)
	setUpHome(t, home)
	return db, home
}

// setUpHome gives the team site 1 and station 1.
func setUpHome(t testing.TB, home *Team) {
	t.Helper()
	for _, noun := range []planner.Noun{
		planner.Site{Name: "Quillmere", Zone: "America/New_York", Units: planner.Celsius,
			Rules: planner.Always(planner.DayRule{OffsetSeconds: -5 * 3600, Boundary: planner.StandardMidnight})},
		planner.Station{Site: 1, Name: "roof", Rank: 1},
	} {
		if _, err := home.Save(context.Background(), stamp, noun); err != nil {
			t.Fatal(err)
		}
	}
}

func reopen(t testing.TB, path string) (*DB, *Team) {
	t.Helper()
	db, err := Open(context.Background(), path)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { db.Close() })
	home, err := db.Team(context.Background(), "terminal", "home")
	if err != nil {
		t.Fatal(err)
	}
	return db, home
}

var testAbout = ImportAbout{FileName: "roof 2024.csv", SHA256: strings.Repeat("a0", 32), Units: planner.Fahrenheit,
	Clock: "offset in the file", Format: "readings", Rows: 10, Empty: 2, Refused: 1}

// merged stages the readings for station 1 and merges them.
func merged(ctx context.Context, team *Team, readings []planner.Reading) (report MergeReport, err error) {
	stage, err := team.Stage(ctx, 1)
	if err != nil {
		return report, err
	}
	defer func() { err = errors.Join(err, stage.Close()) }()
	for i, reading := range readings {
		if err := stage.AddReading(i+1, reading); err != nil {
			return report, err
		}
	}
	return stage.Merge(ctx, stamp, testAbout)
}

func exec1(t testing.TB, db *DB, statement string, args ...any) {
	t.Helper()
	if _, err := db.writer.Exec(statement, args...); err != nil {
		t.Fatalf("%s: %v", statement, err)
	}
}

// texts runs a query and gives each row as one text.
func texts(t testing.TB, db *DB, query string) []string {
	t.Helper()
	rows, err := db.reader.Query(query)
	if err != nil {
		t.Fatalf("%s: %v", query, err)
	}
	defer rows.Close()
	columns, err := rows.Columns()
	if err != nil {
		t.Fatal(err)
	}
	var out []string
	for rows.Next() {
		values := make([]any, len(columns))
		for i := range values {
			values[i] = new(any)
		}
		if err := rows.Scan(values...); err != nil {
			t.Fatal(err)
		}
		cells := make([]string, len(columns))
		for i, value := range values {
			cells[i] = fmt.Sprint(*value.(*any))
		}
		out = append(out, strings.Join(cells, "|"))
	}
	if err := rows.Err(); err != nil {
		t.Fatal(err)
	}
	return out
}

// dump is all that is in the file, by table.
func dump(t testing.TB, db *DB) map[string][]string {
	t.Helper()
	all := map[string][]string{}
	for _, table := range texts(t, db, `SELECT name FROM sqlite_schema WHERE type = 'table'`) {
		all[table] = texts(t, db, "SELECT * FROM "+table)
	}
	return all
}
