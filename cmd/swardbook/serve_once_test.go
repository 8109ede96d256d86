package main

import (
	"path/filepath"
	"strings"
	"testing"

	"swardbook/bot/discord/fakechat"
)

const secondChannel = "110000000000000077"

// posts are the post's messages in a channel; what others say is left out.
func (m *morning) posts(room string) (posts []*fakechat.Message) {
	for _, message := range m.fake.Messages(room) {
		if labels, _ := message.Buttons(); len(labels) > 0 {
			posts = append(posts, message)
		}
	}
	return posts
}

// expectIn checks how many posts stand in the two channels.
func (m *morning) expectIn(first, second int) {
	m.t.Helper()
	if a, b := len(m.posts(channel)), len(m.posts(secondChannel)); a != first || b != second {
		m.t.Fatalf("%d and %d posts, want %d and %d\n%s\n%s", a, b, first, second, m.type_("/setup post list"), m.log)
	}
}

// says checks what the list of posts says.
func (m *morning) says(want ...string) {
	m.t.Helper()
	list := m.type_("/setup post list")
	for _, part := range want {
		if !strings.Contains(list, part) {
			m.t.Errorf("no %q in\n%s", part, list)
		}
	}
}

// failing fails the first so many calls of the method on messages.
func (m *morning) failing(method string, calls int, fault fakechat.Fault) {
	m.fake.SetFault(func(asked, path string) *fakechat.Fault {
		if asked != method || !strings.Contains(path, "/messages") || calls == 0 {
			return nil
		}
		calls--
		return &fault
	})
}

// A post whose outcome is unknown is looked for in the channel that it went to,
// though the post goes elsewhere by now.
func TestPostChannelChangedWhileClaimed(t *testing.T) {
	for _, row := range []struct {
		name          string
		fault         fakechat.Fault
		times         int
		first, second int
	}{
		{"it got through", fakechat.Fault{CutAfter: true}, 1, 1, 0},
		{"it did not", fakechat.Fault{CutBefore: true}, 1, 0, 1},
		{"nor its second try's answer", fakechat.Fault{CutBefore: true}, 2, 0, 1},
	} {
		t.Run(row.name, func(t *testing.T) {
			m := newMorning(t)
			m.fake.AddGuild(server, channel, secondChannel)
			m.weather("2024-06-02")
			m.failing("POST", row.times, row.fault)
			m.tickAt("2024-06-03 05:30")
			m.type_("/setup post change number:1 channel:" + secondChannel)
			m.tickAt("2024-06-03 05:31")
			m.tickAt("2024-06-03 05:40")
			m.expectIn(row.first, row.second)
			m.says("Last sent Mon 3 Jun")
			m.weather("2024-06-03")
			m.fake.SetFault(nil)
			m.tickAt("2024-06-04 05:30")
			m.expectIn(row.first, row.second+1)
		})
	}
}

// The second try goes to the new channel, its answer is lost, and the channel
// is changed back: it is looked for where the second try went.
func TestPostChannelChangedTwiceWhileClaimed(t *testing.T) {
	m := newMorning(t)
	m.fake.AddGuild(server, channel, secondChannel)
	m.weather("2024-06-02")
	m.failing("POST", 1, fakechat.Fault{CutBefore: true})
	m.tickAt("2024-06-03 05:30")
	m.type_("/setup post change number:1 channel:" + secondChannel)
	m.failing("POST", 1, fakechat.Fault{CutAfter: true})
	m.tickAt("2024-06-03 05:31")
	m.type_("/setup post change number:1 channel:" + channel)
	m.tickAt("2024-06-03 05:32")
	m.expectIn(0, 1)
}

// Where the channel of a claimed post cannot be looked into any more, the day
// is given up, and the post itself, which goes elsewhere by now, is not held.
func TestPostOldChannelGone(t *testing.T) {
	m := newMorning(t)
	m.fake.AddGuild(server, channel, secondChannel)
	m.weather("2024-06-02")
	m.failing("POST", 1, fakechat.Fault{CutAfter: true})
	m.tickAt("2024-06-03 05:30")
	m.type_("/setup post change number:1 channel:" + secondChannel)
	m.fake.DropChannel(channel)
	m.tickAt("2024-06-03 05:31")
	m.says("Mon 3 Jun: not known, the channel is gone")
	m.weather("2024-06-03")
	m.tickAt("2024-06-04 05:30")
	m.expectIn(1, 1)
	if list := m.type_("/setup post list"); strings.Contains(list, "On hold") {
		t.Errorf("held:\n%s", list)
	}
}

// More talk than is read back is no proof that the post is not there.
func TestPostBusyChannel(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	m.failing("POST", 1, fakechat.Fault{CutAfter: true})
	m.tickAt("2024-06-03 05:30")
	m.fake.Talk(channel, 1100)
	m.tickAt("2024-06-03 05:40")
	m.expectIn(1, 0)
	m.says("Mon 3 Jun: being sent")
	// The next day's post goes out all the same; a day past the window the row
	// ends, and the post after that tells it.
	m.weather("2024-06-03")
	m.tickAt("2024-06-04 05:30")
	m.expectIn(2, 0)
	m.tickAt("2024-06-04 09:30")
	m.says("Mon 3 Jun: being sent")
	m.tickAt("2024-06-04 09:31")
	m.says("Mon 3 Jun: not known, ", "too much was said")
	m.weather("2024-06-04")
	m.tickAt("2024-06-05 05:30")
	m.expectIn(3, 0)
	if said := m.posts(channel)[2].Say(); !strings.Contains(said, "Whether a post went out on Mon 3 Jun is not known.") || strings.Contains(said, "No post went out") {
		t.Errorf("the next post:\n%s", said)
	}
	m.weather("2024-06-05")
	m.tickAt("2024-06-06 05:30")
	if said := m.posts(channel)[3].Say(); strings.Contains(said, "not known") {
		t.Errorf("told twice:\n%s", said)
	}
}

// A channel that cannot be read does not keep a claimed row open for ever.
func TestPostChannelCannotBeRead(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	m.failing("POST", 1, fakechat.Fault{CutBefore: true})
	m.tickAt("2024-06-03 05:30")
	m.failing("GET", -1, fakechat.Fault{Status: 503})
	m.tickAt("2024-06-03 05:31")
	m.expectIn(0, 0)
	m.tickAt("2024-06-04 09:31")
	m.says("Mon 3 Jun: not known, ", "Tue 4 Jun: none, ")
	m.expectIn(0, 0)
	m.weather("2024-06-04")
	m.expect(m.tickAt("2024-06-05 05:30"), 1, "No post went out on Tue 4 Jun.")
	if said := m.posts(channel)[0].Say(); !strings.Contains(said, "Whether a post went out on Mon 3 Jun is not known.") {
		t.Errorf("the next post:\n%s", said)
	}
}

// Parts of messages that nobody knew of when this was written are not in the
// way of finding a post.
func TestPostAmongUnknownParts(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	m.failing("POST", 1, fakechat.Fault{CutAfter: true})
	m.tickAt("2024-06-03 05:30")
	m.fake.Talk(channel, 1, map[string]any{"type": 99, "components": []any{map[string]any{"type": 98, "custom_id": 7}}}, map[string]any{"type": 97, "components": "x"})
	m.tickAt("2024-06-03 05:31")
	m.says("Last sent Mon 3 Jun")
	if posts := m.posts(channel); len(posts) != 2 { // the strange message counts as one here
		t.Errorf("%d posts", len(posts))
	}
}

// A post that was given up when the program came back is told by the next one,
// also when that goes out in the same minute.
func TestPostGivenUpIsToldAtOnce(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	m.failing("POST", 1, fakechat.Fault{CutBefore: true})
	m.tickAt("2024-06-03 05:30")
	m.weather("2024-06-03")
	m.expect(m.tickAt("2024-06-04 05:30"), 1, "No post went out on Mon 3 Jun.")
}

// Moving a post earlier never loses the day: today's goes out late, or the day
// is a recorded miss; the answer says which.
func TestPostMovedEarlier(t *testing.T) {
	for _, row := range []struct {
		name, at, now, to string
		says, list        string
		posts             int
	}{
		{"a little: it goes out", "05:30", "05:20", "05:10", "Today's goes out now.", "Last sent Mon 3 Jun", 1},
		{"within the window", "18:00", "12:00", "08:00", "Today's goes out now.", "Last sent Mon 3 Jun", 1},
		{"far: it is missed", "18:00", "12:00", "05:30", "Today's does not come any more, 05:30 is more than 4 h past. The next one comes Tue 4 Jun.",
			"Mon 3 Jun: none, moved from 18:00 to 05:30 at 12:00", 0},
		{"later: it comes then", "05:30", "05:20", "05:40", "Changed: ", "", 0},
	} {
		t.Run(row.name, func(t *testing.T) {
			m := newMorning(t)
			m.weather("2024-06-01")
			m.tickAt("2024-06-02 05:30") // Sunday's
			m.weather("2024-06-02")
			m.tickAt("2024-06-03 00:10")
			before := len(m.posts(channel))
			m.type_("/setup post change number:1 at:" + row.at)
			m.tickAt("2024-06-03 " + row.now)
			if got := m.type_("/setup post change number:1 at:" + row.to); !strings.Contains(got, row.says) {
				t.Errorf("no %q in\n%s", row.says, got)
			}
			m.tickAt("2024-06-03 " + row.now)
			m.expectIn(before+row.posts, 0)
			m.says(row.list)
		})
	}
}

// A post that was not sent while nothing ran, and is changed before that is
// recorded, leaves its days in the ledger all the same.
func TestPostChangedAfterDaysAway(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	m.expect(m.tickAt("2024-06-03 05:30"), 1)
	m.now.set(m.now.get().AddDate(0, 0, 3)) // Thursday 05:30
	m.weather("2024-06-05")
	m.type_("/setup post change number:1 at:06:00")
	m.says("Tue 4 Jun: none, not sent before the post was changed on Thu 6 Jun", "Wed 5 Jun: none")
	m.expect(m.tickAt("2024-06-06 06:00"), 2, "No post went out on 2 days, Tue 4 Jun to Wed 5 Jun.")
}

// An entry is its logger's own by the account, not by the name it bears: a
// namesake does not undo it, and who has another name by now does.
func TestOwnEntriesGoByAccount(t *testing.T) {
	s := serveFake(t, filepath.Join(t.TempDir(), "course.db"), fixed(tuesday), nil)
	s.setUpSite(server, channel, "Quillmere")
	sasha := fakechat.User{ID: "300000000000000021", Name: "Sasha"}
	namesake := fakechat.User{ID: "300000000000000022", Name: "Sasha"}
	asked := s.wait(s.fake.Command(server, channel, sasha, "done", textOptions([]string{"surfaces:greens", "works:regulator", "when:2024-06-02"})...))
	logged := s.fake.Click(server, channel, sasha, asked, asked.Button("Yes"))
	if got := s.wait(logged).Say(); !strings.Contains(got, "Done.") {
		t.Fatalf("logging: %s", got)
	}
	number := fakechat.Option{Name: "entry", Type: 4, Value: 1}
	if got := s.wait(s.fake.Command(server, channel, namesake, "log undo", number)).Say(); !strings.Contains(got, "was logged by another Sasha") {
		t.Errorf("a namesake, by number: %s", got)
	}
	if got := s.wait(s.fake.Command(server, channel, namesake, "log undo")).Say(); !strings.Contains(got, "no such entry of yours") {
		t.Errorf("a namesake: %s", got)
	}
	if got := s.wait(s.fake.Command(server, channel, namesake, "log amend", number, fakechat.Option{Name: "note", Type: 3, Value: "hm"})).Say(); !strings.Contains(got, "was logged by another Sasha") {
		t.Errorf("a namesake amends: %s", got)
	}
	sasha.Name = "Sasha the Second"
	if got := s.wait(s.fake.Command(server, channel, sasha, "log undo")).Say(); !strings.Contains(got, "Taken back") {
		t.Errorf("under another name: %s", got)
	}
}

// A site's posts rest while it is dropped; once it is taken up again they go on
// from their next time and do not call the days in between missed.
func TestPostsOfARestoredSite(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	m.expect(m.tickAt("2024-06-03 05:30"), 1)
	m.type_("/setup site drop name:Quillmere")
	m.expect(m.tickAt("2024-06-04 05:30"), 1)
	m.tickAt("2024-06-06 12:00")
	m.type_("/setup site restore name:Quillmere")
	m.expect(m.tickAt("2024-06-06 12:01"), 1)
	m.weather("2024-06-06")
	posts := m.tickAt("2024-06-07 05:30")
	m.expect(posts, 2)
	if strings.Contains(posts[1], "No post") || strings.Contains(m.type_("/setup post list"), "none") {
		t.Errorf("days of a dropped site are called missed:\n%s", posts[1])
	}
}

// A claimed post that comes later from now on is looked for back to when it may
// have gone out, not only to its new time.
func TestPostMovedLaterWhileClaimed(t *testing.T) {
	m := newMorning(t)
	m.weather("2024-06-02")
	m.failing("POST", 1, fakechat.Fault{CutAfter: true})
	m.tickAt("2024-06-03 05:30")
	m.fake.Talk(channel, 150)
	m.type_("/setup post change number:1 at:09:00")
	m.tickAt("2024-06-03 09:05")
	m.expectIn(1, 0)
	m.says("Last sent Mon 3 Jun")
}
