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
// hourly readings and over one, and the ratio of the two: as a running bot pays
// it, and as a new process does, the file opened and the record loaded from it.
// An operation is twenty of each, turn about, for a machine is not equally fast
// from one second to the next.
func BenchmarkBriefing(b *testing.B) {
	const turns = 20
	lengths := []int{1, 10}
	kept, sites := map[int]*house{}, map[int]string{}
	for _, years := range lengths {
		sites[years] = benchSite(b, years)
		kept[years] = benchHouse(b, sites[years])
		defer func() { kept[years].close() }()
		briefing(b, kept[years])
	}
	for name, one := range map[string]func(years int){
		"running": func(years int) { briefing(b, kept[years]) },
		"new process": func(years int) {
			fresh := benchHouse(b, sites[years])
			briefing(b, fresh)
			if err := fresh.close(); err != nil {
				b.Fatal(err)
			}
		},
	} {
		b.Run(name, func(b *testing.B) {
			cost := map[int]time.Duration{}
			for b.Loop() {
				for range turns {
					for _, years := range lengths {
						began := time.Now()
						one(years)
						cost[years] += time.Since(began)
					}
				}
			}
			for _, years := range lengths {
				b.ReportMetric(cost[years].Seconds()*1000/float64(b.N*turns), fmt.Sprintf("ms-of-%d", years))
			}
			b.ReportMetric(cost[10].Seconds()/cost[1].Seconds(), "x-of-1-year")
		})
	}
}

func benchHouse(b *testing.B, database string) *house {
	kept, err := open(context.Background(), database, "home")
	if err != nil {
		b.Fatal(err)
	}
	return kept
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
