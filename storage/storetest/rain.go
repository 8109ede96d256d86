package storetest

import (
	"math"
	"testing"

	"swardbook/planner"
)

func testRain(t *testing.T, newTeam func(string) Store) {
	store := newTeam("one")
	g := newGround(t, store, "Quillmere")
	second := save(t, store, newStation(g.site.ID, "barn", g.station.Rank+1))
	other := newGround(t, store, "Elsewhere")
	hour := func(n int) int64 { return int64(lateJune)*86400 + int64(n)*3600 }
	rain := func(site planner.SiteID, from, to int64) []planner.Rain {
		got, err := store.Rain(t.Context(), site, from, to)
		if err != nil {
			t.Fatalf("Rain: %v", err)
		}
		return got
	}
	load(t, store, g.station.ID, File{Readings: hourly(lateJune, 1)})
	before := record(t, store, g.site.ID)

	first := []planner.Rain{{At: hour(3), MM: 0}, {At: hour(1), MM: 1.8}, {At: hour(2), MM: 0.254}, {At: hour(1), MM: 9}}
	got := load(t, store, g.station.ID, File{Readings: hourly(lateJune, 1), Rain: first})
	want(t, "new rain", got.Rain, planner.RowCounts{New: 3})
	want(t, "rows beside it", got.Same, 24)
	sorted := []planner.Rain{{At: hour(1), MM: 1.8}, {At: hour(2), MM: 0.254}, {At: hour(3), MM: 0}}
	want(t, "all of it", rain(g.site.ID, hour(1), hour(3)), sorted)
	want(t, "part of it", rain(g.site.ID, hour(1)+1, hour(3)-1), sorted[1:2])
	want(t, "the record with rain", record(t, store, g.site.ID), before)

	load(t, store, second.ID, File{Rain: []planner.Rain{{At: hour(2), MM: 5}, {At: hour(9), MM: 6}}})
	want(t, "of the first station", rain(g.site.ID, hour(0), hour(9)), sorted)
	want(t, "of the second, where the first has none", rain(g.site.ID, hour(4), hour(9)), []planner.Rain{{At: hour(9), MM: 6}})
	want(t, "of another site", rain(other.site.ID, hour(0), hour(9)), nil)
	want(t, "of another team", func() []planner.Rain {
		got, err := newTeam("two").Rain(t.Context(), g.site.ID, hour(0), hour(9))
		want(t, "no error", err, nil)
		return got
	}(), nil)

	got = load(t, store, g.station.ID, File{Rain: []planner.Rain{{At: hour(1), MM: 2}, {At: hour(2), MM: 0.254}, {At: hour(5), MM: 1}}})
	want(t, "a later file", got.Rain, planner.RowCounts{New: 1, Changed: 1, Same: 1})
	sorted[0].MM = 2
	want(t, "what it replaced", rain(g.site.ID, hour(0), hour(9)), append(sorted, planner.Rain{At: hour(5), MM: 1}))

	for _, bad := range []planner.Rain{{At: hour(1), MM: -0.1}, {At: hour(1), MM: math.NaN()}, {At: hour(1), MM: planner.MostRainMM + 1}, {At: math.MaxInt64, MM: 1}} {
		_, err := store.Import(t.Context(), stamp(""), g.station.ID, File{Rain: []planner.Rain{bad}})
		wantKind(t, err, planner.Invalid)
	}
}
