package discord

import (
	"context"
	"errors"
	"log/slog"
	"net/http"
	"net/url"
	"runtime"
	"sync"
	"time"

	"github.com/bwmarrin/discordgo"

	"swardbook/bot/command"
	"swardbook/planner"
)

// Team is what the bot needs of one server's team.
type Team struct {
	Table command.Table
	Book  *planner.Book
	Posts planner.PostLedger
	Lines planner.LineKeeper
}

// House has the teams, each under the id of its server.
type House interface {
	// Team returns the server's team; a server that is new gets one.
	Team(ctx context.Context, server string) (*Team, error)
	// Teams returns the servers that have a team and have not left.
	Teams(ctx context.Context) ([]string, error)
	// Joined says that the bot is in the server, Left that it was taken out.
	Joined(ctx context.Context, server string) error
	Left(ctx context.Context, server string, at time.Time) error
	// Note and SetNote keep a word from one run to the next.
	Note(ctx context.Context, name string) (string, error)
	SetNote(ctx context.Context, name, note string) error
}

// Timing is how long the bot waits for what. The zero value is never used: see
// DefaultTiming.
type Timing struct {
	Open     time.Duration // for a connection to be ready
	Silence  time.Duration // without a word from the gateway
	Shortest time.Duration // before another connection, doubling up to Longest
	Longest  time.Duration
	Answer   time.Duration // for the first answer to reach the service
	Call     time.Duration // for any other call
	Work     time.Duration // for a command to run
	Drain    time.Duration // for what runs when the bot is told to stop
}

// DefaultTiming follows the service's documentation: an answer is void after
// three seconds, heartbeats come every 41 seconds or so.
func DefaultTiming() Timing {
	return Timing{Open: 30 * time.Second, Silence: 100 * time.Second, Shortest: 5 * time.Second, Longest: 5 * time.Minute,
		Answer: 2500 * time.Millisecond, Call: 60 * time.Second, Work: 2 * time.Minute, Drain: 20 * time.Second}
}

// Config is what a bot is made of.
type Config struct {
	Token string // without "Bot "; never logged
	// BaseURL, when not empty, takes the place of the service's own hosts: for
	// REST, gateway and files.
	BaseURL string
	House   House
	// Table is what is registered, and how lines are read before it is known
	// whose they are: every team's table has the same commands.
	Table   command.Table
	Log     *slog.Logger
	Metrics *Metrics
	Now     func() time.Time
	Timing  Timing
}

// Bot is one bot in any number of servers.
type Bot struct {
	Config
	base    *url.URL
	rest    *discordgo.Session // never opened: sends survive gateway trouble
	answers *http.Client       // for first answers
	files   *http.Client       // for downloads; never sends the token
	work    chan struct{}      // a place for each command that may run at a time
	running sync.WaitGroup
	seen    seen

	mu     sync.Mutex
	closed bool // no new handlers
}

// New makes a bot. A base address that cannot be used is a *planner.Problem.
func New(config Config) (*Bot, error) {
	b := &Bot{Config: config, work: make(chan struct{}, 2*runtime.GOMAXPROCS(0))}
	if config.BaseURL != "" {
		base, err := url.Parse(config.BaseURL)
		if err != nil || base.Host == "" || base.Scheme != "http" && base.Scheme != "https" {
			return nil, planner.Problemf(planner.Invalid, "%q is no address of a chat service", config.BaseURL).
				WithHint("Write it like https://chat.example.org.")
		}
		b.base = base
	}
	transport := http.DefaultTransport.(*http.Transport).Clone()
	transport.MaxIdleConnsPerHost = 32
	round := http.RoundTripper(transport)
	if b.base != nil {
		round = moved{to: b.base, by: transport}
	}
	rest, err := b.session(&http.Client{Transport: round, Timeout: config.Timing.Call})
	if err != nil {
		return nil, err
	}
	b.rest = rest
	b.answers = &http.Client{Transport: round, Timeout: config.Timing.Answer}
	b.files = fileClient(round)
	return b, nil
}

func (b *Bot) session(client *http.Client) (*discordgo.Session, error) {
	s, err := discordgo.New("Bot " + b.Token)
	if err != nil {
		return nil, err
	}
	s.Client = client
	s.Compress = false
	s.StateEnabled = false
	s.ShouldReconnectOnError = false // before Open; the supervisor connects again
	s.ShouldRetryOnRateLimit = false
	s.LogLevel = discordgo.LogError
	s.Identify.Intents = discordgo.IntentsGuilds
	s.Identify.Compress = false
	return s, nil
}

// Channels sends posts for the servers' runners; see schedule.Channels.
func (b *Bot) Channels(lines planner.LineKeeper) Channels { return Channels{b, lines} }

// start counts a handler in, or reports that the bot takes no more.
func (b *Bot) start() bool {
	b.mu.Lock()
	defer b.mu.Unlock()
	if b.closed {
		return false
	}
	b.running.Add(1)
	return true
}

// drain takes no new handlers and waits for those that run.
func (b *Bot) drain() error {
	b.mu.Lock()
	b.closed = true
	b.mu.Unlock()
	done := make(chan struct{})
	go func() {
		b.running.Wait()
		close(done)
	}()
	select {
	case <-done:
		return nil
	case <-time.After(b.Timing.Drain):
		return errors.New("some commands were still running and were left")
	}
}

// seen remembers interactions for a while: the service may tell one twice.
type seen struct {
	mu  sync.Mutex
	ids map[string]time.Time
}

// seenFor is how long an interaction's token lives.
const seenFor = 15 * time.Minute

// first reports whether the interaction is new.
func (s *seen) first(id string, now time.Time) bool {
	s.mu.Lock()
	defer s.mu.Unlock()
	if s.ids == nil {
		s.ids = map[string]time.Time{}
	}
	if _, known := s.ids[id]; known {
		return false
	}
	const many = 1024
	if len(s.ids) >= many {
		for old, at := range s.ids {
			if now.Sub(at) > seenFor || len(s.ids) >= 2*many {
				delete(s.ids, old)
			}
		}
	}
	s.ids[id] = now
	return true
}
