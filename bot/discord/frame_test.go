package discord

import (
	"bytes"
	"context"
	"errors"
	"io"
	"log/slog"
	"sync"
	"testing"
	"time"

	"swardbook/bot/command"
	"swardbook/bot/discord/fakechat"
	"swardbook/bot/reply"
	"swardbook/planner"
)

// The servers and people of the tests.
const (
	home     = "100000000000000001"
	homeRoom = "110000000000000001"
	away     = "200000000000000002"
	awayRoom = "210000000000000002"
)

var (
	lead = fakechat.User{ID: "300000000000000001", Name: "Robin", Permissions: 32}
	crew = fakechat.User{ID: "300000000000000002", Name: "Sasha"}
)

// shelf keeps nothing but a set-up; every other method of a keeper would end
// the test.
type shelf struct {
	planner.Keeper
	setup planner.Setup
}

func (s shelf) Setup(context.Context) (planner.Setup, error) { return s.setup, nil }

// lines keeps lines in memory.
type lines struct {
	mu  sync.Mutex
	all []string
}

func (l *lines) KeepLine(_ context.Context, line string, _ time.Time) (int64, error) {
	l.mu.Lock()
	defer l.mu.Unlock()
	l.all = append(l.all, line)
	return int64(len(l.all)), nil
}

func (l *lines) Line(_ context.Context, number int64) (string, error) {
	l.mu.Lock()
	defer l.mu.Unlock()
	if number < 1 || int(number) > len(l.all) {
		return "", planner.Problemf(planner.NotFound, "this button is too old")
	}
	return l.all[number-1], nil
}

// building has one team a server, and counts who came and went.
type building struct {
	lookUp func() // before a team is looked up, when not nil; set it before the start

	mu            sync.Mutex
	teams         map[string]*Team
	notes         map[string]string
	left          map[string]bool
	joins, leaves map[string]int
}

func (b *building) Team(_ context.Context, server string) (*Team, error) {
	if b.lookUp != nil {
		b.lookUp()
	}
	b.mu.Lock()
	defer b.mu.Unlock()
	if team := b.teams[server]; team != nil {
		return team, nil
	}
	return nil, errors.New("no such server")
}

func (b *building) Teams(context.Context) (all []string, err error) {
	b.mu.Lock()
	defer b.mu.Unlock()
	for server := range b.teams {
		if !b.left[server] {
			all = append(all, server)
		}
	}
	return all, nil
}

func (b *building) Joined(_ context.Context, server string) error { return b.setLeft(server, false) }

func (b *building) Left(_ context.Context, server string, _ time.Time) error {
	return b.setLeft(server, true)
}

func (b *building) setLeft(server string, left bool) error {
	b.mu.Lock()
	defer b.mu.Unlock()
	b.left[server] = left
	if left {
		b.leaves[server]++
	} else {
		b.joins[server]++
	}
	return nil
}

// counts is how often the server was said to be there, and to be gone.
func (b *building) counts(server string) (joins, leaves int) {
	b.mu.Lock()
	defer b.mu.Unlock()
	return b.joins[server], b.leaves[server]
}

func (b *building) hasLeft(server string) bool {
	b.mu.Lock()
	defer b.mu.Unlock()
	return b.left[server]
}

func (b *building) Note(_ context.Context, name string) (string, error) {
	b.mu.Lock()
	defer b.mu.Unlock()
	return b.notes[name], nil
}

func (b *building) SetNote(_ context.Context, name, note string) error {
	b.mu.Lock()
	defer b.mu.Unlock()
	b.notes[name] = note
	return nil
}

// patience is how long a test waits for what must come: it is used up only when
// something hangs, never by a slow machine.
const patience = time.Minute

// quick is the timing of tests: another connection comes at once, and nothing
// is given up unless it hangs.
func quick() Timing {
	return Timing{Open: patience, Silence: patience, Shortest: 20 * time.Millisecond, Longest: 50 * time.Millisecond,
		Answer: patience, Call: patience, Work: patience, Drain: patience}
}

// logs is a log that tests can read.
type logs struct {
	mu  sync.Mutex
	buf bytes.Buffer
}

func (l *logs) Write(p []byte) (int, error) {
	l.mu.Lock()
	defer l.mu.Unlock()
	return l.buf.Write(p)
}

func (l *logs) String() string {
	l.mu.Lock()
	defer l.mu.Unlock()
	return l.buf.String()
}

// stage is a bot in a fake chat with two servers.
type stage struct {
	t     *testing.T
	fake  *fakechat.Fake
	house *building
	bot   *Bot
	log   *logs
	done  chan error
	stop  context.CancelFunc
}

// newStage starts a bot; every test ends with no limit broken.
func newStage(t *testing.T, table command.Table, change func(*Config)) *stage {
	t.Helper()
	s := newIdleStage(t, table, change)
	s.start()
	if !s.fake.WaitConnected(patience) {
		t.Fatalf("not connected:\n%s", s.log)
	}
	return s
}

// eventually waits until it is so.
func (s *stage) eventually(what string, so func() bool) {
	s.t.Helper()
	for end := time.Now().Add(patience); !so(); time.Sleep(5 * time.Millisecond) {
		if time.Now().After(end) {
			s.t.Fatalf("not so: %s\n%s", what, s.log)
		}
	}
}

// settled waits until the bot has noted both servers' coming n times: once when
// the session begins and once for each server, which come side by side.
func (s *stage) settled(n int) {
	s.t.Helper()
	s.eventually("the servers are noted", func() bool {
		atHome, _ := s.house.counts(home)
		atAway, _ := s.house.counts(away)
		return atHome >= n && atAway >= n
	})
}

// begun waits until the nth session has begun.
func (s *stage) begun(n int) {
	s.t.Helper()
	if !s.fake.WaitSessions(n, patience) {
		s.t.Fatalf("%d sessions, want %d\n%s", s.fake.Sessions(), n, s.log)
	}
}

func newIdleStage(t *testing.T, table command.Table, change func(*Config)) *stage {
	t.Helper()
	fake := fakechat.Start()
	t.Cleanup(fake.Close)
	fake.SetAnswerLimit(patience)
	fake.AddGuild(home, homeRoom)
	fake.AddGuild(away, awayRoom)
	setup := planner.Setup{}
	house := &building{teams: map[string]*Team{}, notes: map[string]string{}, left: map[string]bool{}, joins: map[string]int{}, leaves: map[string]int{}}
	for _, server := range []string{home, away} {
		house.teams[server] = &Team{Table: table, Book: planner.NewBook(shelf{setup: setup}, nil, nil, nil), Lines: &lines{}}
	}
	log := &logs{}
	config := Config{Token: fakechat.Token, BaseURL: fake.URL(), House: house, Table: table, Now: time.Now, Timing: quick(),
		Log: slog.New(slog.NewTextHandler(log, &slog.HandlerOptions{ReplaceAttr: Redactor(fakechat.Token)}))}
	if change != nil {
		change(&config)
	}
	bot, err := New(config)
	if err != nil {
		t.Fatal(err)
	}
	s := &stage{t: t, fake: fake, house: house, bot: bot, log: log, done: make(chan error, 1)}
	t.Cleanup(func() {
		for _, problem := range fake.Problems() {
			t.Error(problem)
		}
	})
	return s
}

func (s *stage) start() {
	ctx, stop := context.WithCancel(context.Background())
	s.stop = stop
	go func() { s.done <- s.bot.Run(ctx) }()
	s.t.Cleanup(func() {
		stop()
		select {
		case err := <-s.done:
			s.done <- err
		case <-time.After(2 * patience):
			s.t.Error("the bot does not stop")
		}
	})
}

// wait waits for the answer to an interaction.
func (s *stage) wait(in *fakechat.Interaction) *fakechat.Message {
	s.t.Helper()
	if !s.fake.Wait(in, patience) {
		s.t.Fatalf("no answer; callback %v\n%s", in.Callback, s.log)
	}
	return in.Message
}

// waiting is a table with a command that waits until it is let go, or until its
// time is over.
func waiting(let <-chan struct{}) command.Table {
	return command.New(nil, command.Command{Path: "hello", Short: "say hello", Examples: []string{"/hello"},
		Run: func(ctx context.Context, _ command.Request) (reply.Reply, error) {
			select {
			case <-let:
				return reply.Of(reply.Text("At last.")), nil
			case <-ctx.Done():
				return reply.Reply{}, planner.Problemf(planner.Busy, "my time is over")
			}
		}})
}

// small is a table with a command of each manner.
func small() command.Table {
	say := func(text string) command.Handler {
		return func(context.Context, command.Request) (reply.Reply, error) {
			return reply.Reply{Private: true, Blocks: []reply.Block{reply.Text(text)}}, nil
		}
	}
	return command.New(nil,
		command.Command{Path: "hello", Short: "say hello", Listed: true, Examples: []string{"/hello"},
			Options: []command.Option{{Name: "name", Kind: command.Text, Help: "to whom"}},
			Run: func(_ context.Context, req command.Request) (reply.Reply, error) {
				name, _ := req.Values.Text("name")
				return reply.Reply{Private: true, Blocks: []reply.Block{reply.Textf("Hello %s from %s, %s.", name, req.Caller.Name, req.Caller.Role)}}, nil
			}},
		command.Command{Path: "log", Short: "log something", Listed: true, Asks: true, Shared: true, Examples: []string{"/log what:cut"},
			Options: []command.Option{{Name: "what", Kind: command.Text, Required: true, Help: "what was done"}, {Name: "note", Kind: command.Text, Help: "a note"}},
			Run: func(_ context.Context, req command.Request) (reply.Reply, error) {
				what, _ := req.Values.Text("what")
				if req.Ask {
					return reply.Reply{Private: true, Blocks: []reply.Block{reply.Textf("Logs %s.", what)}, Confirm: &reply.Confirm{Question: "Log this?"}}, nil
				}
				return reply.Of(reply.Textf("Logged %s by %s.", what, req.Caller.Name), reply.Actions{{Label: "Hello", Line: "/hello name:again"}}), nil
			}},
		command.Command{Path: "crash", Short: "panic", Examples: []string{"/crash"}, Run: func(context.Context, command.Request) (reply.Reply, error) { panic("on purpose") }},
		command.Command{Path: "setup thing add", Short: "set a thing up", Who: command.Lead, Examples: []string{"/setup thing add"}, Run: say("Added.")},
		command.Command{Path: "read", Short: "read a file", Listed: true, Examples: []string{"/read file:a.csv"},
			Options: []command.Option{{Name: "file", Kind: command.File, Required: true, Help: "the file"}},
			Run: func(_ context.Context, req command.Request) (reply.Reply, error) {
				file, err := req.Open("file")
				if err != nil {
					return reply.Reply{}, err
				}
				defer file.Close()
				raw, err := io.ReadAll(file)
				return reply.Reply{Private: true, Blocks: []reply.Block{reply.Textf("%d bytes", len(raw))}}, err
			}},
		command.Command{Path: "need", Short: "need an option later", Listed: true, Examples: []string{"/need a:1"},
			Options: []command.Option{{Name: "a", Kind: command.Text, Help: "one"}, {Name: "b", Kind: command.Text, Help: "another"}},
			Run: func(_ context.Context, req command.Request) (reply.Reply, error) {
				if !req.Values.Has("b") {
					return reply.Reply{}, req.Missing("b")
				}
				b, _ := req.Values.Text("b")
				return reply.Reply{Private: true, Blocks: []reply.Block{reply.Text("b is " + b)}}, nil
			}},
	)
}
