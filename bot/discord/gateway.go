package discord

import (
	"context"
	"errors"
	"fmt"
	"math/rand/v2"
	"net"
	"net/http"
	"runtime/debug"
	"sync"
	"time"

	"github.com/bwmarrin/discordgo"
	"github.com/gorilla/websocket"

	"swardbook/planner"
)

// Run keeps a connection to the gateway until the context ends, then drains
// what runs. It ends earlier only with an error that no retry can cure.
//
// Every connection is a session of its own that is thrown away with it: the
// library's own reconnecting can lock up or go on for ever with a dead session.
func (b *Bot) Run(ctx context.Context) error {
	wait := b.Timing.Shortest
	var budget budget
	for ctx.Err() == nil {
		if !budget.take(b.Now()) {
			b.Log.ErrorContext(ctx, "too many connections today; waiting an hour", "limit", mostIdentifies)
			sleep(ctx, time.Hour)
			continue
		}
		b.Metrics.connecting()
		lasted, err := b.connection(ctx)
		if ctx.Err() != nil {
			break
		}
		if fatal := b.fatal(err); fatal != nil {
			return errors.Join(fatal, b.drain())
		}
		if lasted > b.Timing.Longest {
			wait = b.Timing.Shortest
		}
		pause := wait/2 + time.Duration(rand.Int64N(int64(wait)))
		b.Log.WarnContext(ctx, "not connected", "error", err, "lasted", lasted.String(), "again in", pause.String())
		sleep(ctx, pause)
		wait = min(2*wait, b.Timing.Longest)
	}
	return b.drain()
}

// mostIdentifies stays under the 1,000 a day after which the service takes the
// token away.
const mostIdentifies = 900

// budget counts the connections of the last 24 hours.
type budget struct{ taken []time.Time }

func (b *budget) take(now time.Time) bool {
	for len(b.taken) > 0 && now.Sub(b.taken[0]) > 24*time.Hour {
		b.taken = b.taken[1:]
	}
	if len(b.taken) >= mostIdentifies {
		return false
	}
	b.taken = append(b.taken, now)
	return true
}

func sleep(ctx context.Context, pause time.Duration) {
	select {
	case <-ctx.Done():
	case <-time.After(pause):
	}
}

// fatal explains an error that will not go away by trying again; nil for any
// other.
func (b *Bot) fatal(err error) error {
	var closed *websocket.CloseError
	var rest *discordgo.RESTError
	refused := func(what, hint string) error {
		return planner.Problemf(planner.Refused, "the chat service %s", what).WithHint("%s", hint).WithCause(err)
	}
	switch {
	case errors.As(err, &rest) && rest.Response != nil && rest.Response.StatusCode == http.StatusUnauthorized:
		return refused("does not know the token", "Make a new token on the application's Bot page, and put it into SWARDBOOK_TOKEN or the token file.")
	case !errors.As(err, &closed):
		return nil
	case closed.Code == 4004:
		return refused("does not know the token", "Make a new token on the application's Bot page, and put it into SWARDBOOK_TOKEN or the token file.")
	case closed.Code == 4010, closed.Code == 4011:
		return refused("wants the bot in several parts", "It is in too many servers for one program.")
	case closed.Code == 4012:
		return refused("no longer speaks this version", "Update the program.")
	case closed.Code == 4013, closed.Code == 4014:
		return refused("does not allow what was asked for", "The program asks for no privileged intent: update it, or look at the application's Bot page.")
	}
	return nil
}

// connection is one session from its opening to its end.
func (b *Bot) connection(ctx context.Context) (lasted time.Duration, err error) {
	s, err := b.session(b.rest.Client)
	if err != nil {
		return 0, err
	}
	line := &line{bot: b}
	s.Dialer = &websocket.Dialer{HandshakeTimeout: b.Timing.Open, NetDialContext: line.dial, Proxy: http.ProxyFromEnvironment}
	gone := make(chan struct{})
	var once sync.Once
	s.AddHandler(func(*discordgo.Session, *discordgo.Disconnect) { once.Do(func() { close(gone) }) })
	s.AddHandler(func(_ *discordgo.Session, e *discordgo.InteractionCreate) { b.interaction(ctx, e.Interaction) })
	s.AddHandler(func(_ *discordgo.Session, e *discordgo.Ready) { b.ready(ctx, e) })
	s.AddHandler(func(_ *discordgo.Session, e *discordgo.GuildCreate) { b.joined(ctx, e.Guild) })
	s.AddHandler(func(_ *discordgo.Session, e *discordgo.GuildDelete) { b.left(ctx, e.Guild) })

	opened := make(chan error, 1)
	go func() { opened <- s.Open() }()
	select {
	case err := <-opened:
		if err != nil {
			line.close()
			return 0, fmt.Errorf("open: %w", err)
		}
	case <-time.After(b.Timing.Open):
		line.close() // the session may hold its own lock for good: leave it
		return 0, errors.New("open: no answer in time")
	case <-ctx.Done():
		line.close()
		return 0, ctx.Err()
	}
	b.Metrics.setConnected(true)
	defer b.Metrics.setConnected(false)
	b.Log.InfoContext(ctx, "connected")
	start := b.Now()
	select {
	case <-gone:
		line.close()
		return b.Now().Sub(start), errors.New("the connection ended")
	case <-ctx.Done():
		closed := make(chan struct{})
		go func() {
			_ = s.CloseWithCode(websocket.CloseNormalClosure)
			close(closed)
		}()
		select {
		case <-closed:
		case <-time.After(3 * time.Second):
		}
		line.close()
		return b.Now().Sub(start), ctx.Err()
	}
}

// line keeps the network connection under a session, to cut it and to notice
// silence, for which the library has no deadline.
type line struct {
	bot  *Bot
	mu   sync.Mutex
	conn net.Conn
}

func (l *line) dial(ctx context.Context, network, address string) (net.Conn, error) {
	var dialer net.Dialer
	conn, err := dialer.DialContext(ctx, network, address)
	if err != nil {
		return nil, err
	}
	l.mu.Lock()
	defer l.mu.Unlock()
	l.conn = conn
	return listening{conn, l.bot.Timing.Silence}, nil
}

func (l *line) close() {
	l.mu.Lock()
	defer l.mu.Unlock()
	if l.conn != nil {
		_ = l.conn.Close()
	}
}

// listening ends the connection when it is silent for too long.
type listening struct {
	net.Conn
	silence time.Duration
}

// Read reads, but does not wait longer than the silence allowed.
func (l listening) Read(p []byte) (int, error) {
	timer := time.AfterFunc(l.silence, func() { _ = l.Close() })
	defer timer.Stop()
	return l.Conn.Read(p)
}

// guard runs a handler: counted for the drain, its panic logged with the
// stack. sorry, when not nil, tells the user.
func (b *Bot) guard(ctx context.Context, what string, run func(context.Context), sorry func(context.Context)) {
	if !b.start() {
		return
	}
	defer b.running.Done()
	// What was begun is finished also when the program is told to stop.
	ctx, cancel := context.WithTimeout(context.WithoutCancel(ctx), b.Timing.Work)
	defer cancel()
	defer func() {
		cause := recover()
		if cause == nil {
			return
		}
		b.Metrics.panicked()
		b.Log.ErrorContext(ctx, "panic", "in", what, "cause", fmt.Sprint(cause), "stack", string(debug.Stack()))
		if sorry == nil {
			return
		}
		defer func() { _ = recover() }() // an apology must not end the program
		sorry(ctx)
	}()
	run(ctx)
}

// ready registers the commands if they changed, and finds servers that came or
// went while the bot was away.
func (b *Bot) ready(ctx context.Context, e *discordgo.Ready) {
	b.guard(ctx, "ready", func(ctx context.Context) {
		app := ""
		if e.Application != nil {
			app = e.Application.ID
		}
		if err := b.register(ctx, app); err != nil {
			b.Log.ErrorContext(ctx, "the commands could not be registered", "error", err)
		}
		in := map[string]bool{}
		for _, guild := range e.Guilds {
			in[guild.ID] = true
			if err := b.House.Joined(ctx, guild.ID); err != nil {
				b.Log.ErrorContext(ctx, "note a server", "error", err)
			}
		}
		known, err := b.House.Teams(ctx)
		if err != nil {
			b.Log.ErrorContext(ctx, "list servers", "error", err)
			return
		}
		for _, server := range known {
			if !in[server] {
				b.leave(ctx, server)
			}
		}
	}, nil)
}

func (b *Bot) joined(ctx context.Context, guild *discordgo.Guild) {
	b.guard(ctx, "joined", func(ctx context.Context) {
		if err := b.House.Joined(ctx, guild.ID); err != nil {
			b.Log.ErrorContext(ctx, "note a server", "error", err)
		}
	}, nil)
}

func (b *Bot) left(ctx context.Context, guild *discordgo.Guild) {
	if guild.Unavailable { // an outage of the service
		return
	}
	b.guard(ctx, "left", func(ctx context.Context) { b.leave(ctx, guild.ID) }, nil)
}

func (b *Bot) leave(ctx context.Context, server string) {
	if err := b.House.Left(ctx, server, b.Now()); err != nil {
		b.Log.ErrorContext(ctx, "note that a server took the bot out", "error", err)
		return
	}
	b.Log.WarnContext(ctx, "a server took the bot out; its data is kept for a while", "server", server)
}
