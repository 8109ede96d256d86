package sqlite

import (
	"bytes"
	"context"
	"database/sql"
	"encoding/csv"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/pressly/goose/v3"

	"swardbook/calc"
	"swardbook/planner"
)

// beforeBlocks is the last schema that kept a row for each day.
const beforeBlocks = 6

// oldFile makes a file of that schema with a home team, to be filled by do.
func oldFile(t *testing.T, file string, do func(*DB)) {
	t.Helper()
	db, err := open(t.Context(), file, firstMigrations(t, beforeBlocks))
	if err != nil {
		t.Fatal(err)
	}
	home, err := db.Team(t.Context(), "terminal", "home")
	if err != nil {
		t.Fatal(err)
	}
	setUpHome(t, home)
	do(db)
	if err := db.Close(); err != nil {
		t.Fatal(err)
	}
}

// putFactRow writes a day as the program did before blocks.
func putFactRow(t *testing.T, db *DB, team, station int64, f planner.DayFacts) {
	t.Helper()
	var highC, lowC, meanC, hoursC any
	if f.HasExtremes {
		highC, lowC = f.HighC, f.LowC
	}
	if f.HasHourly {
		meanC = f.HourlyC
	}
	if f.HoursC != nil {
		packed := []byte{}
		for _, c := range f.HoursC {
			bits := math.Float64bits(c)
			for i := range 8 {
				packed = append(packed, byte(bits>>(8*i)))
			}
		}
		hoursC = packed
	}
	exec1(t, db, `INSERT INTO day_fact (team, station, day, high_c, low_c, extremes_from, hourly_c, published,
		slots_real, slots_bridged, slots_wanted, hours_c, doubt) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
		team, station, f.Day, highC, lowC, int64(f.ExtremesFrom), meanC, f.Published,
		f.SlotsReal, f.SlotsBridged, f.SlotsWanted, hoursC, f.Doubt)
}

// A file of the schema before keeps every day of every station when it is
// opened, to the bit: drawn days on both sides of the borders of blocks.
func TestOldDaysAreKept(t *testing.T) {
	t.Parallel()
	const stations = 6
	border := []planner.Day{planner.DayMin, -129, -128, -65, -64, -63, -1, 0, 1, 62, 63, 64, 127, 128, 20000, planner.DayMax}
	kept := map[[2]int64][]planner.DayFacts{} // by team and station
	for n := range stations {
		key := [2]int64{int64(1 + n%2), int64(1 + n/2)}
		for _, day := range border {
			seed := 1000*n + int(day)
			if seed%3 == 0 && n > 0 {
				continue // not known
			}
			f := factsOn(day).Example(seed)
			f.HighC, f.LowC, f.HourlyC = f.HighC+0, f.LowC+0, f.HourlyC+0 // a column of SQLite has no -0
			if !blank(f) {
				kept[key] = append(kept[key], f)
			}
		}
	}
	file := filepath.Join(t.TempDir(), "store.db")
	oldFile(t, file, func(db *DB) {
		other, err := db.Team(t.Context(), "terminal", "away")
		if err != nil {
			t.Fatal(err)
		}
		setUpHome(t, other)
		exec1(t, db, "BEGIN")
		for key, days := range kept {
			exec1(t, db, `INSERT INTO station (team, id, site, name, name_key, rank, archived)
				VALUES (?1, ?2, 1, ?2, ?2, 1, 0) ON CONFLICT DO NOTHING`, key[0], key[1])
			for _, facts := range days {
				putFactRow(t, db, key[0], key[1], facts)
			}
		}
		exec1(t, db, "COMMIT")
	})
	db, _ := reopen(t, file)
	first, last := everyBlock()
	for key, want := range kept {
		got, err := keptDays(t.Context(), db.reader, key[0], planner.StationID(key[1]), first, last)
		if err != nil {
			t.Fatal(err)
		}
		if got = slices.DeleteFunc(got, blank); len(want) < 4 || !same(got, want) {
			t.Fatalf("station %v: kept as %+v, want %+v", key, got, want)
		}
	}
	if left := texts(t, db, `SELECT name FROM sqlite_schema WHERE name = 'day_fact'`); len(left) > 0 {
		t.Error("the rows of days are still there")
	}
}

// The days of readings, as the program before wrote them: the record of an old
// file is that of a new one with the same readings, and stays so when later
// readings come to both.
func TestOldRecordGoesOn(t *testing.T) {
	t.Parallel()
	folder := t.TempDir()
	_, fresh := newHome(t, filepath.Join(folder, "new.db"))
	var readings []planner.Reading
	for hour := range 200 * 24 {
		if hour%97 > 2 && hour/24 != 70 {
			c := math.Round(100*math.Sin(float64(hour)/24*2*math.Pi)) / 10
			if hour > 100*24 {
				c = calc.CelsiusFromFahrenheit(math.Round(c))
			}
			readings = append(readings, planner.Reading{At: int64(hour) * 3600, C: c})
		}
	}
	if _, err := merged(t.Context(), fresh, readings); err != nil {
		t.Fatal(err)
	}
	want, err := fresh.Record(t.Context(), 1)
	if err != nil {
		t.Fatal(err)
	}
	file := filepath.Join(folder, "old.db")
	oldFile(t, file, func(db *DB) {
		exec1(t, db, `INSERT INTO import (team, id, station, change, file_name, sha256, units, clock, format,
			at, who, rows, new, changed, same, empty, refused) VALUES (1, 1, 1, 1, '', '', '', '', '', 0, '', 0, 0, 0, 0, 0, 0)`)
		exec1(t, db, `INSERT INTO counter (team, kind, last) VALUES (1, ?, 1)`, importCounter)
		if err := insertBare(db, readings); err != nil {
			t.Fatal(err)
		}
		exec1(t, db, "BEGIN")
		for _, facts := range want.Facts {
			if !blank(facts) {
				putFactRow(t, db, 1, 1, facts)
			}
		}
		exec1(t, db, "COMMIT")
	})
	_, old := reopen(t, file)
	for _, later := range [][]planner.Reading{nil, {{At: 70*secondsPerDay + 3600, C: 9}, {At: 199 * secondsPerDay, C: -3}}, someReadings(210*24, 50)} {
		for _, team := range []*Team{old, fresh} {
			if _, err := merged(t.Context(), team, later); err != nil {
				t.Fatal(err)
			}
		}
		got, err := old.Record(t.Context(), 1)
		want, wantErr := fresh.Record(t.Context(), 1)
		if err != nil || wantErr != nil || !same(got.Facts, want.Facts) {
			t.Fatalf("after %d readings more the old file has another record: %v, %v", len(later), err, wantErr)
		}
	}
	if copies, _ := filepath.Glob(file + ".before-*"); len(copies) != 1 {
		t.Errorf("copies of the old file: %v", copies)
	}
}

// An old file with a day that cannot be read is refused and stays as it is.
func TestOldDayDamaged(t *testing.T) {
	t.Parallel()
	folder := t.TempDir()
	good := filepath.Join(folder, "good.db")
	oldFile(t, good, func(db *DB) {
		putFactRow(t, db, 1, 1, planner.DayFacts{Day: 70, HasHourly: true, HourlyC: 1, SlotsReal: 1, SlotsWanted: 1, HoursC: []float64{1}})
	})
	content, err := os.ReadFile(good)
	if err != nil {
		t.Fatal(err)
	}
	for i, damage := range []string{
		"hours_c = x'00112233445566'", "hours_c = x''", "hours_c = NULL", "hours_c = x'000000000000f07f'", // an infinity
		"extremes_from = 9", "extremes_from = -1", "extremes_from = 257", "day = 5000000000", "day = 200000",
	} {
		file := filepath.Join(folder, fmt.Sprint(i, ".db"))
		if err := os.WriteFile(file, content, 0o600); err != nil {
			t.Fatal(err)
		}
		makeDatabase(t, file, "UPDATE day_fact SET "+damage)
		_, err := Open(t.Context(), file)
		checkDamaged(t, damage, err)
		if version, err := inspect(t.Context(), file); version != beforeBlocks || err != nil {
			t.Errorf("%s: the file is of schema %d, %v", damage, version, err)
		}
		makeDatabase(t, file, "INSERT INTO day_fact SELECT * FROM day_fact WHERE false") // the table is there
	}
}

// What no other program can mend is not tried again.
func TestRefusedMigrationIsTriedOnce(t *testing.T) {
	t.Parallel()
	all, tries := ourMigrations(t), 0
	all.steps = append(all.steps, goose.NewGoMigration(int64(newest(t)+1), &goose.GoFunc{RunTx: func(context.Context, *sql.Tx) error {
		tries++
		return damaged(0, errDone)
	}}, nil))
	file := filepath.Join(t.TempDir(), "store.db")
	newHome(t, file)
	if _, err := open(t.Context(), file, all); planner.KindOf(err) != planner.Refused || tries != 1 {
		t.Errorf("tried %d times: %v", tries, err)
	}
}

// checkDamaged wants a problem that says what and what to do.
func checkDamaged(t *testing.T, name string, err error) {
	t.Helper()
	var problem *planner.Problem
	if !errors.As(err, &problem) || problem.Kind != planner.Refused || !strings.Contains(problem.Message, "damaged: the days from ") ||
		!strings.Contains(problem.Hint, "newest copy") || !strings.Contains(problem.Hint, "export") || problem.Cause == nil {
		t.Errorf("%s: %#v; want a problem with what to do", name, err)
	}
}

// What cannot be read is told by all that reads it, with what to do, changes
// nothing, and what the hint says works: the readings come out, and in again.
func TestDamagedDaysAreTold(t *testing.T) {
	t.Parallel()
	ctx := context.Background()
	db, home := newHome(t, filepath.Join(t.TempDir(), "store.db"))
	readings := someReadings(0, 100*24)
	if _, err := merged(ctx, home, readings); err != nil {
		t.Fatal(err)
	}
	want, err := home.Record(ctx, 1)
	if err != nil {
		t.Fatal(err)
	}
	exec1(t, db, "UPDATE day_block SET facts = zeroblob(2000) WHERE block = 1")
	before := dump(t, db)
	for name, call := range map[string]func() error{
		"Record":   func() error { _, err := home.Record(ctx, 1); return err },
		"Export":   func() error { _, err := home.Export(ctx, 1); return err },
		"Merge":    func() error { _, err := merged(ctx, home, someReadings(100*24, 5)); return err },
		"Withdraw": func() error { _, err := home.Withdraw(ctx, stamp, 1, false); return err },
	} {
		checkDamaged(t, name, call())
	}
	if _, err := home.Record(ctx, 1); !strings.Contains(fmt.Sprint(err), "station roof: the file of the store is damaged: the days from 1970-03-06 on") { // day 64
		t.Errorf("Record: %v", err)
	}
	if after := dump(t, db); !reflect.DeepEqual(before, after) {
		t.Error("something was changed")
	}
	var out bytes.Buffer
	if err := home.ExportStation(ctx, 1, "time,temp_c,,,", &out); err != nil || strings.Count(out.String(), "\n") != len(readings)+1 {
		t.Fatalf("the station's readings: %d lines, %v", strings.Count(out.String(), "\n"), err)
	}
	for _, noun := range []planner.Noun{
		planner.Station{ID: 1, Site: 1, Name: "roof", Rank: 1, Archived: true}, planner.Station{Site: 1, Name: "roof again", Rank: 1},
	} {
		if _, err := home.Save(ctx, stamp, noun); err != nil {
			t.Fatal(err)
		}
	}
	again, err := home.Stage(ctx, 2)
	if err != nil {
		t.Fatal(err)
	}
	defer again.Close()
	for i, line := range strings.Split(strings.TrimSpace(out.String()), "\n")[1:] {
		at, c, _ := strings.Cut(strings.TrimRight(line, ","), ",")
		when, err := time.Parse(time.RFC3339, at)
		if err != nil {
			t.Fatal(err)
		}
		valueC, err := strconv.ParseFloat(c, 64)
		if err := errors.Join(err, again.AddReading(i+1, planner.Reading{At: when.Unix(), C: valueC})); err != nil {
			t.Fatal(err)
		}
	}
	if _, err := again.Merge(ctx, stamp, testAbout); err != nil {
		t.Fatal(err)
	}
	if got, err := home.Record(ctx, 1); err != nil || !same(got.Facts, want.Facts) {
		t.Errorf("the record from the readings: %v", err)
	}
}

// A day before 1700 or after 2299, which the offset of a site makes of a reading
// just inside, is left out; the record stays readable.
func TestReadingsAtTheEndsOfTime(t *testing.T) {
	t.Parallel()
	_, home := newHome(t, filepath.Join(t.TempDir(), "store.db")) // five hours behind UTC
	for _, from := range []int64{int64(planner.DayMin) * secondsPerDay, int64(planner.DayMax-1)*secondsPerDay + 7200} {
		var readings []planner.Reading
		for hour := range int64(46) {
			readings = append(readings, planner.Reading{At: from + hour*3600, C: 5})
		}
		if _, err := merged(t.Context(), home, readings); err != nil {
			t.Fatal(err)
		}
	}
	record, err := home.Record(t.Context(), 1)
	if err != nil {
		t.Fatal(err)
	}
	for _, day := range []planner.Day{planner.DayMin, planner.DayMax - 1} {
		if facts := record.At(day); !facts.HasHourly || facts.HourlyC != 5 {
			t.Errorf("%s: %+v", day, facts)
		}
	}
	if first, _ := record.First(); first != planner.DayMin {
		t.Errorf("the first day is %s", first)
	}
}

// The export has a row for each day of which anything is known, as it is kept.
func TestExportOfDays(t *testing.T) {
	t.Parallel()
	db, home := newHome(t, filepath.Join(t.TempDir(), "store.db"))
	for station, days := range [][]planner.DayFacts{
		{{Day: -1, HasHourly: true, HourlyC: 2.25, SlotsReal: 2, SlotsBridged: 1, SlotsWanted: 3, HoursC: []float64{1.5, 2, 3.25}},
			{Day: 63, HasExtremes: true, HighC: 20.5, LowC: -0.5, ExtremesFrom: planner.FromStation, HasHourly: true, HourlyC: 9, Published: true}},
		{{Day: 64, SlotsWanted: 24, SlotsReal: 1, Doubt: "a leap, of 20 °C"}},
	} {
		if station > 0 {
			if _, err := home.Save(t.Context(), stamp, planner.Station{Site: 1, Name: "shed", Rank: 2}); err != nil {
				t.Fatal(err)
			}
		}
		out := dayWriter{on: db.writer, team: 1, station: planner.StationID(station + 1)}
		if err := errors.Join(out.add(t.Context(), days...), out.flush(t.Context())); err != nil {
			t.Fatal(err)
		}
	}
	files, err := home.Export(t.Context(), 1)
	if err != nil {
		t.Fatal(err)
	}
	at := slices.IndexFunc(files, func(file planner.DataFile) bool { return file.Name == "day_fact.csv" })
	if at < 0 {
		t.Fatalf("no day_fact.csv among %d files", len(files))
	}
	rows, err := csv.NewReader(bytes.NewReader(files[at].Content)).ReadAll()
	want := [][]string{
		{"station", "day", "high_c", "low_c", "extremes_from", "hourly_c", "published", "slots_real", "slots_bridged", "slots_wanted", "hours_c", "doubt"},
		{"1", "1969-12-31", "", "", "0", "2.25", "0", "2", "1", "3", "1.5 2 3.25", ""},
		{"1", "1970-03-05", "20.5", "-0.5", "1", "9", "1", "0", "0", "0", "", ""},
		{"2", "1970-03-06", "", "", "0", "", "0", "1", "0", "24", "", "a leap, of 20 °C"},
	}
	if err != nil || !reflect.DeepEqual(rows, want) {
		t.Errorf("exported %q, %v, want %q", rows, err, want)
	}
	for _, file := range files {
		if file.Name == "day_block.csv" {
			t.Error("the blocks are exported, which nobody can read")
		}
	}
	// Nothing known, no file.
	exec1(t, db, "DELETE FROM day_block")
	if files, err = home.Export(t.Context(), 1); err != nil || slices.ContainsFunc(files, func(file planner.DataFile) bool { return strings.HasPrefix(file.Name, "day_") }) {
		t.Errorf("days are exported that are not there, %v", err)
	}
}
