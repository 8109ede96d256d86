package main

import (
	"bufio"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"time"
)

// The invented weather of the demo: hourly, from the first to the last day
// (both included), with a fixed seed, so that every run shows the same.
var (
	demoFirst = time.Date(2021, time.January, 1, 0, 0, 0, 0, time.UTC)
	demoLast  = time.Date(2024, time.June, 10, 23, 0, 0, 0, time.UTC)
)

const demoSeed = 20240611

// writeInvented writes a station file of hourly readings from first to last: a
// season, a day's wave that is steeper in the morning than in the evening,
// spells of warm and cold days, and some hours that the logger lost. Nothing of
// it was measured.
func writeInvented(w io.Writer, first, last time.Time) error {
	random := rand.New(rand.NewPCG(demoSeed, demoSeed))
	out := bufio.NewWriter(w)
	fmt.Fprintln(out, "time,temp_c")
	spellC, skew := 0.0, 0.0
	for at := first; !at.After(last); at = at.Add(time.Hour) {
		if at.Hour() == 0 {
			spellC = 0.72*spellC + 2.4*random.NormFloat64()
			skew = 0.07 + 0.06*random.NormFloat64()
		}
		season := 2 * math.Pi * float64(at.YearDay()-202) / 365.25
		phase := 2 * math.Pi * float64(at.Hour()-15) / 24
		wave := math.Cos(phase) + skew*math.Cos(2*phase)
		temperatureC := 11.8 + 11.6*math.Cos(season) + (5.2+1.1*math.Cos(season))*wave + spellC + 0.3*random.NormFloat64()
		if lost(at, random) {
			continue
		}
		fmt.Fprintf(out, "%s-05:00,%.1f\n", at.Format("2006-01-02T15:04"), temperatureC)
	}
	return out.Flush()
}

// lost says whether the logger lost the hour: a few at random, an afternoon in
// this year's May, and three days of an earlier March.
func lost(at time.Time, random *rand.Rand) bool {
	missed := random.Float64() < 0.002
	afternoon := at.Year() == 2024 && at.Month() == time.May && at.Day() == 14 && at.Hour() >= 11 && at.Hour() < 19
	march := at.Year() == 2023 && at.Month() == time.March && at.Day() >= 6 && at.Day() <= 8
	return missed || afternoon || march
}
