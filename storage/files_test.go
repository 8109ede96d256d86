package storage_test

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"os"
	"runtime"
	"runtime/debug"
	"strings"
	"testing"
	"time"
	_ "time/tzdata" // a fresh machine may have no time zones

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"swardbook/planner"
)

// The files of a logger that overlap and agree, in several dialects, make the
// same record and the same export in any order, some of them twice.
func TestAnyOrderOfTheSameFiles(t *testing.T) {
	t.Parallel()
	const hoursInAll = 16 * 24
	at := func(hour int) time.Time {
		return time.Date(2013, 3, 1, 5, 0, 0, 0, time.UTC).Add(time.Duration(hour) * time.Hour)
	}
	value := func(hour int) float64 {
		return math.Round(100+80*math.Sin(float64(hour)/24*2*math.Pi)+float64(hour%7)) / 10
	}
	newYork, err := time.LoadLocation("America/New_York")
	if err != nil {
		t.Fatal(err)
	}
	dialects := []func(b *strings.Builder, from, to int){
		func(b *strings.Builder, from, to int) {
			b.WriteString("time,temp_c\n")
			for hour := from; hour < to; hour++ {
				fmt.Fprintf(b, "%s,%.1f\n", at(hour).Format(time.RFC3339), value(hour))
			}
		},
		func(b *strings.Builder, from, to int) { // standard time, five hours behind
			b.WriteString("Datum;Uhrzeit;Temperatur (°C)\n")
			for hour := from; hour < to; hour++ {
				fmt.Fprintf(b, "%s;%s\n", at(hour).Add(-5*time.Hour).Format("2006-01-02;15:04"), strings.Replace(fmt.Sprintf("%.1f", value(hour)), ".", ",", 1))
			}
		},
		func(b *strings.Builder, from, to int) { // the clock on the wall
			b.WriteString("time\ttemp [°C]\n")
			for hour := from; hour < to; hour++ {
				fmt.Fprintf(b, "%s\t%.1f\n", at(hour).In(newYork).Format("2006-01-02 3:04 PM"), value(hour))
			}
		},
		func(b *strings.Builder, from, to int) { // whole days
			b.WriteString("date,high_c,low_c\n")
			for day := from / 24; day < to/24; day++ {
				fmt.Fprintf(b, "%s,%d,%d\n", at(day*24).Format("2006-01-02"), 20+day%5, 3+day%4)
			}
		},
	}
	var facts []planner.DayFacts
	export, round := "", 0
	g := newGround(t, "America/New_York", -5)
	rapid.Check(t, func(r *rapid.T) {
		type part struct{ from, to, dialect int }
		var parts []part
		for i := range dialects { // together they cover all
			parts = append(parts, part{0, hoursInAll, i})
		}
		for range rapid.IntRange(0, 6).Draw(r, "more") {
			from := rapid.IntRange(0, hoursInAll-48).Draw(r, "from") / 24 * 24
			to := rapid.IntRange(from+24, hoursInAll).Draw(r, "to") / 24 * 24
			// The clock on the wall is told by a whole file, so parts are of the others.
			parts = append(parts, part{from, to, rapid.SampledFrom([]int{0, 1, 3}).Draw(r, "dialect")})
		}
		parts = rapid.Permutation(parts).Draw(r, "order")
		round++ // a station of its own for every round: opening a store costs more
		dropAll(t, g)
		g.station = save(t, g.team, planner.Station{Site: g.site.ID, Name: fmt.Sprintf("S%d", round), Rank: 1}).ID
		for i, part := range parts {
			var b strings.Builder
			dialects[part.dialect](&b, part.from, part.to)
			if report := g.take(t, fmt.Sprintf("%d.csv", i), b.String()); report.Changed+report.Refused > 0 {
				r.Fatalf("part %+v changed or refused rows: %+v", part, report)
			}
		}
		gotFacts, gotExport := g.state(t).record.Facts, g.export(t)
		if facts == nil {
			facts, export = gotFacts, gotExport
		}
		if diff := cmp.Diff(facts, gotFacts); diff != "" {
			r.Fatal(diff)
		}
		if diff := cmp.Diff(export, gotExport); diff != "" {
			r.Fatal(diff)
		}
	})
}

// What was said of a file holds for the station's next, until the file is
// withdrawn; another station is asked anew.
func TestWhatIsSaidIsRemembered(t *testing.T) {
	t.Parallel()
	const two = "time,green 7 temp (°C),green 12 temp (°C)\n01/07/2013 05:00,17.8,16.9\n"
	g := newGround(t, "UTC", 0)
	refused := func(content string) {
		t.Helper()
		if _, err := g.importer.Import(t.Context(), g.request("two.csv", strings.NewReader(content))); planner.KindOf(err) != planner.Refused {
			t.Fatalf("%v, want it refused", err)
		}
	}
	refused(two)
	request := g.request("two.csv", strings.NewReader(two))
	request.Sensor, request.Dates = "green 12 temp (°C)", "d/m/y"
	said, err := g.importer.Import(t.Context(), request)
	if err != nil || strings.Join(said.Remembered, " ") != `sensor:"green 12 temp (°C)" dates:d/m/y` {
		t.Fatalf("%+v %v", said, err)
	}
	if again := g.take(t, "two.csv", two); again.Same != 1 || again.From != planner.DayOf(2013, 7, 1) {
		t.Errorf("%+v", again)
	}
	refused(strings.Replace(two, "green 12", "green 14", 1)) // another sensor than the one remembered
	first := g.station
	g.station = save(t, g.team, planner.Station{Site: g.site.ID, Name: "Roof", Rank: 2}).ID
	refused(two)
	g.station = first
	for _, id := range []planner.ImportID{1, 2} {
		if _, err := g.importer.Withdraw(t.Context(), stamp, id, false); err != nil {
			t.Fatal(err)
		}
	}
	refused(two)
}

// A site's second station stands in for days that the first lacks.
func TestASecondStationStandsIn(t *testing.T) {
	t.Parallel()
	g := newGround(t, "UTC", 0)
	day := planner.DayOf(2013, 7, 1)
	daily := func(days int, highC float64, lost int) string {
		var b strings.Builder
		b.WriteString("date,high_c,low_c\n")
		for i := range days {
			if i != lost {
				fmt.Fprintf(&b, "%s,%v,%v\n", day+planner.Day(i), highC, highC-10)
			}
		}
		return b.String()
	}
	g.take(t, "shed.csv", daily(35, 24, 31))
	before := g.state(t).record
	g.station = save(t, g.team, planner.Station{Site: g.site.ID, Name: "Roof", Rank: 2}).ID
	g.take(t, "roof.csv", daily(36, 26, -1))
	record := g.state(t).record
	if record.Revision == before.Revision {
		t.Error("the revision is the same")
	}
	if got := record.At(day + 30); got.Other != "" || got.HighC != 24 {
		t.Errorf("a day of the first: %+v", got)
	}
	for _, lost := range []planner.Day{day + 31, day + 35} { // 2 °C warmer on the roof on all shared days
		if got := record.At(lost); got.Other != "Roof" || got.OtherDays < 30 || got.HighC != 24 || got.LowC != 14 {
			t.Errorf("%s: %+v", lost, got)
		}
	}
}

// Every import gives its memory back: a hundred a day must not add up. The
// store's memory is not Go's, so that the system is asked.
func TestImportsGiveTheirMemoryBack(t *testing.T) {
	if raceOn {
		t.Skip("the race detector has memory of its own")
	}
	if residentMiB("RssAnon:") == 0 {
		t.Skip("the system does not tell how much memory is in use")
	}
	const rows = 20_000
	g := newGround(t, "UTC", 0)
	some := func(from, to int) {
		for file := from; file < to; file++ {
			if _, err := g.importer.Import(t.Context(), g.request("part.csv", minutes(file*rows, rows))); err != nil {
				t.Fatal(err)
			}
		}
	}
	resident := func() float64 {
		debug.FreeOSMemory() // Go's own garbage is not meant
		return residentMiB("RssAnon:")
	}
	some(0, 3)
	before := resident()
	some(3, 13)
	// With a statement of each left open ten imports kept 30 MiB.
	if grown := resident() - before; grown > 15 {
		t.Errorf("ten imports of %d readings keep %.0f MiB", rows, grown)
	}
}

// BenchmarkTwentyFiles imports 20 files of readings each minute, in three sizes:
// the time a reading should be the same in all, and the memory too. With
// SWARDBOOK_FULL set they are 2.5, 5 and 10 million readings.
func BenchmarkTwentyFiles(b *testing.B) {
	const files = 20
	sizes := []int{100_000, 200_000, 400_000}
	if os.Getenv("SWARDBOOK_FULL") != "" {
		sizes = []int{2_500_000, 5_000_000, 10_000_000}
	}
	for _, size := range sizes {
		b.Run(fmt.Sprint(size), func(b *testing.B) {
			for b.Loop() {
				g := newGround(b, "UTC", 0)
				peak := uint64(0)
				for file := range files {
					request := g.request("part.csv", minutes(file*size/files, size/files))
					request.Progress = func(int) {
						var now runtime.MemStats
						runtime.ReadMemStats(&now)
						peak = max(peak, now.HeapInuse)
					}
					report, err := g.importer.Import(b.Context(), request)
					if err != nil || report.New != size/files {
						b.Fatal(report, err)
					}
				}
				b.ReportMetric(float64(peak)/(1<<20), "peak-heap-MiB")
				b.ReportMetric(residentMiB("VmHWM:"), "resident-MiB")
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(size), "ns/reading")
		})
	}
}

// residentMiB is a line of the memory that the program has, where the system
// tells; 0 elsewhere. VmHWM is the most so far, RssAnon what it has now.
func residentMiB(line string) float64 {
	status, err := os.ReadFile("/proc/self/status")
	if err != nil {
		return 0
	}
	_, after, _ := strings.Cut(string(status), line)
	var kibibytes float64
	if _, err := fmt.Sscan(after, &kibibytes); err != nil {
		return 0
	}
	return kibibytes / 1024
}

// minutes streams a file of readings a minute apart.
func minutes(from, rows int) io.Reader {
	at := time.Date(2000, 1, 1, 0, 0, 0, 0, time.UTC).Add(time.Duration(from) * time.Minute)
	row, buffer := -1, bytes.Buffer{}
	return readerFunc(func(p []byte) (int, error) {
		for buffer.Len() < len(p) && row < rows {
			if row++; row == 0 {
				buffer.WriteString("time;temp_c\n")
				continue
			}
			line := at.AppendFormat(nil, "02/01/2006 15:04")
			fmt.Fprintf(&buffer, "%s;%d,%d\n", line, row%35, row%10)
			at = at.Add(time.Minute)
		}
		if buffer.Len() == 0 {
			return 0, io.EOF
		}
		return buffer.Read(p)
	})
}

type readerFunc func(p []byte) (int, error)

func (f readerFunc) Read(p []byte) (int, error) { return f(p) }

// A file that does not show its clock says so where another of the station ran
// on the clock on the wall.
func TestAFileBesideOneOnTheWallClock(t *testing.T) {
	t.Parallel()
	g := newGround(t, "America/New_York", -5)
	const plain = "time,temp_c\n2013-07-01 05:00,17.8\n"
	note := func(content string) bool {
		return strings.Contains(strings.Join(g.take(t, "a.csv", content).Notes, " "), "An earlier file of this station ran on the clock on the wall")
	}
	if note(plain) {
		t.Error("said of the station's first file")
	}
	wall, err := os.ReadFile("../testdata/intake/readings_wall_clock.csv")
	if err != nil {
		t.Fatal(err)
	}
	if note(string(wall)) {
		t.Error("said of the file on the clock on the wall")
	}
	if !note(plain) {
		t.Error("not said of the next")
	}
	for _, shows := range []string{"time,temp_c\n2013-03-10 02:00,17.8\n", "time,temp_c\n2013-07-01 05:00Z,17.8\n", "date,high_c,low_c\n2013-07-01,17,8\n"} {
		if note(shows) {
			t.Errorf("said of %q", shows)
		}
	}
}
