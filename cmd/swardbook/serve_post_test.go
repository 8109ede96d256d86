package main

import (
	"bytes"
	"context"
	"fmt"
	"log/slog"
	"path/filepath"
	"strings"
	"sync/atomic"
	"testing"
	"time"

	"swardbook/bot/command"
	"swardbook/bot/discord"
	"swardbook/bot/discord/fakechat"
	"swardbook/bot/terminal"
	"swardbook/planner"
	"swardbook/storage/sqlite"
)

// morning is a team with one site and one post, its ticks under the test's
// control.
type morning struct {
	t     *testing.T
	fake  *fakechat.Fake
	db    *sqlite.DB
	teams *teams
	bot   *discord.Bot
	log   *syncBuffer
	now   moment
}

func newMorning(t *testing.T) *morning {
	t.Helper()
	m := &morning{t: t, fake: fakechat.Start(), log: &syncBuffer{}}
	m.now.set(tuesday.Add(-24 * time.Hour)) // Monday 05:29
	t.Cleanup(m.fake.Close)
	m.fake.AddGuild(server, channel)
	m.fake.SetClock(m.now.get)
	db, err := sqlite.Open(t.Context(), filepath.Join(t.TempDir(), "course.db"))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = db.Close() })
	m.db = db
	log := slog.New(slog.NewTextHandler(m.log, &slog.HandlerOptions{ReplaceAttr: discord.Redactor(fakechat.Token)}))
	m.teams = newTeams(db, log)
	m.bot, err = discord.New(discord.Config{Token: fakechat.Token, BaseURL: m.fake.URL(), House: m.teams, Table: command.Desk{}.Table(nil),
		Log: log, Now: m.now.get, Timing: quickly()})
	if err != nil {
		t.Fatal(err)
	}
	m.type_("/setup site add name:Quillmere lat:40.69 lon:-74.17 zone:America/New_York units:c",
		"/setup surface add name:greens grass:cool ceiling:3",
		"/setup work add surface:greens name:regulator counts:degree-days base:0 target:200",
		"/setup post add at:05:30 channel:"+channel)
	t.Cleanup(func() {
		for _, problem := range m.fake.Problems() {
			t.Error(problem)
		}
	})
	return m
}

// type_ types lines in the terminal on the server's team.
func (m *morning) type_(lines ...string) string {
	m.t.Helper()
	team, err := m.teams.Team(context.Background(), server)
	if err != nil {
		m.t.Fatal(err)
	}
	var out bytes.Buffer
	session := terminal.Session{Table: team.Table, Caller: command.Caller{ID: "t", Name: "Robin", Role: command.Lead},
		Now: func() (time.Time, bool) { return m.now.get(), false }, Out: &out, Err: &out, Dir: m.t.TempDir(), Width: 200}
	for _, line := range lines {
		if !session.RunLine(context.Background(), line) {
			m.t.Fatalf("%s:\n%s", line, out.String())
		}
	}
	return out.String()
}

// weather types the day's weather in.
func (m *morning) weather(day string) {
	m.t.Helper()
	over, err := time.Parse("2006-01-02 15:04", day+" 08:00") // early the next morning there
	if err != nil {
		m.t.Fatal(err)
	}
	before := m.now.get()
	if over = over.Add(24 * time.Hour); over.After(before) {
		m.now.set(over)
	}
	m.type_("/weather day date:" + day + " high:21 low:10")
	m.now.set(before)
}

// tickAt ticks at the time on New York's clock and returns all posts.
func (m *morning) tickAt(clock string) []string {
	m.t.Helper()
	zone, err := time.LoadLocation("America/New_York")
	if err != nil {
		m.t.Fatal(err)
	}
	now, err := time.ParseInLocation("2006-01-02 15:04", clock, zone)
	if err != nil {
		m.t.Fatal(err)
	}
	m.now.set(now)
	tick(context.Background(), m.teams, m.bot, nil, slog.New(slog.NewTextHandler(m.log, nil)), now)
	var said []string
	for _, message := range m.fake.Messages(channel) {
		said = append(said, message.Say())
	}
	return said
}

// expect checks how many posts there are and what the last one says.
func (m *morning) expect(posts []string, n int, want ...string) {
	m.t.Helper()
	if len(posts) != n {
		m.t.Fatalf("%d posts, want %d:\n%s\n%s", len(posts), n, strings.Join(posts, "\n---\n"), m.log)
	}
	for _, part := range want {
		if !strings.Contains(posts[n-1], part) {
			m.t.Errorf("no %q in\n%s", part, posts[n-1])
		}
	}
}

func TestPostMorning(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	m.expect(m.tickAt("2024-06-03 05:29"), 0)
	posts := m.tickAt("2024-06-03 05:30")
	m.expect(posts, 1, "Quillmere, Mon 3 Jun", "greens regulator")
	if strings.Contains(posts[0], "Late") || strings.Contains(posts[0], "not whole") {
		t.Errorf("it says too much:\n%s", posts[0])
	}
	m.expect(m.tickAt("2024-06-03 05:31"), 1)
	message := m.fake.Messages(channel)[0]
	labels, _ := message.Buttons()
	if !strings.HasPrefix(fmt.Sprint(labels), "[Due Done…") {
		t.Errorf("buttons %v", labels)
	}
	if flags := message.Body["flags"]; flags != float64(1<<12) {
		t.Errorf("flags %v: it would push", flags)
	}
	// Equal to what /briefing gives, but for the buttons.
	if asked := m.type_("/briefing"); !strings.Contains(asked, "greens regulator: not started") || !strings.Contains(posts[0], "greens regulator: not started") {
		t.Errorf("the briefing:\n%s", asked)
	}
}

func TestPostEvening(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	m.type_("/setup post add what:evening at:18:00 channel:" + channel)
	m.expect(m.tickAt("2024-06-03 05:30"), 1)
	posts := m.tickAt("2024-06-03 18:00")
	m.expect(posts, 2, "Tue 4 Jun")
	if strings.Contains(posts[1], "not whole") {
		t.Errorf("it speaks of yesterday:\n%s", posts[1])
	}
	m.expect(m.tickAt("2024-06-03 18:01"), 2)
}

func TestPostWeekly(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	m.type_("/setup post drop number:1", "/setup post add what:weekly at:06:00 channel:"+channel)
	posts := m.tickAt("2024-06-03 06:00") // a Monday
	m.expect(posts, 1)
	if message := m.fake.Messages(channel)[0]; len(message.Names) == 0 || !strings.HasSuffix(message.Names[0], ".xlsx") {
		t.Errorf("files %v of %s", message.Names, message.Say())
	}
	m.expect(m.tickAt("2024-06-04 06:00"), 1)
	m.expect(m.tickAt("2024-06-10 06:00"), 2)
}

func TestPostLateAndMissed(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	m.expect(m.tickAt("2024-06-03 08:10"), 1, "Late: this was due at 05:30.")
	// Tuesday and Wednesday nobody was there; Thursday says so.
	m.weather("2024-06-05")
	posts := m.tickAt("2024-06-06 05:30")
	m.expect(posts, 2, "No post went out on 2 days, Tue 4 Jun to Wed 5 Jun.")
	if list := m.type_("/setup post list"); !strings.Contains(list, "Tue 4 Jun: none, not running at 05:30, nor within 4 h after") || !strings.Contains(list, "Last sent Thu 6 Jun") {
		t.Errorf("the list:\n%s", list)
	}
	m.weather("2024-06-06")
	if posts := m.tickAt("2024-06-07 05:30"); strings.Contains(posts[2], "No post") {
		t.Errorf("told twice:\n%s", posts[2])
	}
}

// A reading that comes late and moves a figure that was posted is told in the
// next post, once.
func TestPostTellsCorrections(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	m.weather("2024-06-03")
	m.now.set(time.Date(2024, 6, 4, 8, 0, 0, 0, time.UTC))
	m.type_("/done greens regulator when:2024-06-01")
	m.expect(m.tickAt("2024-06-04 05:30"), 1, "31 of 200")
	m.weather("2024-06-04")
	m.type_("/weather day date:2024-06-03 high:31 low:10")
	m.expect(m.tickAt("2024-06-05 05:30"), 2, "Tue corrected: ", "late readings")
	m.weather("2024-06-05")
	if posts := m.tickAt("2024-06-06 05:30"); strings.Contains(posts[2], "corrected") {
		t.Errorf("told twice:\n%s", posts[2])
	}
}

func TestPostFollowUp(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-01")
	m.expect(m.tickAt("2024-06-03 05:30"), 1, "Yesterday's weather is not whole yet")
	m.expect(m.tickAt("2024-06-03 06:00"), 1)
	m.weather("2024-06-02")
	m.expect(m.tickAt("2024-06-03 06:01"), 2, "Yesterday's weather is in", "21.0 °C")
	m.expect(m.tickAt("2024-06-03 06:02"), 2)
	m.weather("2024-06-03")
	m.expect(m.tickAt("2024-06-04 05:30"), 3)
	// A day that stays without weather is not followed up the day after.
	m.expect(m.tickAt("2024-06-05 05:30"), 4, "not whole yet")
	m.weather("2024-06-04")
	m.weather("2024-06-05")
	m.expect(m.tickAt("2024-06-06 05:00"), 4)
}

// A message that was sent but whose answer was lost is found again, long after
// the nonce has been forgotten.
func TestPostAnswerLost(t *testing.T) {
	for name, fault := range map[string]fakechat.Fault{
		"cut after":  {CutAfter: true},
		"cut before": {CutBefore: true},
		"500":        {Status: 500, Body: `{"message":"oops"}`},
		"503":        {Status: 503},
		"429": {Status: 429, Body: `{"message":"slow down","retry_after":0.01,"global":false}`,
			Header: map[string]string{"Content-Type": "application/json"}},
		"a page instead of JSON": {Status: 429, Body: "<html>", Header: map[string]string{"Content-Type": "text/html"}},
		"lost for an hour":       {CutAfter: true, After: func() {}},
	} {
		t.Run(name, func(t *testing.T) {
			m := newMorning(t)
			m.weather("2024-06-02")
			var struck atomic.Bool
			m.fake.SetFault(func(method, path string) *fakechat.Fault {
				if method != "POST" || !struck.CompareAndSwap(false, true) {
					return nil
				}
				return &fault
			})
			m.tickAt("2024-06-03 05:30")
			// Others talk meanwhile: more than a page of it.
			next := "2024-06-03 05:31"
			if name == "lost for an hour" {
				next = "2024-06-03 06:30"
			}
			m.expect(m.tickAt(next), 1)
			m.expect(m.tickAt("2024-06-03 07:00"), 1)
			if list := m.type_("/setup post list"); !strings.Contains(list, "Last sent Mon 3 Jun") {
				t.Errorf("the list:\n%s", list)
			}
		})
	}
}

// While the service is down the day is tried until its window ends, and then
// given up with the reason; the next day goes out and says so.
func TestPostServiceDown(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	m.fake.SetFault(func(method, _ string) *fakechat.Fault {
		if method == "POST" {
			return &fakechat.Fault{Status: 503}
		}
		return nil
	})
	for _, clock := range []string{"05:30", "05:31", "07:00", "09:29", "09:31"} {
		m.expect(m.tickAt("2024-06-03 "+clock), 0)
	}
	if list := m.type_("/setup post list"); !strings.Contains(list, "Mon 3 Jun: none, could not be sent by") {
		t.Errorf("the list:\n%s", list)
	}
	m.fake.SetFault(nil)
	m.weather("2024-06-03")
	m.expect(m.tickAt("2024-06-04 05:30"), 1, "No post went out on Mon 3 Jun.")
}

// A channel that is gone, or closed to the bot, puts the post on hold: one
// refusal, no more tries, until a lead changes it.
func TestPostOnHold(t *testing.T) {
	for name, refuse := range map[string]func(*morning){
		"channel is gone":      func(m *morning) { m.fake.DropChannel(channel) },
		"lacks a permission":   func(m *morning) { m.refuse(403, 50013) },
		"lacks a permission v": func(m *morning) { m.refuse(403, 50001) },
	} {
		t.Run(name, func(t *testing.T) {
			m := newMorning(t)
			m.weather("2024-06-02")
			refuse(m)
			m.expect(m.tickAt("2024-06-03 05:30"), 0)
			m.tickAt("2024-06-03 05:31")
			m.tickAt("2024-06-04 05:30")
			posts := 0
			for _, request := range m.fake.Requests() {
				if request.Method == "POST" {
					posts++
				}
			}
			if posts != 1 {
				t.Errorf("tried %d times", posts)
			}
			list := m.type_("/setup post list")
			if !strings.Contains(list, "On hold: the") || !strings.Contains(list, "/setup post change number:1") {
				t.Errorf("the list:\n%s", list)
			}
			m.fake.SetFault(nil)
			m.fake.AddGuild(server, channel)
			m.type_("/setup post change number:1")
			m.weather("2024-06-04")
			m.expect(m.tickAt("2024-06-05 05:30"), 1, "No post went out on")
		})
	}
}

func (m *morning) refuse(status, code int) {
	m.fake.SetFault(func(method, _ string) *fakechat.Fault {
		if method != "POST" {
			return nil
		}
		return &fakechat.Fault{Status: status, Body: fmt.Sprintf(`{"code":%d,"message":"no"}`, code)}
	})
}

// A team that took the bot out gets no posts, and is erased after the grace.
func TestRemovedTeam(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	if err := m.teams.Left(context.Background(), server, m.now.get()); err != nil {
		t.Fatal(err)
	}
	m.expect(m.tickAt("2024-06-03 05:30"), 0)
	m.tickAt("2024-07-01 06:00")
	if err := m.teams.Joined(context.Background(), server); err != nil {
		t.Fatal(err)
	}
	if list := m.type_("/setup site list"); !strings.Contains(list, "Quillmere") {
		t.Errorf("erased within the grace:\n%s", list)
	}
	if err := m.teams.Left(context.Background(), server, m.now.get()); err != nil {
		t.Fatal(err)
	}
	m.tickAt("2024-08-01 06:00")
	team, err := m.teams.Team(context.Background(), server)
	if err != nil {
		t.Fatal(err)
	}
	if setup, err := team.Book.Setup(context.Background()); err != nil || len(setup.Sites) > 0 {
		t.Errorf("kept past the grace: %+v, %v", setup.Sites, err)
	}
}

// A post changed after it went out does not go out again that day.
func TestPostChangedTheSameDay(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	m.expect(m.tickAt("2024-06-03 05:30"), 1)
	m.now.set(m.now.get().Add(time.Hour))
	m.type_("/setup post change number:1 at:06:00")
	m.expect(m.tickAt("2024-06-03 07:00"), 1)
	m.weather("2024-06-03")
	m.expect(m.tickAt("2024-06-04 05:30"), 1)
	m.expect(m.tickAt("2024-06-04 06:00"), 2)
	if row := (planner.Post{Minute: 360}); row.Clock() != "06:00" {
		t.Error(row.Clock())
	}
}
