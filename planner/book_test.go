package planner_test

import (
	"context"
	"errors"
	"io"
	"reflect"
	"strings"
	"sync"
	"testing"

	"swardbook/calc"
	"swardbook/planner"
)

// shelf is the least that a Book stands on: a set-up, a log, a record. It holds
// to the contracts of the interfaces only as far as the tests below ask.
type shelf struct {
	mu      sync.Mutex
	setup   planner.Setup
	entries []planner.Entry
	changes []planner.Change
	saved   []planner.Noun
	stamps  []planner.Stamp

	record planner.Record
	loads  int
	hand   []planner.HandDay
	asked  planner.Day // of Ahead
	rain   []planner.Rain
	// what Rain was asked for
	rainFrom, rainTo int64

	imported planner.ImportRequest
	facts    []planner.DayFacts // what an import brings
	fails    map[string]error   // by method
	nextID   int64
}

func (s *shelf) Setup(context.Context) (planner.Setup, error) { return s.setup, s.fails["Setup"] }

func (s *shelf) Dropped(context.Context) (planner.Setup, error) { return planner.Setup{}, nil }

func (s *shelf) Entries(context.Context, planner.SiteID) ([]planner.Entry, error) {
	return s.entries, s.fails["Entries"]
}

func (s *shelf) Changes(_ context.Context, kind string, limit int) ([]planner.Change, error) {
	var changes []planner.Change
	for _, change := range s.changes {
		if kind == "" || change.Kind == kind {
			changes = append(changes, change)
		}
	}
	return changes[:min(limit, len(changes))], s.fails["Changes"]
}

func (s *shelf) Save(_ context.Context, stamp planner.Stamp, noun planner.Noun) (planner.Noun, error) {
	if err := s.fails["Save "+noun.Kind()]; err != nil {
		return nil, err
	}
	if err := noun.Check(); err != nil {
		return nil, err
	}
	switch n := noun.(type) {
	case planner.Station:
		s.nextID++
		n.ID = planner.StationID(s.nextID)
		noun = n
	case planner.Work:
		for i := range s.setup.Works {
			if s.setup.Works[i].ID == n.ID {
				s.setup.Works[i] = n
			}
		}
	}
	s.saved, s.stamps = append(s.saved, noun), append(s.stamps, stamp)
	return noun, nil
}

func (s *shelf) Record(context.Context, planner.SiteID) (planner.Record, error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.loads++
	return s.record, s.fails["Record"]
}

func (s *shelf) Revision(context.Context, planner.SiteID) (int64, error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.record.Revision, s.fails["Revision"]
}

func (s *shelf) SaveAhead(_ context.Context, _ planner.Stamp, _ planner.SiteID, _ planner.Day, days []planner.HandDay) error {
	s.hand = append(s.hand, days...)
	return s.fails["SaveAhead"]
}

func (s *shelf) Ahead(_ context.Context, _ planner.SiteID, asOf planner.Day) ([]planner.HandDay, error) {
	s.asked = asOf
	return s.hand, s.fails["Ahead"]
}

func (s *shelf) Rain(_ context.Context, _ planner.SiteID, from, to int64) ([]planner.Rain, error) {
	s.rainFrom, s.rainTo = from, to
	return s.rain, s.fails["Rain"]
}

func (s *shelf) Import(_ context.Context, request planner.ImportRequest) (planner.ImportReport, error) {
	s.imported = request
	if err := s.fails["Import"]; err != nil {
		return planner.ImportReport{}, err
	}
	s.record = planner.Record{Facts: s.facts, Revision: s.record.Revision + 1}
	station := request.Station
	if station == 0 {
		s.nextID++
		station = planner.StationID(s.nextID)
	}
	return planner.ImportReport{Rows: 48, New: 40, Changed: 3, Same: 2, Refused: 3, Station: station}, nil
}

// The rows say whether an entry is the person's own: by the id, whatever the
// names; by the name where the entry is too old to have an id.
func TestOwnEntry(t *testing.T) {
	sasha := planner.Person{ID: "7", Name: "Sasha"}
	for _, row := range []struct {
		name  string
		entry planner.Entry
		own   bool
	}{
		{"their own", planner.Entry{By: "Sasha", ByID: "7"}, true},
		{"under an earlier name", planner.Entry{By: "Sash", ByID: "7"}, true},
		{"another one of that name", planner.Entry{By: "Sasha", ByID: "8"}, false},
		{"an old entry", planner.Entry{By: "Sasha"}, true},
		{"an old entry of another one", planner.Entry{By: "Kim"}, false},
		{"nobody's", planner.Entry{}, false},
	} {
		entry := done(1, 1, 0)
		entry.ID, entry.By, entry.ByID = 4, row.entry.By, row.entry.ByID
		_, err := bookOf(&shelf{entries: []planner.Entry{entry}}).Entry(t.Context(), 1, 4, sasha, false)
		if got := err == nil; got != row.own || entry.LoggedBy(sasha) != row.own {
			t.Errorf("%s: %v", row.name, err)
		}
	}
	if (planner.Entry{By: ""}).LoggedBy(planner.Person{}) {
		t.Error("an entry of nobody is somebody's")
	}
}

// seen is an Ahead that shows what it was given.
type seen struct{}

func (seen) Outlook(record planner.Record, hand []planner.HandDay, asOf planner.Day) planner.Outlook {
	return planner.Outlook{AsOf: asOf, Typed: len(hand), Path: record.Facts}
}

func bookOf(s *shelf) *planner.Book { return planner.NewBook(s, s, s, seen{}) }

var ash = planner.Stamp{By: "Ash", Command: "/test"}

func TestBookKeepsTheRecord(t *testing.T) {
	s := &shelf{record: planner.Record{Facts: flat(0, 1, 2), Revision: 1}}
	book := bookOf(s)
	for _, row := range []struct {
		revision int64
		site     planner.SiteID
		loads    int
	}{{1, 1, 1}, {1, 1, 1}, {2, 1, 2}, {2, 1, 2}, {2, 2, 3}, {2, 1, 3}, {1, 1, 4}} {
		s.record.Revision = row.revision
		record, err := book.Record(t.Context(), row.site)
		if err != nil || !reflect.DeepEqual(record, s.record) || s.loads != row.loads {
			t.Errorf("site %d at revision %d: %d loads, %v; want %d", row.site, row.revision, s.loads, err, row.loads)
		}
	}
	var all sync.WaitGroup
	for range 8 {
		all.Go(func() {
			if _, err := book.Record(t.Context(), 1); err != nil {
				t.Error(err)
			}
		})
	}
	all.Wait()
}

// What goes wrong below comes up with its step and its kind.
func TestBookPassesErrorsOn(t *testing.T) {
	busy := planner.Problemf(planner.Busy, "somebody else holds the store")
	for method, call := range map[string]func(*planner.Book) error{
		"Setup":    func(b *planner.Book) error { _, err := b.Plan(t.Context(), quillmere(), 5, 5); return err },
		"Revision": func(b *planner.Book) error { _, err := b.Plan(t.Context(), quillmere(), 5, 5); return err },
		"Record":   func(b *planner.Book) error { _, err := b.DefaultMean(t.Context(), 1); return err },
		"Entries":  func(b *planner.Book) error { _, err := b.Plan(t.Context(), quillmere(), 5, 5); return err },
		"Ahead":    func(b *planner.Book) error { _, err := b.Plan(t.Context(), quillmere(), 5, 5); return err },
		"Changes": func(b *planner.Book) error {
			_, err := b.UndoEntry(t.Context(), ash, planner.Person{}, 1, 0, true)
			return err
		},
		"Save entry": func(b *planner.Book) error {
			_, err := b.UndoEntry(t.Context(), ash, planner.Person{}, 1, 0, true)
			return err
		},
		"Import": func(b *planner.Book) error {
			_, err := b.Import(t.Context(), quillmere(), "", planner.ImportRequest{FileName: "a.csv"})
			return err
		},
		"SaveAhead": func(b *planner.Book) error { return b.SaveAhead(t.Context(), ash, 1, 5, nil) },
	} {
		s := &shelf{entries: []planner.Entry{done(1, 1, 0)}, fails: map[string]error{method: busy}, record: planner.Record{Revision: 4}}
		if err := call(bookOf(s)); !errors.Is(err, busy) || planner.KindOf(err) != planner.Busy {
			t.Errorf("%s: %v", method, err)
		}
	}
}

func TestBookPlan(t *testing.T) {
	today := date("2024-06-10")
	other := done(today-3, 9, 0)
	s := &shelf{
		setup:   grounds(),
		record:  planner.Record{Facts: flat(today-5, 1, 2, 3, 4, 5, 6, 7), Revision: 3},
		entries: []planner.Entry{other, done(today-2, 1, 0), done(today-1, 1, 0), done(today, 1, 0), done(today+1, 1, 0)},
		hand:    []planner.HandDay{{Day: today, HighC: 20, LowC: 10}},
	}
	for _, row := range []struct {
		name           string
		asOf           planner.Day
		entries, facts int
	}{
		{"today: the morning's own entries count", today, 4, 5},
		{"a past morning: they do not", today - 1, 2, 4},
		{"two mornings ago", today - 2, 1, 3},
		{"before the record", today - 9, 0, 0},
		{"ahead of today", today + 1, 4, 6},
	} {
		plan, err := bookOf(s).Plan(t.Context(), quillmere(), row.asOf, today)
		if err != nil {
			t.Fatal(err)
		}
		if len(plan.Log) != row.entries || len(plan.Record.Facts) != row.facts || plan.AsOf != row.asOf {
			t.Errorf("%s: %d entries, %d days; want %d, %d", row.name, len(plan.Log), len(plan.Record.Facts), row.entries, row.facts)
		}
		for _, facts := range append(plan.Record.Facts, plan.Outlook.Path...) { // the fake Ahead shows what it was given
			if facts.Day >= row.asOf {
				t.Errorf("%s looks at %s", row.name, facts.Day)
			}
		}
		if s.asked != row.asOf || plan.Outlook.AsOf != row.asOf || plan.Outlook.Typed != 1 {
			t.Errorf("%s: typed days of %s, outlook %+v", row.name, s.asked, plan.Outlook)
		}
		if len(plan.Surfaces) != 2 || len(plan.Works) != 3 || len(plan.Totals) != 1 {
			t.Errorf("%s: another site's things are among %+v, %+v, %+v", row.name, plan.Surfaces, plan.Works, plan.Totals)
		}
	}
	if len(s.record.Facts) != 7 || len(s.entries) != 5 {
		t.Error("planning changed what is kept")
	}
}

// A past morning counts by the settings that held then.
func TestPastMorningOnItsSettings(t *testing.T) {
	today := date("2024-06-10")
	s := &shelf{setup: planner.Setup{Surfaces: planOf(today, nil, times(9, 20)).Surfaces},
		record: planner.Record{Facts: flat(today-20, times(20, 20)...), Revision: 1}, entries: []planner.Entry{done(today-15, 1, 0)}}
	work := regulator(100)
	work.Settings = work.Settings.With(today-4, degreeDays(900))
	s.setup.Works = []planner.Work{work}
	for asOf, target := range map[planner.Day]float64{today: 900, today - 4: 900, today - 5: 100} {
		plan, err := bookOf(s).Plan(t.Context(), quillmere(), asOf, today)
		if err != nil {
			t.Fatal(err)
		}
		if facts, ok := evaluate(t, plan).Works[0].OwnFacts(); !ok || facts.Target != target {
			t.Errorf("%s counts to %g, want %g", asOf, facts.Target, target)
		}
	}
}

func TestUndoEntry(t *testing.T) {
	by := func(who string, id planner.EntryID, day planner.Day) planner.Entry {
		entry := done(day, 1, 0)
		entry.ID, entry.By = id, who
		return entry
	}
	entries := []planner.Entry{by("Ash", 4, 1), by("Ash", 1, 5), by("Bryn", 5, 6)} // number 4 was logged late, for day 1
	changes := []planner.Change{{ID: 12, Kind: "entry", Thing: 4}, {ID: 11, Kind: "work", Thing: 4}, {ID: 9, Kind: "entry", Thing: 4}, {ID: 8, Kind: "entry", Thing: 1}}
	for _, row := range []struct {
		name   string
		id     planner.EntryID
		anyone bool
		by     string
		want   planner.EntryID
		undoes planner.ChangeID
		kind   planner.Kind
	}{
		{"the newest logged of one's own", 0, false, "Ash", 4, 12, ""},
		{"by number", 1, false, "Ash", 1, 8, ""},
		{"somebody else's", 5, false, "Ash", 0, 0, planner.Forbidden},
		{"a lead: the newest of all", 0, true, "Ash", 5, 0, ""},
		{"a lead: somebody else's", 5, true, "Ash", 5, 0, ""},
		{"no such number", 77, false, "Ash", 0, 0, planner.NotFound},
		{"no such number, a lead", 77, true, "Ash", 0, 0, planner.NotFound},
		{"nothing of one's own", 0, false, "Cole", 0, 0, planner.NotFound},
	} {
		s := &shelf{entries: entries, changes: changes}
		stamp := planner.Stamp{By: row.by, Command: "/log undo"}
		entry, err := bookOf(s).UndoEntry(t.Context(), stamp, planner.Person{Name: row.by}, 1, row.id, row.anyone)
		if row.kind != "" {
			wantKind(t, row.name, err, row.kind)
			if s.saved != nil {
				t.Errorf("%s: kept %+v", row.name, s.saved)
			}
			continue
		}
		if err != nil || entry.ID != row.want || !entry.Undone || len(s.saved) != 1 || !reflect.DeepEqual(s.saved[0], planner.Noun(entry)) {
			t.Errorf("%s: %+v, %v, kept %+v; want entry %d", row.name, entry, err, s.saved, row.want)
			continue
		}
		stamp.Undoes = row.undoes
		if s.stamps[0] != stamp {
			t.Errorf("%s: stamped %+v, want %+v", row.name, s.stamps[0], stamp)
		}
	}
	if entries[0].Undone {
		t.Error("the log itself was changed")
	}
}

func TestSaveAheadRefuses(t *testing.T) {
	issued := date("2024-06-10")
	for _, row := range []struct {
		name string
		day  planner.HandDay
		good bool
	}{
		{"today", planner.HandDay{Day: issued, HighC: 20, LowC: 10}, true},
		{"ahead", planner.HandDay{Day: issued + 9, HighC: 20, LowC: 10}, true},
		{"cleared: values do not matter", planner.HandDay{Day: issued + 1, HighC: -500, Cleared: true}, true},
		{"past", planner.HandDay{Day: issued - 1, HighC: 20, LowC: 10}, false},
		{"high below low", planner.HandDay{Day: issued, HighC: 10, LowC: 20}, false},
		{"no temperature", planner.HandDay{Day: issued, HighC: missing, LowC: 20}, false},
		{"too hot", planner.HandDay{Day: issued, HighC: 90, LowC: 60}, false},
	} {
		s := &shelf{}
		err := bookOf(s).SaveAhead(t.Context(), ash, 1, issued, []planner.HandDay{{Day: issued, HighC: 1}, row.day})
		if row.good {
			if err != nil || len(s.hand) != 2 {
				t.Errorf("%s: %v", row.name, err)
			}
			continue
		}
		wantKind(t, row.name, err, planner.Invalid)
		if s.hand != nil {
			t.Errorf("%s: kept %+v, though one day was refused", row.name, s.hand)
		}
	}
}

func TestImportNamesTheStation(t *testing.T) {
	for _, row := range []struct{ file, name, want string }{
		{"roof.csv", "", "roof"},
		{"roof_2024-05.csv", "", "roof 2024 05"},
		{"greens.station.2024.csv", "", "greens"},
		{`C:\weather\North Pond.CSV`, "", "North Pond"},
		{"/home/ash/pond (1).txt", "", "pond 1"},
		{"../../etc/passwd", "", "passwd"},
		{".csv", "", "csv"},
		{"", "", "station"},
		{"...", "", "station"},
		{"!!!.csv", "", "station"},
		{strings.Repeat("abcdefgh ", 9) + ".csv", "", "abcdefgh abcdefgh abcdefgh abcde"},
		{strings.Repeat("x", 31) + " y.csv", "", strings.Repeat("x", 31)},
		{"Größe.csv", "", "Größe"},
		{"roof.csv", "north pond", "north pond"},
	} {
		s := &shelf{}
		got, err := bookOf(s).Import(t.Context(), quillmere(), row.name, planner.ImportRequest{Stamp: ash, FileName: row.file})
		if err != nil || got.Station.Name != row.want || got.Station.Rank != 1 || got.Station.Site != 1 || got.Station.ID == 0 ||
			s.imported.Station != 0 || s.imported.New.Name != row.want || s.saved != nil {
			t.Errorf("%q named %q: station %+v, %v; want %q", row.file, row.name, got.Station, err, row.want)
		}
	}
	s := &shelf{}
	_, err := bookOf(s).Import(t.Context(), quillmere(), "a/b", planner.ImportRequest{FileName: "roof.csv"})
	wantKind(t, "a name that cannot be used", err, planner.Invalid)
}

func TestImportIntoAStation(t *testing.T) {
	one := []planner.Station{{ID: 5, Site: 1, Name: "roof", Rank: 1}}
	two := append(one[:1:1], planner.Station{ID: 6, Site: 1, Name: "pond", Rank: 2})
	for _, row := range []struct {
		what     string
		stations []planner.Station
		name     string
		want     planner.StationID
		kind     planner.Kind
	}{
		{"the only one", one, "", 5, ""},
		{"by name", two, "POND", 6, ""},
		{"which of two", two, "", 0, planner.Missing},
		{"none of that name: no other is added", one, "pond", 0, planner.NotFound},
	} {
		s := &shelf{setup: planner.Setup{Stations: row.stations}}
		got, err := bookOf(s).Import(t.Context(), quillmere(), row.name, planner.ImportRequest{Stamp: ash, FileName: "x.csv", Content: io.LimitReader(nil, 0)})
		if row.kind != "" {
			wantKind(t, row.what, err, row.kind)
			continue
		}
		if err != nil || got.Station.ID != row.want || s.imported.Station != row.want || s.saved != nil || got.Report.Taken() != 45 {
			t.Errorf("%s: %+v, %v, kept %+v; want station %d", row.what, got, err, s.saved, row.want)
		}
	}
}

// A file that is refused leaves nothing behind: nothing was added for it, and a
// station that was there stays.
func TestRefusedImportLeavesNothing(t *testing.T) {
	refused := planner.Problemf(planner.Refused, "the header was not understood")
	s := &shelf{fails: map[string]error{"Import": refused}}
	got, err := bookOf(s).Import(t.Context(), quillmere(), "", planner.ImportRequest{Stamp: ash, FileName: "roof.csv"})
	if planner.KindOf(err) != planner.Refused || len(s.setup.Stations) != 0 || !reflect.DeepEqual(got, planner.Imported{}) {
		t.Errorf("%+v, %v; stations %+v", got, err, s.setup.Stations)
	}
	if s.saved != nil {
		t.Errorf("kept %+v", s.saved)
	}
	s = &shelf{fails: map[string]error{"Import": refused}, setup: planner.Setup{Stations: []planner.Station{{ID: 5, Site: 1, Name: "roof", Rank: 1}}}}
	if _, err := bookOf(s).Import(t.Context(), quillmere(), "", planner.ImportRequest{FileName: "roof.csv"}); planner.KindOf(err) != planner.Refused || s.saved != nil || len(s.setup.Stations) != 1 {
		t.Errorf("%v; kept %+v", err, s.saved)
	}
}

// Works without a mean of their own get one with the first weather; the setting
// is added beside the old one, of the same day.
func TestImportSettlesMeans(t *testing.T) {
	bare := func(settings planner.WorkSettings) planner.WorkSettings {
		settings.Basis = ""
		return settings
	}
	midrangeOnly := flat(0, 1, 2)
	for i := range midrangeOnly {
		midrangeOnly[i].HasHourly = false
	}
	for _, row := range []struct {
		name  string
		facts []planner.DayFacts
		want  planner.Basis
	}{{"hourly readings", flat(0, 1, 2), planner.Hourly}, {"daily ones", midrangeOnly, planner.Midrange}, {"an empty file", nil, ""}} {
		s := &shelf{facts: row.facts, setup: planner.Setup{
			Surfaces: []planner.Surface{{ID: greens, Site: 1, Name: "greens"}, {ID: 9, Site: 2, Name: "greens"}},
			Works: []planner.Work{
				workOn(greens, 1, "regulator", bare(degreeDays(200))),
				workOn(greens, 2, "settled", degreeDays(200)),
				workOn(greens, 3, "cut", planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByDays}, Target: 3}),
				workOn(greens, 4, "sine", planner.WorkSettings{Counting: countingBy(calc.MethodSingleSine, calc.Thresholds{}), Target: 200}),
				workOn(9, 5, "elsewhere", bare(degreeDays(200))),
				{ID: 6, Surface: greens, Name: "newer", Settings: planner.Dated[planner.WorkSettings]{
					{Day: 3, Value: degreeDays(100)}, {Day: 8, Value: bare(degreeDays(150))}}},
			},
		}}
		book := bookOf(s)
		got, err := book.Import(t.Context(), quillmere(), "", planner.ImportRequest{Stamp: ash, FileName: "roof.csv"})
		if err != nil {
			t.Fatal(err)
		}
		var settled []planner.WorkID
		for _, work := range got.Settled {
			settled = append(settled, work.ID)
		}
		if row.want == "" {
			if settled != nil {
				t.Errorf("%s: settled %v", row.name, settled)
			}
			continue
		}
		if !reflect.DeepEqual(settled, []planner.WorkID{1, 6}) {
			t.Errorf("%s: settled %v, want 1 and 6", row.name, settled)
			continue
		}
		first, newer := got.Settled[0], got.Settled[1]
		if len(first.Settings) != 2 || first.Settings.On(planner.DayMin).Basis != row.want || first.Settings[0].Value.Basis != "" {
			t.Errorf("%s: %+v", row.name, first.Settings)
		}
		if newer.Settings.On(8).Basis != row.want || newer.Settings.On(8).Target != 150 || newer.Settings.On(7).Target != 100 {
			t.Errorf("%s: %+v", row.name, newer.Settings)
		}
		if basis, err := book.DefaultMean(t.Context(), 1); err != nil || basis != row.want {
			t.Errorf("%s: the default mean is %s, %v", row.name, basis, err)
		}
	}
	if basis, err := bookOf(&shelf{}).DefaultMean(t.Context(), 1); err != nil || basis != "" {
		t.Errorf("without weather the default mean is %q, %v", basis, err)
	}
}

func TestBookSetupSaveLog(t *testing.T) {
	s := &shelf{setup: grounds(), entries: []planner.Entry{done(1, 1, 0)}}
	book := bookOf(s)
	if setup, err := book.Setup(t.Context()); err != nil || !reflect.DeepEqual(setup, grounds()) {
		t.Errorf("%+v, %v", setup, err)
	}
	if log, err := book.Log(t.Context(), 1); err != nil || len(log) != 1 {
		t.Errorf("%+v, %v", log, err)
	}
	kept, err := book.Save(t.Context(), ash, planner.Station{Site: 1, Name: "pond", Rank: 1})
	if err != nil || kept.Key() == 0 || s.stamps[0] != ash {
		t.Errorf("%+v, %v, stamped %+v", kept, err, s.stamps)
	}
}
