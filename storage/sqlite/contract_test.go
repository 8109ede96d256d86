package sqlite_test

import (
	"context"
	"errors"
	"path/filepath"
	"testing"

	"swardbook/planner"
	"swardbook/storage/sqlite"
	"swardbook/storage/storetest"
)

func TestContract(t *testing.T) {
	storetest.Run(t, func(t *testing.T) func(string) storetest.Store {
		db := openFile(t, filepath.Join(t.TempDir(), "store.db"))
		return func(name string) storetest.Store { return store{team(t, db, name)} }
	})
}

func openFile(t testing.TB, path string) *sqlite.DB {
	t.Helper()
	db, err := sqlite.Open(context.Background(), path)
	if err != nil {
		t.Fatalf("Open: %v", err)
	}
	t.Cleanup(func() {
		if err := db.Close(); err != nil {
			t.Errorf("Close: %v", err)
		}
	})
	return db
}

func team(t testing.TB, db *sqlite.DB, name string) *sqlite.Team {
	t.Helper()
	team, err := db.Team(context.Background(), "terminal", name)
	if err != nil {
		t.Fatalf("Team(%q): %v", name, err)
	}
	return team
}

// store imports as the contract suite wants it.
type store struct{ *sqlite.Team }

func (s store) Import(ctx context.Context, stamp planner.Stamp, station planner.StationID, file storetest.File) (storetest.Imported, error) {
	var done storetest.Imported
	stage, err := s.Stage(ctx, station)
	if err != nil {
		return done, err
	}
	defer stage.Close()
	line := 0
	take := func(err error) error {
		var repeat *sqlite.RepeatError
		if errors.As(err, &repeat) {
			done.Repeats = append(done.Repeats, storetest.Repeat{Line: repeat.Line, First: repeat.First})
			return nil
		}
		return err
	}
	for _, reading := range file.Readings {
		line++
		if err := take(stage.AddReading(line, reading)); err != nil {
			return done, err
		}
	}
	for _, daily := range file.Daily {
		line++
		if err := take(stage.AddDaily(line, daily)); err != nil {
			return done, err
		}
	}
	for _, rain := range file.Rain {
		line++
		if err := take(stage.AddRain(line, rain)); err != nil {
			return done, err
		}
	}
	report, err := stage.Merge(ctx, stamp, about("made up.csv"))
	if err != nil {
		return done, err
	}
	done.New, done.Changed, done.Same = report.New, report.Changed, report.Same
	done.Rain = report.Rain
	done.From, done.To = report.From, report.To
	return done, nil
}

func about(name string) sqlite.ImportAbout {
	return sqlite.ImportAbout{FileName: name, SHA256: "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855",
		Units: planner.Celsius, Clock: "UTC", Format: "readings"}
}
