package planner_test

import (
	"fmt"
	"math"
	"reflect"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"swardbook/calc/knownday"
	"swardbook/planner"
)

const hour = int64(3600)

// windowOf is a day of so many hours that begins at UTC second 0.
func windowOf(hours float64, firstSlot int) planner.Window {
	return planner.Window{Day: 0, Start: 0, End: int64(hours * 3600), FirstSlot: firstSlot}
}

// onTheHour has a reading at each hour from first through last, but for those
// left out.
func onTheHour(first, last int, c func(h int) float64, without ...int) []planner.Reading {
	var readings []planner.Reading
	for h := first; h <= last; h++ {
		if !slices.Contains(without, h) {
			readings = append(readings, planner.Reading{At: int64(h) * hour, C: c(h)})
		}
	}
	return readings
}

func ramp(h int) float64 { return float64(h) / 2 }

// The catalogue of days whose answers are known; each states its own source.
func TestBuildDayKnownDays(t *testing.T) {
	for _, d := range knownday.Days() {
		t.Run(d.Name, func(t *testing.T) {
			n := len(d.HoursC)
			w := windowOf(float64(n), 0)
			readings := onTheHour(0, n-1, func(h int) float64 { return d.HoursC[h] }, d.Missing...)
			facts := planner.BuildDay(w, readings, nil)
			if facts.HasHourly != d.Whole || facts.HasHourly && !within(facts.HourlyC, d.BridgedMeanC, d.Tolerance) {
				t.Errorf("24-hour mean %.10g (%t), want %.10g (%t)", facts.HourlyC, facts.HasHourly, d.BridgedMeanC, d.Whole)
			}
			if (facts.HoursC != nil) != d.Whole || d.Whole && len(facts.HoursC) != n {
				t.Errorf("%d hours kept, whole day: %t", len(facts.HoursC), d.Whole)
			}
			bridged := 0
			if d.Whole {
				bridged = len(d.Missing)
			}
			if facts.SlotsWanted != n || facts.SlotsReal != n-len(d.Missing) || facts.SlotsBridged != bridged {
				t.Errorf("%d real, %d bridged of %d; want %d, %d of %d", facts.SlotsReal, facts.SlotsBridged, facts.SlotsWanted, n-len(d.Missing), bridged, n)
			}
			rest := d.RestC()
			if !facts.HasExtremes || facts.ExtremesFrom != planner.FromHourly || facts.HighC != slices.Max(rest) || facts.LowC != slices.Min(rest) {
				t.Errorf("extremes %g and %g from %d, want those of the readings, %g and %g", facts.HighC, facts.LowC, facts.ExtremesFrom, slices.Max(rest), slices.Min(rest))
			}
			own := planner.DailyReading{HighC: d.HighC, LowC: d.LowC}
			facts = planner.BuildDay(w, readings, &own)
			meanC, ok := facts.Mean(planner.Midrange)
			if !ok || facts.ExtremesFrom != planner.FromStation || !within(meanC, d.MidrangeMeanC, d.Tolerance) {
				t.Errorf("high/low mean %g from %d, want %g from the station's own", meanC, facts.ExtremesFrom, d.MidrangeMeanC)
			}
		})
	}
}

// The two ways of labelling 24 hours, of the invented day of the catalogue,
// computed at 50 digits (18.7041666667 and 18.7208333333).
func TestBuildDayFirstSlot(t *testing.T) {
	c := knownday.Readings25C()
	readings := onTheHour(0, 24, func(h int) float64 { return c[h] })
	for firstSlot, want := range []float64{18.7041666667, 18.7208333333} {
		facts := planner.BuildDay(windowOf(24, firstSlot), readings, nil)
		if !within(facts.HourlyC, want, 1e-9) || facts.SlotsReal != 24 {
			t.Errorf("first slot %d: %.10f of %d readings, want %.10f of 24", firstSlot, facts.HourlyC, facts.SlotsReal, want)
		}
	}
	// 24:00 belongs to the day whose slots run 01 to 24, 00:00 to the other.
	extreme := func(h int) float64 { return map[int]float64{0: -9, 24: 39}[h] }
	first, second := planner.BuildDay(windowOf(24, 0), onTheHour(0, 24, extreme), nil), planner.BuildDay(windowOf(24, 1), onTheHour(0, 24, extreme), nil)
	if first.LowC != -9 || first.HighC != 0 || second.LowC != 0 || second.HighC != 39 {
		t.Errorf("extremes %g to %g and %g to %g, want -9 to 0 and 0 to 39", first.LowC, first.HighC, second.LowC, second.HighC)
	}
}

// A slot takes the reading nearest to it; the rules are the design's own.
func TestBuildDayNearestReading(t *testing.T) {
	at := func(clock string) int64 {
		var h, m, s int64
		if _, err := fmt.Sscanf(clock, "%d:%d:%d", &h, &m, &s); err != nil {
			t.Fatal(err)
		}
		return h*hour + m*60 + s
	}
	for _, row := range []struct {
		name         string
		around       map[string]float64 // readings around noon; all other hours have theirs
		noon, oneC   float64            // what the slots 12 and 13 hold
		real, bridge int
	}{
		{"on the hour", map[string]float64{"12:00:00": 20, "13:00:00": 30}, 20, 30, 24, 0},
		{"the nearer of two", map[string]float64{"11:50:00": 20, "12:05:00": 21, "13:00:00": 30}, 21, 30, 24, 0},
		{"the nearer of two, before", map[string]float64{"11:55:00": 20, "12:06:00": 21, "13:00:00": 30}, 20, 30, 24, 0},
		{"equally near: the earlier", map[string]float64{"11:50:00": 20, "12:10:00": 21, "13:00:00": 30}, 20, 30, 24, 0},
		{"a second short of half an hour", map[string]float64{"12:29:59": 20, "13:00:00": 30}, 20, 30, 24, 0},
		{"half an hour exactly: the later slot", map[string]float64{"12:00:00": 20, "12:30:00": 30}, 20, 30, 24, 0},
		{"half an hour exactly, alone", map[string]float64{"12:30:00": 30}, 20, 30, 23, 1}, // noon by the line from 10 at 11:00
		{"half past eleven is noon's", map[string]float64{"11:30:00": 20, "13:00:00": 30}, 20, 30, 24, 0},
		{"half past is farther than any", map[string]float64{"11:30:00": 5, "12:29:00": 20, "13:00:00": 30}, 20, 30, 24, 0},
		{"two at one instant: the first", map[string]float64{"12:00:00": 20, "13:00:00": 30}, 20, 30, 24, 0},
	} {
		readings := onTheHour(0, 23, func(int) float64 { return 10 }, 12, 13)
		for clock, c := range row.around {
			readings = append(readings, planner.Reading{At: at(clock), C: c})
		}
		if strings.HasPrefix(row.name, "two at one") {
			readings = append(readings, planner.Reading{At: at("12:00:00"), C: 99})
		}
		slices.SortStableFunc(readings, func(a, b planner.Reading) int { return int(a.At - b.At) })
		facts := planner.BuildDay(windowOf(24, 0), readings, nil)
		if !facts.HasHourly || facts.HoursC[12] != row.noon || facts.HoursC[13] != row.oneC || facts.SlotsReal != row.real || facts.SlotsBridged != row.bridge {
			t.Errorf("%s: hours %v, %d real, %d bridged; want %g and %g, %d, %d", row.name,
				facts.HoursC, facts.SlotsReal, facts.SlotsBridged, row.noon, row.oneC, row.real, row.bridge)
		}
	}
}

// A station that reads at half past fills the later slot each time.
func TestBuildDayHalfPast(t *testing.T) {
	var readings []planner.Reading
	for h := int64(-6); h < 30; h++ {
		readings = append(readings, planner.Reading{At: h*hour + 1800, C: float64(h)})
	}
	for firstSlot := range 2 {
		facts := planner.BuildDay(windowOf(24, firstSlot), readings, nil)
		if facts.SlotsReal != 24 || !facts.HasHourly {
			t.Fatalf("first slot %d: %d real slots", firstSlot, facts.SlotsReal)
		}
		for i, c := range facts.HoursC {
			if want := float64(i + firstSlot - 1); c != want {
				t.Errorf("first slot %d: hour %d holds %g, want the %g read half an hour before", firstSlot, i+firstSlot, c, want)
			}
		}
	}
	// Without the reading of 23:30 the day before, 00:00 stays open.
	facts := planner.BuildDay(windowOf(24, 0), readings[6:], nil)
	if facts.HasHourly || facts.SlotsReal != 23 || !facts.HasExtremes {
		t.Errorf("a station's first day: %+v; want 23 real slots, extremes and no mean", facts)
	}
}

func TestBuildDayGaps(t *testing.T) {
	for _, row := range []struct {
		name    string
		missing []int
		bridged int  // slots of the day itself
		whole   bool // has a mean
	}{
		{"none", nil, 0, true},
		{"one", []int{9}, 1, true},
		{"two", []int{9, 10}, 2, true},
		{"three", []int{9, 10, 11}, 3, true},
		{"four", []int{9, 10, 11, 12}, 0, false},
		{"three and three, one between", []int{9, 10, 11, 13, 14, 15}, 6, true},
		{"first", []int{0}, 1, true},
		{"first three", []int{0, 1, 2}, 3, true},
		{"across midnight, one each side", []int{-1, 0}, 1, true},
		{"across midnight, one before", []int{-1, 0, 1}, 2, true},
		{"across midnight, two before", []int{-2, -1, 0}, 1, true},
		{"four across midnight, one before", []int{-1, 0, 1, 2}, 0, false},
		{"four across midnight, two each side", []int{-2, -1, 0, 1}, 0, false},
		{"four across midnight, three before", []int{-3, -2, -1, 0}, 0, false},
		{"long before and one after", []int{-9, -8, -7, -6, -5, -4, -3, -2, -1, 0}, 0, false},
		{"the day before only", []int{-4, -3, -2, -1}, 0, true},
		{"last", []int{23}, 1, true},
		{"last three", []int{21, 22, 23}, 3, true},
		{"across the end, two after", []int{23, 24, 25}, 1, true},
		{"across the end, two before", []int{22, 23, 24}, 2, true},
		{"four across the end", []int{22, 23, 24, 25}, 0, false},
		{"four across the end, three after", []int{23, 24, 25, 26}, 0, false},
		{"no day after", []int{23, 24, 25, 26, 27, 28, 29, 30}, 0, false},
		{"the day after only", []int{24, 25, 26, 27}, 0, true},
		{"both ends", []int{-1, 0, 1, 22, 23, 24}, 4, true},
	} {
		facts := planner.BuildDay(windowOf(24, 0), onTheHour(-10, 33, ramp, row.missing...), nil)
		if facts.SlotsBridged != row.bridged || facts.HasHourly != row.whole {
			t.Errorf("%s: %d bridged, mean %t; want %d, %t", row.name, facts.SlotsBridged, facts.HasHourly, row.bridged, row.whole)
		}
		// On a straight ramp a straight line gives back what was lost.
		if row.whole && !within(facts.HourlyC, (ramp(0)+ramp(23))/2, 1e-12) {
			t.Errorf("%s: mean %g, want %g", row.name, facts.HourlyC, (ramp(0)+ramp(23))/2)
		}
		if !row.whole && facts.HoursC != nil {
			t.Errorf("%s: hours %v without a mean", row.name, facts.HoursC)
		}
	}
}

// Reach promises that readings farther away change nothing.
func TestBuildDayReach(t *testing.T) {
	for _, hours := range []float64{23, 23.5, 24, 24.5, 25} {
		for firstSlot := range 2 {
			w := windowOf(hours, firstSlot)
			for missing := range 4 {
				var gone []int
				for i := range missing {
					gone = append(gone, i, int(hours)-i)
				}
				all := onTheHour(-30, 60, ramp, gone...)
				near := slices.DeleteFunc(slices.Clone(all), func(r planner.Reading) bool {
					return r.At < w.Start-planner.Reach || r.At > w.End+planner.Reach
				})
				if a, b := planner.BuildDay(w, all, nil), planner.BuildDay(w, near, nil); !reflect.DeepEqual(a, b) {
					t.Errorf("%g hours, first slot %d, %d missing at each end: %+v with far readings, %+v without", hours, firstSlot, missing, a, b)
				}
			}
		}
	}
}

// Three quarters of the slots must be real: 18 of 24, 18 of 23, 19 of 25.
func TestBuildDayThreeQuarters(t *testing.T) {
	lost := []int{2, 3, 6, 7, 10, 11, 14, 15}
	for _, row := range []struct {
		hours   float64
		missing int
		enough  bool
	}{{24, 6, true}, {24, 7, false}, {23, 5, true}, {23, 6, false}, {25, 6, true}, {25, 7, false}, {23.5, 6, true}, {24.5, 6, true}, {24.5, 7, false}} {
		readings := onTheHour(-5, 30, ramp, lost[:row.missing]...)
		facts := planner.BuildDay(windowOf(row.hours, 0), readings, nil)
		if facts.HasHourly != row.enough || facts.HasExtremes != row.enough {
			t.Errorf("%g hours, %d lost: mean %t, extremes %t, want %t", row.hours, row.missing, facts.HasHourly, facts.HasExtremes, row.enough)
		}
		if want := int(math.Ceil(row.hours)); facts.SlotsWanted != want || facts.SlotsReal != want-row.missing {
			t.Errorf("%g hours, %d lost: %d of %d real", row.hours, row.missing, facts.SlotsReal, facts.SlotsWanted)
		}
		// The station's own extremes need no readings.
		own := planner.DailyReading{HighC: 30, LowC: -3}
		if facts := planner.BuildDay(windowOf(row.hours, 0), readings, &own); facts.HighC != 30 || facts.LowC != -3 || facts.ExtremesFrom != planner.FromStation {
			t.Errorf("%g hours, %d lost: own extremes became %g and %g", row.hours, row.missing, facts.HighC, facts.LowC)
		}
	}
}

// Extremes without own ones are those of all readings, not of the slots only.
func TestBuildDayExtremesOfAllReadings(t *testing.T) {
	readings := onTheHour(0, 23, func(int) float64 { return 10 })
	readings = slices.Insert(readings, 15, planner.Reading{At: 14*hour + 600, C: 17}, planner.Reading{At: 14*hour + 1200, C: 4})
	facts := planner.BuildDay(windowOf(24, 0), readings, nil)
	if facts.HighC != 17 || facts.LowC != 4 || facts.HourlyC != 10 || facts.ExtremesFrom != planner.FromHourly {
		t.Errorf("%+v; want extremes 17 and 4 beside a mean of 10", facts)
	}
}

func TestBuildDayPublishedMean(t *testing.T) {
	own := planner.DailyReading{HighC: 20, LowC: 10, MeanC: 14.2, HasMean: true}
	alone := planner.BuildDay(windowOf(24, 0), nil, &own)
	if !alone.HasHourly || alone.HourlyC != 14.2 || !alone.Published || alone.HoursC != nil || alone.SlotsReal != 0 {
		t.Errorf("published mean alone: %+v", alone)
	}
	beside := planner.BuildDay(windowOf(24, 0), onTheHour(0, 23, func(int) float64 { return 15 }), &own)
	if !beside.HasHourly || beside.HourlyC != 15 || beside.Published {
		t.Errorf("readings go before a published mean: %+v", beside)
	}
	gap := planner.BuildDay(windowOf(24, 0), onTheHour(0, 23, func(int) float64 { return 15 }, 5, 6, 7, 8), &own)
	if gap.HourlyC != 14.2 || !gap.Published || gap.HoursC != nil || gap.SlotsReal != 20 {
		t.Errorf("a published mean stands in for an open gap: %+v", gap)
	}
	own.HasMean = false
	if none := planner.BuildDay(windowOf(24, 0), nil, &own); none.HasHourly || none.Published {
		t.Errorf("a mean of 0 was never published: %+v", none)
	}
}

func TestBuildDayDoubt(t *testing.T) {
	for _, row := range []struct {
		name   string
		change map[int]float64 // by hour; others are 14.0, 13.9 at 02:00
		half   bool            // drop each other reading
		offset int64
		want   string
	}{
		{"steady", nil, false, 0, ""},
		{"a leap down", map[int]float64{3: -10.5}, false, 0, "-10.5 °C at 03:00 between 13.9 and 14.0"},
		{"a leap up", map[int]float64{3: 41}, false, 0, "41.0 °C at 03:00 between 13.9 and 14.0"},
		{"named in standard time", map[int]float64{3: -10.5}, false, -5 * hour, "-10.5 °C at 22:00 between 13.9 and 14.0"},
		{"exactly 10 from both", map[int]float64{5: 24}, false, 0, "24.0 °C at 05:00 between 14.0 and 14.0"},
		{"10 from one only", map[int]float64{3: 23.9}, false, 0, ""},
		{"a front: it stays", map[int]float64{20: 2, 21: 2, 22: 2, 23: 2, 24: 2}, false, 0, ""},
		{"readings too far apart", map[int]float64{4: -10.5}, true, 0, ""},
		{"the first of two", map[int]float64{8: 40, 16: -10.5}, false, 0, "40.0 °C at 08:00 between 14.0 and 14.0"},
		{"at midnight, against the day before", map[int]float64{0: 40}, false, 0, "40.0 °C at 00:00 between 14.0 and 14.0"},
		{"the day before is its own", map[int]float64{-1: 40}, false, 0, ""},
		{"the day after is its own", map[int]float64{24: 40}, false, 0, ""},
	} {
		w := windowOf(24, 0)
		w.Offset = row.offset
		var readings []planner.Reading
		for _, r := range onTheHour(-3, 27, func(int) float64 { return 14 }) {
			h := int(r.At / hour)
			if h == 2 {
				r.C = 13.9
			}
			if c, ok := row.change[h]; ok {
				r.C = c
			}
			if !row.half || h%2 == 0 {
				readings = append(readings, r)
			}
		}
		facts := planner.BuildDay(w, readings, nil)
		if facts.Doubt != row.want {
			t.Errorf("%s: %q, want %q", row.name, facts.Doubt, row.want)
		}
	}
	// A doubted value still counts.
	leap := func(h int) float64 { return map[bool]float64{true: -10, false: 14}[h == 3] }
	facts := planner.BuildDay(windowOf(24, 0), onTheHour(0, 23, leap), nil)
	if facts.Doubt == "" || facts.LowC != -10 || !within(facts.HourlyC, 13, 1e-12) {
		t.Errorf("%+v; want a doubt, a low of -10 and a mean of (23·14 - 10)/24 = 13", facts)
	}
}

func TestBuildDayEmpty(t *testing.T) {
	facts := planner.BuildDay(windowOf(24, 0), nil, nil)
	if want := (planner.DayFacts{SlotsWanted: 24}); !reflect.DeepEqual(facts, want) || !facts.Empty() {
		t.Errorf("%+v, want %+v", facts, want)
	}
	// The date that Samoa's clocks left out holds no instant, and so nothing.
	gone := planner.DayRule{Boundary: planner.CivilMidnight}.Window(zone(t, "Pacific/Apia"), date("2011-12-30"))
	var readings []planner.Reading
	for at := gone.Start - planner.Reach; at <= gone.End+planner.Reach; at += hour / 2 {
		readings = append(readings, planner.Reading{At: at, C: 25})
	}
	if facts := planner.BuildDay(gone, readings, nil); !reflect.DeepEqual(facts, planner.DayFacts{Day: gone.Day}) {
		t.Errorf("a date without hours has %+v", facts)
	}
}

// slowDay builds a day from the words of the rules alone, without the package's
// functions: "slot h takes the reading nearest to h:00 within 30 minutes
// (exactly half an hour goes to the later slot; of two equally near, the earlier
// reading) … a gap of up to 3 slots, counted across midnight, is bridged by a
// straight line between the slots on its two sides; a longer one is not. With
// fewer than 18 real slots [three quarters], or an unbridged one, the day has
// none."
func slowDay(w planner.Window, readings []planner.Reading) planner.DayFacts {
	n := 0
	for s := w.Start; s < w.End; s += hour {
		n++
	}
	slotTime := func(i int) int64 { // i from 0; slots 01 to 24 end at the day's end
		if w.FirstSlot == 1 {
			return w.End - int64(n-1-i)*hour
		}
		return w.Start + int64(i)*hour
	}
	slot := func(i int) (float64, bool) {
		best, found := planner.Reading{}, false
		for _, r := range readings {
			before, after := slotTime(i)-r.At, r.At-slotTime(i)
			if before > 1800 || after >= 1800 {
				continue
			}
			if !found || max(before, after) < max(slotTime(i)-best.At, best.At-slotTime(i)) {
				best, found = r, true
			}
		}
		return best.C, found
	}
	facts := planner.DayFacts{Day: w.Day, SlotsWanted: n}
	hours, open := []float64{}, false
	for i := range n {
		if c, ok := slot(i); ok {
			facts.SlotsReal++
			hours = append(hours, c)
			continue
		}
		left, right := i-1, i+1
		for ; left > i-9; left-- {
			if _, ok := slot(left); ok {
				break
			}
		}
		for ; right < i+9; right++ {
			if _, ok := slot(right); ok {
				break
			}
		}
		a, okA := slot(left)
		b, okB := slot(right)
		if !okA || !okB || right-left-1 > 3 {
			open = true
			continue
		}
		facts.SlotsBridged++
		hours = append(hours, a+(b-a)*float64(i-left)/float64(right-left))
	}
	if float64(facts.SlotsReal) < 0.75*float64(n) {
		return facts
	}
	for _, r := range readings {
		in := r.At >= w.Start && r.At < w.End
		if w.FirstSlot == 1 {
			in = r.At > w.Start && r.At <= w.End
		}
		if in && (!facts.HasExtremes || r.C > facts.HighC) {
			facts.HighC = r.C
		}
		if in && (!facts.HasExtremes || r.C < facts.LowC) {
			facts.LowC = r.C
		}
		facts.HasExtremes = facts.HasExtremes || in
	}
	if facts.HasExtremes {
		facts.ExtremesFrom = planner.FromHourly
	}
	if open || n == 0 {
		return facts
	}
	facts.HoursC, facts.HasHourly = hours, true
	for _, c := range hours {
		facts.HourlyC += c / float64(len(hours))
	}
	return facts
}

// drawReadings draws a station's readings around a day, at an interval and with
// gaps and strays.
func drawReadings(t *rapid.T, w planner.Window) []planner.Reading {
	var readings []planner.Reading
	step := rapid.SampledFrom([]int64{600, 1200, 1800, 3600, 3600, 3600, 5400}).Draw(t, "step")
	stray := rapid.SampledFrom([]int64{0, 0, 60, 900, 1800}).Draw(t, "stray")
	lost := rapid.IntRange(0, 25).Draw(t, "percent lost")
	at := w.Start - 8*hour + 60*rapid.Int64Range(0, 59).Draw(t, "minute")
	for ; at < w.End+8*hour; at += step {
		if rapid.IntRange(1, 100).Draw(t, "luck") <= lost {
			continue
		}
		moved := at
		if stray > 0 {
			moved += 60 * rapid.Int64Range(-stray/60, stray/60).Draw(t, "away")
		}
		readings = append(readings, planner.Reading{At: moved, C: drawTemperature(t, -20, 40, "reading")})
	}
	slices.SortStableFunc(readings, func(a, b planner.Reading) int { return int(a.At - b.At) })
	return readings
}

func TestBuildDayAgainstSlowDay(t *testing.T) {
	whole, partly, empty := 0, 0, 0
	rapid.Check(t, func(t *rapid.T) {
		w := windowOf(rapid.SampledFrom([]float64{24, 24, 23, 25, 23.5, 24.5}).Draw(t, "hours"), rapid.IntRange(0, 1).Draw(t, "first slot"))
		readings := drawReadings(t, w)
		got, want := planner.BuildDay(w, readings, nil), slowDay(w, readings)
		switch {
		case want.HasHourly:
			whole++
		case want.SlotsReal > 0:
			partly++
		default:
			empty++
		}
		for i := range want.HoursC {
			if len(got.HoursC) != len(want.HoursC) || !within(got.HoursC[i], want.HoursC[i], 1e-9) {
				t.Fatalf("%+v:\nhours %v\nslowly %v", w, got.HoursC, want.HoursC)
			}
		}
		if !within(got.HourlyC, want.HourlyC, 1e-9) {
			t.Fatalf("%+v: mean %g, slowly %g", w, got.HourlyC, want.HourlyC)
		}
		got.HoursC, want.HoursC, got.HourlyC, want.HourlyC, got.Doubt = nil, nil, 0, 0, ""
		if !reflect.DeepEqual(got, want) {
			t.Fatalf("%+v:\n%+v\nslowly\n%+v", w, got, want)
		}
	})
	if whole == 0 || partly == 0 {
		t.Errorf("the draw was too narrow: %d whole days, %d partly known, %d empty", whole, partly, empty)
	}
}

// checkDay holds what must be true of every day that is built.
func checkDay(t testing.TB, w planner.Window, facts planner.DayFacts) {
	t.Helper()
	for _, c := range append([]float64{facts.HighC, facts.LowC, facts.HourlyC}, facts.HoursC...) {
		if math.IsNaN(c) || math.IsInf(c, 0) {
			t.Fatalf("%+v holds no number", facts)
		}
	}
	switch {
	case facts.SlotsReal+facts.SlotsBridged > facts.SlotsWanted:
		t.Fatalf("%d real and %d bridged of %d", facts.SlotsReal, facts.SlotsBridged, facts.SlotsWanted)
	case facts.HasExtremes && facts.HighC < facts.LowC:
		t.Fatalf("high %g below low %g", facts.HighC, facts.LowC)
	case facts.HasHourly && !facts.Published && len(facts.HoursC) != facts.SlotsWanted:
		t.Fatalf("a mean of %d hours of %d", len(facts.HoursC), facts.SlotsWanted)
	case (facts.Published || !facts.HasHourly) && facts.HoursC != nil:
		t.Fatalf("hours without a mean of them: %+v", facts)
	case !facts.HasHourly && facts.HourlyC != 0, !facts.HasExtremes && (facts.HighC != 0 || facts.LowC != 0 || facts.ExtremesFrom != planner.Unknown):
		t.Fatalf("values that are not known: %+v", facts)
	case facts.Day != w.Day:
		t.Fatalf("day %s of the window of %s", facts.Day, w.Day)
	}
}

// FuzzBuildDay reads pairs of bytes as a time step in minutes and a temperature.
func FuzzBuildDay(f *testing.F) {
	var ordinary []byte
	for h := range 34 {
		ordinary = append(ordinary, 60, byte(10+h))
	}
	f.Add(ordinary, uint8(0), uint8(0), false)
	f.Add(ordinary[:40], uint8(1), uint8(1), true)
	f.Add([]byte{}, uint8(2), uint8(0), false)
	f.Add([]byte{}, uint8(5), uint8(0), false) // a date that the clocks left out
	f.Add([]byte{0, 200, 0, 5, 30, 7}, uint8(3), uint8(1), true)
	f.Fuzz(func(t *testing.T, data []byte, length, firstSlot uint8, hasOwn bool) {
		w := windowOf([]float64{24, 23, 25, 23.5, 24.5, 0}[length%6], int(firstSlot%2))
		at := w.Start - 5*hour
		var readings []planner.Reading
		for i := 0; i+1 < len(data) && i < 2000; i += 2 {
			at += int64(data[i]) * 60
			readings = append(readings, planner.Reading{At: at, C: float64(data[i+1])/2 - 60})
		}
		var own *planner.DailyReading
		if hasOwn {
			own = &planner.DailyReading{Day: w.Day, HighC: 20, LowC: 5, MeanC: 11, HasMean: len(data)%3 == 0}
		}
		facts := planner.BuildDay(w, readings, own)
		checkDay(t, w, facts)
		facts.Doubt = ""
		if own == nil {
			slow := slowDay(w, readings)
			if facts.HasHourly != slow.HasHourly || facts.SlotsReal != slow.SlotsReal || facts.SlotsBridged != slow.SlotsBridged ||
				facts.HighC != slow.HighC || facts.LowC != slow.LowC || !within(facts.HourlyC, slow.HourlyC, 1e-9) {
				t.Fatalf("%+v, slowly %+v", facts, slow)
			}
		}
	})
}
