package storetest

import (
	"math"
	"testing"
	"time"

	"swardbook/calc"
	"swardbook/planner"
)

// ground is a small set-up.
type ground struct {
	site    planner.Site
	station planner.Station
	surface planner.Surface
	work    planner.Work
	total   planner.Total
	closed  planner.Closed
}

func newGround(t *testing.T, store Store, name string) ground {
	t.Helper()
	var g ground
	g.site = save(t, store, newSite(name))
	g.station = save(t, store, newStation(g.site.ID, "roof", 1))
	g.surface = save(t, store, newSurface(g.site.ID, "greens"))
	g.work = save(t, store, newWork(g.surface.ID, "regulator"))
	g.total = save(t, store, newTotal(g.site.ID, "growth"))
	g.closed = save(t, store, newClosed(g.site.ID, "derby", g.work.ID))
	return g
}

func testIDs(t *testing.T, newTeam func(string) Store) {
	one, two := newTeam("one"), newTeam("two")
	for _, store := range []Store{one, two} {
		site := save(t, store, newSite("Quillmere"))
		surface := save(t, store, newSurface(site.ID, "greens"))
		if site.ID != 1 || surface.ID != 1 {
			t.Errorf("the first ids of a team are %d and %d, want 1", site.ID, surface.ID)
		}
	}
	seen := map[planner.SurfaceID]bool{1: true}
	for range 3 {
		refuse(t, one, planner.Taken, newSurface(1, "Greens"))
		surface := save(t, one, newSurface(1, "tees"))
		if surface.ID == 0 || seen[surface.ID] {
			t.Errorf("id %d was given twice", surface.ID)
		}
		seen[surface.ID] = true
		surface.Archived = true
		if dropped := save(t, one, surface); dropped.ID != surface.ID {
			t.Errorf("dropping surface %d gave it id %d", surface.ID, dropped.ID)
		}
	}
}

func testSetup(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	want(t, "Setup of an empty team", setup(t, store), planner.Setup{})
	first := newGround(t, store, "Quillmere")
	second := newGround(t, store, "Ashby 2")

	second = withEveryField(second)
	want(t, "the saved site", save(t, store, second.site), second.site)
	want(t, "the saved station", save(t, store, second.station), second.station)
	want(t, "the saved surface", save(t, store, second.surface), second.surface)
	want(t, "the saved work", save(t, store, second.work), second.work)
	want(t, "the saved total", save(t, store, second.total), second.total)
	mow := save(t, store, newWork(second.surface.ID, "mow"))
	second.closed.Works = []planner.WorkID{mow.ID, second.work.ID}
	want(t, "the saved closed days", save(t, store, second.closed), second.closed)
	entry := newEntry(second.site.ID, lateJune, mow.ID, second.work.ID)
	entry.Result, entry.Clock, entry.Watered, entry.RainCounts, entry.ByID = planner.Doubtful, "06:10", lateJune+1, true, "300000000000000002"
	entry.Passes[1] = planner.Pass{Work: second.work.ID, NitrogenGM2: 2.94, Part: 1, Share: 0.625, SlowShare: 0.4, SlowWeeks: 8.5,
		Rate: planner.Rate{Kind: planner.MassRate, Value: 14, NPercent: 21}}
	entry = save(t, store, entry)
	want(t, "the log", log(t, store, second.site.ID), []planner.Entry{entry})
	everyField(t, []planner.Noun{second.site, second.station, second.surface, second.work, second.total, second.closed, entry})
	want(t, "Setup", setup(t, store), planner.Setup{
		Sites:    []planner.Site{first.site, second.site},
		Stations: []planner.Station{first.station, second.station},
		Surfaces: []planner.Surface{first.surface, second.surface},
		Works:    []planner.Work{first.work, second.work, mow},
		Totals:   []planner.Total{first.total, second.total},
		Closed:   []planner.Closed{first.closed, second.closed},
	})

	// What is kept as a list may be shortened and emptied.
	second.surface.Parts, second.total.Marks, second.closed.Works = nil, second.total.Marks[1:], second.closed.Works[:1]
	save(t, store, second.surface)
	save(t, store, second.total)
	save(t, store, second.closed)
	shorter := setup(t, store)
	want(t, "the surface without parts", shorter.Surfaces[1], second.surface)
	want(t, "the total with fewer marks", shorter.Totals[1], second.total)
	want(t, "the closed days of fewer works", shorter.Closed[1], second.closed)
}

// withEveryField sets every field of the nouns, at values that show a slip: no
// two alike, none its zero.
func withEveryField(g ground) ground {
	g.site.Name, g.site.Lat, g.site.Lon, g.site.Zone, g.site.Units = "Aldermoor", -33.5, 151.25, "Australia/Sydney", planner.Celsius
	g.site.Rules = g.site.Rules.With(lateJune, planner.DayRule{OffsetSeconds: 36000, Boundary: planner.FixedHour, ClosingHour: 9, FirstSlot: 1})
	g.station.Name, g.station.Rank = "by the pond", 7
	g.surface.Name, g.surface.AreaM2 = "Pitch 2", 7140.5
	g.surface.Parts = []planner.Part{{ID: 1, Name: "north half", Share: 0.625}, {ID: 2, Name: "south half", Share: 0.375}, {ID: 3, Name: "nursery", Share: 0.5, Dropped: true}}
	g.surface.Turf = g.surface.Turf.With(lateJune, planner.Turf{Grass: "own",
		Curve: calc.GrowthCurve{OptimumC: 25.1, WidthC: 6.3, HeldAbove: true}, CeilingGM2: 4.7, BudgetGM2: 17.3})
	g.work.Name = "feed"
	g.work.Settings = g.work.Settings.With(lateJune, planner.WorkSettings{
		Counting: planner.Counting{Counts: planner.ByNitrogen}, Target: 0.1, Basis: planner.Midrange,
		Limits:    planner.Limits{LeastDays: 14, MostTimes: 6, MostTotal: 18.5},
		Season:    planner.WorkSeason{From: planner.MonthDay{Month: time.April, Day: 2}, To: planner.MonthDay{Month: time.October, Day: 31}, Resting: true, StartsEmpty: true},
		Origin:    planner.Origin{Source: "own trials", Ingredient: "urea", Grass: "bent", HeightMM: 3.2},
		WateredIn: true, RainFreeHours: 4.5,
	})
	g.total.Name = "gdd 10"
	g.total.Marks = []planner.Mark{{Name: "first spray", At: 120.5}, {Name: "second", At: 90}}
	g.total.Settings = g.total.Settings.With(lateJune, planner.TotalSettings{
		Counting: planner.Counting{Counts: planner.ByDegreeDays, Method: calc.MethodDoubleTriangle,
			Thresholds: calc.Thresholds{LowerC: 10.1, UpperC: 29.7, Cutoff: calc.CutoffVertical}},
		Curve: calc.GrowthCurve{OptimumC: 26.3, WidthC: 6.1, HeldAbove: true},
		Start: planner.MonthDay{Month: time.November, Day: 30}})
	g.closed.Name, g.closed.From, g.closed.To = "reseeding", midMay+1, lateJune+2
	return g
}

func testArchived(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	g := newGround(t, store, "Quillmere")
	whole := setup(t, store)

	archived := g.surface
	archived.Archived = true
	save(t, store, archived)
	noSurface := whole
	noSurface.Surfaces, noSurface.Works = nil, nil
	want(t, "Setup without the surface", setup(t, store), noSurface)
	want(t, "Dropped: the surface, not what is under it", dropped(t, store), planner.Setup{Surfaces: []planner.Surface{archived}})
	save(t, store, g.surface)
	want(t, "Setup with the surface again", setup(t, store), whole)

	site := g.site
	site.Archived = true
	save(t, store, site)
	want(t, "Setup without the site", setup(t, store), planner.Setup{})
	want(t, "Dropped: the site, not what is under it", dropped(t, store), planner.Setup{Sites: []planner.Site{site}})
	save(t, store, g.site)
	want(t, "Setup with the site again", setup(t, store), whole)
	want(t, "Dropped, once all is back", dropped(t, store), planner.Setup{})

	station, work, total, closed := g.station, g.work, g.total, g.closed
	station.Archived, work.Archived, total.Archived, closed.Archived = true, true, true, true
	save(t, store, station)
	save(t, store, work)
	save(t, store, total)
	save(t, store, closed)
	want(t, "Setup without what is under them", setup(t, store),
		planner.Setup{Sites: whole.Sites, Surfaces: whole.Surfaces, Dropped: []planner.Work{work}})
	want(t, "Dropped: the work", dropped(t, store), planner.Setup{Works: []planner.Work{work}})
}

func testNames(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	g := newGround(t, store, "North End")
	other := newGround(t, store, "South End") // the same names under another site
	refuse(t, store, planner.Taken, newSite("north-end"))
	refuse(t, store, planner.Taken, newStation(g.site.ID, "ROOF", 2))
	refuse(t, store, planner.Taken, newSurface(g.site.ID, "Greens"))
	refuse(t, store, planner.Taken, newWork(g.surface.ID, "Regulator"))
	refuse(t, store, planner.Taken, newTotal(g.site.ID, "GROWTH"))
	refuse(t, store, planner.Taken, newClosed(g.site.ID, "Derby"))
	_, err := store.Save(t.Context(), stamp(""), newSurface(g.site.ID, "greens"))
	if err == nil || err.Error() != "greens is already a surface of North End" {
		t.Errorf("the problem of a taken name reads %q", err)
	}
	renamed := other.site
	renamed.Name = "North END"
	refuse(t, store, planner.Taken, renamed)

	recased := g.surface
	recased.Name = "GREENS" // its own name is not in its way
	save(t, store, recased)
	recased.Archived = true
	save(t, store, recased)
	successor := save(t, store, newSurface(g.site.ID, "greens"))
	if successor.ID == g.surface.ID {
		t.Error("a new surface has a dropped one's id")
	}
	refuse(t, store, planner.Taken, g.surface) // coming back
}

func testParents(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	g, other := newGround(t, store, "Quillmere"), newGround(t, store, "Ashby")
	const none = 99
	for _, noun := range []planner.Noun{
		newStation(none, "mast", 1), newSurface(none, "tees"), newWork(none, "cut"), newTotal(none, "heat"), newClosed(none, "match"),
		newClosed(g.site.ID, "match", none), newClosed(g.site.ID, "match", g.work.ID, other.work.ID),
		newEntry(none, lateJune, g.work.ID), newEntry(g.site.ID, lateJune, none), newEntry(g.site.ID, lateJune, other.work.ID),
		planner.Site{ID: none, Name: "Nowhere", Zone: "UTC", Units: planner.Celsius, Rules: planner.Always(standard)},
		planner.Station{ID: none, Site: g.site.ID, Name: "mast", Rank: 1},
	} {
		refuse(t, store, planner.NotFound, noun)
	}
	closed := g.closed
	closed.Site, closed.Works, closed.Name = other.site.ID, nil, "e"
	station, surface, work, total := g.station, g.surface, g.work, g.total
	station.Site, surface.Site, work.Surface, total.Site = other.site.ID, other.site.ID, other.surface.ID, other.site.ID
	surface.Name, station.Name, work.Name, total.Name = "a", "b", "c", "d"
	entry := save(t, store, newEntry(g.site.ID, lateJune, g.work.ID))
	entry.Site, entry.Passes = other.site.ID, []planner.Pass{{Work: other.work.ID}}
	for _, noun := range []planner.Noun{station, surface, work, total, closed, entry} {
		refuse(t, store, planner.Invalid, noun)
	}

	archived := g.surface
	archived.Archived = true
	save(t, store, archived)
	refuse(t, store, planner.NotFound, newWork(g.surface.ID, "cut"))
	refuse(t, store, planner.NotFound, newEntry(g.site.ID, lateJune, g.work.ID))
	site := g.site
	site.Archived = true
	save(t, store, site)
	refuse(t, store, planner.NotFound, newStation(g.site.ID, "mast", 1))
	refuse(t, store, planner.NotFound, newSurface(g.site.ID, "tees"))
	refuse(t, store, planner.NotFound, newTotal(g.site.ID, "heat"))
	refuse(t, store, planner.NotFound, newClosed(g.site.ID, "match"))
	refuse(t, store, planner.NotFound, newWork(g.surface.ID, "cut"))
	refuse(t, store, planner.NotFound, newEntry(g.site.ID, lateJune, g.work.ID))
	_, err := store.Import(t.Context(), stamp(""), g.station.ID, File{})
	wantKind(t, err, planner.NotFound)
	wantKind(t, store.SaveAhead(t.Context(), stamp(""), g.site.ID, lateJune, []planner.HandDay{{Day: lateJune}}), planner.NotFound)
}

func testChecks(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	g := newGround(t, store, "Quillmere")
	nameless, unread := newSite(" "), newTotal(g.site.ID, "heat")
	refuse(t, store, planner.Invalid, nameless)
	refuse(t, store, planner.Invalid, planner.Work{Surface: g.surface.ID, Name: "cut"})
	refuse(t, store, planner.Internal, nil)
	refuse(t, store, planner.Internal, (*planner.Site)(nil))
	// A curve that a total of degree days does not read is not checked.
	unread.Settings = planner.Always(planner.TotalSettings{Counting: planner.Counting{Counts: planner.ByDegreeDays},
		Curve: calc.GrowthCurve{OptimumC: math.NaN()}})
	refuse(t, store, planner.Invalid, unread)
}

func testSettings(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	g := newGround(t, store, "Quillmere")
	work := g.work
	for i, day := range []planner.Day{lateJune, midMay, lateJune, lateJune} {
		work.Settings = work.Settings.With(day, degreeDays(float64(210+i)))
		work = save(t, store, work)
	}
	want(t, "the settings in order of day, then of adding", setup(t, store).Works[0].Settings, planner.Dated[planner.WorkSettings]{
		{Day: planner.DayMin, Value: degreeDays(200)}, {Day: midMay, Value: degreeDays(211)},
		{Day: lateJune, Value: degreeDays(210)}, {Day: lateJune, Value: degreeDays(212)}, {Day: lateJune, Value: degreeDays(213)},
	})
	edit := func(change func(planner.Dated[planner.WorkSettings]) planner.Dated[planner.WorkSettings]) planner.Work {
		edited := work
		edited.Settings = change(append(planner.Dated[planner.WorkSettings]{}, work.Settings...))
		return edited
	}
	type settings = planner.Dated[planner.WorkSettings]
	for _, edited := range []planner.Work{
		edit(func(s settings) settings { return s[1:] }),
		edit(func(s settings) settings { return s[:len(s)-1] }),
		edit(func(s settings) settings { s[1].Value.Target++; return s }),
		edit(func(s settings) settings { s[1].Day++; return s }),
		edit(func(s settings) settings { s[2], s[3] = s[3], s[2]; return s }),
		edit(func(s settings) settings {
			return append(s, planner.From[planner.WorkSettings]{Day: midMay, Value: degreeDays(5)})
		}),
		edit(func(s settings) settings { return append(settings{{Day: planner.DayMin, Value: degreeDays(5)}}, s...) }),
	} {
		refuse(t, store, planner.Invalid, edited)
	}
	site, surface, total := g.site, g.surface, g.total
	site.Rules, surface.Turf = planner.Always(civil), surface.Turf.With(lateJune, surface.Turf[0].Value)[1:]
	total.Settings = planner.Always(planner.TotalSettings{Counting: planner.Counting{Counts: planner.ByGrowthDays}, Curve: calc.CoolSeason()})
	for _, edited := range []planner.Noun{site, surface, total} {
		refuse(t, store, planner.Invalid, edited)
	}
}

func testEntries(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	g := newGround(t, store, "Quillmere")
	feed, cut := save(t, store, newWork(g.surface.ID, "feed")), save(t, store, newWork(g.surface.ID, "cut"))
	late := save(t, store, newEntry(g.site.ID, lateJune, g.work.ID))
	early := save(t, store, newEntry(g.site.ID, midMay, feed.ID, cut.ID, g.work.ID))
	again := save(t, store, newEntry(g.site.ID, midMay, g.work.ID))
	if want := time.Date(2024, time.June, 4, 5, 6, 7, 0, time.UTC); !late.At.Equal(want) {
		t.Errorf("an entry's time is kept as %v, want whole seconds %v", late.At, want)
	}
	want(t, "the log", log(t, store, g.site.ID), []planner.Entry{early, again, late})

	feed.Archived = true
	save(t, store, feed)
	early.Passes, early.Note = []planner.Pass{{Work: g.work.ID, NitrogenGM2: 0.1}, {Work: feed.ID}}, ""
	early.Day, early.By = lateJune+1, "Kim"
	want(t, "an amended entry", save(t, store, early), early)
	want(t, "the log amended", log(t, store, g.site.ID), []planner.Entry{again, late, early})
	refuse(t, store, planner.NotFound, newEntry(g.site.ID, lateJune, feed.ID))
	refuse(t, store, planner.Invalid, newEntry(g.site.ID, lateJune, cut.ID, cut.ID))

	again.Undone = true
	save(t, store, again)
	want(t, "the log with one undone", log(t, store, g.site.ID), []planner.Entry{late, early})
	again.Undone = false
	save(t, store, again)
	want(t, "the log with it back", log(t, store, g.site.ID), []planner.Entry{again, late, early})
	want(t, "the log of no site", log(t, store, 99), nil)
}

func testChanges(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	g := newGround(t, store, "Quillmere")
	entry := save(t, store, newEntry(g.site.ID, lateJune, g.work.ID))
	entry.Undone = true
	undo := stamp("/log undo")
	undo.By, undo.Undoes = "Kim", 7
	if _, err := store.Save(t.Context(), undo, entry); err != nil {
		t.Fatal(err)
	}
	changes, err := store.Changes(t.Context(), "", 100)
	if err != nil {
		t.Fatal(err)
	}
	kept := entry
	kept.Undone = false
	row := func(id planner.ChangeID, noun planner.Noun) planner.Change {
		s := stamp("/setup")
		s.At = s.At.Truncate(time.Second)
		return planner.Change{ID: id, Stamp: s, Kind: noun.Kind(), Thing: noun.Key(), After: noun}
	}
	last := row(8, entry)
	last.By, last.Command, last.Undoes, last.Before = undo.By, undo.Command, undo.Undoes, kept
	all := []planner.Change{last, row(7, kept), row(6, g.closed), row(5, g.total), row(4, g.work), row(3, g.surface), row(2, g.station), row(1, g.site)}
	want(t, "all changes", changes, all)
	for _, limited := range []struct {
		kind  string
		limit int
		want  []planner.Change
	}{
		{"", 2, all[:2]}, {"entry", 1, all[:1]}, {"entry", 9, all[:2]}, {"site", 9, all[7:]}, {"closed", 9, all[2:3]}, {"plan", 9, nil}, {"", 0, nil}, {"", -1, nil},
	} {
		got, err := store.Changes(t.Context(), limited.kind, limited.limit)
		if err != nil {
			t.Fatal(err)
		}
		want(t, "limited changes", got, limited.want)
	}
	undo.Undoes = 99
	_, err = store.Save(t.Context(), undo, kept)
	wantKind(t, err, planner.NotFound)

	// Weather leaves a row too, without a noun.
	if _, err := store.Import(t.Context(), stamp("/weather file"), g.station.ID, File{Readings: hourly(lateJune, 1)}); err != nil {
		t.Fatal(err)
	}
	if err := store.SaveAhead(t.Context(), stamp("/weather ahead"), g.site.ID, lateJune, []planner.HandDay{{Day: lateJune, HighC: 20, LowC: 10}}); err != nil {
		t.Fatal(err)
	}
	changes, err = store.Changes(t.Context(), "", 2)
	if err != nil || len(changes) != 2 {
		t.Fatalf("changes of weather: %v, %v", changes, err)
	}
	for i, want := range []string{"/weather ahead", "/weather file"} {
		if c := changes[i]; c.Command != want || c.Before != nil || c.After != nil {
			t.Errorf("change %d is %+v, want one of %s without nouns", i, c, want)
		}
	}
}
