package storage_test

import (
	"bytes"
	"crypto/sha256"
	"encoding/csv"
	"encoding/hex"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"swardbook/planner"
)

const openFolder = "../testdata/open"

// The open data sets are the ones that SOURCES.md describes.
func TestOpenDataIsUnchanged(t *testing.T) {
	t.Parallel()
	sources, err := os.ReadFile(filepath.Join(openFolder, "SOURCES.md"))
	if err != nil {
		t.Fatal(err)
	}
	paths, err := filepath.Glob(filepath.Join(openFolder, "seattle*.csv"))
	if err != nil || len(paths) != 2 {
		t.Fatalf("%v, %v", paths, err)
	}
	for _, path := range paths {
		content, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		sum := sha256.Sum256(content)
		if !bytes.Contains(sources, []byte(hex.EncodeToString(sum[:]))) {
			t.Errorf("%s is not the file of SOURCES.md", path)
		}
	}
}

// table reads a CSV with the standard library, a second route beside intake.
func table(t *testing.T, path string) (content string, rows [][]string) {
	t.Helper()
	raw, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	rows, err = csv.NewReader(bytes.NewReader(raw)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return string(raw), rows[1:]
}

func number(t *testing.T, text string) float64 {
	t.Helper()
	value, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return value
}

// Source: NOAA GHCN-Daily, Seattle 2012-2015, see testdata/open/SOURCES.md.
func TestImportSeattleDaily(t *testing.T) {
	t.Parallel()
	content, rows := table(t, filepath.Join(openFolder, "seattle-weather.csv"))
	g := newGround(t, "America/Los_Angeles", -8)
	report := g.take(t, "seattle-weather.csv", content)
	if report.Format != "daily" || report.Units != planner.Celsius || report.New != len(rows) || report.Rows != 1461 {
		t.Errorf("%+v", report)
	}
	record := g.state(t).record
	if len(record.Facts) != len(rows) {
		t.Fatalf("%d days in the record, %d in the file", len(record.Facts), len(rows))
	}
	for i, row := range rows {
		facts := record.Facts[i]
		high, low := number(t, row[2]), number(t, row[3])
		mean, known := facts.Mean(planner.Midrange)
		if facts.Day.String() != row[0] || facts.HighC != high || facts.LowC != low || !known || math.Abs(mean-(high+low)/2) > 1e-9 ||
			facts.ExtremesFrom != planner.FromStation || facts.HasHourly {
			t.Errorf("%v is kept as %+v", row, facts)
		}
	}
	again := g.take(t, "seattle-weather.csv", content)
	if again.Same != len(rows) || g.state(t).record.Revision != record.Revision {
		t.Errorf("the same file again: %+v", again)
	}
}

// Source: NOAA hourly normals 1981-2010, Seattle, see testdata/open/SOURCES.md.
// The file begins at 01:00, so that its first day has no 24-hour mean: there is
// no reading before the gap to bridge it from.
func TestImportSeattleHourly(t *testing.T) {
	t.Parallel()
	content, rows := table(t, filepath.Join(openFolder, "seattle-weather-hourly-normals.csv"))
	g := newGround(t, "America/Los_Angeles", -8)
	report := g.take(t, "seattle-weather-hourly-normals.csv", content)
	if report.Format != "readings" || report.Clock != "site standard time" || report.New != len(rows) || report.Rows != 8759 {
		t.Errorf("%+v", report)
	}
	type day struct{ sum, count, high, low float64 }
	days := map[string]day{}
	for _, row := range rows {
		date, c := row[0][:10], number(t, row[2])
		d, known := days[date]
		if !known {
			d.high, d.low = c, c
		}
		days[date] = day{d.sum + c, d.count + 1, max(d.high, c), min(d.low, c)}
	}
	record := g.state(t).record
	if len(record.Facts) != len(days) || len(days) != 365 {
		t.Fatalf("%d days in the record, %d in the file", len(record.Facts), len(days))
	}
	for i, facts := range record.Facts {
		d := days[facts.Day.String()]
		if d.count != 24 && i > 0 || facts.HasHourly != (i > 0) {
			t.Errorf("%s: %g readings, 24-hour mean known: %t", facts.Day, d.count, facts.HasHourly)
			continue
		}
		if i > 0 && math.Abs(facts.HourlyC-d.sum/d.count) > 1e-9 {
			t.Errorf("%s: mean %v, want %v", facts.Day, facts.HourlyC, d.sum/d.count)
		}
		if facts.HighC != d.high || facts.LowC != d.low || facts.ExtremesFrom != planner.FromHourly {
			t.Errorf("%s is kept as %+v, want %+v", facts.Day, facts, d)
		}
	}
}

// sharedWeather finds the folder shared/weather beside one of the folders above
// this one.
func sharedWeather() (string, bool) {
	folder, err := os.Getwd()
	for err == nil {
		candidate := filepath.Join(folder, "shared", "weather")
		if info, err := os.Stat(candidate); err == nil && info.IsDir() {
			return candidate, true
		}
		above := filepath.Dir(folder)
		if above == folder {
			break
		}
		folder = above
	}
	return "", false
}

// Every station file of the folder shared, which is no part of the project, is
// taken with no row refused.
func TestImportSharedWeather(t *testing.T) {
	t.Parallel()
	folder, ok := sharedWeather()
	if !ok {
		t.Skip("there is no folder shared/weather above the project: its station files are not here to be read")
	}
	paths, err := filepath.Glob(filepath.Join(folder, "*", "*.csv"))
	if err != nil || len(paths) == 0 {
		t.Fatalf("no station files in the folder: %v", err)
	}
	for _, path := range paths {
		kind := filepath.Base(filepath.Dir(path))
		t.Run(kind+"/"+filepath.Base(path), func(t *testing.T) {
			t.Parallel()
			content, rows := table(t, path)
			g := newGround(t, "UTC", 0)
			report := g.take(t, filepath.Base(path), content)
			if report.Rows != len(rows) || report.New != len(rows) || report.Refused != 0 || report.Empty != 0 {
				t.Errorf("%d rows: %+v", len(rows), report)
			}
			if want := map[string]string{"hourly": "readings", "daily": "daily"}[kind]; report.Format != want {
				t.Errorf("read as %s", report.Format)
			}
			if strings.Contains(content, "tmean24") {
				g.checkPublishedMeans(t, rows)
			}
		})
	}
}

func (g *ground) checkPublishedMeans(t *testing.T, rows [][]string) {
	t.Helper()
	record := g.state(t).record
	for _, row := range rows {
		day, err := planner.ParseDay(row[0])
		if err != nil {
			t.Fatal(err)
		}
		if facts := record.At(day); !facts.Published || facts.HourlyC != number(t, row[3]) {
			t.Fatalf("%v is kept as %+v", row, facts)
		}
	}
}
