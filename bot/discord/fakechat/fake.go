// Package fakechat is a chat service on loopback for tests: REST and gateway as
// the chat server's open documentation has them, strict about every limit, with
// faults on request and a record of all that came in.
//
// It must not know the bot: it reads the JSON that arrives by itself, so that a
// mistake of the client library or of the bot is seen as the service sees it.
package fakechat

import (
	"encoding/json"
	"fmt"
	"maps"
	"net"
	"net/http"
	"net/http/httptest"
	"slices"
	"sort"
	"strconv"
	"strings"
	"sync"
	"sync/atomic"
	"time"
)

// Ids of the application and its user.
const (
	AppID = "900000000000000001"
	BotID = "900000000000000002"
	Token = "fake.token.not-a-secret"
)

// Fake is the service. All methods may be used from several goroutines.
type Fake struct {
	server *httptest.Server
	open   atomic.Int64 // connections for REST calls

	mu           sync.Mutex
	cond         *sync.Cond // signalled when anything changes
	clock        func() time.Time
	permissions  string        // the bot's own, in every channel
	limit        time.Duration // for the first answer to an interaction
	lastID       int64
	guilds       map[string]*guild
	channels     map[string]string // channel → guild
	messages     map[string][]*Message
	interactions map[string]*Interaction // by token
	files        map[string][]byte       // path → content
	nonces       map[string]*Message
	commands     []json.RawMessage
	overwrites   int
	problems     []string
	requests     []Request
	fault        func(method, path string) *Fault
	gateway      gateway
}

type guild struct {
	ID      string
	removed bool
}

// Request is one REST call that came in.
type Request struct {
	At           time.Time
	Method, Path string
}

// Fault is what goes wrong with one REST call.
type Fault struct {
	Delay  time.Duration
	Status int    // answered instead of doing it; 0 does it
	Body   string // of the answer
	Header map[string]string
	// CutBefore drops the connection instead of doing it; CutAfter does it and
	// drops the connection instead of answering.
	CutBefore, CutAfter bool
	// After, when not nil, runs once it was done and before the answer.
	After func()
}

// Message is a message in a channel, or one that only one user sees. The fake
// hands out copies, which stay as they are.
type Message struct {
	ID, Channel string
	Private     bool
	Body        map[string]any
	Files       map[string][]byte
	Names       []string // of the files, in order
	Nonce       string
	At          time.Time
	Edits       int
	Deleted     bool
}

// Start starts the service. Close it when done.
func Start() *Fake {
	f := &Fake{
		clock: time.Now, permissions: "117760", limit: 3 * time.Second, guilds: map[string]*guild{}, channels: map[string]string{}, messages: map[string][]*Message{},
		interactions: map[string]*Interaction{}, files: map[string][]byte{}, nonces: map[string]*Message{},
	}
	f.cond = sync.NewCond(&f.mu)
	f.gateway.init(f)
	f.server = httptest.NewUnstartedServer(http.HandlerFunc(f.serve))
	f.server.Config.ConnState = func(_ net.Conn, state http.ConnState) {
		switch state {
		case http.StateNew:
			f.open.Add(1)
		case http.StateClosed, http.StateHijacked:
			f.open.Add(-1)
		}
	}
	f.server.Start()
	return f
}

// URL is where the service is, for SWARDBOOK_CHAT_URL.
func (f *Fake) URL() string { return f.server.URL }

// Close ends the service and its connections.
func (f *Fake) Close() {
	f.gateway.cutAll()
	f.server.CloseClientConnections()
	f.server.Close()
}

// WaitGone waits until nothing that ended clients have sent is still on its way:
// a call that was made before its client was killed can arrive after that.
func (f *Fake) WaitGone(patience time.Duration) bool {
	// Connections are taken in one after the other: after this one all that were
	// made before it are counted.
	client := http.Client{Transport: &http.Transport{DisableKeepAlives: true}, Timeout: patience}
	knock, err := client.Get(f.URL() + knockPath)
	if err != nil {
		return false
	}
	_ = knock.Body.Close()
	return poll(patience, func() bool { return f.open.Load() == 0 })
}

// knockPath answers that the fake is there.
const knockPath = "/knock"

// SetClock sets the time that new messages bear.
func (f *Fake) SetClock(clock func() time.Time) {
	f.mu.Lock()
	defer f.mu.Unlock()
	f.clock = clock
}

// SetPermissions sets the bot's own permissions, in the service's bits; at
// first it may view, send, embed, attach and read the history.
func (f *Fake) SetPermissions(bits int64) {
	f.mu.Lock()
	defer f.mu.Unlock()
	f.permissions = strconv.FormatInt(bits, 10)
}

// SetAnswerLimit sets after what time a first answer is void, at first the
// service's three seconds: on a busy machine these say nothing about the bot.
func (f *Fake) SetAnswerLimit(limit time.Duration) {
	f.mu.Lock()
	defer f.mu.Unlock()
	f.limit = limit
}

// AddGuild adds a server with channels; the bot is in it.
func (f *Fake) AddGuild(id string, channels ...string) {
	f.mu.Lock()
	defer f.mu.Unlock()
	f.guilds[id] = &guild{ID: id}
	for _, channel := range channels {
		f.channels[channel] = id
	}
}

// DropChannel deletes a channel.
func (f *Fake) DropChannel(id string) {
	f.mu.Lock()
	defer f.mu.Unlock()
	delete(f.channels, id)
}

// SetFault sets what goes wrong with REST calls; nil results, or a nil
// function, let them pass.
func (f *Fake) SetFault(fault func(method, path string) *Fault) {
	f.mu.Lock()
	defer f.mu.Unlock()
	f.fault = fault
}

// Problems are the limits that were broken so far.
func (f *Fake) Problems() []string {
	f.mu.Lock()
	defer f.mu.Unlock()
	return append([]string(nil), f.problems...)
}

// Requests are the REST calls so far.
func (f *Fake) Requests() []Request {
	f.mu.Lock()
	defer f.mu.Unlock()
	return append([]Request(nil), f.requests...)
}

// Forget drops what was recorded of calls and interactions, for long runs.
func (f *Fake) Forget() {
	f.mu.Lock()
	defer f.mu.Unlock()
	f.requests = nil
	f.interactions = map[string]*Interaction{}
	f.nonces = map[string]*Message{}
}

// Messages are the public messages of a channel that stand, oldest first.
func (f *Fake) Messages(channel string) []*Message {
	f.mu.Lock()
	defer f.mu.Unlock()
	var all []*Message
	for _, message := range f.messages[channel] {
		if !message.Deleted {
			all = append(all, message.copied())
		}
	}
	return all
}

// Talk adds messages of somebody else to a channel, with the components.
func (f *Fake) Talk(channel string, n int, components ...any) {
	f.mu.Lock()
	defer f.mu.Unlock()
	for range n {
		f.messages[channel] = append(f.messages[channel], &Message{ID: f.newID(), Channel: channel, At: f.clock(),
			Body: map[string]any{"content": "Morning!", "components": components}})
	}
}

// copied is the message with nothing shared that a later edit changes.
func (m *Message) copied() *Message {
	if m == nil {
		return nil
	}
	copied := *m
	copied.Body, _ = deep(m.Body).(map[string]any)
	copied.Files, copied.Names = maps.Clone(m.Files), slices.Clone(m.Names)
	return &copied
}

// deep copies what was read from JSON.
func deep(value any) any {
	switch value := value.(type) {
	case map[string]any:
		if value == nil {
			return value
		}
		copied := make(map[string]any, len(value))
		for key, one := range value {
			copied[key] = deep(one)
		}
		return copied
	case []any:
		copied := make([]any, len(value))
		for i, one := range value {
			copied[i] = deep(one)
		}
		return copied
	}
	return value
}

// Commands are the registered commands, and how often they were overwritten.
func (f *Fake) Commands() ([]json.RawMessage, int) {
	f.mu.Lock()
	defer f.mu.Unlock()
	return slices.Clone(f.commands), f.overwrites
}

// Host puts a file on the file host and returns its address.
func (f *Fake) Host(name string, content []byte) string {
	f.mu.Lock()
	defer f.mu.Unlock()
	path := fmt.Sprintf("/attachments/%s/%s", f.newID(), name)
	f.files[path] = content
	return "https://cdn.discordapp.com" + path + "?ex=1&is=2&hm=3"
}

// newID gives an id that bears the clock's time. The lock must be held.
func (f *Fake) newID() string {
	const epoch = 1420070400000 // the service's own, in ms
	id := (f.clock().UnixMilli() - epoch) << 22
	if id <= f.lastID {
		id = f.lastID + 1
	}
	f.lastID = id
	return strconv.FormatInt(id, 10)
}

func (f *Fake) problem(format string, args ...any) {
	f.problems = append(f.problems, fmt.Sprintf(format, args...))
}

// serve takes every request: REST, gateway and file host.
func (f *Fake) serve(w http.ResponseWriter, r *http.Request) {
	switch {
	case r.URL.Path == knockPath:
		w.WriteHeader(http.StatusNoContent)
	case strings.HasPrefix(r.URL.Path, "/gw"):
		f.gateway.serve(w, r)
	case strings.HasPrefix(r.URL.Path, "/attachments/"):
		f.serveFile(w, r)
	case strings.HasPrefix(r.URL.Path, "/api/v9/"):
		f.serveAPI(w, r)
	default:
		f.mu.Lock()
		f.problem("unknown address %s %s", r.Method, r.URL.Path)
		f.mu.Unlock()
		http.NotFound(w, r)
	}
}

func (f *Fake) serveFile(w http.ResponseWriter, r *http.Request) {
	f.mu.Lock()
	content, ok := f.files[r.URL.Path]
	if r.Header.Get("Authorization") != "" {
		f.problem("the token was sent to the file host")
	}
	f.mu.Unlock()
	if !ok {
		http.NotFound(w, r)
		return
	}
	_, _ = w.Write(content)
}

// answer is what a call is answered with.
type answer struct {
	status int
	body   any
}

func refuse(status, code int, message string) answer {
	return answer{status, map[string]any{"code": code, "message": message}}
}

func (f *Fake) serveAPI(w http.ResponseWriter, r *http.Request) {
	path := strings.TrimPrefix(r.URL.Path, "/api/v9/")
	call, err := readCall(r)
	arrived := time.Now()
	f.mu.Lock()
	f.requests = append(f.requests, Request{arrived, r.Method, path})
	fault := f.fault
	if err != nil {
		f.problem("%s %s: %v", r.Method, path, err)
	}
	if r.Header.Get("Authorization") != "Bot "+Token {
		f.mu.Unlock()
		writeAnswer(w, refuse(http.StatusUnauthorized, 0, "401: Unauthorized"))
		return
	}
	f.mu.Unlock()
	var wrong *Fault
	if fault != nil {
		wrong = fault(r.Method, path)
	}
	if wrong != nil {
		time.Sleep(wrong.Delay)
		if wrong.CutBefore {
			cut(w)
			return
		}
		if wrong.Status != 0 {
			for name, value := range wrong.Header {
				w.Header().Set(name, value)
			}
			w.WriteHeader(wrong.Status)
			_, _ = w.Write([]byte(wrong.Body))
			return
		}
	}
	f.mu.Lock()
	result := f.route(r, path, call, arrived)
	f.cond.Broadcast()
	f.mu.Unlock()
	if wrong != nil && wrong.After != nil {
		wrong.After()
	}
	if wrong != nil && wrong.CutAfter {
		cut(w)
		return
	}
	writeAnswer(w, result)
}

func writeAnswer(w http.ResponseWriter, a answer) {
	if a.body == nil {
		w.WriteHeader(a.status)
		return
	}
	w.Header().Set("Content-Type", "application/json")
	w.WriteHeader(a.status)
	_ = json.NewEncoder(w).Encode(a.body)
}

// cut drops the connection without an answer.
func cut(w http.ResponseWriter) {
	if hijacker, ok := w.(http.Hijacker); ok {
		if conn, _, err := hijacker.Hijack(); err == nil {
			_ = conn.Close()
		}
	}
}

// route does what a call asks. The lock is held.
func (f *Fake) route(r *http.Request, path string, call call, arrived time.Time) answer {
	parts := strings.Split(path, "/")
	switch {
	case r.Method == "GET" && path == "gateway":
		return answer{200, map[string]any{"url": "ws" + strings.TrimPrefix(f.server.URL, "http") + "/gw/"}}
	case r.Method == "GET" && path == "gateway/bot":
		return answer{200, map[string]any{"url": "ws" + strings.TrimPrefix(f.server.URL, "http") + "/gw/", "shards": 1,
			"session_start_limit": map[string]any{"total": 1000, "remaining": 999, "reset_after": 1000, "max_concurrency": 1}}}
	case r.Method == "PUT" && len(parts) == 3 && parts[0] == "applications" && parts[2] == "commands":
		return f.overwrite(call)
	case r.Method == "POST" && len(parts) == 4 && parts[0] == "interactions" && parts[3] == "callback":
		return f.callback(parts[1], parts[2], call, arrived)
	case len(parts) >= 3 && parts[0] == "webhooks":
		return f.webhook(r.Method, parts, call)
	case len(parts) == 2 && parts[0] == "channels" && r.Method == "GET":
		guild, ok := f.channels[parts[1]]
		if !ok {
			return refuse(404, 10003, "Unknown Channel")
		}
		return answer{200, map[string]any{"id": parts[1], "guild_id": guild, "type": 0, "name": "a-channel"}}
	case len(parts) == 3 && parts[0] == "channels" && parts[2] == "messages":
		if _, ok := f.channels[parts[1]]; !ok {
			return refuse(404, 10003, "Unknown Channel")
		}
		if r.Method == "POST" {
			return f.post(parts[1], call)
		}
		return f.list(parts[1], r)
	}
	f.problem("unknown call %s %s", r.Method, path)
	return refuse(404, 0, "404: Not Found")
}

// nonceWindow is how long one nonce means one message: "the past few minutes".
const nonceWindow = 2 * time.Minute

func (f *Fake) post(channel string, call call) answer {
	f.checkMessage("message", call, f.channels[channel])
	nonce, _ := call.body["nonce"].(string)
	if len(nonce) > 25 {
		f.problem("a nonce of %d characters", len(nonce))
	}
	enforced, _ := call.body["enforce_nonce"].(bool)
	if old := f.nonces[channel+nonce]; nonce != "" && enforced && old != nil && f.clock().Sub(old.At) < nonceWindow {
		return answer{200, old.view()}
	}
	message := &Message{ID: f.newID(), Channel: channel, Body: call.body, Files: call.files, Names: call.names, Nonce: nonce, At: f.clock()}
	f.messages[channel] = append(f.messages[channel], message)
	f.nonces[channel+nonce] = message
	return answer{200, message.view()}
}

// view is the message as the service sends it: without the nonce.
func (m *Message) view() map[string]any {
	view := map[string]any{"id": m.ID, "channel_id": m.Channel, "type": 0, "timestamp": m.At.UTC().Format(time.RFC3339Nano),
		"author": map[string]any{"id": BotID, "username": "swardbook", "bot": true, "discriminator": "0"}, "content": "", "embeds": []any{}, "components": []any{}}
	for _, key := range []string{"content", "embeds", "components"} {
		if value, ok := m.Body[key]; ok && value != nil {
			view[key] = value
		}
	}
	return view
}

func (f *Fake) list(channel string, r *http.Request) answer {
	limit, _ := strconv.Atoi(r.URL.Query().Get("limit"))
	if limit < 1 || limit > 100 {
		f.problem("limit %d of messages", limit)
		limit = 50
	}
	before, _ := strconv.ParseInt(r.URL.Query().Get("before"), 10, 64)
	all := append([]*Message(nil), f.messages[channel]...)
	sort.Slice(all, func(i, j int) bool { return idOf(all[i]) > idOf(all[j]) })
	views := []any{}
	for _, message := range all {
		if !message.Deleted && (before == 0 || idOf(message) < before) && len(views) < limit {
			views = append(views, message.view())
		}
	}
	return answer{200, views}
}

func idOf(m *Message) int64 {
	id, _ := strconv.ParseInt(m.ID, 10, 64)
	return id
}
