package sqlite

import (
	"context"
	"errors"
	"fmt"
	"math"
	"path/filepath"
	"testing"

	"github.com/google/go-cmp/cmp"
	sqlite3 "modernc.org/sqlite/lib"

	"swardbook/planner"
)

func someReadings(from, n int) []planner.Reading {
	var readings []planner.Reading
	for i := range n {
		readings = append(readings, planner.Reading{At: int64(from+i) * 3600, C: float64((from+i)%30) + 0.1})
	}
	return readings
}

func stage(t *testing.T, team *Team, readings []planner.Reading) *Stage {
	t.Helper()
	s, err := team.Stage(t.Context(), 1)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { s.Close() })
	for i, reading := range readings {
		if err := s.AddReading(i+1, reading); err != nil {
			t.Fatal(err)
		}
	}
	return s
}

func TestStagingLocksNothing(t *testing.T) {
	t.Parallel()
	path := filepath.Join(t.TempDir(), "store.db")
	_, home := newHome(t, path)
	other, otherHome := reopen(t, path)
	exec1(t, other, "PRAGMA busy_timeout = 1") // a lock would show at once
	s := stage(t, home, someReadings(0, 10*stagedRows+7))
	for name, team := range map[string]*Team{"this": home, "another": otherHome} {
		if _, err := team.Save(t.Context(), stamp, surface(name)); err != nil {
			t.Errorf("%s store cannot write while a file is staged: %v", name, err)
		}
	}
	exec1(t, other, "PRAGMA wal_checkpoint(TRUNCATE)")
	second := stage(t, home, someReadings(100, 3*stagedRows))
	for i, s := range []*Stage{second, s} {
		if _, err := s.Merge(t.Context(), stamp, testAbout); err != nil {
			t.Errorf("merge %d of two that were staged at a time: %v", i, err)
		}
	}
	record, err := home.Record(t.Context(), 1)
	if err != nil {
		t.Fatal(err)
	}
	if days := (10*stagedRows+7)/24 + 2; len(record.Facts) != days { // 19:00 of the day before to the last hour
		t.Errorf("the record has %d days, want %d", len(record.Facts), days)
	}
}

func TestBusy(t *testing.T) {
	t.Parallel()
	path := filepath.Join(t.TempDir(), "store.db")
	db, home := newHome(t, path)
	other, _ := reopen(t, path)
	s := stage(t, home, someReadings(0, 30))
	exec1(t, db, "PRAGMA busy_timeout = 1")
	if _, err := s.conn.ExecContext(t.Context(), "PRAGMA busy_timeout = 1"); err != nil {
		t.Fatal(err)
	}
	exec1(t, other, "BEGIN IMMEDIATE")
	_, saveErr := home.Save(t.Context(), stamp, surface("tees"))
	_, mergeErr := s.Merge(t.Context(), stamp, testAbout)
	for _, err := range []error{saveErr, mergeErr} {
		var problem *planner.Problem
		if !errors.As(err, &problem) || problem.Kind != planner.Busy || problem.Hint == "" {
			t.Errorf("while another program writes: %v, want a Busy problem with a hint", err)
		}
	}
	if _, err := home.Setup(t.Context()); err != nil {
		t.Errorf("reading while another program writes: %v", err)
	}
	exec1(t, other, "COMMIT")
	if _, err := home.Save(t.Context(), stamp, surface("tees")); err != nil {
		t.Errorf("save after that: %v", err)
	}
	if report, err := s.Merge(t.Context(), stamp, testAbout); err != nil || report.New != 30 {
		t.Errorf("merge after that: %+v, %v", report, err)
	}
}

func TestStageEnds(t *testing.T) {
	t.Parallel()
	_, home := newHome(t, filepath.Join(t.TempDir(), "store.db"))
	s := stage(t, home, someReadings(0, 30))
	bad := testAbout
	bad.SHA256 = "abc"
	if _, err := s.Merge(t.Context(), stamp, bad); planner.KindOf(err) != planner.Internal {
		t.Errorf("a sum that is none: %v", err)
	}
	if _, err := s.Merge(t.Context(), stamp, testAbout); err != nil {
		t.Fatal(err)
	}
	unmerged := stage(t, home, someReadings(100, 30))
	for range 2 {
		if err := errors.Join(s.Close(), unmerged.Close()); err != nil {
			t.Errorf("close: %v", err)
		}
		for _, s := range []*Stage{s, unmerged} {
			if err := s.AddReading(1, planner.Reading{}); !errors.Is(err, errDone) {
				t.Errorf("AddReading on a closed stage: %v", err)
			}
			if err := s.AddDaily(1, planner.DailyReading{}); !errors.Is(err, errDone) {
				t.Errorf("AddDaily on a closed stage: %v", err)
			}
			if _, err := s.Merge(t.Context(), stamp, testAbout); !errors.Is(err, errDone) {
				t.Errorf("Merge on a closed stage: %v", err)
			}
		}
	}
	twice := stage(t, home, nil)
	for i, want := range []error{nil, errDone} {
		if _, err := twice.Merge(t.Context(), stamp, testAbout); !errors.Is(err, want) {
			t.Errorf("merge %d of one stage: %v, want %v", i, err, want)
		}
	}
	if record, err := home.Record(t.Context(), 1); err != nil || len(record.Facts) != 3 {
		t.Errorf("the record of the one merge: %d days, %v", len(record.Facts), err)
	}
}

func TestStationDroppedWhileStaging(t *testing.T) {
	t.Parallel()
	db, home := newHome(t, filepath.Join(t.TempDir(), "store.db"))
	s := stage(t, home, someReadings(0, 30))
	if _, err := home.Save(t.Context(), stamp, planner.Station{ID: 1, Site: 1, Name: "roof", Rank: 1, Archived: true}); err != nil {
		t.Fatal(err)
	}
	if _, err := s.Merge(t.Context(), stamp, testAbout); planner.KindOf(err) != planner.NotFound {
		t.Errorf("merge into a dropped station: %v", err)
	}
	if rows := texts(t, db, "SELECT * FROM reading"); len(rows) != 0 {
		t.Errorf("readings were kept: %v", rows)
	}
}

func TestMergeCancelled(t *testing.T) {
	t.Parallel()
	db, home := newHome(t, filepath.Join(t.TempDir(), "store.db"))
	s := stage(t, home, someReadings(0, 20000))
	before := dump(t, db)
	ctx, cancel := context.WithCancel(t.Context())
	held, err := db.writer.Conn(t.Context()) // somebody writes
	if err != nil {
		t.Fatal(err)
	}
	done := make(chan error)
	go func() {
		_, err := s.Merge(ctx, stamp, testAbout)
		done <- err
	}()
	cancel()
	if err := <-done; !errors.Is(err, context.Canceled) {
		t.Errorf("a merge that waits and is cancelled: %v", err)
	}
	held.Close()
	if diff := cmp.Diff(before, dump(t, db)); diff != "" {
		t.Errorf("a cancelled merge left something: %s", diff)
	}
	if _, err := s.Merge(t.Context(), stamp, testAbout); err != nil {
		t.Errorf("merging again: %v", err)
	}
}

func TestReplacedValuesAreKept(t *testing.T) {
	t.Parallel()
	db, home := newHome(t, filepath.Join(t.TempDir(), "store.db"))
	first := []planner.Reading{{At: 0, C: 1.5}, {At: 3600, C: 2.5}, {At: 7200, C: 3.5}}
	second := []planner.Reading{{At: 0, C: 1.5}, {At: 3600, C: 20}, {At: 10800, C: 4.5}}
	third := []planner.Reading{{At: 3600, C: 2.5}}
	for _, readings := range [][]planner.Reading{first, second, third} {
		if _, err := merged(t.Context(), home, readings); err != nil {
			t.Fatal(err)
		}
	}
	for i, dayC := range []float64{10, 11} {
		s := stage(t, home, nil)
		if err := s.AddDaily(1, planner.DailyReading{Day: 5, HighC: dayC, LowC: 1.5, MeanC: 2.25, HasMean: i == 0}); err != nil {
			t.Fatal(err)
		}
		if _, err := s.Merge(t.Context(), stamp, testAbout); err != nil {
			t.Fatal(err)
		}
	}
	for query, want := range map[string][]string{
		"SELECT at, c, import FROM reading":                                                         {"0|1.5|1", "3600|2.5|3", "7200|3.5|1", "10800|4.5|2"},
		"SELECT team, station, at, replaced_by, c, import FROM replaced_reading":                    {"1|1|3600|2|2.5|1", "1|1|3600|3|20|2"},
		"SELECT day, high_c, mean_c, import FROM daily":                                             {"5|11|<nil>|5"},
		"SELECT team, station, day, replaced_by, high_c, low_c, mean_c, import FROM replaced_daily": {"1|1|5|5|10|1.5|2.25|4"},
		"SELECT id, station, file_name, units, clock, format, at, who FROM import WHERE id = 2":     {"2|1|roof 2024.csv|f|offset in the file|readings|1717477567|Robin"},
		"SELECT sha256, rows, new, changed, same, empty, refused, change FROM import WHERE id = 2":  {testAbout.SHA256 + "|10|1|1|1|2|1|4"},
		"SELECT kind, thing, command FROM change WHERE id = 4":                                      {"import|2|/setup"},
		"SELECT json_extract(after, '$.file', '$.new') FROM change WHERE id = 4":                    {`["roof 2024.csv",1]`},
	} {
		if got := texts(t, db, query); !cmp.Equal(got, want) {
			t.Errorf("%s: %v, want %v", query, got, want)
		}
	}
}

// putBlock puts the days in place of block 0.
func putBlock(days ...planner.DayFacts) string {
	return fmt.Sprintf("UPDATE day_block SET facts = x'%X' WHERE block = 0", packDays(days))
}

func TestStoredNonsenseIsAnError(t *testing.T) {
	t.Parallel()
	ctx := context.Background()
	calls := map[string]func(*Team) error{
		"Record":  func(team *Team) error { _, err := team.Record(ctx, 1); return err },
		"Changes": func(team *Team) error { _, err := team.Changes(ctx, "", 9); return err },
		"Setup":   func(team *Team) error { _, err := team.Setup(ctx); return err },
		"Ahead":   func(team *Team) error { _, err := team.Ahead(ctx, 1, 0); return err },
		"Entries": func(team *Team) error { _, err := team.Entries(ctx, 1); return err },
	}
	for _, row := range []struct{ call, statement string }{
		{"Record", "UPDATE day_block SET facts = substr(facts, 1, length(facts) - 1) WHERE block = 0"},
		{"Record", "UPDATE day_block SET facts = CAST(facts || x'00' AS BLOB) WHERE block = 0"},
		{"Record", "UPDATE day_block SET facts = x'' WHERE block = 0"},
		{"Record", putBlock(planner.DayFacts{Day: 1, HasHourly: true, HourlyC: 1})}, // without its hours
		{"Record", putBlock(planner.DayFacts{Day: 1, HasHourly: true, HourlyC: 1, HoursC: []float64{math.Inf(1)}})},
		{"Record", putBlock(planner.DayFacts{Day: 1, HasExtremes: true, HighC: math.NaN(), LowC: 1})},
		{"Record", putBlock(planner.DayFacts{Day: 1, ExtremesFrom: 9})},
		{"Record", putBlock(planner.DayFacts{Day: 1, ExtremesFrom: 255})},
		{"Record", "UPDATE day_block SET block = 5000000000 WHERE block = 0"},
		{"Record", "UPDATE day_block SET block = 3125 WHERE block = 0"}, // day 200000
		{"Changes", "INSERT INTO change (team, id, at, who, command, kind, thing, before, after, undoes) VALUES (1, 77, 0, '', '', 'site', 1, NULL, '{', NULL)"},
		{"Changes", "INSERT INTO change (team, id, at, who, command, kind, thing, before, after, undoes) VALUES (1, 77, 0, '', '', 'site', 1, '{\"name\":7}', NULL, NULL)"},
		{"Changes", "INSERT INTO change (team, id, at, who, command, kind, thing, before, after, undoes) VALUES (1, 77, 0, '', '', 'bird', 1, NULL, '{}', NULL)"},
		{"Setup", "INSERT INTO site_rule (team, site, step, valid_from, change, offset_seconds, boundary, closing_hour, first_slot) VALUES (1, 1, 9, 5000000000, 1, 0, '', 0, 0)"},
		{"Ahead", "INSERT INTO hand_ahead (team, site, day, issued, seq, change, high_c, low_c, cleared) VALUES (1, 1, 5000000000, 0, 1, 1, 2, 1, 0)"},
		{"Entries", "INSERT INTO entry (team, id, site, day, who, at, note, undone) VALUES (1, 1, 1, -5000000000, '', 0, '', 0)"},
	} {
		db, home := newHome(t, filepath.Join(t.TempDir(), "store.db"))
		if _, err := merged(ctx, home, someReadings(0, 72)); err != nil {
			t.Fatal(err)
		}
		if err := calls[row.call](home); err != nil {
			t.Fatalf("%s before %s: %v", row.call, row.statement, err)
		}
		exec1(t, db, row.statement)
		if err := calls[row.call](home); err == nil {
			t.Errorf("%s after %s: no error", row.call, row.statement)
		}
		db.Close()
	}
}

// What the schema itself keeps out.
func TestSchemaRefuses(t *testing.T) {
	t.Parallel()
	db, home := newHome(t, filepath.Join(t.TempDir(), "store.db"))
	if _, err := merged(t.Context(), home, someReadings(0, 72)); err != nil {
		t.Fatal(err)
	}
	for _, statement := range []string{
		"UPDATE day_block SET facts = NULL WHERE block = 0",
		"UPDATE day_block SET facts = 'many' WHERE block = 0",
		"UPDATE day_block SET block = 0.5 WHERE block = 0",
		"UPDATE day_block SET station = 9 WHERE block = 0",
		"UPDATE reading SET c = 'warm'",
		"UPDATE reading SET import = 9",
		"UPDATE station SET site = 9",
		"UPDATE site SET archived = 2",
		"INSERT INTO hand_ahead (team, site, day, issued, seq, change, high_c, low_c, cleared) VALUES (1, 1, 5, 0, 1, 1, NULL, NULL, 0)",
	} {
		if _, err := db.writer.Exec(statement); code(err)&primary != sqlite3.SQLITE_CONSTRAINT {
			t.Errorf("%s: %v", statement, err)
		}
	}
}

func TestSettingsAreNeverUpdated(t *testing.T) {
	t.Parallel()
	db, home := newHome(t, filepath.Join(t.TempDir(), "store.db"))
	if _, err := home.Save(t.Context(), stamp, surface("greens")); err != nil {
		t.Fatal(err)
	}
	for _, table := range []string{"site_rule", "surface_turf", "change"} {
		if len(texts(t, db, "SELECT * FROM "+table)) == 0 {
			t.Errorf("%s is empty: the check checks nothing", table)
		}
		if _, err := db.writer.Exec(fmt.Sprintf("UPDATE %s SET team = 1", table)); err == nil {
			t.Errorf("%s can be updated", table)
		}
	}
}
