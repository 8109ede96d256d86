package fakechat

import (
	"encoding/json"
	"net/http"
	"sync"
	"time"

	"github.com/gorilla/websocket"
)

// Manner is how the gateway treats one connection.
type Manner struct {
	NoHello        bool // says nothing at all
	ReconnectFirst bool // op 7 instead of READY
	InvalidFirst   bool // op 9 instead of READY
	CloseFirst     int  // closes with the code instead of READY
	NoAck          bool // never acknowledges a heartbeat
	Heartbeat      time.Duration
}

type gateway struct {
	fake *Fake

	mu         sync.Mutex
	next       []Manner
	open       map[*link]bool
	identifies []time.Time
	sessions   int
	heartbeat  time.Duration
}

// link is one connection of a client.
type link struct {
	mu   sync.Mutex // one writer at a time
	conn *websocket.Conn
	seq  int64
	up   bool
}

func (g *gateway) init(f *Fake) {
	g.fake, g.open, g.heartbeat = f, map[*link]bool{}, 40*time.Second
}

// NextConnections says how the next connections are treated, one each.
func (f *Fake) NextConnections(manners ...Manner) {
	f.gateway.mu.Lock()
	defer f.gateway.mu.Unlock()
	f.gateway.next = append(f.gateway.next, manners...)
}

// Identifies are the times at which clients identified.
func (f *Fake) Identifies() []time.Time {
	f.gateway.mu.Lock()
	defer f.gateway.mu.Unlock()
	return append([]time.Time(nil), f.gateway.identifies...)
}

// Sessions is how many sessions have begun: each was told so and hears of
// events from then on.
func (f *Fake) Sessions() int {
	f.gateway.mu.Lock()
	defer f.gateway.mu.Unlock()
	return f.gateway.sessions
}

// WaitSessions waits until so many sessions have begun. After a fault it says
// more than WaitConnected: until the fault is noticed the old connection is up.
func (f *Fake) WaitSessions(n int, patience time.Duration) bool {
	return poll(patience, func() bool { return f.Sessions() >= n })
}

// Connected reports how many connections are up.
func (f *Fake) Connected() int {
	f.gateway.mu.Lock()
	defer f.gateway.mu.Unlock()
	n := 0
	for link := range f.gateway.open {
		if link.up {
			n++
		}
	}
	return n
}

// WaitConnected waits until a connection is up.
func (f *Fake) WaitConnected(patience time.Duration) bool {
	return poll(patience, func() bool { return f.Connected() > 0 })
}

// poll asks again and again until it is so, or the patience ends.
func poll(patience time.Duration, so func() bool) bool {
	for end := time.Now().Add(patience); !so(); time.Sleep(5 * time.Millisecond) {
		if time.Now().After(end) {
			return false
		}
	}
	return true
}

// Event sends an event to the clients that are up.
func (f *Fake) Event(kind string, data any) {
	for _, link := range f.gateway.links() {
		link.send(0, kind, data)
	}
}

// Reconnect asks the clients to reconnect (op 7).
func (f *Fake) Reconnect() {
	for _, link := range f.gateway.links() {
		link.send(7, "", nil)
	}
}

// Invalidate ends the clients' sessions (op 9).
func (f *Fake) Invalidate() {
	for _, link := range f.gateway.links() {
		link.send(9, "", false)
	}
}

// Cut drops the gateway connections.
func (f *Fake) Cut() { f.gateway.cutAll() }

// CloseWith closes the gateway connections with a code.
func (f *Fake) CloseWith(code int) {
	for _, link := range f.gateway.links() {
		f.gateway.down(link)
		link.close(code)
	}
}

// RemoveGuild takes the bot out of a server.
func (f *Fake) RemoveGuild(id string) {
	f.mu.Lock()
	if guild := f.guilds[id]; guild != nil {
		guild.removed = true
	}
	f.mu.Unlock()
	f.Event("GUILD_DELETE", map[string]any{"id": id})
}

// Outage says that a server is not reachable for the moment.
func (f *Fake) Outage(id string) {
	f.Event("GUILD_DELETE", map[string]any{"id": id, "unavailable": true})
}

// ReturnGuild takes the bot into a server again.
func (f *Fake) ReturnGuild(id string) {
	f.mu.Lock()
	if guild := f.guilds[id]; guild != nil {
		guild.removed = false
	}
	f.mu.Unlock()
	f.Event("GUILD_CREATE", map[string]any{"id": id, "name": "a server"})
}

func (g *gateway) links() []*link {
	g.mu.Lock()
	defer g.mu.Unlock()
	var up []*link
	for link := range g.open {
		if link.up {
			up = append(up, link)
		}
	}
	return up
}

// down lets a connection hear of no more events.
func (g *gateway) down(link *link) {
	g.mu.Lock()
	defer g.mu.Unlock()
	link.up = false
}

func (g *gateway) cutAll() {
	g.mu.Lock()
	defer g.mu.Unlock()
	for link := range g.open {
		link.up = false
		_ = link.conn.Close()
	}
}

var upgrader = websocket.Upgrader{CheckOrigin: func(*http.Request) bool { return true }}

func (g *gateway) serve(w http.ResponseWriter, r *http.Request) {
	if q := r.URL.Query(); q.Get("v") != "9" || q.Get("encoding") != "json" {
		g.fake.mu.Lock()
		g.fake.problem("gateway asked for with %s", r.URL.RawQuery)
		g.fake.mu.Unlock()
	}
	conn, err := upgrader.Upgrade(w, r, nil)
	if err != nil {
		return
	}
	link := &link{conn: conn}
	g.mu.Lock()
	manner := Manner{}
	if len(g.next) > 0 {
		manner, g.next = g.next[0], g.next[1:]
	}
	g.open[link] = true
	beat := g.heartbeat
	g.mu.Unlock()
	if manner.Heartbeat > 0 {
		beat = manner.Heartbeat
	}
	defer func() {
		g.mu.Lock()
		delete(g.open, link)
		g.mu.Unlock()
		_ = conn.Close()
	}()
	if !manner.NoHello {
		link.send(10, "", map[string]any{"heartbeat_interval": beat.Milliseconds()})
	}
	g.read(link, manner)
}

// read answers what a client sends until it goes.
func (g *gateway) read(link *link, manner Manner) {
	for {
		var message struct {
			Op int             `json:"op"`
			D  json.RawMessage `json:"d"`
		}
		if err := link.conn.ReadJSON(&message); err != nil {
			return
		}
		switch message.Op {
		case 1:
			if !manner.NoAck {
				link.send(11, "", nil)
			}
		case 2, 6:
			if message.Op == 2 {
				g.mu.Lock()
				g.identifies = append(g.identifies, time.Now())
				g.mu.Unlock()
			}
			if !g.welcome(link, manner, message.D) {
				return
			}
			manner.ReconnectFirst, manner.InvalidFirst = false, false
		}
	}
}

// welcome answers an identify.
func (g *gateway) welcome(link *link, manner Manner, raw json.RawMessage) bool {
	var identify struct {
		Token   string `json:"token"`
		Intents int    `json:"intents"`
	}
	_ = json.Unmarshal(raw, &identify)
	switch {
	case identify.Token != "Bot "+Token && identify.Token != Token:
		link.close(4004)
		return false
	case manner.CloseFirst != 0:
		link.close(manner.CloseFirst)
		return false
	case manner.ReconnectFirst:
		link.send(7, "", nil)
		return true
	case manner.InvalidFirst:
		link.send(9, "", false)
		return true
	}
	g.fake.mu.Lock()
	if identify.Intents != 1 {
		g.fake.problem("identified with intents %d", identify.Intents)
	}
	guilds := []any{}
	for id, guild := range g.fake.guilds {
		if !guild.removed {
			guilds = append(guilds, map[string]any{"id": id, "unavailable": true})
		}
	}
	g.fake.mu.Unlock()
	link.send(0, "READY", map[string]any{"v": 9, "session_id": "s", "user": map[string]any{"id": BotID, "username": "swardbook", "bot": true, "discriminator": "0"},
		"application": map[string]any{"id": AppID, "flags": 0}, "guilds": guilds, "private_channels": []any{}})
	for _, one := range guilds {
		link.send(0, "GUILD_CREATE", map[string]any{"id": one.(map[string]any)["id"], "name": "a server"})
	}
	g.mu.Lock()
	link.up = true
	g.sessions++
	g.mu.Unlock()
	return true
}

func (l *link) send(op int, kind string, data any) {
	l.mu.Lock()
	defer l.mu.Unlock()
	frame := map[string]any{"op": op, "d": data, "s": nil, "t": nil}
	if op == 0 {
		l.seq++
		frame["s"], frame["t"] = l.seq, kind
	}
	_ = l.conn.WriteJSON(frame)
}

func (l *link) close(code int) {
	l.mu.Lock()
	defer l.mu.Unlock()
	_ = l.conn.WriteControl(websocket.CloseMessage, websocket.FormatCloseMessage(code, ""), time.Now().Add(time.Second))
	_ = l.conn.Close()
}
