package planner

import (
	"context"
	"fmt"
	"slices"
	"sync"
)

// Book is the only thing between commands and storage: it loads plans by site
// and day, and keeps what is logged, set up and imported. It is safe for
// concurrent use.
type Book struct {
	keeper   Keeper
	recorder Recorder
	importer Importer
	ahead    Ahead

	mu      sync.Mutex
	records map[SiteID]Record // the newest revision loaded of each site
}

// NewBook returns the book of one team.
func NewBook(keeper Keeper, recorder Recorder, importer Importer, ahead Ahead) *Book {
	return &Book{keeper: keeper, recorder: recorder, importer: importer, ahead: ahead, records: map[SiteID]Record{}}
}

// Setup returns everything the team has set up.
func (b *Book) Setup(ctx context.Context) (Setup, error) { return b.keeper.Setup(ctx) }

// Dropped returns the sites, surfaces and works that were dropped and could be
// taken up again.
func (b *Book) Dropped(ctx context.Context) (Setup, error) { return b.keeper.Dropped(ctx) }

// Save keeps a noun and returns it with its id.
func (b *Book) Save(ctx context.Context, stamp Stamp, noun Noun) (Noun, error) {
	return b.keeper.Save(ctx, stamp, noun)
}

// Record returns the site's weather record, from memory while no reading and
// no day rule has changed.
func (b *Book) Record(ctx context.Context, site SiteID) (Record, error) {
	revision, err := b.recorder.Revision(ctx, site)
	if err != nil {
		return Record{}, fmt.Errorf("revision of the record: %w", err)
	}
	b.mu.Lock()
	kept, ok := b.records[site]
	b.mu.Unlock()
	if ok && kept.Revision == revision {
		return kept, nil
	}
	record, err := b.recorder.Record(ctx, site)
	if err != nil {
		return Record{}, fmt.Errorf("load the record: %w", err)
	}
	b.mu.Lock()
	b.records[site] = record
	b.mu.Unlock()
	return record, nil
}

// Plan loads the site as it stands on the morning asOf. today is the site's
// day now: a past morning is computed on readings, log and typed days up to
// its own, and on the settings that held then; entries of the morning's own
// day count only when it is today.
func (b *Book) Plan(ctx context.Context, site Site, asOf, today Day) (Plan, error) {
	setup, err := b.keeper.Setup(ctx)
	if err != nil {
		return Plan{}, fmt.Errorf("load the set-up: %w", err)
	}
	record, err := b.Record(ctx, site.ID)
	if err != nil {
		return Plan{}, err
	}
	log, err := b.Log(ctx, site.ID)
	if err != nil {
		return Plan{}, err
	}
	hand, err := b.recorder.Ahead(ctx, site.ID, asOf)
	if err != nil {
		return Plan{}, fmt.Errorf("load the days ahead: %w", err)
	}
	rain, err := b.rain(ctx, site, setup, asOf, today)
	if err != nil {
		return Plan{}, err
	}
	record = record.Before(asOf)
	return Plan{
		Site: site, AsOf: asOf, Record: record,
		Surfaces: setup.SurfacesOf(site.ID), Works: setup.WorksOf(site.ID), Totals: setup.TotalsOf(site.ID),
		Dropped: setup.DroppedOf(site.ID), Closed: setup.ClosedOf(site.ID),
		Log:     filter(log, func(e Entry) bool { return e.Day < asOf || e.Day == asOf && asOf == today }),
		Outlook: b.ahead.Outlook(record, hand, asOf), Hand: hand, Rain: rain,
	}, nil
}

// rain loads what the gauge caught since the oldest pass that may still be
// asked about: for a past morning up to its midnight. Sites whose works have no
// rain-free hours are not looked up.
func (b *Book) rain(ctx context.Context, site Site, setup Setup, asOf, today Day) ([]Rain, error) {
	wanted := slices.ContainsFunc(setup.WorksOf(site.ID), func(w Work) bool { return w.Settings.On(asOf).RainFreeHours > 0 })
	zone, err := site.Location()
	if !wanted || err != nil {
		return nil, err
	}
	from, to := site.Rules.On(asOf).Window(zone, asOf-rainDays-1).Start, site.Rules.On(asOf).Window(zone, asOf+1).End
	if asOf != today {
		to = site.Rules.On(asOf).Window(zone, asOf).Start
	}
	rain, err := b.recorder.Rain(ctx, site.ID, from, to)
	if err != nil {
		return nil, fmt.Errorf("load the rain: %w", err)
	}
	return rain, nil
}

// Log returns the site's work log by day, undone entries left out.
func (b *Book) Log(ctx context.Context, site SiteID) ([]Entry, error) {
	log, err := b.keeper.Entries(ctx, site)
	if err != nil {
		return nil, fmt.Errorf("load the work log: %w", err)
	}
	return log, nil
}

// Entry returns an entry of the site's log: the one with the id, or the newest
// logged when the id is 0. Only the person's own, unless anyone is set.
// Nothing found is a NotFound problem, somebody else's entry a Forbidden one.
func (b *Book) Entry(ctx context.Context, site SiteID, id EntryID, person Person, anyone bool) (Entry, error) {
	log, err := b.Log(ctx, site)
	if err != nil {
		return Entry{}, err
	}
	var found Entry
	for _, entry := range log {
		mine := anyone || entry.LoggedBy(person)
		if entry.ID == id && !mine {
			who := entry.By
			if who == person.Name {
				who = "another " + who
			}
			return Entry{}, Problemf(Forbidden, "Entry %d was logged by %s.", id, who).
				WithHint("Crew undo and amend their own entries; a lead anyone's.")
		}
		if mine && (entry.ID == id || id == 0 && entry.ID > found.ID) {
			found = entry
		}
	}
	if found.ID == 0 {
		return Entry{}, Problemf(NotFound, "There is no such entry of yours.").WithHint("/log list shows the entries and their numbers.")
	}
	return found, nil
}

// mostChanges bounds how far back the change of an entry is looked for.
const mostChanges = 1000

// UndoEntry takes an entry of the site's log back: the one with the id, or the
// newest when the id is 0. Only entries of the person by count, unless anyone
// is set. Nothing to undo is a NotFound problem, somebody else's entry a
// Forbidden one.
func (b *Book) UndoEntry(ctx context.Context, stamp Stamp, person Person, site SiteID, id EntryID, anyone bool) (Entry, error) {
	found, err := b.Entry(ctx, site, id, person, anyone)
	if err != nil {
		return Entry{}, err
	}
	changes, err := b.keeper.Changes(ctx, found.Kind(), mostChanges)
	if err != nil {
		return Entry{}, fmt.Errorf("look up the entry's change: %w", err)
	}
	for _, change := range changes {
		if change.Thing == found.Key() {
			stamp.Undoes = change.ID
			break
		}
	}
	found.Undone = true
	if _, err = b.keeper.Save(ctx, stamp, found); err != nil {
		return Entry{}, fmt.Errorf("undo entry %d: %w", found.ID, err)
	}
	return found, nil
}

// SaveAhead keeps days ahead typed by hand, issued on the day.
func (b *Book) SaveAhead(ctx context.Context, stamp Stamp, site SiteID, issued Day, days []HandDay) error {
	for _, day := range days {
		if err := CheckHandDay(issued, day); err != nil {
			return err
		}
	}
	return b.recorder.SaveAhead(ctx, stamp, site, issued, days)
}

// Imported is what Book.Import did.
type Imported struct {
	Station Station
	Report  ImportReport
	Settled []Work // works whose mean was settled by what the file holds
}

// Import reads a station file into the record of the site's station with the
// name; its only one when the name is empty. A site without any gets one,
// named after the file when no name is given. A file that is refused, or not
// read to its end, leaves nothing behind: no station either. Works that had no
// mean of their own get one now that it is
// known whether the site has hourly readings.
func (b *Book) Import(ctx context.Context, site Site, name string, request ImportRequest) (Imported, error) {
	station, err := b.stationFor(ctx, site, name, request.FileName)
	if err != nil {
		return Imported{}, err
	}
	if request.Station = station.ID; station.ID == 0 {
		request.New = station
	}
	report, err := b.importer.Import(ctx, request)
	if err != nil {
		return Imported{}, err
	}
	station.ID = report.Station
	settled, err := b.settleMeans(ctx, request.Stamp, site)
	return Imported{station, report, settled}, err
}

// stationFor is the site's station with the name, or, of a site without any, one
// to be added, without an id.
func (b *Book) stationFor(ctx context.Context, site Site, name, fileName string) (Station, error) {
	setup, err := b.keeper.Setup(ctx)
	if err != nil {
		return Station{}, fmt.Errorf("load the set-up: %w", err)
	}
	if len(setup.StationsOf(site.ID)) > 0 {
		return setup.Station(site, name)
	}
	if name == "" {
		name = stationName(fileName)
	}
	fresh := Station{Site: site.ID, Name: name, Rank: 1}
	return fresh, fresh.Check()
}

func (b *Book) settleMeans(ctx context.Context, stamp Stamp, site Site) ([]Work, error) {
	setup, err := b.keeper.Setup(ctx)
	if err != nil {
		return nil, fmt.Errorf("load the set-up: %w", err)
	}
	var settled []Work
	for _, work := range setup.WorksOf(site.ID) {
		newest := len(work.Settings) - 1
		settings := work.Settings[newest].Value
		if settings.Basis != "" || !settings.StandsOnMean() {
			continue
		}
		if settings.Basis, err = b.DefaultMean(ctx, site.ID); err != nil || settings.Basis == "" {
			return settled, err
		}
		work.Settings = work.Settings.With(work.Settings[newest].Day, settings)
		kept, err := b.keeper.Save(ctx, stamp, work)
		if err != nil {
			return settled, fmt.Errorf("settle the mean of %s: %w", work.Name, err)
		}
		settled = append(settled, kept.(Work))
	}
	return settled, nil
}

// DefaultMean is the mean that a work of the site stands on when none is
// given: the 24-hour mean when the site has hourly readings, the high/low mean
// when it has days without; empty when it has no weather yet.
func (b *Book) DefaultMean(ctx context.Context, site SiteID) (Basis, error) {
	record, err := b.Record(ctx, site)
	switch {
	case err != nil:
		return "", err
	case record.HasHourly():
		return Hourly, nil
	case len(record.Facts) > 0:
		return Midrange, nil
	}
	return "", nil
}

// StandsOnMean reports whether the counting has a choice between the two
// means.
func (c Counting) StandsOnMean() bool {
	measure, err := NewMeasure(c, nil)
	return err == nil && len(measure.Bases()) > 1
}
