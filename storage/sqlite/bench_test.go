package sqlite

import (
	"context"
	"fmt"
	"math"
	"path/filepath"
	"testing"
	"time"

	"swardbook/planner"
)

// benchReadings are n readings of a station that reads every ten minutes.
func benchReadings(n int) []planner.Reading {
	readings := make([]planner.Reading, n)
	for i := range readings {
		at := int64(i) * 600
		readings[i] = planner.Reading{At: at, C: math.Round(100+80*math.Sin(float64(at)/86400*2*math.Pi)+float64(i%7)) / 10}
	}
	return readings
}

// BenchmarkImport compares what an import costs (Stage and Merge: checked,
// counted, day facts built) with bare inserts of the same parsed rows, by a
// prepared statement in one transaction, into the same table.
func BenchmarkImport(b *testing.B) {
	for _, n := range []int{100_000, 1_000_000} {
		readings := benchReadings(n)
		var bare, merge time.Duration
		b.Run(fmt.Sprintf("bare/%d", n), func(b *testing.B) {
			for b.Loop() {
				b.StopTimer()
				db, _ := newHome(b, filepath.Join(b.TempDir(), "store.db"))
				if _, err := db.writer.Exec(`INSERT INTO import (team, id, station, change, file_name, sha256, units, clock, format,
					at, who, rows, new, changed, same, empty, refused) VALUES (1, 1, 1, 1, '', '', '', '', '', 0, '', 0, 0, 0, 0, 0, 0)`); err != nil {
					b.Fatal(err)
				}
				b.StartTimer()
				if err := insertBare(db, readings); err != nil {
					b.Fatal(err)
				}
				b.StopTimer()
				db.Close()
				b.StartTimer()
			}
			bare = b.Elapsed() / time.Duration(b.N)
		})
		b.Run(fmt.Sprintf("import/%d", n), func(b *testing.B) {
			for b.Loop() {
				b.StopTimer()
				db, home := newHome(b, filepath.Join(b.TempDir(), "store.db"))
				b.StartTimer()
				if _, err := merged(context.Background(), home, readings); err != nil {
					b.Fatal(err)
				}
				b.StopTimer()
				db.Close()
				b.StartTimer()
			}
			merge = b.Elapsed() / time.Duration(b.N)
			if bare > 0 {
				b.ReportMetric(float64(merge)/float64(bare), "x-bare")
			}
		})
	}
}

func insertBare(db *DB, readings []planner.Reading) error {
	tx, err := db.writer.Begin()
	if err != nil {
		return err
	}
	defer tx.Rollback()
	insert, err := tx.Prepare(`INSERT INTO reading (team, station, at, c, import) VALUES (1, 1, ?, ?, 1)`)
	if err != nil {
		return err
	}
	for _, reading := range readings {
		if _, err := insert.Exec(reading.At, reading.C); err != nil {
			return err
		}
	}
	return tx.Commit()
}

// BenchmarkImportAgain is the import of a file that is in the record already.
func BenchmarkImportAgain(b *testing.B) {
	_, home := newHome(b, filepath.Join(b.TempDir(), "store.db"))
	readings := benchReadings(100_000)
	for b.Loop() {
		if _, err := merged(context.Background(), home, readings); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkRecord reads ten years of day facts with their hourly values.
func BenchmarkRecord(b *testing.B) {
	_, home := newHome(b, filepath.Join(b.TempDir(), "store.db"))
	if _, err := merged(context.Background(), home, someReadings(0, 3650*24)); err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if _, err := home.Record(context.Background(), 1); err != nil {
			b.Fatal(err)
		}
	}
}
