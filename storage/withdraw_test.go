package storage_test

import (
	"bytes"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"swardbook/planner"
)

// written is a file of hourly readings and days: of each hour, or day, a value
// or none. With every other reading comes rain.
func written(hours, days map[int]float64) string {
	var b strings.Builder
	b.WriteString("time,temp_c,day_high_c,day_low_c,day_mean_c,rain_mm\n")
	for _, hour := range sortedKeys(hours) {
		rain := ""
		if hour%2 == 0 {
			rain = fmt.Sprint(math.Abs(hours[hour]))
		}
		fmt.Fprintf(&b, "2013-07-%02dT%02d:00:00Z,%v,,,,%s\n", 1+hour/24, hour%24, hours[hour], rain)
	}
	for _, day := range sortedKeys(days) {
		fmt.Fprintf(&b, "2013-07-%02d,,%v,%v,,\n", 1+day, days[day]+5, days[day]-5)
	}
	return b.String()
}

func sortedKeys(of map[int]float64) (keys []int) {
	for key := range of {
		keys = append(keys, key)
	}
	slices.Sort(keys)
	return keys
}

func (g *ground) export(t testing.TB) string {
	t.Helper()
	var b bytes.Buffer
	if err := g.importer.Export(t.Context(), g.station, &b); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// Whatever was imported and withdrawn in whatever order, the record is the one
// that the imports that stand make when they alone are read, in their order.
func TestWithdrawnImportsMightNeverHaveBeen(t *testing.T) {
	t.Parallel()
	g := newGround(t, "UTC", 0)
	again := newGround(t, "UTC", 0)
	round := 0
	rapid.Check(t, func(r *rapid.T) {
		round++ // a station of its own for every round: opening a store costs more
		for _, ground := range []*ground{g, again} {
			ground.station = save(t, ground.team, planner.Station{Site: ground.site.ID, Name: fmt.Sprintf("S%d", round), Rank: 1}).ID
		}
		values := rapid.MapOfN(rapid.IntRange(0, 29), rapid.SampledFrom([]float64{10, 11, 12}), 1, 20)
		days := rapid.MapOfN(rapid.IntRange(0, 2), rapid.SampledFrom([]float64{10, 11}), 0, 3)
		type kept struct {
			id      planner.ImportID
			content string
		}
		var standing []kept
		for range rapid.IntRange(1, 7).Draw(r, "steps") {
			if len(standing) > 0 && rapid.Bool().Draw(r, "withdraw") {
				i := rapid.IntRange(0, len(standing)-1).Draw(r, "which")
				before := g.export(t)
				would, err := g.importer.Withdraw(t.Context(), stamp, standing[i].id, true)
				if err != nil || g.export(t) != before {
					r.Fatalf("a look at import %d: %v", standing[i].id, err)
				}
				did, err := g.importer.Withdraw(t.Context(), stamp, standing[i].id, false)
				if diff := cmp.Diff(would, did); err != nil || diff != "" {
					r.Fatalf("withdraw import %d: %v, not as was said: %s", standing[i].id, err, diff)
				}
				standing = slices.Delete(standing, i, i+1)
				continue
			}
			content := written(values.Draw(r, "hours"), days.Draw(r, "days"))
			report := g.take(t, "some.csv", content)
			standing = append(standing, kept{report.Import, content})
		}
		for _, one := range standing {
			again.take(t, "some.csv", one.content)
		}
		if diff := cmp.Diff(again.export(t), g.export(t)); diff != "" {
			r.Fatal(diff)
		}
		for _, ground := range []*ground{g, again} { // the next round's station gives the record
			facts := ground.state(t).record.Facts
			ground.station, ground.facts = 0, facts
		}
		if diff := cmp.Diff(again.facts, g.facts); diff != "" {
			r.Fatal(diff)
		}
		dropAll(t, g)
		dropAll(t, again)
	})
}

// dropAll drops the site's stations, so that the next one gives the record.
func dropAll(t testing.TB, g *ground) {
	t.Helper()
	setup, err := g.team.Setup(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	for _, station := range setup.Stations {
		station.Archived = true
		save(t, g.team, station)
	}
}

func TestWithdraw(t *testing.T) {
	t.Parallel()
	g := newGround(t, "UTC", 0)
	first := g.take(t, "july.csv", hours(48, nil))
	was := g.state(t).record
	wrong := g.take(t, "wrong.csv", hours(30, firstRows(30, "30")))
	moved := g.state(t).record

	imports, err := g.importer.Imports(t.Context(), g.site.ID, 10)
	if err != nil || len(imports) != 2 || imports[0].ID != wrong.Import || imports[0].FileName != "wrong.csv" || imports[0].Changed != 30 || imports[0].Withdrawn {
		t.Fatalf("%+v %v", imports, err)
	}
	done, err := g.importer.Withdraw(t.Context(), stamp, wrong.Import, false)
	if err != nil || done.Restored != 30 || done.Gone != 0 || done.Kept != 0 || len(done.Moved) != 2 {
		t.Fatalf("%+v %v", done, err)
	}
	if got := done.Moved[0]; got.Before.HourlyC != 30 || got.After.HourlyC != 15.75 {
		t.Errorf("1 July moved from %.2f to %.2f, want 30 to 15.75", got.Before.HourlyC, got.After.HourlyC)
	}
	now := g.state(t).record
	if diff := cmp.Diff(was.Facts, now.Facts); diff != "" {
		t.Error(diff)
	}
	if now.Revision == was.Revision || now.Revision == moved.Revision {
		t.Errorf("revision %d is not a new one", now.Revision)
	}
	changes := g.state(t).changes
	if changes[0].Undoes == 0 || changes[0].Thing != int64(wrong.Import) {
		t.Errorf("logged as %+v", changes[0])
	}
	for _, id := range []planner.ImportID{wrong.Import, 99} {
		if _, err := g.importer.Withdraw(t.Context(), stamp, id, false); planner.KindOf(err) != planner.NotFound {
			t.Errorf("withdraw import %d: %v", id, err)
		}
	}
	if done, err = g.importer.Withdraw(t.Context(), stamp, first.Import, false); err != nil || done.Gone != 48 {
		t.Fatalf("%+v %v", done, err)
	}
	if facts := g.state(t).record.Facts; facts != nil {
		t.Errorf("%d days are left", len(facts))
	}
}

// The same file sent twice stays in the record when one of the two is
// withdrawn.
func TestWithdrawOneOfTwoAlike(t *testing.T) {
	t.Parallel()
	g := newGround(t, "UTC", 0)
	first := g.take(t, "july.csv", hours(48, nil))
	g.take(t, "july again.csv", hours(40, nil))
	done, err := g.importer.Withdraw(t.Context(), stamp, first.Import, false)
	if err != nil || done.Kept != 40 || done.Gone != 8 {
		t.Fatalf("%+v %v", done, err)
	}
}

// What a station exports reads back to the same record, and to the same export.
func TestExportComesBack(t *testing.T) {
	t.Parallel()
	g := newGround(t, "America/New_York", -5)
	g.take(t, "july.csv", hours(72, func(row int) (string, bool) { return fmt.Sprint(float64(row) / 7), row%5 == 0 }))
	g.take(t, "days.csv", "date,high_f,low_f,mean_f\n2013-07-02,77.7,55.1,63.9\n2013-07-05,78,54,\n")
	other := newGround(t, "America/New_York", -5)
	report := other.take(t, "export.csv", g.export(t))
	if report.New != 74 || report.Refused != 0 {
		t.Errorf("%+v", report)
	}
	if diff := cmp.Diff(g.state(t).record.Facts, other.state(t).record.Facts); diff != "" {
		t.Error(diff)
	}
	if diff := cmp.Diff(g.export(t), other.export(t)); diff != "" {
		t.Error(diff)
	}
}
