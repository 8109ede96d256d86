// Package storetest holds the promises that a store makes to the planner, as a
// suite that every engine's tests run on the real thing. It must not know any
// engine.
package storetest

import (
	"context"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"

	"swardbook/calc"
	"swardbook/planner"
)

// Store is one team's store, with the taking in of station files in the one
// form that the suite needs.
type Store interface {
	planner.Keeper
	planner.Recorder
	planner.SheetKeeper
	// Import stages the rows of the file in their order, readings first, and
	// merges those that are taken.
	Import(ctx context.Context, stamp planner.Stamp, station planner.StationID, file File) (Imported, error)
}

// File is a station file that has been read. Its lines are counted from 1 on,
// readings first.
type File struct {
	Readings []planner.Reading
	Daily    []planner.DailyReading
	Rain     []planner.Rain
}

// Imported says what became of a File.
type Imported struct {
	New, Changed, Same int
	From, To           planner.Day
	Repeats            []Repeat // refused rows
	Rain               planner.RowCounts
}

// Repeat is a row that says otherwise than an earlier one of the same time.
type Repeat struct{ Line, First int }

// Run runs the suite. open gives a new, empty store and returns how to get the
// handle of its team of a name; the same name gives the same team.
//
// The promises, each a subtest:
//
//  1. Save gives ids by team and kind from 1 on, and none twice, also when what
//     had it was dropped or its Save refused.
//  2. Setup returns what was saved, every field of it, in the order added; the
//     suite fails when a noun has a field that it sets no value in.
//  3. What is archived is not in Setup, nor what is under an archived site or
//     surface; it comes back with it. Works that were dropped stand apart.
//  4. A name is unique under its parent among what is not archived, ignoring
//     case and taking a space for a hyphen; a Taken problem keeps nothing.
//  5. A parent that is missing or archived, and an id that is not the team's,
//     are NotFound problems; a noun does not move to another parent.
//  6. What a noun's Check refuses, and a value that is no number, is not kept.
//  7. Settings are added: what is kept stays, in its order; of two of a day the
//     later added stands last; changing, removing or disordering them is
//     Invalid.
//  8. Entries come by day, then in the order logged, without undone ones; an
//     entry may be amended also when its work was dropped since; its passes
//     are of its site and name a work once.
//  9. Changes tell who, when (in seconds), by which command, what was and is,
//     and what is undone, newest first.
//  10. No method sees, changes or hits what is another team's.
//  11. Days ahead hold from the day of issue on, the newest of a day standing;
//     earlier days keep their answer; a cleared day is out.
//  12. An import counts new, changed and same rows and tells its days; of two
//     rows of one time the first stands, a different one is told with its line.
//  13. The record is what planner.BuildDay makes of all readings, contiguous.
//  14. Neither the order nor the split of imports moves the record.
//  15. The record is that of the stations by rank, then id, joined by
//     planner.JoinStations.
//  16. The revision is another one after every change of the record or of a
//     station, the same one otherwise, and Revision tells it alone.
//  17. A day rule that is added cuts the days again from its day on; a first
//     rule, or another zone, all days.
//  18. Writers at the same time lose nothing.
//  19. A call whose context has ended keeps nothing.
//  20. Rain comes by time, both ends included, of the first station by rank that
//     has any in between; of two values of a time in a file the first stands,
//     a later file's replaces; it moves neither record nor revision.
//  21. An issued sheet comes back as it was kept, times in seconds, to its own
//     team only; outlooks of the same site, day, revision, engine and path are
//     one, others each their own.
func Run(t *testing.T, open func(t *testing.T) (newTeam func(name string) Store)) {
	promises := []struct {
		name string
		test func(*testing.T, func(string) Store)
	}{
		{"1 ids", testIDs},
		{"2 setup", testSetup},
		{"3 archived", testArchived},
		{"4 names", testNames},
		{"5 parents", testParents},
		{"6 checks", testChecks},
		{"7 settings", testSettings},
		{"8 entries", testEntries},
		{"9 changes", testChanges},
		{"10 teams", testTeams},
		{"11 ahead", testAhead},
		{"12 import counts", testImportCounts},
		{"13 record", testRecord},
		{"14 import order", testImportOrder},
		{"15 first station", testFirstStation},
		{"16 revision", testRevision},
		{"17 day rules", testDayRules},
		{"18 writers", testWriters},
		{"19 ended context", testEndedContext},
		{"20 rain", testRain},
		{"21 sheets", testSheets},
	}
	for _, promise := range promises {
		t.Run(promise.name, func(t *testing.T) {
			t.Parallel()
			promise.test(t, open(t))
		})
	}
}

// stamp is somebody's, with a fraction of a second that is not kept.
func stamp(command string) planner.Stamp {
	return planner.Stamp{At: time.Date(2024, time.June, 4, 5, 6, 7, 890, time.UTC), By: "Robin", Command: command}
}

var (
	standard = planner.DayRule{OffsetSeconds: -5 * 3600, Boundary: planner.StandardMidnight}
	byHand   = planner.DayRule{OffsetSeconds: -5 * 3600, Boundary: planner.FixedHour, ClosingHour: 9, FirstSlot: 1}
	civil    = planner.DayRule{OffsetSeconds: -5 * 3600, Boundary: planner.CivilMidnight}
	lateJune = planner.DayOf(2024, time.June, 20)
	midMay   = planner.DayOf(2024, time.May, 15)
)

func newSite(name string) planner.Site {
	return planner.Site{Name: name, Lat: 40.75, Lon: -74.125, Zone: "America/New_York",
		Units: planner.Fahrenheit, Rules: planner.Always(standard)}
}

func newStation(site planner.SiteID, name string, rank int) planner.Station {
	return planner.Station{Site: site, Name: name, Rank: rank}
}

func newSurface(site planner.SiteID, name string) planner.Surface {
	return planner.Surface{Site: site, Name: name, Turf: planner.Always(planner.Turf{Grass: "cool", Curve: calc.CoolSeason(), CeilingGM2: 3})}
}

func newWork(surface planner.SurfaceID, name string) planner.Work {
	return planner.Work{Surface: surface, Name: name, Settings: planner.Always(degreeDays(200))}
}

func degreeDays(target float64) planner.WorkSettings {
	return planner.WorkSettings{
		Counting: planner.Counting{Counts: planner.ByDegreeDays, Method: calc.MethodSingleSine,
			Thresholds: calc.Thresholds{LowerC: 0.1, UpperC: 30.3, Cutoff: calc.CutoffHorizontal}},
		Target: target, Basis: planner.Hourly, Latest: target * 1.1,
	}
}

func newTotal(site planner.SiteID, name string) planner.Total {
	return planner.Total{Site: site, Name: name, Settings: planner.Always(planner.TotalSettings{
		Counting: planner.Counting{Counts: planner.ByGrowthDays}, Curve: calc.WarmSeasonF(),
		Start: planner.MonthDay{Month: time.March, Day: 1},
	})}
}

func newClosed(site planner.SiteID, name string, works ...planner.WorkID) planner.Closed {
	return planner.Closed{Site: site, Name: name, Works: works, From: midMay, To: lateJune, Yearly: true}
}

func newEntry(site planner.SiteID, day planner.Day, works ...planner.WorkID) planner.Entry {
	entry := planner.Entry{Site: site, Day: day, By: "Sam", At: time.Date(2024, time.June, 4, 5, 6, 7, 890, time.UTC), Note: "in the rain"}
	for i, work := range works {
		entry.Passes = append(entry.Passes, planner.Pass{Work: work, NitrogenGM2: float64(i) / 4})
	}
	return entry
}

// save keeps the noun or ends the test.
func save[N planner.Noun](t *testing.T, store Store, noun N) N {
	t.Helper()
	kept, err := store.Save(t.Context(), stamp("/setup"), noun)
	if err != nil {
		t.Fatalf("Save(%s %+v): %v", noun.Kind(), noun, err)
	}
	return kept.(N)
}

// refuse wants the noun refused with a problem of the kind, and nothing kept.
func refuse(t *testing.T, store Store, kind planner.Kind, noun planner.Noun) {
	t.Helper()
	before := everything(t, store)
	kept, err := store.Save(t.Context(), stamp("/setup"), noun)
	wantKind(t, err, kind)
	if kept != nil {
		t.Errorf("a refused Save returned %+v", kept)
	}
	if diff := cmp.Diff(before, everything(t, store)); diff != "" {
		t.Errorf("a refused Save of %+v left something (-before +after):\n%s", noun, diff)
	}
}

// wantKind wants a problem of the kind that says something.
func wantKind(t *testing.T, err error, kind planner.Kind) {
	t.Helper()
	if err == nil {
		t.Errorf("no error, want a %s problem", kind)
		return
	}
	if got := planner.KindOf(err); got != kind {
		t.Errorf("error %q is %s, want %s", err, got, kind)
	}
}

// all is what can be seen of a team.
type all struct {
	Setup   planner.Setup
	Changes []planner.Change
	Entries map[planner.SiteID][]planner.Entry
	Records map[planner.SiteID]planner.Record
	Ahead   map[planner.SiteID][]planner.HandDay
}

func everything(t *testing.T, store Store) all {
	t.Helper()
	seen := all{Setup: setup(t, store), Entries: map[planner.SiteID][]planner.Entry{},
		Records: map[planner.SiteID]planner.Record{}, Ahead: map[planner.SiteID][]planner.HandDay{}}
	var err error
	if seen.Changes, err = store.Changes(t.Context(), "", 1000); err != nil {
		t.Fatalf("Changes: %v", err)
	}
	for site := planner.SiteID(1); site <= 3; site++ {
		seen.Entries[site] = log(t, store, site)
		seen.Records[site] = record(t, store, site)
		if seen.Ahead[site], err = store.Ahead(t.Context(), site, lateJune); err != nil {
			t.Fatalf("Ahead: %v", err)
		}
	}
	return seen
}

func setup(t *testing.T, store Store) planner.Setup {
	t.Helper()
	got, err := store.Setup(t.Context())
	if err != nil {
		t.Fatalf("Setup: %v", err)
	}
	return got
}

func dropped(t *testing.T, store Store) planner.Setup {
	t.Helper()
	got, err := store.Dropped(t.Context())
	if err != nil {
		t.Fatalf("Dropped: %v", err)
	}
	return got
}

func log(t *testing.T, store Store, site planner.SiteID) []planner.Entry {
	t.Helper()
	got, err := store.Entries(t.Context(), site)
	if err != nil {
		t.Fatalf("Entries: %v", err)
	}
	return got
}

func record(t *testing.T, store Store, site planner.SiteID) planner.Record {
	t.Helper()
	got, err := store.Record(t.Context(), site)
	if err != nil {
		t.Fatalf("Record: %v", err)
	}
	return got
}

func want[T any](t *testing.T, what string, got, want T) {
	t.Helper()
	if diff := cmp.Diff(want, got); diff != "" {
		t.Errorf("%s (-want +got):\n%s", what, diff)
	}
}
