package planner_test

import (
	"math"
	"testing"

	"swardbook/planner"
)

// Rules of the work where two of them meet; dates and amounts by hand, on a
// plan of 20 °C a day.

func gap(days int) planner.WorkSettings {
	settings := byDays(3)
	settings.Limits.LeastDays = days
	return settings
}

func byNitrogen() planner.WorkSettings {
	return planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByNitrogen}, Basis: planner.Hourly}
}

func gave(gM2 float64) func(*planner.Entry) {
	return func(e *planner.Entry) {
		e.Passes[0].NitrogenGM2, e.Passes[0].Rate = gM2, planner.Rate{Kind: planner.NutrientRate, Value: gM2}
	}
}

func ofWork(id planner.WorkID) func(*planner.Entry) {
	return func(e *planner.Entry) { e.Passes[0].Work = id }
}

// The least days run from the newest pass over what is to be done next.
func TestLeastDaysOfParts(t *testing.T) {
	front, back := inPart(frontNine), inPart(backNine)
	for _, row := range []struct {
		name string
		log  []planner.Entry
		date planner.Day
	}{
		{"the whole", []planner.Entry{doneOn(june(1))}, june(15)},
		{"a round: from its last part", []planner.Entry{doneOn(june(1), front), doneOn(june(8), back)}, june(22)},
		{"a round begun: from the part behind", []planner.Entry{doneOn(june(1)), doneOn(june(9), front)}, june(15)},
	} {
		facts, _ := stateOf(t, simple(gap(14), june(10), row.log...)).OwnFacts()
		if got := facts.Date(); got.Day != row.date || !facts.Held.Known {
			t.Errorf("%s: %v, held %v, want %s", row.name, got, facts.Held, row.date)
		}
	}
}

// Another work's feed restarts the balance, and not the least days of this one.
func TestLeastDaysOfAFeedAreItsOwn(t *testing.T) {
	settings := byNitrogen()
	settings.Limits.LeastDays = 14
	plan := simple(settings, june(13), doneOn(planner.DayOf(2023, 5, 20), gave(0.5)), doneOn(june(12), ofWork(2), gave(0.1)))
	plan.Works = append(plan.Works, planner.Work{ID: 2, Surface: 1, Name: "granular", Settings: planner.Always(byDays(30))})
	if facts, _ := stateOf(t, plan).OwnFacts(); facts.Held.Known || facts.Since != june(13) {
		t.Errorf("held to %v since %s; its own last feed was on 20 May", facts.Held, facts.Since)
	}
}

// A closed date is never told to be done sooner than the least days allow.
func TestClosedAndLeastDays(t *testing.T) {
	plan := simple(gap(14), june(10), doneOn(june(1)))
	plan.Closed = []planner.Closed{{Name: "match", From: june(15), To: june(16)}}
	if note := stateOf(t, plan).Closed; note == nil || note.Before.Known || note.After.Day != june(17) {
		t.Errorf("%+v, want no day before, and 17 June", note)
	}
}

// A work that the lead had rest starts unset when it is on again; taken back on
// the same day, it never rested.
func TestRestEndsTheCount(t *testing.T) {
	on, resting := byDays(7), byDays(7)
	resting.Season.Resting = true
	settings := planner.Always(on).With(june(5), resting).With(june(20), on)
	for _, row := range []struct {
		name     string
		settings planner.Dated[planner.WorkSettings]
		log      []planner.Entry
		status   planner.Status
	}{
		{"done before the rest", settings, []planner.Entry{doneOn(june(1))}, planner.NotStarted},
		{"done since", settings, []planner.Entry{doneOn(june(1)), doneOn(june(20))}, planner.NotYet},
		{"taken back at once", planner.Always(on).With(june(20), resting).With(june(20), on), []planner.Entry{doneOn(june(19))}, planner.NotYet},
		{"still resting", settings.With(june(22), resting), []planner.Entry{doneOn(june(20))}, planner.Resting},
	} {
		plan := simple(on, june(24), row.log...)
		plan.Works[0].Settings = row.settings
		if state := stateOf(t, plan); state.Status != row.status {
			t.Errorf("%s: %s, want %s", row.name, state.Status, row.status)
		}
	}
}

// What a dropped work gave stays given, and the share of a part stays what it
// was when the pass was logged.
func TestNitrogenStaysGiven(t *testing.T) {
	half := func(e *planner.Entry) { e.Passes[0].Part, e.Passes[0].Share = frontNine, 0.5 }
	plan := simple(byNitrogen(), june(2), doneOn(june(1), gave(1)), doneOn(june(1), ofWork(2), gave(4)), doneOn(june(1), gave(2), half))
	plan.Dropped = []planner.Work{{ID: 2, Surface: 1, Name: "granular", Archived: true}, {ID: 3, Surface: 9}}
	plan.Surfaces[0].Parts[0].Share, plan.Surfaces[0].Parts[1].Share = 0.25, 0.75 // cut anew
	evaluation, err := planner.Evaluate(plan)
	if err != nil {
		t.Fatal(err)
	}
	if got := evaluation.Nitrogen[0].GivenGM2; math.Abs(got-6) > 1e-12 { // 1 + 4 + half of 2
		t.Errorf("%g g N/m² given, want 6", got)
	}
}

// A season's most is of one kind: nitrogen of a feed, else the newest product.
func TestSeasonsMostIsOfOneKind(t *testing.T) {
	rate := func(kind planner.RateKind, value, nPercent float64) func(*planner.Entry) {
		return func(e *planner.Entry) {
			r := planner.Rate{Kind: kind, Value: value, NPercent: nPercent}
			e.Passes[0].Rate, e.Passes[0].NitrogenGM2 = r, r.NitrogenGM2()
		}
	}
	log := []planner.Entry{doneOn(june(1), rate(planner.NutrientRate, 2.5, 0)), doneOn(june(3), rate(planner.MassRate, 14, 21))}
	for _, row := range []struct {
		name     string
		settings planner.WorkSettings
		log      []planner.Entry
		given    float64
	}{
		{"nitrogen of a feed", byNitrogen(), log, 2.5 + 14*0.21},
		{"the newest kind of another work", byDays(7), log, 14},
		{"and then by volume", byDays(7), append(log, doneOn(june(5), rate(planner.VolumeRate, 0.2, 0)), doneOn(june(6))), 0.2},
	} {
		if got := stateOf(t, simple(row.settings, june(10), row.log...)).Season.Given; math.Abs(got-row.given) > 1e-12 {
			t.Errorf("%s: %g, want %g", row.name, got, row.given)
		}
	}
}

// How intervals ran, where passes are over parts, a rest lies between, watering
// in is waited for, or the day is not over.
func TestIntervalsAsTheyRan(t *testing.T) {
	front, back := inPart(frontNine), inPart(backNine)
	watered := byDays(7)
	watered.WateredIn = true
	season := byDays(7)
	season.Season = planner.WorkSeason{From: planner.MonthDay{Month: 6, Day: 8}, To: planner.MonthDay{Month: 12, Day: 31}}
	wateredOn := func(day planner.Day) func(*planner.Entry) {
		return func(e *planner.Entry) { e.Watered = day }
	}
	for _, row := range []struct {
		name     string
		settings planner.WorkSettings
		log      []planner.Entry
		days     []int
		degrees  []float64 // °C-days above 0, at 20 a day
		missing  int       // of the last
	}{
		{"rounds of parts", byDays(7), []planner.Entry{doneOn(june(1), front), doneOn(june(3), back), doneOn(june(11), front), doneOn(june(13), back), doneOn(june(18), front)},
			[]int{10}, []float64{200}, 0},
		{"a rest between", season, []planner.Entry{doneOn(june(2)), doneOn(june(9)), doneOn(june(14))}, []int{5}, []float64{100}, 0},
		{"watered in three days after", watered, []planner.Entry{doneOn(june(1), wateredOn(june(4))), doneOn(june(14))}, []int{13}, []float64{200}, 0},
		{"done again today", byDays(7), []planner.Entry{doneOn(june(10)), doneOn(june(20))}, []int{10}, []float64{180}, 1},
	} {
		plan := simple(row.settings, june(20), row.log...)
		intervals, err := planner.PastIntervals(plan, plan.Works[0])
		if err != nil || len(intervals) != len(row.days) {
			t.Errorf("%s: %+v, %v", row.name, intervals, err)
			continue
		}
		for i, interval := range intervals {
			if sum := interval.Sums[0].Sum; interval.Days != row.days[i] || math.Abs(sum.Total-row.degrees[i]) > 1e-9 {
				t.Errorf("%s: %d days, %g °C-days, want %d and %g", row.name, interval.Days, sum.Total, row.days[i], row.degrees[i])
			}
		}
		if sum := intervals[len(intervals)-1].Sums[0].Sum; sum.Missing != row.missing {
			t.Errorf("%s: %d days missing, want %d", row.name, sum.Missing, row.missing)
		}
	}
}

// The pass before is of the same part or meets it, was not lost, is another
// entry, and is not later.
func TestPassBefore(t *testing.T) {
	numbered := func(id planner.EntryID, entry planner.Entry) planner.Entry {
		entry.ID = id
		return entry
	}
	plan := simple(byDays(7), june(20), numbered(1, doneOn(june(1))), numbered(2, doneOn(june(4), inPart(frontNine))),
		numbered(3, doneOn(june(6), result(planner.Lost))), numbered(4, doneOn(june(9), inPart(backNine))), numbered(5, doneOn(june(12), ofWork(2))))
	for _, row := range []struct {
		name  string
		entry planner.Entry
		want  planner.EntryID // 0 for none
	}{
		{"the whole meets every part", doneOn(june(15)), 4},
		{"a part meets itself and the whole", doneOn(june(15), inPart(frontNine)), 2},
		{"on the day itself", doneOn(june(9), inPart(backNine)), 4},
		{"not a later one", doneOn(june(8), inPart(backNine)), 1},
		{"not a lost one", doneOn(june(7)), 2},
		{"not the entry itself", numbered(4, doneOn(june(9), inPart(backNine))), 1},
		{"of no other work", doneOn(june(15), ofWork(3)), 0},
		{"before the first", doneOn(planner.DayOf(2023, 5, 1)), 0},
	} {
		before, ok := plan.PassBefore(row.entry, row.entry.Passes[0].Work)
		if before.ID != row.want || ok != (row.want > 0) {
			t.Errorf("%s: entry %d, %v, want %d", row.name, before.ID, ok, row.want)
		}
	}
}
