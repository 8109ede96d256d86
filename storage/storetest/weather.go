package storetest

import (
	"context"
	"fmt"
	"math"
	"slices"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"swardbook/planner"
)

// hourly is a reading on each hour of the days, in UTC, unlike any other.
func hourly(first planner.Day, days int) []planner.Reading {
	var readings []planner.Reading
	for hour := range 24 * days {
		at := int64(first)*86400 + int64(hour)*3600
		readings = append(readings, planner.Reading{At: at, C: 15 + 8*math.Sin(float64(at)/86400*2*math.Pi) + math.Round(float64(at/3600%97))/10})
	}
	return readings
}

func load(t *testing.T, store Store, station planner.StationID, file File) Imported {
	t.Helper()
	got, err := store.Import(t.Context(), stamp("/weather file"), station, file)
	if err != nil {
		t.Fatalf("Import: %v", err)
	}
	return got
}

// built is the record that planner.BuildDay makes of all readings at once.
func built(site planner.Site, readings []planner.Reading, daily []planner.DailyReading) []planner.DayFacts {
	zone, err := site.Location()
	if err != nil {
		panic(err)
	}
	readings = slices.Clone(readings)
	slices.SortFunc(readings, func(a, b planner.Reading) int { return int(a.At - b.At) })
	readings = slices.Compact(readings)
	first, last := planner.DayMax, planner.DayMin
	for _, r := range readings {
		first, last = min(first, planner.Day(r.At/86400)-3), max(last, planner.Day(r.At/86400)+3)
	}
	own := map[planner.Day]*planner.DailyReading{}
	for _, d := range daily {
		first, last = min(first, d.Day), max(last, d.Day)
		own[d.Day] = &d
	}
	var facts []planner.DayFacts
	for day := first; day <= last; day++ {
		// All readings of the days around: more than enough, and fast.
		from, _ := slices.BinarySearchFunc(readings, int64(day-4)*86400, func(r planner.Reading, at int64) int { return int(r.At - at) })
		to, _ := slices.BinarySearchFunc(readings, int64(day+5)*86400, func(r planner.Reading, at int64) int { return int(r.At - at) })
		one := planner.BuildDay(site.Rules.On(day).Window(zone, day), readings[from:to], own[day])
		if one.Empty() && one.SlotsReal == 0 && one.SlotsBridged == 0 && one.Doubt == "" {
			one = planner.DayFacts{Day: day}
		}
		facts = append(facts, one)
	}
	unknown := func(f planner.DayFacts) bool { return f.SlotsWanted == 0 }
	for len(facts) > 0 && unknown(facts[0]) {
		facts = facts[1:]
	}
	for len(facts) > 0 && unknown(facts[len(facts)-1]) {
		facts = facts[:len(facts)-1]
	}
	return facts
}

func testImportCounts(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	g := newGround(t, store, "Quillmere")
	readings := hourly(lateJune, 3)
	daily := []planner.DailyReading{{Day: lateJune, HighC: 25, LowC: 12}, {Day: lateJune + 5, HighC: 26, LowC: 11, MeanC: 17, HasMean: true}}
	from, to := lateJune-1, lateJune+2 // midnight in UTC is 19:00 of the day before
	want(t, "nothing", load(t, store, g.station.ID, File{}), Imported{})
	want(t, "readings", load(t, store, g.station.ID, File{Readings: readings}), Imported{New: 72, From: from, To: to})
	want(t, "the same again", load(t, store, g.station.ID, File{Readings: readings}), Imported{Same: 72, From: from, To: to})
	want(t, "daily readings", load(t, store, g.station.ID, File{Daily: daily}), Imported{New: 2, From: lateJune, To: lateJune + 5})
	want(t, "both again", load(t, store, g.station.ID, File{Readings: readings, Daily: daily}), Imported{Same: 74, From: from, To: lateJune + 5})

	more := hourly(lateJune+2, 2) // a day known, a day new
	more[3].C++
	want(t, "some of each", load(t, store, g.station.ID, File{Readings: more}), Imported{New: 24, Changed: 1, Same: 23, From: lateJune + 1, To: lateJune + 3})
	daily[0].HasMean, daily[0].MeanC, daily[1].HasMean, daily[1].MeanC = true, 18, false, 0
	want(t, "a mean come and gone", load(t, store, g.station.ID, File{Daily: daily}), Imported{Changed: 2, From: lateJune, To: lateJune + 5})

	r := hourly(lateJune+10, 1)
	disordered := []planner.Reading{r[5], r[3], r[4], r[5], {At: r[3].At, C: 1}, r[3], {At: r[3].At, C: r[3].C + 0.1}, r[7], r[6]}
	twice := []planner.DailyReading{{Day: lateJune + 20, HighC: 5, LowC: 1}, {Day: lateJune + 20, HighC: 5, LowC: 1},
		{Day: lateJune + 20, HighC: 5, LowC: 1, HasMean: true, MeanC: 2}, {Day: lateJune + 20, HighC: 6, LowC: 1}}
	want(t, "rows that repeat", load(t, store, g.station.ID, File{Readings: disordered, Daily: twice}), Imported{
		New: 6, Same: 3, From: lateJune + 9, To: lateJune + 20, Repeats: []Repeat{{5, 2}, {7, 2}, {12, 10}, {13, 10}}})

	readings = slices.Concat(readings[:48], more, []planner.Reading{r[3], r[4], r[5], r[6], r[7]})
	want(t, "the record of it all", record(t, store, g.site.ID).Facts, built(g.site, readings, append(daily, twice[0])))
	for _, bad := range []File{
		{Readings: []planner.Reading{{At: 0, C: math.NaN()}}}, {Readings: []planner.Reading{{At: 0, C: 99}}},
		{Readings: []planner.Reading{{At: math.MaxInt64, C: 1}}}, {Readings: []planner.Reading{{At: math.MinInt64, C: 1}}},
		{Daily: []planner.DailyReading{{HighC: 1, LowC: 2}}}, {Daily: []planner.DailyReading{{Day: planner.DayMax + 1}}},
	} {
		_, err := store.Import(t.Context(), stamp(""), g.station.ID, bad)
		wantKind(t, err, planner.Invalid)
	}
}

func testRecord(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	for i, rule := range []planner.DayRule{standard, civil, byHand,
		{OffsetSeconds: 14 * 3600, Boundary: planner.FixedHour, ClosingHour: 1, FirstSlot: 1}, {OffsetSeconds: -12 * 3600, Boundary: planner.FixedHour, ClosingHour: 23}} {
		site := newSite(fmt.Sprintf("Ground %d", i))
		site.Rules = planner.Always(rule)
		site = save(t, store, site)
		want(t, "the record without a station", record(t, store, site.ID), planner.Record{})
		station := save(t, store, newStation(site.ID, "roof", 1))
		if got := record(t, store, site.ID); got.Facts != nil || got.Revision == 0 {
			t.Errorf("the record without readings is %+v", got)
		}
		// Before 1970, around changes of clocks, more days than an engine
		// may hold at once, with gaps short and long, a leap of one reading, half hours and daily readings.
		readings := slices.Concat(hourly(-40, 3), hourly(planner.DayOf(2023, time.March, 10), 300))
		readings = slices.Delete(readings, 1000, 1003)
		readings = slices.Delete(readings, 2000, 2009)
		readings = slices.Delete(readings, 3000, 3200)
		readings[5000].C += 30
		for i := 6000; i < 6400; i += 3 {
			readings[i].At += 1500
		}
		daily := []planner.DailyReading{{Day: -40, HighC: 9, LowC: 1}, {Day: -20, HighC: 8.5, LowC: 0.5, MeanC: 4.1, HasMean: true},
			{Day: planner.DayOf(2023, time.May, 1), HighC: 31, LowC: 7, MeanC: 18, HasMean: true}}
		load(t, store, station.ID, File{Readings: readings, Daily: daily})
		want(t, fmt.Sprintf("the record by %+v", rule), record(t, store, site.ID).Facts, built(site, readings, daily))
	}
	want(t, "the record of no site", record(t, store, 99), planner.Record{})
}

func testImportOrder(t *testing.T, newTeam func(string) Store) {
	teams := 0
	rapid.Check(t, func(r *rapid.T) {
		teams++
		store := newTeam(fmt.Sprintf("team %d", teams))
		site := newSite("Quillmere")
		site.Rules = planner.Always(rapid.SampledFrom([]planner.DayRule{standard, civil, byHand}).Draw(r, "rule"))
		site = mustSave(r, store, site)
		station := mustSave(r, store, newStation(site.ID, "roof", 1))
		readings := drawReadings(r)
		var daily []planner.DailyReading
		for _, day := range rapid.SliceOfNDistinct(rapid.IntRange(-8, 8), 0, 3, rapid.ID[int]).Draw(r, "daily") {
			daily = append(daily, planner.DailyReading{Day: lateJune + planner.Day(day), HighC: 30, LowC: float64(day)})
		}
		left, leftDaily := rapid.Permutation(readings).Draw(r, "order"), daily
		for files := rapid.IntRange(1, 4).Draw(r, "files"); files > 0; files-- {
			n, m := len(left), len(leftDaily)
			if files > 1 {
				n = rapid.IntRange(0, len(left)).Draw(r, "readings in the file")
				m = rapid.IntRange(0, len(leftDaily)).Draw(r, "daily readings in the file")
			}
			again := readings[:rapid.IntRange(0, len(readings)).Draw(r, "readings told out of turn")]
			if _, err := store.Import(context.Background(), stamp(""), station.ID,
				File{Readings: slices.Concat(left[:n], again), Daily: leftDaily[:m]}); err != nil {
				r.Fatal(err)
			}
			left, leftDaily = left[n:], leftDaily[m:]
		}
		got, err := store.Record(context.Background(), site.ID)
		if err != nil {
			r.Fatal(err)
		}
		if diff := cmp.Diff(built(site, readings, daily), got.Facts); diff != "" {
			r.Fatalf("the record of several imports (-at once +got):\n%s", diff)
		}
	})
}

func mustSave[N planner.Noun](r *rapid.T, store Store, noun N) N {
	kept, err := store.Save(context.Background(), stamp(""), noun)
	if err != nil {
		r.Fatal(err)
	}
	return kept.(N)
}

// drawReadings draws some days of readings, about hourly, with gaps.
func drawReadings(r *rapid.T) []planner.Reading {
	var readings []planner.Reading
	at := int64(lateJune) * 86400
	for range rapid.IntRange(1, 80).Draw(r, "readings") {
		at += rapid.SampledFrom([]int64{600, 1800, 3600, 3600, 3600, 3600, 3600, 3600, 7200, 4 * 3600, 30 * 3600}).Draw(r, "step")
		readings = append(readings, planner.Reading{At: at, C: float64(rapid.IntRange(-100, 400).Draw(r, "tenths")) / 10})
	}
	return readings
}
