package main

import (
	"context"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"testing"
	"time"

	"swardbook/bot/command"
	"swardbook/bot/terminal"
)

// BenchmarkBriefing prints what a morning briefing costs over ten years of
// hourly readings and over one, and the ratio of the two: as a new process
// pays it, the record loaded from the file, and as a running bot does.
func BenchmarkBriefing(b *testing.B) {
	ctx := context.Background()
	sites := map[int]string{}
	for _, years := range []int{1, 10} {
		sites[years] = benchSite(b, years)
	}
	for _, kind := range []struct {
		name string
		warm bool
	}{{"running", true}, {"new process", false}} {
		cost := map[int]time.Duration{}
		for _, years := range []int{1, 10} {
			b.Run(fmt.Sprintf("%s/%d years", kind.name, years), func(b *testing.B) {
				kept, err := open(ctx, sites[years], "home")
				if err != nil {
					b.Fatal(err)
				}
				defer func() { kept.close() }()
				briefing(b, kept)
				for b.Loop() {
					if !kind.warm {
						if err := kept.close(); err != nil {
							b.Fatal(err)
						}
						if kept, err = open(ctx, sites[years], "home"); err != nil {
							b.Fatal(err)
						}
					}
					briefing(b, kept)
				}
				cost[years] = b.Elapsed() / time.Duration(b.N)
				if years == 10 && cost[1] > 0 {
					b.ReportMetric(float64(cost[10])/float64(cost[1]), "x-of-1-year")
				}
			})
		}
	}
}

func briefing(b *testing.B, kept *house) {
	session := terminal.Session{
		Table: kept.table(io.Discard), Caller: command.Caller{Role: command.Crew}, Out: io.Discard, Err: os.Stderr,
		Now: func() (time.Time, bool) { return demoLast.Add(6 * time.Hour), true },
	}
	if !session.RunLine(context.Background(), "/briefing") {
		b.Fatal("the briefing failed")
	}
}

// benchSite is the demo's site with so many years of its weather.
func benchSite(b *testing.B, years int) string {
	folder := b.TempDir()
	station, err := os.Create(filepath.Join(folder, "station.csv"))
	if err != nil {
		b.Fatal(err)
	}
	if err := writeInvented(station, demoLast.AddDate(-years, 0, 0), demoLast); err != nil {
		b.Fatal(err)
	}
	if err := station.Close(); err != nil {
		b.Fatal(err)
	}
	database := filepath.Join(folder, "course.db")
	if err := setUpDemo(context.Background(), database, station.Name(), io.Discard); err != nil {
		b.Fatal(err)
	}
	return database
}
