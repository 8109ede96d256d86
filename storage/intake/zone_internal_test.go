package intake

import (
	"slices"
	"testing"
	"time"
	_ "time/tzdata" // a fresh machine may have no time zones
)

// zones invert summer time (Dublin), shift by half an hour (Lord Howe), change
// at midnight (Asuncion), left a day out (Apia) or do nothing of it (UTC).
var zones = []string{"America/New_York", "Europe/Dublin", "Australia/Lord_Howe", "America/Asuncion", "Pacific/Apia", "Africa/Casablanca", "UTC", "Asia/Kolkata"}

func load(t *testing.T, name string) *time.Location {
	t.Helper()
	zone, err := time.LoadLocation(name)
	if err != nil {
		t.Fatal(err)
	}
	return zone
}

// Every instant is among those at which the clock shows what it shows then, and
// each of those shows it: the second route goes through all instants.
func TestWallInstants(t *testing.T) {
	t.Parallel()
	for _, name := range zones {
		zone := load(t, name)
		shown := map[int64][]int64{}
		from := time.Date(2011, 1, 1, 0, 0, 0, 0, time.UTC).Unix()
		const step, steps = 1800, 366 * 48
		for i := range int64(steps) {
			at := from + i*step
			_, offset := time.Unix(at, 0).In(zone).Zone()
			shown[at+int64(offset)] = append(shown[at+int64(offset)], at)
		}
		for i := int64(48); i < steps-48; i++ {
			local := from + i*step
			want := shown[local]
			first, second, count := wallInstants(zone, local)
			got := []int64{first, second}[:count]
			if !slices.Equal(got, want) && len(got)+len(want) > 0 {
				t.Fatalf("%s, %s: %v, want %v", name, time.Unix(local, 0).UTC(), got, want)
			}
		}
	}
}

// A year of half hours on the clock on the wall is known for one, in either
// order; one on standard time is not, nor one with gaps around the changes.
func TestWallEvidence(t *testing.T) {
	t.Parallel()
	for _, name := range zones {
		zone := load(t, name)
		standard := 0
		for _, month := range []time.Month{1, 7} {
			_, offset := time.Date(2013, month, 1, 0, 0, 0, 0, zone).Zone()
			if month == 1 || offset < standard {
				standard = offset
			}
		}
		changes := len(namesOfYear(zone, 2013)) > 1
		for _, backwards := range []bool{false, true} {
			wall, fixed := newWallEvidence(zone), newWallEvidence(zone)
			for i := range int64(365 * 48) {
				if backwards {
					i = 365*48 - 1 - i
				}
				at := time.Date(2013, 1, 1, 0, 0, 0, 0, time.UTC).Unix() + i*1800
				_, offset := time.Unix(at, 0).In(zone).Zone()
				wall.add(at + int64(offset))
				fixed.add(at + int64(standard))
			}
			if got, unsure := wall.judge(); got != changes || unsure {
				t.Errorf("%s, backwards %t: the clock on the wall is judged %t, unsure %t", name, backwards, got, unsure)
			}
			if got, unsure := fixed.judge(); got || unsure {
				t.Errorf("%s, backwards %t: standard time is judged %t, unsure %t", name, backwards, got, unsure)
			}
		}
	}
}

// namesOfYear are the offsets of the zone in a year.
func namesOfYear(zone *time.Location, year int) map[int]bool {
	offsets := map[int]bool{}
	for day := range 365 {
		_, offset := time.Date(year, 1, 1+day, 12, 0, 0, 0, zone).Zone()
		offsets[offset] = true
	}
	return offsets
}

// A file on standard time is never taken for one on the clock on the wall,
// however far apart its rows, and with every row twice; one on that clock is
// known for one when two rows fit into the hour that comes twice.
func TestWallEvidenceAtAnySpacing(t *testing.T) {
	t.Parallel()
	zone := load(t, "America/New_York")
	for _, minutes := range []int64{1, 5, 10, 15, 20, 30, 60, 90, 120, 180, 240, 360, 720} {
		for _, past := range []int64{0, 7, 53} {
			for _, times := range []int{1, 2} {
				wall, fixed := newWallEvidence(zone), newWallEvidence(zone)
				from := time.Date(2013, 1, 1, 5, 0, 0, 0, time.UTC).Unix() + past*60
				for at := from; at < from+365*secondsPerDay; at += minutes * 60 {
					_, offset := time.Unix(at, 0).In(zone).Zone()
					for range times {
						wall.add(at + int64(offset))
						fixed.add(at - 5*3600)
					}
				}
				if got, unsure := fixed.judge(); got || unsure {
					t.Errorf("standard time, %d rows each %d minutes: judged %t, unsure %t", times, minutes, got, unsure)
				}
				if got, unsure := wall.judge(); minutes <= 60 && !got || unsure {
					t.Errorf("the clock on the wall, %d rows each %d minutes: judged %t, unsure %t", times, minutes, got, unsure)
				}
			}
		}
	}
}

func TestZoneNames(t *testing.T) {
	t.Parallel()
	newYork := namesOf(load(t, "America/New_York"))
	for text, want := range map[string]int{"Z": 0, "utc": 0, "(UTC)": 0, "GMT+2": 7200, "UTC-05:30": -19800, "+0100": 3600, "-3": -10800, "EST": -18000, "edt": -14400, "UTC−4": -14400} {
		if got, ok := newYork.offset(text); !ok || got != want {
			t.Errorf("%q is %d, %t; want %d", text, got, ok, want)
		}
	}
	for _, text := range []string{"", "CET", "+", "+1:2", "+25", "UTC+", "5", "+123", "+01:60"} {
		if got, ok := newYork.offset(text); ok {
			t.Errorf("%q is %d", text, got)
		}
	}
}
