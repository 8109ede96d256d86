package intake

import (
	"testing"
	"time"
)

// What the doc comment of parseAnyMoment shows, and what tries to break it.
func TestAnyMoment(t *testing.T) {
	t.Parallel()
	for _, row := range []struct {
		text  string
		order dateOrder
		want  string // as RFC 3339 without the zone; "" when it is refused
	}{
		{"1/7/2013 5:00", dayFirst, "2013-07-01T05:00:00"},
		{"1/7/2013 5:00", monthFirst, "2013-01-07T05:00:00"},
		{"07/01/13 5:00:00 AM", monthFirst, "2013-07-01T05:00:00"},
		{"1.7.2013 05:00", dayFirst, "2013-07-01T05:00:00"},
		{"2013/07/01 05.00", dayFirst, "2013-07-01T05:00:00"},
		{"20130701 0500", dayFirst, "2013-07-01T05:00:00"},
		{"20130701053059", dayFirst, "2013-07-01T05:30:59"},
		{"201307010530", monthFirst, "2013-07-01T05:30:00"},
		{"1 Jul 2013 05:00", monthFirst, "2013-07-01T05:00:00"},
		{"Jul 1, 2013 5 pm", dayFirst, "2013-07-01T17:00:00"},
		{"01-Jul-13", dayFirst, "2013-07-01T00:00:00"},
		{"1. Juli 2013 5h30", dayFirst, "2013-07-01T05:30:00"},
		{"1 août 2013 05:00", dayFirst, "2013-08-01T05:00:00"},
		{"12 déc. 2013 05:00", dayFirst, "2013-12-12T05:00:00"},
		{"13/07/08", yearFirst, "2013-07-08T00:00:00"},
		{"31/12/69", dayFirst, "2069-12-31T00:00:00"},
		{"1/1/70", dayFirst, "1970-01-01T00:00:00"},
		{"1/7/2013 12:00 am", dayFirst, "2013-07-01T00:00:00"},
		{"1/7/2013 12:30 a. m.", dayFirst, "2013-07-01T00:30:00"},
		{"1/7/2013 12:00 PM", dayFirst, "2013-07-01T12:00:00"},
		{"1/7/2013 24:00", dayFirst, "2013-07-02T00:00:00"},
		{"1/7/2013, 05:00:30.250", dayFirst, "2013-07-01T05:00:30"},
		{"29/2/2012", dayFirst, "2012-02-29T00:00:00"},
		{"29/2/2013", dayFirst, ""},
		{"13/7/2013", monthFirst, ""},
		{"0/7/2013", dayFirst, ""},
		{"1/7/13/05", dayFirst, ""},
		{"1/7/201", dayFirst, ""},
		{"1/7", dayFirst, ""},
		{"1/7/2013 25:00", dayFirst, ""},
		{"1/7/2013 24:00:01", dayFirst, ""},
		{"1/7/2013 5:60", dayFirst, ""},
		{"1/7/2013 13:00 pm", dayFirst, ""},
		{"1/7/2013 0:30 am", dayFirst, ""},
		{"1/7/2013 5", dayFirst, ""},
		{"1/7/2013 5:0", dayFirst, ""},
		{"1/7/2013 5:00 xyz", dayFirst, ""},
		{"1 foo 2013", dayFirst, ""},
		{"Jul 2013", dayFirst, ""},
		{"Jul Jul 1 2013", dayFirst, ""},
		{"1372654800", dayFirst, ""},
		{"123456789012345678901234567890", dayFirst, ""},
		{"yesterday", dayFirst, ""},
		{"", dayFirst, ""},
		{"-", dayFirst, ""},
		{"1/7/2013 \xff", dayFirst, ""},
	} {
		m, reason := parseAnyMoment([]byte(row.text), row.order, nil)
		got := ""
		if reason == "" {
			got = time.Unix(int64(m.day)*secondsPerDay+int64(m.second), 0).UTC().Format("2006-01-02T15:04:05")
		}
		if got != row.want {
			t.Errorf("%q as %s is %q (%s), want %q", row.text, string(row.order), got, reason, row.want)
		}
	}
}

// FuzzAnyMoment holds that what is read is in the calendar and on the clock.
func FuzzAnyMoment(f *testing.F) {
	for _, text := range []string{"1/7/2013 5:00", "20130701 0500", "Jul 1, 2013 5 pm", "01-Jul-13 05:00 EST", "1.7.2013 24:00", "13/07/08 5h30 a. m."} {
		for i := range dateOrders {
			f.Add([]byte(text), i)
		}
	}
	names := zoneNames{"EST": -5 * secondsPerHour}
	f.Fuzz(func(t *testing.T, text []byte, order int) {
		m, reason := parseAnyMoment(text, dateOrders[(order%3+3)%3], names)
		if reason != "" {
			return
		}
		year, _, _ := m.day.Date()
		if year < 0 || year > 9999 || m.second < 0 || m.second > secondsPerDay || m.offset > maxOffsetSeconds || m.offset < -maxOffsetSeconds {
			t.Fatalf("%q is read as %+v", text, m)
		}
	})
}
