package intake

import (
	"bytes"
	"regexp"
	"strconv"
	"strings"
	"testing"
	"time"

	"swardbook/planner"
)

// layouts are the forms of parseMoment in the standard library's own terms;
// time.Parse takes a fraction after the seconds of any of them.
var layouts = func() (all []string) {
	for _, separator := range []string{"T", " "} {
		for _, clock := range []string{"15:04", "15:04:05"} {
			for _, space := range []string{"", " "} {
				for _, offset := range []string{"Z07:00", "Z0700", "Z07"} {
					all = append(all, "2006-01-02"+separator+clock+space+offset)
				}
			}
			all = append(all, "2006-01-02"+separator+clock)
		}
	}
	return append(all, "2006-01-02")
}()

// shape is narrower than time.Parse, which also takes "5:00", runs of spaces
// and a comma before a fraction.
var shape = regexp.MustCompile(`^\d{4}-\d\d-\d\d([T ]\d\d:\d\d(:\d\d(\.\d+)?)?( ?(Z|[+-]\d\d(:?\d\d)?))?)?$`)

// byStandardLibrary is the second route from a text to an instant.
func byStandardLibrary(text string, site Site) (at int64, clock, ok bool) {
	if !shape.MatchString(text) {
		return 0, false, false
	}
	zone := time.FixedZone("site", site.OffsetSeconds)
	day := time.Duration(0)
	if i := strings.Index(text, "24:00"); i == 11 {
		text, day = text[:11]+"00:00"+text[16:], 24*time.Hour
	}
	for _, layout := range layouts {
		parsed, err := time.ParseInLocation(layout, text, zone)
		if err != nil {
			continue
		}
		if _, offset := parsed.Zone(); offset < -maxOffsetSeconds || offset > maxOffsetSeconds {
			return 0, false, false
		}
		if day > 0 && (parsed.Second() != 0 || parsed.Nanosecond() != 0) {
			return 0, false, false
		}
		parsed = parsed.Add(day)
		local, utc := planner.DayIn(parsed, zone), planner.DayIn(parsed, time.UTC)
		return parsed.Unix(), layout != "2006-01-02", min(local, utc) >= planner.DayMin && max(local, utc) <= planner.DayMax
	}
	return 0, false, false
}

// FuzzMoment compares parseMoment with time.Parse. Where the two differ on
// purpose byStandardLibrary says so.
func FuzzMoment(f *testing.F) {
	for _, text := range []string{
		"2013-07-01T05:00-05:00", "2013-07-01 05:00:00Z", "2013-07-01T05:00:00.123456789123+0530", "2013-07-01T05:00 +02",
		"2013-07-01", "2013-07-01T24:00", "2013-07-01T24:00:00.0Z", "2013-07-01T24:00:00.1Z", "2013-02-29T00:00", "2000-02-29T00:00",
		"1700-01-01T00:00+15:00", "2299-12-31T24:00Z", "0000-01-01T00:00Z", "2013-07-01T05:00:60Z", "2013-07-01T05:00+15:01",
		"2013-07-01T05:00:00,5Z", "2013-07-01T5:00", "2013-07-01t05:00z", " 2013-07-01T05:00", "2013-07-01T05:00  Z", "",
		"2013-07-01T", "2013-07-01T05:0", "2013-07-01T05-00", "2013-07-01T0x:00", "2013-07-01T05:00:0", "2013-07-01T05:00:xx", "2013-07-01T05:00:00.Z",
		"2013-07-01T05:00+5", "2013-07-01T05:00+05-00", "2013-07-01T05:00+0x", "2013-07-01T05:00+05:0x", "2013-07-01T05:00 ", "2013-0x-01", "2013-07-01X",
	} {
		f.Add(text, -5)
	}
	f.Fuzz(func(t *testing.T, text string, hours int) {
		// A fraction longer than a nanosecond loses digits in time.Parse, which
		// can only matter to 24:00.
		if strings.Contains(text, "24:00:00.000000000") {
			return
		}
		site := Site{OffsetSeconds: hours % 15 * 3600}
		m, reason := parseMoment([]byte(text))
		at := int64(0)
		if reason == "" {
			clock := fileClock{offset: site.OffsetSeconds}
			at, reason = clock.instant(m, site)
		}
		wantAt, wantClock, ok := byStandardLibrary(text, site)
		if ok != (reason == "") {
			t.Fatalf("%q: reason %q, the standard library takes it: %t", text, reason, ok)
		}
		if ok && (at != wantAt || m.hasClock != wantClock) {
			t.Fatalf("%q: %d (clock %t), the standard library says %d (clock %t)", text, at, m.hasClock, wantAt, wantClock)
		}
	})
}

// Every day from 1600 to 2400 has the number that planner gives it, and every
// month the length.
func TestDayNumber(t *testing.T) {
	t.Parallel()
	for at := time.Date(1600, 1, 1, 0, 0, 0, 0, time.UTC); at.Year() < 2400; at = at.AddDate(0, 0, 1) {
		year, month, date := at.Date()
		if got, want := dayNumber(year, int(month), date), planner.DayOf(year, month, date); got != want {
			t.Fatalf("%s is day %d, want %d", at.Format(time.DateOnly), got, want)
		}
		if next := at.AddDate(0, 0, 1); next.Day() == 1 && daysIn(year, int(month)) != date {
			t.Fatalf("%s has %d days, want %d", at.Format("2006-01"), daysIn(year, int(month)), date)
		}
	}
	if got, want := dayNumber(0, 1, 1), planner.DayOf(0, time.January, 1); got != want {
		t.Errorf("year 0 begins on day %d, want %d", got, want)
	}
}

// FuzzNumber compares parseNumber with strconv.ParseFloat.
func FuzzNumber(f *testing.F) {
	for _, text := range []string{"12.5", "-0.1", "+3", ".5", "5.", "", ".", "-", "1e1", "1E-3", "0x1p-2", "inf", "NaN", "1_000",
		"123456789012345", "1234567890123456", "0.000000000000001", "0.1234567890123456", "9007199254740993", "1e999", "1e", "--1", "1.2.3"} {
		f.Add([]byte(text))
	}
	f.Fuzz(func(t *testing.T, text []byte) {
		got, ok := parseNumber(text)
		// A comma is a decimal comma where it is the only one and no point is there.
		if bytes.Count(text, []byte{','}) == 1 && !bytes.ContainsAny(text, ".") {
			text = bytes.Replace(text, []byte{','}, []byte{'.'}, 1)
		}
		want, err := strconv.ParseFloat(string(text), 64)
		wantOK := err == nil && len(text) <= longestNumber && len(bytes.Trim(text, "0123456789+-.eE")) == 0 && !bytes.ContainsAny(text, "xX_pPiInN")
		if ok != wantOK || ok && got != want {
			t.Fatalf("%q: %v %t, strconv says %v %v", text, got, ok, want, err)
		}
	})
}
