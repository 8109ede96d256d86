package main

import (
	"context"
	"fmt"
	"log/slog"
	"net/http"
	"sync"
	"time"

	"swardbook/bot/discord"
	"swardbook/storage/sqlite"
)

// chatPlatform names the teams of chat servers.
const chatPlatform = "discord"

// teams are the teams of the chat servers in one file.
type teams struct {
	db  *sqlite.DB
	log *slog.Logger

	mu    sync.Mutex
	known map[int64]*discord.Team // by the team's own number, which is never given twice
}

var _ discord.House = (*teams)(nil)

func newTeams(db *sqlite.DB, log *slog.Logger) *teams {
	return &teams{db: db, log: log, known: map[int64]*discord.Team{}}
}

// Team returns the server's team; a server that is new gets one. It is looked
// up anew each time: a team that was erased meanwhile is another one now.
func (t *teams) Team(ctx context.Context, server string) (*discord.Team, error) {
	kept, err := t.db.Team(ctx, chatPlatform, server)
	if err != nil {
		return nil, err
	}
	t.mu.Lock()
	defer t.mu.Unlock()
	if team := t.known[kept.ID()]; team != nil {
		return team, nil
	}
	desk := deskOf(kept)
	team := &discord.Team{Table: desk.Table(t.log), Book: desk.Book, Posts: kept, Lines: kept}
	t.known[kept.ID()] = team
	return team, nil
}

// Teams returns the servers that have a team and have not left.
func (t *teams) Teams(ctx context.Context) ([]string, error) { return t.db.Teams(ctx, chatPlatform) }

// Joined says that the bot is in the server.
func (t *teams) Joined(ctx context.Context, server string) error {
	return t.db.Back(ctx, chatPlatform, server)
}

// Left says that the bot was taken out of the server.
func (t *teams) Left(ctx context.Context, server string, at time.Time) error {
	return t.db.Left(ctx, chatPlatform, server, at)
}

// Note returns what was noted under the name.
func (t *teams) Note(ctx context.Context, name string) (string, error) { return t.db.Note(ctx, name) }

// SetNote notes something for the next run.
func (t *teams) SetNote(ctx context.Context, name, note string) error {
	return t.db.SetNote(ctx, name, note)
}

// health says whether the program still ticks.
type health struct {
	now  func() time.Time
	mu   sync.Mutex
	last time.Time // the last tick that ended
}

func (h *health) ticked() {
	h.mu.Lock()
	defer h.mu.Unlock()
	h.last = h.now()
}

// mostSilence is how long no tick may have ended before the program counts as
// stuck: a tick, the longest work of one, and some.
const mostSilence = 10 * time.Minute

// ServeHTTP answers 200 while the program ticks, 503 when it does not.
func (h *health) ServeHTTP(w http.ResponseWriter, _ *http.Request) {
	h.mu.Lock()
	defer h.mu.Unlock()
	now := h.now()
	if h.last.IsZero() {
		h.last = now // it has just begun
	}
	if since := now.Sub(h.last); since > mostSilence {
		w.WriteHeader(http.StatusServiceUnavailable)
		fmt.Fprintf(w, "no tick for %s\n", since.Round(time.Second))
		return
	}
	fmt.Fprintln(w, "ok")
}
