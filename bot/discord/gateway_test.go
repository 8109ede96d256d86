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

// answers checks that the bot still answers.
func (s *stage) answers() {
	s.t.Helper()
	if !s.fake.WaitConnected(15 * time.Second) {
		s.t.Fatalf("not connected again:\n%s", s.log)
	}
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
		then func(*fakechat.Fake) // once connected
	}{
		{name: "reconnect before ready", next: []fakechat.Manner{{ReconnectFirst: true}}},
		{name: "invalid session before ready", next: []fakechat.Manner{{InvalidFirst: true}}},
		{name: "no hello", next: []fakechat.Manner{{NoHello: true}}},
		{name: "acknowledgements stay out", next: []fakechat.Manner{{NoAck: true, Heartbeat: 100 * time.Millisecond}}},
		{name: "closed before ready, curable", next: []fakechat.Manner{{CloseFirst: 4000}, {CloseFirst: 4009}}},
		{name: "reconnect", then: (*fakechat.Fake).Reconnect},
		{name: "invalid session", then: (*fakechat.Fake).Invalidate},
		{name: "cut", then: (*fakechat.Fake).Cut},
		{name: "closed", then: func(f *fakechat.Fake) { f.CloseWith(4009) }},
	} {
		t.Run(row.name, func(t *testing.T) {
			t.Parallel()
			s := newIdleStage(t, small(), nil)
			s.fake.NextConnections(row.next...)
			s.start()
			if row.then != nil {
				s.answers()
				row.then(s.fake)
				time.Sleep(50 * time.Millisecond) // the fault reaches the client
			}
			s.answers()
		})
	}
}

// A session that the bot gives up on must not come back by itself.
func TestOneConnection(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	for range 3 {
		s.fake.Cut()
		time.Sleep(50 * time.Millisecond)
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
			case <-time.After(10 * time.Second):
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
	s := newStage(t, small(), nil)
	in := s.fake.Command(home, homeRoom, crew, "slow")
	time.Sleep(100 * time.Millisecond)
	s.stop()
	if err := <-s.done; err != nil {
		t.Error(err)
	}
	s.done <- nil
	if !s.fake.Wait(in, time.Millisecond) || !strings.Contains(in.Message.Say(), "At last") {
		t.Error("the command was left")
	}
}

func TestServersComeAndGo(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	eventually := func(what string, want bool) {
		t.Helper()
		for end := time.Now().Add(5 * time.Second); time.Now().Before(end); time.Sleep(5 * time.Millisecond) {
			if s.house.hasLeft(away) == want {
				return
			}
		}
		t.Errorf("%s: left is %v", what, !want)
	}
	s.fake.Outage(away)
	s.answers()
	eventually("an outage", false)
	s.fake.RemoveGuild(away)
	eventually("removed", true)
	s.fake.ReturnGuild(away)
	eventually("back", false)
	// Removed while the bot is away: the next READY tells.
	s.fake.RemoveGuild(away)
	eventually("removed again", true)
	if err := s.house.Joined(context.Background(), away); err != nil {
		t.Fatal(err)
	}
	s.fake.Cut()
	eventually("missed while away", true)
}
