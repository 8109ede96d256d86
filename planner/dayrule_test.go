package planner_test

import (
	"testing"
	"time"

	"pgregory.net/rapid"

	"swardbook/planner"
)

// Offsets as the IANA time zone database gives the legal times.
func TestStandardOffset(t *testing.T) {
	const hour = 3600
	for _, row := range []struct {
		zone string
		year int
		want int
	}{
		{"UTC", 2024, 0},
		{"America/New_York", 2024, -5 * hour},
		{"Australia/Brisbane", 2024, 10 * hour},
		{"Australia/Sydney", 2024, 10 * hour},
		{"Australia/Lord_Howe", 2024, 10*hour + hour/2}, // summer time is half an hour
		{"Asia/Kolkata", 2024, 5*hour + hour/2},
		{"Asia/Kathmandu", 2024, 5*hour + 45*60},
		{"Europe/London", 2024, 0},
		{"Europe/London", 1970, hour}, // a year on British Standard Time throughout
		{"Europe/Dublin", 2024, 0},    // its law calls winter the exception
		{"America/Sao_Paulo", 2017, -3 * hour},
		{"America/Sao_Paulo", 2024, -3 * hour}, // no summer time any more
		{"America/Caracas", 2010, -(4*hour + hour/2)},
		{"Pacific/Apia", 2010, -11 * hour},
		{"Pacific/Apia", 2011, -11 * hour},
		{"Pacific/Apia", 2012, 13 * hour}, // west of the date line since 30 December 2011
		{"Pacific/Kiritimati", 2024, 14 * hour},
	} {
		if got := planner.StandardOffset(zone(t, row.zone), row.year); got != row.want {
			t.Errorf("%s in %d: %d s, want %d", row.zone, row.year, got, row.want)
		}
	}
}

func TestDayRuleCheck(t *testing.T) {
	for _, rule := range []planner.DayRule{
		{Boundary: planner.StandardMidnight},
		{Boundary: planner.CivilMidnight, OffsetSeconds: 14 * 3600, FirstSlot: 1},
		{Boundary: planner.FixedHour, ClosingHour: 1},
		{Boundary: planner.FixedHour, ClosingHour: 23, OffsetSeconds: -14 * 3600},
	} {
		if err := rule.Check(); err != nil {
			t.Errorf("%+v: %v", rule, err)
		}
	}
	for _, rule := range []planner.DayRule{
		{},
		{Boundary: "noon"},
		{Boundary: planner.StandardMidnight, OffsetSeconds: 15*3600 + 1},
		{Boundary: planner.StandardMidnight, OffsetSeconds: -14*3600 - 1},
		{Boundary: planner.StandardMidnight, FirstSlot: 2},
		{Boundary: planner.StandardMidnight, FirstSlot: -1},
		{Boundary: planner.FixedHour},
		{Boundary: planner.FixedHour, ClosingHour: 24},
		{Boundary: planner.FixedHour, ClosingHour: -9},
	} {
		wantKind(t, shot(rule), rule.Check(), planner.Invalid)
	}
}

// Changes of clocks by the IANA time zone database.
func TestWindow(t *testing.T) {
	standard := planner.DayRule{Boundary: planner.StandardMidnight}
	newYork := planner.DayRule{Boundary: planner.StandardMidnight, OffsetSeconds: -5 * 3600}
	hour9 := planner.DayRule{Boundary: planner.FixedHour, ClosingHour: 9, OffsetSeconds: 10 * 3600}
	civil := planner.DayRule{Boundary: planner.CivilMidnight}
	for _, row := range []struct {
		name, zone, day string
		rule            planner.DayRule
		start           string
		hours           float64
	}{
		{"standard, winter", "America/New_York", "2024-01-15", newYork, "2024-01-15T05:00:00Z", 24},
		{"standard, summer: 01:00 on the clock", "America/New_York", "2024-06-04", newYork, "2024-06-04T05:00:00Z", 24},
		{"standard, clocks forward", "America/New_York", "2024-03-10", newYork, "2024-03-10T05:00:00Z", 24},
		{"standard, clocks back", "America/New_York", "2024-11-03", newYork, "2024-11-03T05:00:00Z", 24},
		{"standard, before 1970", "UTC", "1969-12-31", standard, "1969-12-31T00:00:00Z", 24},
		{"the 24 hours to 09:00", "Australia/Brisbane", "2024-06-04", hour9, "2024-06-02T23:00:00Z", 24},
		{"New York forward", "America/New_York", "2024-03-10", civil, "2024-03-10T05:00:00Z", 23},
		{"New York back", "America/New_York", "2024-11-03", civil, "2024-11-03T04:00:00Z", 25},
		{"New York, ordinary", "America/New_York", "2024-06-04", civil, "2024-06-04T04:00:00Z", 24},
		{"London forward", "Europe/London", "2024-03-31", civil, "2024-03-31T00:00:00Z", 23},
		{"London back", "Europe/London", "2024-10-27", civil, "2024-10-26T23:00:00Z", 25},
		{"Dublin back", "Europe/Dublin", "2024-10-27", civil, "2024-10-26T23:00:00Z", 25},
		{"Lord Howe back, half an hour", "Australia/Lord_Howe", "2024-04-07", civil, "2024-04-06T13:00:00Z", 24.5},
		{"Lord Howe forward", "Australia/Lord_Howe", "2024-10-06", civil, "2024-10-05T13:30:00Z", 23.5},
		{"no midnight, São Paulo", "America/Sao_Paulo", "2017-10-15", civil, "2017-10-15T03:00:00Z", 23},
		{"the day before it", "America/Sao_Paulo", "2017-10-14", civil, "2017-10-14T03:00:00Z", 24},
		{"23:00 twice, São Paulo", "America/Sao_Paulo", "2018-02-17", civil, "2018-02-17T02:00:00Z", 25},
		{"no midnight, Beirut", "Asia/Beirut", "2022-03-27", civil, "2022-03-26T22:00:00Z", 23},
		{"23:00 twice, Beirut", "Asia/Beirut", "2022-10-29", civil, "2022-10-28T21:00:00Z", 25},
		{"midnight twice, Havana", "America/Havana", "2023-11-05", civil, "2023-11-05T04:00:00Z", 25},
		{"midnight twice, Azores", "Atlantic/Azores", "2024-10-27", civil, "2024-10-27T00:00:00Z", 25},
		{"a minute of the day, then the day before again", "America/St_Johns", "2006-10-29", civil, "2006-10-29T02:30:00Z", 25},
		{"Samoa before the date line", "Pacific/Apia", "2011-12-29", civil, "2011-12-29T10:00:00Z", 24},
		{"the day Samoa left out", "Pacific/Apia", "2011-12-30", civil, "2011-12-30T10:00:00Z", 0},
		{"Samoa after it", "Pacific/Apia", "2011-12-31", civil, "2011-12-30T10:00:00Z", 24},
		{"midnight skipped by 44½ minutes", "Africa/Monrovia", "1972-01-07", civil, "1972-01-07T00:44:30Z", 24 - 44.5/60},
	} {
		w := row.rule.Window(zone(t, row.zone), date(row.day))
		if w.Start != utc(row.start) || float64(w.End-w.Start)/3600 != row.hours {
			t.Errorf("%s: from %s, %g hours; want %s, %g hours", row.name,
				time.Unix(w.Start, 0).UTC().Format(time.RFC3339), float64(w.End-w.Start)/3600, row.start, row.hours)
		}
		if w.Day != date(row.day) || w.FirstSlot != row.rule.FirstSlot || w.Offset != int64(row.rule.OffsetSeconds) {
			t.Errorf("%s: %+v does not carry its day, slots and offset", row.name, w)
		}
	}
}

// drawRule draws a rule that Check takes.
func drawRule(t *rapid.T) planner.DayRule {
	rule := planner.DayRule{
		OffsetSeconds: 900 * rapid.IntRange(-48, 56).Draw(t, "offset"),
		Boundary:      rapid.SampledFrom([]planner.Boundary{planner.StandardMidnight, planner.CivilMidnight, planner.FixedHour}).Draw(t, "boundary"),
		FirstSlot:     rapid.IntRange(0, 1).Draw(t, "first slot"),
	}
	if rule.Boundary == planner.FixedHour {
		rule.ClosingHour = rapid.IntRange(1, 23).Draw(t, "closing hour")
	}
	return rule
}

// Every instant belongs to exactly one day, and the days leave no gap.
func TestDayOfIsTheInverseOfWindow(t *testing.T) {
	zones := []string{
		"UTC", "America/New_York", "Europe/London", "Europe/Dublin", "Australia/Lord_Howe", "America/Sao_Paulo", "Asia/Beirut",
		"Pacific/Apia", "America/St_Johns", "America/Havana", "Asia/Kathmandu", "Africa/Monrovia", "Pacific/Kwajalein", "Africa/Casablanca", "America/Juneau",
	}
	loaded := map[string]*time.Location{}
	for _, name := range zones {
		loaded[name] = zone(t, name)
	}
	first, last := date("1800-01-05"), date("2299-01-01")
	rapid.Check(t, func(t *rapid.T) {
		rule, in := drawRule(t), loaded[rapid.SampledFrom(zones).Draw(t, "zone")]
		at := rapid.Int64Range(int64(first)*86400, int64(last)*86400).Draw(t, "at")
		if rapid.Bool().Draw(t, "at a change of clocks") {
			if _, change := time.Unix(at, 0).In(in).ZoneBounds(); !change.IsZero() {
				at = change.Unix() + rapid.Int64Range(-90000, 90000).Draw(t, "away")
			}
		}
		day := rule.DayOf(in, at)
		for near := day - 2; near <= day+2; near++ {
			w, next := rule.Window(in, near), rule.Window(in, near+1)
			if holds := w.Start <= at && at < w.End; holds != (near == day) {
				t.Fatalf("%+v in %s: %d belongs to %s, yet %s runs %d to %d", rule, in, at, day, near, w.Start, w.End)
			}
			if w.End != next.Start || w.End < w.Start {
				t.Fatalf("%+v in %s: %s ends at %d, %s begins at %d", rule, in, near, w.End, near+1, next.Start)
			}
			if rule.Boundary != planner.CivilMidnight && w.End-w.Start != 86400 {
				t.Fatalf("%+v: %s has %d seconds", rule, near, w.End-w.Start)
			}
		}
		if rule.Boundary == planner.CivilMidnight {
			// The second route: what the clock on the wall shows. A date may come
			// twice; the instant is then on the later day of the two.
			if shown := planner.DayIn(time.Unix(at, 0), in); shown > day {
				t.Fatalf("%s: %d belongs to %s, the clock shows %s", in, at, day, shown)
			}
			if w := rule.Window(in, day); planner.DayIn(time.Unix(w.Start, 0), in) != day || planner.DayIn(time.Unix(w.Start-1, 0), in) >= day {
				t.Fatalf("%s: %s begins at %d, which is not when its clocks first show it", in, day, w.Start)
			}
		}
	})
}
