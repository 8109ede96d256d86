package schedule_test

import (
	"fmt"
	"testing"
	"time"

	"pgregory.net/rapid"

	"swardbook/bot/schedule"
	"swardbook/planner"
)

func zone(t testing.TB, name string) *time.Location {
	t.Helper()
	zone, err := time.LoadLocation(name)
	if err != nil {
		t.Fatal(err)
	}
	return zone
}

func day(t testing.TB, text string) planner.Day {
	t.Helper()
	day, err := planner.ParseDay(text)
	if err != nil {
		t.Fatal(err)
	}
	return day
}

func at(t testing.TB, text string) time.Time {
	t.Helper()
	at, err := time.Parse(time.RFC3339, text)
	if err != nil {
		t.Fatal(err)
	}
	return at
}

// The clock changes are those of the time zone database (IANA tzdata): New
// York 10 March and 3 November 2024, Lord Howe half an hour on 7 April and 6
// October 2024, Santiago at midnight on 8 September 2024, Dublin 31 March
// 2024 (its winter is the one with the negative summer time), Apia without 30
// December 2011.
func TestDueAt(t *testing.T) {
	for _, row := range []struct {
		name, zone, day, clock, want string
	}{
		{"plain", "America/New_York", "2024-06-04", "05:30", "2024-06-04T09:30:00Z"},
		{"skipped hour: the next that exists", "America/New_York", "2024-03-10", "02:30", "2024-03-10T07:00:00Z"},
		{"just before the skip", "America/New_York", "2024-03-10", "01:59", "2024-03-10T06:59:00Z"},
		{"just after the skip", "America/New_York", "2024-03-10", "03:00", "2024-03-10T07:00:00Z"},
		{"doubled hour: the first", "America/New_York", "2024-11-03", "01:30", "2024-11-03T05:30:00Z"},
		{"after the doubled hour", "America/New_York", "2024-11-03", "02:00", "2024-11-03T07:00:00Z"},
		{"half an hour skipped", "Australia/Lord_Howe", "2024-10-06", "02:15", "2024-10-05T15:30:00Z"},
		{"half an hour doubled", "Australia/Lord_Howe", "2024-04-07", "01:45", "2024-04-06T14:45:00Z"},
		{"midnight skipped", "America/Santiago", "2024-09-08", "00:00", "2024-09-08T04:00:00Z"},
		{"inverted summer time", "Europe/Dublin", "2024-03-31", "01:30", "2024-03-31T01:00:00Z"},
		{"far east", "Pacific/Kiritimati", "2024-06-04", "05:30", "2024-06-03T15:30:00Z"},
		{"UTC", "UTC", "2024-06-04", "23:59", "2024-06-04T23:59:00Z"},
		{"a day that never was", "Pacific/Apia", "2011-12-30", "05:30", ""},
		{"the day after it", "Pacific/Apia", "2011-12-31", "05:30", "2011-12-30T15:30:00Z"},
	} {
		t.Run(row.name, func(t *testing.T) {
			got, exists := schedule.DueAt(day(t, row.day), minuteOf(t, row.clock), zone(t, row.zone))
			if exists != (row.want != "") {
				t.Fatalf("exists %v at %s", exists, got)
			}
			if exists && !got.Equal(at(t, row.want)) {
				t.Errorf("got %s, want %s", got.Format(time.RFC3339), row.want)
			}
		})
	}
}

func minuteOf(t testing.TB, clock string) int {
	t.Helper()
	at, err := time.Parse("15:04", clock)
	if err != nil {
		t.Fatal(err)
	}
	return 60*at.Hour() + at.Minute()
}

// In any zone and on any day the instant is on that day and shows the minute,
// or is the first after a gap.
func TestDueAtProperty(t *testing.T) {
	names := []string{"America/New_York", "Europe/Dublin", "Australia/Lord_Howe", "America/Santiago", "Asia/Tehran",
		"Africa/Casablanca", "Pacific/Chatham", "America/St_Johns", "UTC", "Asia/Kathmandu"}
	rapid.Check(t, func(t *rapid.T) {
		place := rapid.SampledFrom(names).Draw(t, "zone")
		zone, err := time.LoadLocation(place)
		if err != nil {
			t.Fatal(err)
		}
		day := planner.DayOf(2024, time.January, 1) + planner.Day(rapid.IntRange(-3000, 3000).Draw(t, "day"))
		minute := rapid.IntRange(0, 1439).Draw(t, "minute")
		got, exists := schedule.DueAt(day, minute, zone)
		if !exists || planner.DayIn(got, zone) != day {
			t.Fatalf("%s %d: %s is not on the day", day, minute, got.In(zone))
		}
		local := got.In(zone)
		shown := 60*local.Hour() + local.Minute()
		before := got.Add(-time.Minute).In(zone)
		switch beforeMinute := 60*before.Hour() + before.Minute(); {
		case shown == minute: // the first such: an hour earlier shows another
			for back := 15 * time.Minute; back <= 3*time.Hour; back += 15 * time.Minute {
				earlier := got.Add(-back).In(zone)
				if planner.DayIn(earlier, zone) == day && 60*earlier.Hour()+earlier.Minute() == minute {
					t.Fatalf("%s shows the time before %s", earlier, local)
				}
			}
		case shown > minute && (beforeMinute < minute || planner.DayIn(before, zone) < day): // the first after a gap
		default:
			t.Fatalf("%s shows %d for %d", local, shown, minute)
		}
	})
}

func post(zone *time.Location, change func(*planner.Post)) schedule.Timed {
	one := planner.Post{ID: 1, Site: 1, What: "morning", Minute: 330, Channel: "77", WindowMinutes: 240, From: planner.DayOf(2024, time.June, 1)}
	if change != nil {
		change(&one)
	}
	return schedule.Timed{Post: one, Zone: zone}
}

func TestDue(t *testing.T) {
	newYork := zone(t, "America/New_York")
	june := func(d int) planner.Day { return planner.DayOf(2024, time.June, d) }
	row := func(d, part int, state planner.PostingState) planner.Posting {
		return planner.Posting{Post: 1, Day: june(d), Part: part, State: state}
	}
	when := func(p planner.Posting, text string) planner.Posting { p.At = at(t, text); return p }
	partial := func(p planner.Posting) planner.Posting { p.Partial = true; return p }
	for _, test := range []struct {
		name   string
		post   func(*planner.Post)
		ledger []planner.Posting
		now    string
		want   []string
	}{
		{name: "before the first", now: "2024-06-01T09:29:59Z"},
		{name: "on the minute", now: "2024-06-01T09:30:00Z", want: []string{"send 2024-06-01.0"}},
		{name: "five minutes are not late", now: "2024-06-01T09:35:00Z", want: []string{"send 2024-06-01.0"}},
		{name: "six are", now: "2024-06-01T09:36:00Z", want: []string{"send 2024-06-01.0 late"}},
		{name: "end of the window", now: "2024-06-01T13:30:00Z", want: []string{"send 2024-06-01.0 late"}},
		{name: "past the window", now: "2024-06-01T13:30:01Z", want: []string{"miss 2024-06-01.0"}},
		{name: "sent is done", ledger: []planner.Posting{row(1, 0, planner.Sent)}, now: "2024-06-01T10:00:00Z"},
		{name: "given up is done", ledger: []planner.Posting{row(1, 0, planner.GivenUp)}, now: "2024-06-01T10:00:00Z"},
		{name: "claimed is settled", ledger: []planner.Posting{row(1, 0, planner.Claimed)}, now: "2024-06-01T10:00:00Z", want: []string{"settle 2024-06-01.0 late"}},
		{name: "claimed long ago only looks", ledger: []planner.Posting{row(1, 0, planner.Claimed)}, now: "2024-06-01T20:00:00Z", want: []string{"settle 2024-06-01.0 late expired"}},
		{name: "days away are missed, and told", ledger: []planner.Posting{row(1, 0, planner.Sent)}, now: "2024-06-04T09:30:00Z",
			want: []string{"miss 2024-06-02.0", "miss 2024-06-03.0 missed 1", "send 2024-06-04.0 missed 2"}},
		{name: "a miss in the ledger is told", ledger: []planner.Posting{row(1, 0, planner.Sent), row(2, 0, planner.GivenUp)}, now: "2024-06-03T09:30:00Z",
			want: []string{"send 2024-06-03.0 missed 1"}},
		{name: "told once", ledger: []planner.Posting{row(2, 0, planner.GivenUp), row(3, 0, planner.Sent)}, now: "2024-06-04T09:30:00Z",
			want: []string{"send 2024-06-04.0"}},
		{name: "given up after the next went out: told by the one after that",
			ledger: []planner.Posting{when(row(1, 0, planner.GivenUp), "2024-06-02T14:00:00Z"), when(row(2, 0, planner.Sent), "2024-06-02T09:30:00Z")},
			now:    "2024-06-03T09:30:00Z", want: []string{"send 2024-06-03.0 missed 1"}},
		{name: "given up in the same minute: told by it",
			ledger: []planner.Posting{when(row(1, 0, planner.GivenUp), "2024-06-02T09:30:00Z"), when(row(2, 0, planner.Sent), "2024-06-02T09:30:00Z")},
			now:    "2024-06-03T09:30:00Z", want: []string{"send 2024-06-03.0"}},
		{name: "claimed, a day past the window", ledger: []planner.Posting{row(1, 0, planner.Claimed)}, now: "2024-06-02T13:30:00Z",
			want: []string{"settle 2024-06-01.0 late expired", "send 2024-06-02.0 late"}},
		{name: "claimed, more than a day past the window", ledger: []planner.Posting{row(1, 0, planner.Claimed)}, now: "2024-06-02T13:30:01Z",
			want: []string{"settle 2024-06-01.0 late expired hopeless", "miss 2024-06-02.0"}},
		{name: "trouble is missed", post: func(p *planner.Post) { p.Trouble = "the channel is gone" }, now: "2024-06-01T09:30:00Z", want: []string{"miss 2024-06-01.0"}},
		{name: "weekdays", post: func(p *planner.Post) { p.On = planner.WeekdaysOf(time.Monday) }, now: "2024-06-04T09:30:00Z",
			want: []string{"miss 2024-06-03.0"}}, // Monday the 3rd
		{name: "partial is followed up", ledger: []planner.Posting{partial(row(1, 0, planner.Sent))}, now: "2024-06-01T12:00:00Z", want: []string{"follow-up 2024-06-01.1"}},
		{name: "once", ledger: []planner.Posting{partial(row(1, 0, planner.Sent)), row(1, 1, planner.Sent)}, now: "2024-06-01T12:00:00Z"},
		{name: "and not the day after", ledger: []planner.Posting{partial(row(1, 0, planner.Sent))}, now: "2024-06-02T05:00:00Z"},
		{name: "an open follow-up is settled", ledger: []planner.Posting{partial(row(1, 0, planner.Sent)), row(1, 1, planner.Claimed)}, now: "2024-06-01T12:00:00Z",
			want: []string{"settle 2024-06-01.1"}},
		{name: "late into the next day", post: func(p *planner.Post) { p.Minute = 23 * 60 }, now: "2024-06-02T05:00:00Z", want: []string{"send 2024-06-01.0 late"}},
		{name: "another post's rows", ledger: []planner.Posting{{Post: 2, Day: june(1), State: planner.Sent}}, now: "2024-06-01T09:30:00Z", want: []string{"send 2024-06-01.0"}},
	} {
		t.Run(test.name, func(t *testing.T) {
			var got []string
			for _, task := range schedule.Due([]schedule.Timed{post(newYork, test.post)}, test.ledger, at(t, test.now)) {
				text := fmt.Sprintf("%s %s.%d", task.Do, task.Day, task.Part)
				if task.Late && task.Do != schedule.Miss {
					text += " late"
				}
				if task.Expired {
					text += " expired"
				}
				if task.Hopeless {
					text += " hopeless"
				}
				if len(task.Missed) > 0 {
					text += fmt.Sprintf(" missed %d", len(task.Missed))
				}
				if task.Do == schedule.Miss && task.Reason == "" {
					t.Errorf("%s has no reason", text)
				}
				got = append(got, text)
			}
			if fmt.Sprint(got) != fmt.Sprint(test.want) {
				t.Errorf("got %v, want %v", got, test.want)
			}
		})
	}
}

// A year of minutes, in three zones with clock changes and at three times of
// which two fall into the changes: each day exactly one post.
func TestYear(t *testing.T) {
	for _, place := range []string{"America/New_York", "Europe/Dublin", "Australia/Lord_Howe"} {
		t.Run(place, func(t *testing.T) {
			t.Parallel()
			zone := zone(t, place)
			first := planner.DayOf(2024, time.January, 1)
			var posts []schedule.Timed
			for i, minute := range []int{330, 90, 150} {
				posts = append(posts, post(zone, func(p *planner.Post) { p.ID, p.Minute, p.From = planner.PostID(i+1), minute, first }))
			}
			newest := map[planner.PostID]planner.Posting{}
			count := map[planner.PostID]map[planner.Day]int{1: {}, 2: {}, 3: {}}
			end := time.Date(2025, time.January, 1, 0, 0, 0, 0, zone)
			for now := time.Date(2024, time.January, 1, 0, 0, 0, 0, zone); now.Before(end); now = now.Add(time.Minute) {
				var ledger []planner.Posting
				for _, row := range newest {
					ledger = append(ledger, row)
				}
				for _, task := range schedule.Due(posts, ledger, now) {
					if task.Do != schedule.Send || task.Late {
						t.Fatalf("%s: %+v", now, task)
					}
					count[task.Post.ID][task.Day]++
					newest[task.Post.ID] = planner.Posting{Post: task.Post.ID, Day: task.Day, State: planner.Sent}
				}
			}
			for id, days := range count {
				if len(days) != 366 {
					t.Errorf("post %d: %d days of 366", id, len(days))
				}
				for day, n := range days {
					if n != 1 {
						t.Errorf("post %d: %d on %s", id, n, day)
					}
				}
			}
		})
	}
}
