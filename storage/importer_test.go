package storage_test

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"testing/iotest"
	"time"

	"github.com/google/go-cmp/cmp"

	"swardbook/planner"
	"swardbook/storage"
	"swardbook/storage/sqlite"
)

// ground is a team with one invented site and its station in a file of its own.
type ground struct {
	path     string
	team     *sqlite.Team
	site     planner.Site
	station  planner.StationID
	importer *storage.Importer
	facts    []planner.DayFacts // of a test that compares two
}

var stamp = planner.Stamp{At: time.Date(2024, 6, 4, 6, 0, 0, 0, time.UTC), By: "tester", Command: "/weather file"}

// newGround opens a store whose site is in the zone with days from midnight to
// midnight in the standard time.
func newGround(t testing.TB, zone string, offsetHours int) *ground {
	t.Helper()
	ctx := t.Context()
	path := filepath.Join(t.TempDir(), "store.db")
	db, err := sqlite.Open(ctx, path)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		if err := db.Close(); err != nil {
			t.Error(err)
		}
	})
	team, err := db.Team(ctx, "test", "team")
	if err != nil {
		t.Fatal(err)
	}
	rule := planner.DayRule{OffsetSeconds: offsetHours * 3600, Boundary: planner.StandardMidnight}
	site := save(t, team, planner.Site{Name: "Fernhollow", Lat: 47.6, Lon: -122.3, Zone: zone, Units: planner.Celsius, Rules: planner.Always(rule)})
	station := save(t, team, planner.Station{Site: site.ID, Name: "Shed", Rank: 1})
	return &ground{path: path, team: team, site: site, station: station.ID, importer: storage.NewImporter(team)}
}

func save[N planner.Noun](t testing.TB, team *sqlite.Team, noun N) N {
	t.Helper()
	kept, err := team.Save(t.Context(), stamp, noun)
	if err != nil {
		t.Fatal(err)
	}
	return kept.(N)
}

func (g *ground) request(name string, content io.Reader) planner.ImportRequest {
	return planner.ImportRequest{Stamp: stamp, Station: g.station, FileName: name, Content: content}
}

func (g *ground) take(t testing.TB, name, content string) planner.ImportReport {
	t.Helper()
	report, err := g.importer.Import(t.Context(), g.request(name, strings.NewReader(content)))
	if err != nil {
		t.Fatalf("import %s: %v", name, err)
	}
	checkCounts(t, report)
	return report
}

// checkCounts holds that every row of a file is accounted for.
func checkCounts(t testing.TB, report planner.ImportReport) {
	t.Helper()
	if report.Rows != report.Taken()+report.Empty+report.Refused {
		t.Errorf("rows do not add up: %+v", report)
	}
	if min(report.Refused, 100) != len(report.Refusals) {
		t.Errorf("%d rows refused, %d listed", report.Refused, len(report.Refusals))
	}
}

// state is all of the store that an import could change.
type state struct {
	record  planner.Record
	changes []planner.Change
}

func (g *ground) state(t testing.TB) state {
	t.Helper()
	record, err := g.team.Record(t.Context(), g.site.ID)
	if err != nil {
		t.Fatal(err)
	}
	changes, err := g.team.Changes(t.Context(), "", 1000)
	if err != nil {
		t.Fatal(err)
	}
	return state{record, changes}
}

// hours writes a file of so many hourly readings from midnight UTC of 1 July
// 2013; change may replace the value of a row.
func hours(rows int, change func(row int) (value string, changed bool)) string {
	var b strings.Builder
	b.WriteString("time,temp_c\n")
	at := time.Date(2013, 7, 1, 0, 0, 0, 0, time.UTC)
	for i := range rows {
		value, changed := "", false
		if change != nil {
			value, changed = change(i)
		}
		if !changed {
			value = fmt.Sprintf("%.1f", 10+float64(i%24)/2)
		}
		fmt.Fprintf(&b, "%s,%s\n", at.Add(time.Duration(i)*time.Hour).Format("2006-01-02T15:04Z"), value)
	}
	return b.String()
}

// firstRows replaces the values of the first rows.
func firstRows(n int, value string) func(int) (string, bool) {
	return func(row int) (string, bool) { return value, row < n }
}

func TestImportThenAgainThenCorrected(t *testing.T) {
	t.Parallel()
	g := newGround(t, "UTC", 0)
	report := g.take(t, "july.csv", hours(48, nil))
	want := planner.ImportReport{Format: "readings", Units: "c", Clock: "offset in the file", Rows: 48, New: 48,
		Import: 1, Station: g.station,
		From: planner.DayOf(2013, 7, 1), To: planner.DayOf(2013, 7, 2)}
	if diff := cmp.Diff(want, report); diff != "" {
		t.Error(diff)
	}
	first := g.state(t)

	again := g.take(t, "july again.csv", hours(48, nil))
	want.New, want.Same, want.Import = 0, 48, 2
	if diff := cmp.Diff(want, again); diff != "" {
		t.Error(diff)
	}
	if diff := cmp.Diff(first.record, g.state(t).record); diff != "" {
		t.Errorf("the same file again changed the record: %s", diff)
	}

	corrected := g.take(t, "july corrected.csv", hours(49, firstRows(1, "11.5")))
	if corrected.New != 1 || corrected.Changed != 1 || corrected.Same != 47 {
		t.Errorf("corrected: %+v", corrected)
	}
	// The mean of 10, 10.5 … 21.5 is 15.75; one reading is 1.5 more.
	facts := g.state(t).record.At(planner.DayOf(2013, 7, 1))
	if diff := facts.HourlyC - (15.75 + 1.5/24); diff > 1e-9 || diff < -1e-9 {
		t.Errorf("mean %v", facts.HourlyC)
	}
}

func TestRepeatsInOneFile(t *testing.T) {
	t.Parallel()
	g := newGround(t, "UTC", 0)
	content, err := os.ReadFile("../testdata/intake/readings_repeats.csv")
	if err != nil {
		t.Fatal(err)
	}
	report := g.take(t, "repeats.csv", string(content))
	want := []planner.Refusal{{Line: 27, Value: "2013-07-01 05:00:00 UTC, 13.5 °C", Reason: "line 7 gives another value for the same time, and stands", Alike: 1}}
	if report.New != 24 || report.Same != 1 || !slices.Equal(report.Refusals, want) {
		t.Errorf("%+v", report)
	}

	days := "date,high_c,low_c\n"
	for i := range 25 {
		days += fmt.Sprintf("%s,20,10\n", planner.DayOf(2013, 8, 1)+planner.Day(i))
	}
	report = g.take(t, "days.csv", days+"2013-08-03,20,10\n2013-08-04,21,10\n")
	want = []planner.Refusal{{Line: 28, Value: "2013-08-04, high 21.0 °C, low 10.0 °C", Reason: "line 5 gives another value for the same time, and stands", Alike: 1}}
	if report.New != 25 || report.Same != 1 || report.Clock != "dates only" || !slices.Equal(report.Refusals, want) {
		t.Errorf("%+v", report)
	}
}

func TestSiteStandardTimeOfTheRequestsDay(t *testing.T) {
	t.Parallel()
	g := newGround(t, "America/Los_Angeles", -8)
	rule := g.site.Rules[0].Value
	rule.OffsetSeconds = -7 * 3600
	g.site.Rules = g.site.Rules.With(planner.DayOf(2024, 1, 1), rule)
	save(t, g.team, g.site)
	content := hours(24, nil)
	local := strings.ReplaceAll(content, "Z,", ",")
	for _, row := range []struct {
		year  int
		hours int // that midnight at the site is after midnight UTC
	}{{2023, 8}, {2025, 7}} {
		g.station = save(t, g.team, planner.Station{Site: g.site.ID, Name: fmt.Sprint("Mast ", row.year), Rank: row.year}).ID
		request := g.request("local.csv", strings.NewReader(local))
		request.At = time.Date(row.year, 6, 1, 0, 0, 0, 0, time.UTC)
		report, err := g.importer.Import(t.Context(), request)
		if err != nil || report.Clock != "site standard time" {
			t.Fatalf("%+v, %v", report, err)
		}
		// The same instants written with the offset are already there.
		offset := strings.ReplaceAll(content, "Z,", fmt.Sprintf("-%02d:00,", row.hours))
		if again := g.take(t, "offset.csv", offset); again.Same != 24 {
			t.Errorf("in %d: %+v", row.year, again)
		}
	}
}

func TestRefusedWholeLeavesTheStoreAsItWas(t *testing.T) {
	t.Parallel()
	g := newGround(t, "UTC", 0)
	g.take(t, "before.csv", hours(30, nil))
	before := g.state(t)
	broken := errors.New("the cable is out")
	for _, row := range []struct {
		name    string
		content io.Reader
		units   planner.Units
		problem string // "" where the error is not ours
	}{
		{"header", strings.NewReader("rh,wind\n1,2\n"), "", "is not a header"},
		{"units", strings.NewReader(hours(30, firstRows(3, "1"))), "f", "°F was asked for"},
		{"no rows", strings.NewReader("time,temp_c\n"), "", `"no rows" holds a header and no rows`},
		{"nothing but empty", strings.NewReader(hours(7, firstRows(7, "NA"))), "", "all 7 rows"},
		{"nothing usable", strings.NewReader(hours(2, firstRows(2, "warm"))), "",
			`2 of 2 rows of "nothing usable" cannot be used: 2 × the temperature is not a number like 12.5 (line 2: "warm")`},
		{"6 of 100", strings.NewReader(hours(100, firstRows(6, "999"+"0"))), "",
			`6 of 100 rows of "6 of 100" cannot be used: 6 × the temperature is outside -95 to 62 °C, read as °C: check the value and its unit (line 2: "9990")`},
		{"5 of 80", strings.NewReader(hours(100, func(row int) (string, bool) {
			if row < 5 {
				return "x", true
			}
			return "", row < 25
		})), "", `5 of 80 rows`},
		{"repeats", strings.NewReader(hours(30, nil) + "2013-07-01T00:00Z,1\n2013-07-01T00:00Z,2\n"), "",
			`2 of 32 rows of "repeats" cannot be used: 2 × another value for a time or day given before (line 32: "2013-07-01 00:00:00 UTC, 1.0 °C")`},
		{"long line", strings.NewReader(hours(3000, firstRows(3, "1")) + strings.Repeat("9", 2<<20)), "", "line 3002 is longer than 1 MiB"},
		{"read error", io.MultiReader(strings.NewReader(hours(3000, firstRows(3, "1"))), iotest.ErrReader(broken)), "", ""},
	} {
		request := g.request(row.name, row.content)
		request.Units = row.units
		report, err := g.importer.Import(t.Context(), request)
		var problem *planner.Problem
		switch {
		case row.problem == "":
			if !errors.Is(err, broken) {
				t.Errorf("%s: %v", row.name, err)
			}
		case !errors.As(err, &problem):
			t.Errorf("%s: %v", row.name, err)
		case problem.Kind != planner.Refused || !strings.Contains(problem.Message, row.problem) || problem.Hint == "":
			t.Errorf("%s: %s problem %q, hint %q; want %q", row.name, problem.Kind, problem.Message, problem.Hint, row.problem)
		}
		if report.Rows != 0 {
			t.Errorf("%s: report %+v beside an error", row.name, report)
		}
		if diff := cmp.Diff(before, g.state(t), cmp.AllowUnexported(state{})); diff != "" {
			t.Fatalf("%s changed the store: %s", row.name, diff)
		}
	}
}

// Up to 5 % of the rows that hold a value may be refused.
func TestAFewRefusedRows(t *testing.T) {
	t.Parallel()
	for _, row := range []struct{ rows, refused, empty int }{{100, 5, 0}, {100, 4, 20}, {20, 1, 0}, {4000, 200, 0}} {
		g := newGround(t, "UTC", 0)
		report := g.take(t, "few.csv", hours(row.rows, func(i int) (string, bool) {
			if i < row.refused {
				return "x", true
			}
			return "", i < row.refused+row.empty
		}))
		if report.Refused != row.refused || report.Empty != row.empty || report.New != row.rows-row.refused-row.empty {
			t.Errorf("%+v: %+v", row, report)
		}
		if got := report.Refusals[0]; got != (planner.Refusal{Line: 2, Value: "x", Reason: "the temperature is not a number like 12.5", Alike: row.refused}) {
			t.Errorf("first refusal %+v", got)
		}
	}
}

func TestStationThatIsNotThere(t *testing.T) {
	t.Parallel()
	g := newGround(t, "UTC", 0)
	dropped := save(t, g.team, planner.Station{Site: g.site.ID, Name: "Old mast", Rank: 2})
	dropped.Archived = true
	save(t, g.team, dropped)
	for _, station := range []planner.StationID{0, -1, dropped.ID, 999} {
		request := g.request("july.csv", strings.NewReader(hours(24, nil)))
		request.Station = station
		if _, err := g.importer.Import(t.Context(), request); planner.KindOf(err) != planner.NotFound {
			t.Errorf("station %d: %v", station, err)
		}
	}
}

func TestProgressAndStopping(t *testing.T) {
	t.Parallel()
	g := newGround(t, "UTC", 0)
	before := g.state(t)
	content := hours(25_000, nil)

	ctx, cancel := context.WithCancel(t.Context())
	defer cancel()
	request := g.request("long.csv", strings.NewReader(content))
	var told []int
	request.Progress = func(rows int) {
		told = append(told, rows)
		cancel()
	}
	if _, err := g.importer.Import(ctx, request); !errors.Is(err, context.Canceled) {
		t.Errorf("stopped: %v", err)
	}
	if !slices.Equal(told, []int{10_000}) {
		t.Errorf("told %v before it stopped", told)
	}
	request.Content = strings.NewReader(content)
	if _, err := g.importer.Import(ctx, request); !errors.Is(err, context.Canceled) {
		t.Errorf("stopped beforehand: %v", err)
	}
	if diff := cmp.Diff(before, g.state(t), cmp.AllowUnexported(state{})); diff != "" {
		t.Errorf("a stopped import changed the store: %s", diff)
	}

	told = nil
	request.Progress = func(rows int) { told = append(told, rows) }
	request.Content = strings.NewReader(content)
	if _, err := g.importer.Import(t.Context(), request); err != nil {
		t.Fatal(err)
	}
	if !slices.Equal(told, []int{10_000, 20_000}) {
		t.Errorf("told %v", told)
	}
}
