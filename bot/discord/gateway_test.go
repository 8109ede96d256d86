package discord

import (
	"context"
	"errors"
	"strings"
	"testing"
	"time"

	"swardbook/bot/discord/fakechat"
	"swardbook/planner"
)

// answers checks that the bot still answers. A connection that has only begun
// can still be given up: it must have said that it is connected.
func (s *stage) answers() {
	s.t.Helper()
	s.eventually("connected", func() bool { return s.fake.Connected() > 0 && strings.Contains(s.log.String(), "msg=connected") })
	if got := s.wait(s.fake.Command(home, homeRoom, crew, "hello")).Say(); !strings.Contains(got, "Hello") {
		s.t.Errorf("got %q", got)
	}
}

// Each fault of a gateway, from the service's documentation and from what the
// client library is known to make of it.
func TestGatewayFaults(t *testing.T) {
	for _, row := range []struct {
		name string
		next []fakechat.Manner
		open time.Duration        // when not 0, for a connection to be ready
		then func(*fakechat.Fake) // once connected
		// sessions is how many it takes until it answers again; then is one more.
		sessions int
	}{
		{name: "reconnect before ready", next: []fakechat.Manner{{ReconnectFirst: true}}, open: 2 * time.Second, sessions: 1},
		{name: "invalid session before ready", next: []fakechat.Manner{{InvalidFirst: true}}, sessions: 1},
		{name: "no hello", next: []fakechat.Manner{{NoHello: true}}, open: 2 * time.Second, sessions: 1},
		{name: "acknowledgements stay out", next: []fakechat.Manner{{NoAck: true, Heartbeat: 100 * time.Millisecond}}, sessions: 2},
		{name: "closed before ready, curable", next: []fakechat.Manner{{CloseFirst: 4000}, {CloseFirst: 4009}}, sessions: 1},
		{name: "reconnect", then: (*fakechat.Fake).Reconnect, sessions: 2},
		{name: "invalid session", then: (*fakechat.Fake).Invalidate, sessions: 2},
		{name: "cut", then: (*fakechat.Fake).Cut, sessions: 2},
		{name: "closed", then: func(f *fakechat.Fake) { f.CloseWith(4009) }, sessions: 2},
	} {
		t.Run(row.name, func(t *testing.T) {
			t.Parallel()
			s := newIdleStage(t, small(), func(c *Config) {
				if row.open > 0 {
					c.Timing.Open = row.open
				}
			})
			s.fake.NextConnections(row.next...)
			s.start()
			if row.then != nil {
				s.answers()
				row.then(s.fake)
			}
			s.begun(row.sessions)
			s.answers()
		})
	}
}

// A session that the bot gives up on must not come back by itself.
func TestOneConnection(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	for i := range 3 {
		s.fake.Cut()
		s.begun(i + 2)
		s.answers()
	}
	if n := s.fake.Connected(); n != 1 {
		t.Errorf("%d connections", n)
	}
	if n := len(s.fake.Identifies()); n != 4 {
		t.Errorf("identified %d times, want 4", n)
	}
}

func TestGatewayStopsWhereNoRetryHelps(t *testing.T) {
	for _, row := range []struct {
		name  string
		code  int
		token string
		want  string
	}{
		{"disallowed intents", 4014, "", "does not allow"},
		{"sharding", 4011, "", "several parts"},
		{"version", 4012, "", "this version"},
		{"wrong token", 0, "wrong", "does not know the token"},
	} {
		t.Run(row.name, func(t *testing.T) {
			t.Parallel()
			s := newIdleStage(t, small(), func(c *Config) {
				if row.token != "" {
					c.Token = row.token
				}
			})
			if row.code != 0 {
				s.fake.NextConnections(fakechat.Manner{CloseFirst: row.code})
			}
			s.start()
			select {
			case err := <-s.done:
				s.done <- err
				var problem *planner.Problem
				if !errors.As(err, &problem) || !strings.Contains(problem.Message, row.want) || problem.Hint == "" {
					t.Errorf("got %v", err)
				}
			case <-time.After(patience):
				t.Fatalf("goes on:\n%s", s.log)
			}
		})
	}
}

func TestIdentifyBudget(t *testing.T) {
	var b budget
	now := time.Date(2024, 6, 1, 0, 0, 0, 0, time.UTC)
	for i := range mostIdentifies {
		if !b.take(now.Add(time.Duration(i) * time.Second)) {
			t.Fatalf("refused after %d", i)
		}
	}
	if b.take(now.Add(time.Hour)) {
		t.Error("one more was taken")
	}
	if !b.take(now.Add(24*time.Hour + time.Second + time.Nanosecond)) {
		t.Error("refused a day later")
	}
}

// What runs when the bot is told to stop is finished.
func TestDrain(t *testing.T) {
	t.Parallel()
	let := make(chan struct{})
	s := newStage(t, waiting(let), nil)
	in := s.fake.Command(home, homeRoom, crew, "hello")
	if !s.fake.WaitAnswer(in, patience) {
		t.Fatalf("not begun: %s", s.log)
	}
	s.stop()
	s.eventually("it takes no more", func() bool {
		s.bot.mu.Lock()
		defer s.bot.mu.Unlock()
		return s.bot.closed
	})
	select {
	case err := <-s.done:
		t.Fatalf("it did not wait: %v", err)
	default:
	}
	close(let)
	if err := <-s.done; err != nil {
		t.Error(err)
	}
	s.done <- nil
	if !s.fake.Wait(in, 0) || !strings.Contains(in.Message.Say(), "At last") {
		t.Error("the command was left")
	}
}

func TestServersComeAndGo(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	s.settled(2) // what is noted late would undo what comes next
	left := func(what string, want bool) {
		t.Helper()
		s.eventually(what, func() bool { return s.house.hasLeft(away) == want })
	}
	s.fake.Outage(away)
	s.answers()
	s.fake.RemoveGuild(away)
	left("removed", true)
	s.fake.ReturnGuild(away)
	left("back", false)
	// Removed while the bot is away: the next READY tells.
	s.fake.RemoveGuild(away)
	left("removed again", true)
	if err := s.house.Joined(context.Background(), away); err != nil {
		t.Fatal(err)
	}
	s.fake.Cut()
	left("missed while away", true)
	// The outage, long past by now, was none of them.
	if _, leaves := s.house.counts(away); leaves != 3 {
		t.Errorf("it left %d times, want 3", leaves)
	}
}
