package storetest

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"sync"
	"testing"

	"github.com/google/go-cmp/cmp"

	"swardbook/planner"
)

func testTeams(t *testing.T, newTeam func(string) Store) {
	one, two := newTeam("one"), newTeam("two")
	mine := newGround(t, one, "Quillmere")
	feed := save(t, one, newWork(mine.surface.ID, "feed")) // the second team will have no work of this id
	save(t, one, newEntry(mine.site.ID, lateJune, mine.work.ID, feed.ID))
	load(t, one, mine.station.ID, File{Readings: hourly(lateJune, 3)})
	days := []planner.HandDay{{Day: lateJune, HighC: 20, LowC: 10}}
	if err := one.SaveAhead(t.Context(), stamp(""), mine.site.ID, lateJune-1, days); err != nil {
		t.Fatal(err)
	}
	if got := newTeam("one"); !cmp.Equal(setup(t, got), setup(t, one)) {
		t.Error("the same name gave another team")
	}
	before := everything(t, one)

	// The other team, with nothing of its own, names every id of the first.
	nothing := everything(t, two)
	if len(nothing.Changes) != 0 || !cmp.Equal(nothing.Setup, planner.Setup{}) {
		t.Errorf("a new team sees %+v", nothing)
	}
	for site, record := range nothing.Records {
		if record.Facts != nil || record.Revision != 0 || nothing.Entries[site] != nil || nothing.Ahead[site] != nil {
			t.Errorf("a new team sees of site %d: %+v", site, nothing)
		}
	}
	if revision, err := two.Revision(t.Context(), mine.site.ID); revision != 0 || err != nil {
		t.Errorf("a new team sees revision %d, %v", revision, err)
	}
	entry := before.Entries[mine.site.ID][0]
	fresh := entry
	fresh.ID = 0
	for _, noun := range []planner.Noun{mine.site, mine.station, mine.surface, mine.work, mine.total, mine.closed, entry,
		newClosed(mine.site.ID, "match"), newStation(mine.site.ID, "mast", 1), newSurface(mine.site.ID, "tees"), newWork(mine.surface.ID, "cut"), newTotal(mine.site.ID, "heat"), fresh} {
		refuse(t, two, planner.NotFound, noun)
	}
	_, err := two.Import(t.Context(), stamp(""), mine.station.ID, File{Readings: hourly(lateJune, 1)})
	wantKind(t, err, planner.NotFound)
	wantKind(t, two.SaveAhead(t.Context(), stamp(""), mine.site.ID, lateJune, days), planner.NotFound)
	undo := stamp("")
	undo.Undoes = before.Changes[0].ID
	_, err = two.Save(t.Context(), undo, newSite("Ashby"))
	wantKind(t, err, planner.NotFound)
	want(t, "what the second team sees", everything(t, two), nothing)

	// The same ids, now both teams': each keeps its own.
	theirs := newGround(t, two, "Quillmere")
	save(t, two, newEntry(theirs.site.ID, midMay, theirs.work.ID))
	theirs.site.Name, theirs.work.Archived = "Ashby", true
	save(t, two, theirs.site)
	refuse(t, two, planner.NotFound, newEntry(theirs.site.ID, lateJune, feed.ID))
	refuse(t, two, planner.NotFound, newClosed(theirs.site.ID, "match", feed.ID))
	save(t, two, theirs.work)
	refuse(t, two, planner.NotFound, newEntry(theirs.site.ID, lateJune, mine.work.ID)) // dropped here, not there
	changed := hourly(lateJune, 3)
	for range 2 {
		for i := range changed {
			changed[i].C++
		}
		load(t, two, theirs.station.ID, File{Readings: changed})
	}
	cleared := []planner.HandDay{{Day: lateJune, Cleared: true}}
	if err := two.SaveAhead(t.Context(), stamp(""), theirs.site.ID, lateJune-1, cleared); err != nil {
		t.Fatal(err)
	}
	theirs.site.Rules = theirs.site.Rules.With(lateJune, byHand)
	save(t, two, theirs.site)
	want(t, "the second team's record", record(t, two, theirs.site.ID).Facts, built(theirs.site, changed, nil))
	want(t, "what the first team sees after it all", everything(t, one), before)
}

func testAhead(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	g := newGround(t, store, "Quillmere")
	type day = planner.HandDay
	typed := func(issued planner.Day, days ...day) {
		t.Helper()
		if err := store.SaveAhead(t.Context(), stamp("/weather ahead"), g.site.ID, issued, days); err != nil {
			t.Fatal(err)
		}
	}
	d := lateJune
	typed(d, day{Day: d + 2, HighC: 22, LowC: 12}, day{Day: d, HighC: 20, LowC: 10}, day{Day: d + 1, HighC: 21, LowC: 11})
	typed(d+1, day{Day: d + 2, HighC: 32, LowC: 12.5}, day{Day: d + 4, HighC: 24, LowC: 14})
	typed(d+1, day{Day: d + 4, HighC: 25, LowC: 15}, day{Day: d + 4, HighC: 26, LowC: 16})
	typed(d+2, day{Day: d + 4, Cleared: true, HighC: math.NaN(), LowC: math.Inf(1)})
	typed(d-3, day{Day: d + 2, HighC: 1, LowC: 0}) // older, typed later
	for _, row := range []struct {
		asOf planner.Day
		want []day
	}{
		{d - 4, nil},
		{d - 1, []day{{Day: d + 2, HighC: 1, LowC: 0}}},
		{d, []day{{Day: d, HighC: 20, LowC: 10}, {Day: d + 1, HighC: 21, LowC: 11}, {Day: d + 2, HighC: 22, LowC: 12}}},
		{d + 1, []day{{Day: d + 1, HighC: 21, LowC: 11}, {Day: d + 2, HighC: 32, LowC: 12.5}, {Day: d + 4, HighC: 26, LowC: 16}}},
		{d + 2, []day{{Day: d + 2, HighC: 32, LowC: 12.5}}},
		{d + 3, nil},
	} {
		got, err := store.Ahead(t.Context(), g.site.ID, row.asOf)
		if err != nil {
			t.Fatal(err)
		}
		want(t, fmt.Sprintf("days ahead as of %s", row.asOf), got, row.want)
	}
	typed(d+2, day{Day: d + 4, HighC: 27, LowC: 17})
	got, err := store.Ahead(t.Context(), g.site.ID, d+3)
	if err != nil {
		t.Fatal(err)
	}
	want(t, "a cleared day typed again", got, []day{{Day: d + 4, HighC: 27, LowC: 17}})

	before := everything(t, store)
	for kind, days := range map[planner.Kind][][]day{
		planner.Missing: {nil},
		planner.Invalid: {
			{{Day: d + 5, HighC: 10, LowC: 5}, {Day: d - 1, HighC: 10, LowC: 5}}, {{Day: d + 1, HighC: 10, LowC: 11}},
			{{Day: d + 1, HighC: math.NaN(), LowC: 1}}, {{Day: d + 1, HighC: 70, LowC: 1}}, {{Day: planner.DayMax + 1, Cleared: true}},
		},
	} {
		for _, bad := range days {
			wantKind(t, store.SaveAhead(t.Context(), stamp(""), g.site.ID, d, bad), kind)
		}
	}
	want(t, "all after refused days ahead", everything(t, store), before)
}

func testFirstStation(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	site := save(t, store, newSite("Quillmere"))
	second := save(t, store, newStation(site.ID, "roof", 2))
	first := save(t, store, newStation(site.ID, "pond", 1))
	equal := save(t, store, newStation(site.ID, "mast", 1))
	facts := map[planner.StationID][]planner.DayFacts{}
	revisions := map[int64]bool{}
	for i, station := range []planner.Station{second, first, equal} {
		readings := hourly(lateJune+planner.Day(i), i+2)
		load(t, store, station.ID, File{Readings: readings})
		facts[station.ID] = built(site, readings, nil)
	}
	check := func(ranked ...planner.Station) {
		t.Helper()
		got := record(t, store, site.ID)
		var all []planner.StationFacts
		for _, station := range ranked {
			all = append(all, planner.StationFacts{Name: station.Name, Facts: facts[station.ID]})
		}
		want(t, "the record", got.Facts, planner.JoinStations(all))
		if revisions[got.Revision] {
			t.Errorf("two stations' records have revision %d", got.Revision)
		}
		revisions[got.Revision] = true
	}
	check(first, equal, second)
	first.Rank = 3
	save(t, store, first)
	check(equal, second, first)
	equal.Archived = true
	save(t, store, equal)
	check(second, first)
}

func testRevision(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	g, other := newGround(t, store, "Quillmere"), newGround(t, store, "Ashby")
	seen := map[int64]string{0: "no station"}
	var now int64
	check := func(what string, moves bool) {
		t.Helper()
		got, err := store.Revision(t.Context(), g.site.ID)
		if err != nil {
			t.Fatal(err)
		}
		if alone := record(t, store, g.site.ID).Revision; alone != got {
			t.Errorf("%s: Revision is %d, that of the Record %d", what, got, alone)
		}
		if earlier, dup := seen[got]; moves && dup {
			t.Errorf("%s: the revision is the same as after %s", what, earlier)
		}
		if !moves && got != now {
			t.Errorf("%s: the revision moved", what)
		}
		seen[got], now = what, got
	}
	readings := hourly(lateJune, 2)
	check("a station", true)
	load(t, store, g.station.ID, File{Readings: readings})
	check("new readings", true)
	load(t, store, g.station.ID, File{Readings: readings})
	check("the same readings", false)
	load(t, store, g.station.ID, File{})
	check("an empty file", false)
	readings[7].C++
	load(t, store, g.station.ID, File{Readings: readings[7:8]})
	check("one changed reading", true)
	load(t, store, g.station.ID, File{Daily: []planner.DailyReading{{Day: lateJune, HighC: 30, LowC: 10}}})
	check("a daily reading", true)
	load(t, store, other.station.ID, File{Readings: readings})
	check("another site's readings", false)
	g.site.Rules = g.site.Rules.With(lateJune, civil)
	save(t, store, g.site)
	check("a day rule", true)
	g.site.Name = "Quillmere North"
	save(t, store, g.site)
	check("a new name of the site", false)
	g.station.Name = "shed"
	save(t, store, g.station)
	check("a new name of the station", true)
	g.site.Zone = "America/Chicago"
	save(t, store, g.site)
	check("another zone", true)
	save(t, store, newStation(g.site.ID, "mast", 2))
	check("a second station", true)
	g.station.Rank = 3
	save(t, store, g.station)
	check("the second station first", true)
}

func testDayRules(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	site := newSite("Quillmere")
	site.Rules = planner.Dated[planner.DayRule]{{Day: lateJune, Value: standard}}
	site = save(t, store, site)
	station := save(t, store, newStation(site.ID, "roof", 1))
	dropped := save(t, store, newStation(site.ID, "pond", 2))
	readings := hourly(midMay, 270) // more than is built at once
	daily := []planner.DailyReading{{Day: midMay - 30, HighC: 20, LowC: 10}}
	load(t, store, station.ID, File{Readings: readings, Daily: daily})
	load(t, store, dropped.ID, File{Readings: readings[:100]})
	dropped.Archived = true
	save(t, store, dropped)
	for _, step := range []struct {
		name string
		edit func()
	}{
		{"a later rule", func() { site.Rules = site.Rules.With(lateJune+20, byHand) }},
		{"a rule between", func() { site.Rules = site.Rules.With(lateJune+10, civil) }},
		{"another of the same day", func() { site.Rules = site.Rules.With(lateJune+10, byHand) }},
		{"a rule before the first", func() { site.Rules = site.Rules.With(midMay+5, byHand) }},
		{"two at once", func() { site.Rules = site.Rules.With(lateJune+30, civil).With(lateJune+60, standard) }},
		{"another zone", func() { site.Zone = "Europe/Dublin" }},
	} {
		before := record(t, store, site.ID)
		step.edit()
		save(t, store, site)
		after := record(t, store, site.ID)
		want(t, "the record with "+step.name, after.Facts, built(site, readings, daily))
		if cmp.Equal(before.Facts, after.Facts) {
			t.Errorf("%s moved nothing: the check checks nothing", step.name)
		}
	}
	dropped.Archived, station.Archived = false, true
	save(t, store, dropped)
	save(t, store, station)
	want(t, "the record of a station that came back", record(t, store, site.ID).Facts, built(site, readings[:100], nil))
}

func testWriters(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	g := newGround(t, store, "Quillmere")
	readings := hourly(lateJune, 40)
	const each = 10
	var group sync.WaitGroup
	var mutex sync.Mutex
	var problems []error
	do := func(call func() error) {
		if err := call(); err != nil {
			mutex.Lock()
			defer mutex.Unlock()
			problems = append(problems, err)
		}
	}
	for worker := range 4 {
		group.Go(func() {
			for i := range each {
				do(func() error {
					_, err := store.Save(t.Context(), stamp(""), newSurface(g.site.ID, fmt.Sprintf("pitch %d-%d", worker, i)))
					return err
				})
				part := readings[(worker*each+i)*24:][:24]
				do(func() error {
					_, err := store.Import(t.Context(), stamp(""), g.station.ID, File{Readings: part})
					return err
				})
				do(func() error { _, err := store.Setup(t.Context()); return err })
				do(func() error { _, err := store.Record(t.Context(), g.site.ID); return err })
			}
		})
	}
	group.Wait()
	if err := errors.Join(problems...); err != nil {
		t.Fatal(err)
	}
	ids := map[planner.SurfaceID]bool{}
	for _, surface := range setup(t, store).Surfaces {
		ids[surface.ID] = true
	}
	if len(ids) != 4*each+1 {
		t.Errorf("%d surfaces are kept of %d saved", len(ids), 4*each+1)
	}
	want(t, "the record", record(t, store, g.site.ID).Facts, built(g.site, readings, nil))
}

func testEndedContext(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	g := newGround(t, store, "Quillmere")
	before := everything(t, store)
	ended, end := context.WithCancel(t.Context())
	end()
	_, saveErr := store.Save(ended, stamp(""), newSite("Ashby"))
	_, importErr := store.Import(ended, stamp(""), g.station.ID, File{Readings: hourly(lateJune, 2)})
	aheadErr := store.SaveAhead(ended, stamp(""), g.site.ID, lateJune, []planner.HandDay{{Day: lateJune, HighC: 2, LowC: 1}})
	_, setupErr := store.Setup(ended)
	for i, err := range []error{saveErr, importErr, aheadErr, setupErr} {
		if !errors.Is(err, context.Canceled) {
			t.Errorf("call %d: error %v, want context.Canceled", i, err)
		}
	}
	want(t, "all after the ended calls", everything(t, store), before)
	if surfaces := setup(t, store).Surfaces; !slices.Equal([]planner.SurfaceID{g.surface.ID}, []planner.SurfaceID{surfaces[0].ID}) {
		t.Error("the store does not go on after an ended call")
	}
}
