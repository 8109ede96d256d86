package main

import (
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"
)

// openRecords is the folder of open station records for trying the program.
// They are not part of the project: where the folder is not beside it the test
// is skipped.
func openRecords(t *testing.T) string {
	t.Helper()
	folder, err := os.Getwd()
	if err != nil {
		t.Fatal(err)
	}
	for ; filepath.Dir(folder) != folder; folder = filepath.Dir(folder) {
		records := filepath.Join(folder, "shared", "weather")
		if _, err := os.Stat(records); err == nil {
			return records
		}
	}
	t.Skip("no folder of open station records stands beside the project")
	return ""
}

// Each file imports without a refused row, and comparing the two means over a
// whole year agrees with a plain loop over the same file, written apart.
func TestOpenRecords(t *testing.T) {
	records := openRecords(t)
	for _, row := range []struct {
		file   string
		offset string // hours from UTC
		year   int
		days   bool // some day has both means
	}{
		{"hourly/newark.csv", "-5", 2013, true},
		{"hourly/nyc_jfk.csv", "-5", 2013, true},
		{"hourly/beijing.csv", "8", 2014, true},
		{"hourly/brisbane.csv", "10", 2010, true},
		{"hourly/tmy_phoenix.csv", "-7", 2005, true},
		{"hourly/tmy_san_francisco.csv", "-8", 2005, true},
		{"hourly/tmy_miami.csv", "-5", 2005, true},
		{"daily/seattle_2012_2015.csv", "-8", 2013, false},
		{"daily/new_york_central_park.csv", "-5", 2013, false},
		{"daily/dublin_airport.csv", "0", 2013, false},
		{"daily/nl_hupsel.csv", "0", 2013, true},
		{"daily/melbourne_1981_1990.csv", "10", 1985, false},
		{"daily/brisbane_daily.csv", "10", 2010, false},
		{"daily/alice_springs.csv", "9.5", 2010, false},
	} {
		t.Run(row.file, func(t *testing.T) {
			t.Parallel()
			path := filepath.Join(records, filepath.FromSlash(row.file))
			year := strconv.Itoa(row.year)
			answers := session(t, filepath.Join(t.TempDir(), "course.db"), "2026-01-01T05:30",
				"/setup site add name:Quillmere lat:40 lon:-74 zone:UTC offset:"+row.offset,
				"/weather file file:"+path,
				"/why compare from:"+year+"-01-01 to:"+year+"-12-31")
			if refused := answers[1].number(t, "import.refused"); refused != 0 {
				t.Errorf("%v rows refused", refused)
			}
			want := plainCompare(t, path, row.offset, row.year)
			got := answers[2]
			if days := got.number(t, "means.days"); days != float64(want.days) || row.days != (want.days > 0) {
				t.Fatalf("%v days with both means, the plain loop has %d", days, want.days)
			}
			if want.days == 0 {
				return
			}
			for key, value := range map[string]float64{
				"means.mean_difference_c": want.mean, "means.mean_abs_difference_c": want.abs,
				"means.sd_c": want.sd, "means.largest_c": want.largest,
			} {
				if number := got.number(t, key); math.Abs(number-value) > 1e-9 {
					t.Errorf("%s = %.12f, the plain loop has %.12f", key, number, value)
				}
			}
			if got.Figures["means.largest_date"] != want.largestDate {
				t.Errorf("largest on %v, the plain loop has %s", got.Figures["means.largest_date"], want.largestDate)
			}
		})
	}
}

type plainMeans struct {
	days                   int
	mean, abs, sd, largest float64
	largestDate            string
}

// plainCompare is the other route: it knows nothing of the program, reads the
// file with encoding/csv, and follows the written rules day by day.
func plainCompare(t *testing.T, path, offset string, year int) plainMeans {
	t.Helper()
	file, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	rows, err := csv.NewReader(file).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var differences []float64
	var dates []string
	first := time.Date(year, 1, 1, 0, 0, 0, 0, time.UTC)
	if rows[0][0] == "date" {
		differences, dates = plainDaily(rows[1:], strconv.Itoa(year))
	} else {
		hours, err := strconv.ParseFloat(offset, 64)
		if err != nil {
			t.Fatal(err)
		}
		slots, highs, lows, counts := plainSlots(t, rows[1:], hours)
		for day := first; day.Year() == year; day = day.AddDate(0, 0, 1) {
			start := day.Unix() / 3600
			mean, ok := plainMean(slots, start)
			if date := day.Format("2006-01-02"); ok && counts[date] > 0 {
				differences = append(differences, (highs[date]+lows[date])/2-mean)
				dates = append(dates, date)
			}
		}
	}
	out := plainMeans{days: len(differences)}
	for i, d := range differences {
		out.mean += d / float64(len(differences))
		out.abs += math.Abs(d) / float64(len(differences))
		if math.Abs(d) > math.Abs(out.largest) {
			out.largest, out.largestDate = d, dates[i]
		}
	}
	squares := 0.0
	for _, d := range differences {
		squares += (d - out.mean) * (d - out.mean)
	}
	out.sd = math.Sqrt(squares / float64(len(differences)-1))
	return out
}

func plainDaily(rows [][]string, year string) (differences []float64, dates []string) {
	for _, row := range rows {
		if len(row) < 4 || !strings.HasPrefix(row[0], year) || row[1] == "" || row[2] == "" || row[3] == "" {
			continue
		}
		high, _ := strconv.ParseFloat(row[1], 64)
		low, _ := strconv.ParseFloat(row[2], 64)
		mean, _ := strconv.ParseFloat(row[3], 64)
		differences, dates = append(differences, (high+low)/2-mean), append(dates, row[0])
	}
	return differences, dates
}

// plainSlots puts each reading into the hour nearest to it, a half hour going
// up, hours counted since 1970 on the site's standard clock; and keeps each
// date's extremes.
func plainSlots(t *testing.T, rows [][]string, offset float64) (slots, highs, lows map[any]float64, counts map[any]int) {
	t.Helper()
	slots, highs, lows, counts = map[any]float64{}, map[any]float64{}, map[any]float64{}, map[any]int{}
	distance := map[int64]float64{}
	for _, row := range rows {
		text := strings.Replace(row[0], "T24:00", "T00:00", 1)
		at, err := time.Parse("2006-01-02T15:04Z07:00", text)
		if err != nil {
			t.Fatal(err)
		}
		if text != row[0] {
			at = at.Add(24 * time.Hour)
		}
		if row[1] == "" {
			continue
		}
		c, err := strconv.ParseFloat(row[1], 64)
		if err != nil {
			t.Fatal(err)
		}
		local := float64(at.Unix()) + offset*3600
		hour := int64(math.Floor(local/3600 + 0.5))
		away := math.Abs(local - float64(hour)*3600)
		if before, taken := distance[hour]; !taken || away < before {
			slots[hour], distance[hour] = c, away
		}
		date := time.Unix(int64(local), 0).UTC().Format("2006-01-02")
		if counts[date] == 0 {
			highs[date], lows[date] = c, c
		}
		counts[date]++
		highs[date], lows[date] = math.Max(highs[date], c), math.Min(lows[date], c)
	}
	return slots, highs, lows, counts
}

// plainMean is the mean of the 24 hours from start on, with runs of up to
// three lost hours bridged by a straight line and at least 18 real ones.
func plainMean(slots map[any]float64, start int64) (float64, bool) {
	sum, real := 0.0, 0
	for hour := start; hour < start+24; hour++ {
		if c, ok := slots[hour]; ok {
			sum += c
			real++
			continue
		}
		left, right := hour, hour
		for ; left > hour-4; left-- {
			if _, ok := slots[left]; ok {
				break
			}
		}
		for ; right < hour+4; right++ {
			if _, ok := slots[right]; ok {
				break
			}
		}
		a, hasA := slots[left]
		b, hasB := slots[right]
		if !hasA || !hasB || right-left > 4 {
			return 0, false
		}
		sum += a + (b-a)*float64(hour-left)/float64(right-left)
	}
	return sum / 24, real >= 18
}
