package main

import (
	"archive/zip"
	"bytes"
	"context"
	"fmt"
	"io"
	"net/http"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"swardbook/bot/discord"
	"swardbook/bot/discord/fakechat"
)

const (
	otherServer  = "200000000000000002"
	otherChannel = "210000000000000002"
)

var (
	leader = fakechat.User{ID: "300000000000000001", Name: "Robin", Permissions: 32}
	worker = fakechat.User{ID: "300000000000000002", Name: "Sasha"}
)

// served is the program serving a fake chat.
type served struct {
	t    testing.TB
	fake *fakechat.Fake
	path string
	log  *syncBuffer
	stop func() error
}

// syncBuffer is a buffer that several goroutines may write.
type syncBuffer struct {
	mu  sync.Mutex
	buf bytes.Buffer
}

func (b *syncBuffer) Write(p []byte) (int, error) {
	b.mu.Lock()
	defer b.mu.Unlock()
	return b.buf.Write(p)
}

func (b *syncBuffer) String() string {
	b.mu.Lock()
	defer b.mu.Unlock()
	return b.buf.String()
}

// patience is how long a test waits for what must come: it is used up only when
// something hangs, never by a slow machine.
const patience = 2 * time.Minute

// quickly is the timing of tests on loopback: another connection comes at once,
// and nothing is given up unless it hangs.
func quickly() discord.Timing {
	timing := discord.DefaultTiming()
	timing.Shortest, timing.Longest = 20*time.Millisecond, 50*time.Millisecond
	timing.Open, timing.Answer, timing.Drain = patience, patience, patience
	return timing
}

// moment is a test's clock, which stands until it is set.
type moment struct {
	mu sync.Mutex
	at time.Time
}

func (m *moment) set(at time.Time) {
	m.mu.Lock()
	defer m.mu.Unlock()
	m.at = at
}

func (m *moment) get() time.Time {
	m.mu.Lock()
	defer m.mu.Unlock()
	return m.at
}

// serveFake starts the program in a fake chat with two servers. It ends with
// the test, which fails when the fake saw a limit broken.
func serveFake(t testing.TB, path string, now func() time.Time, change func(*serving)) *served {
	t.Helper()
	s := &served{t: t, path: path, fake: fakechat.Start(), log: &syncBuffer{}}
	t.Cleanup(s.fake.Close)
	s.fake.SetAnswerLimit(patience)
	s.fake.AddGuild(server, channel)
	s.fake.AddGuild(otherServer, otherChannel)
	settings := serving{db: path, token: fakechat.Token, chatURL: s.fake.URL(), timing: quickly(), now: now}
	if change != nil {
		change(&settings)
	}
	ctx, cancel := context.WithCancel(context.Background())
	done := make(chan error, 1)
	go func() { done <- settings.run(ctx, s.log) }()
	var once sync.Once
	var result error
	s.stop = func() error {
		once.Do(func() {
			cancel()
			result = <-done
		})
		return result
	}
	t.Cleanup(func() {
		if err := s.stop(); err != nil {
			t.Errorf("serve: %v", err)
		}
		for _, problem := range s.fake.Problems() {
			t.Error(problem)
		}
	})
	if !s.fake.WaitConnected(patience) {
		t.Fatalf("not connected:\n%s", s.log)
	}
	return s
}

// wait waits for the answer to an interaction.
func (s *served) wait(in *fakechat.Interaction) *fakechat.Message {
	s.t.Helper()
	if !s.fake.Wait(in, patience) {
		s.t.Fatalf("no answer; callback %v\n%s", in.Callback, s.log)
	}
	return in.Message
}

// say gives a command as the user and returns what the answer says.
func (s *served) say(in, room string, user fakechat.User, path string, pairs ...string) string {
	s.t.Helper()
	return s.wait(s.fake.Command(in, room, user, path, textOptions(pairs)...)).Say()
}

func textOptions(pairs []string) []fakechat.Option {
	var options []fakechat.Option
	for _, pair := range pairs {
		name, value, _ := strings.Cut(pair, ":")
		options = append(options, fakechat.Option{Name: name, Type: 3, Value: value})
	}
	return options
}

// setUpSite sets a site with weather up through the chat.
func (s *served) setUpSite(in, room, name string) {
	s.t.Helper()
	for _, line := range [][]string{
		{"setup site add", "name:" + name, "lat:40.69", "lon:-74.17", "zone:America/New_York", "units:c"},
		{"setup surface add", "name:greens", "grass:cool", "ceiling:3"},
		{"setup work add", "surface:greens", "name:regulator", "counts:degree-days", "base:0", "target:200"},
		{"setup work add", "surface:greens", "name:feed", "counts:nitrogen"},
	} {
		if got := s.say(in, room, leader, line[0], line[1:]...); !strings.Contains(got, "dded") {
			s.t.Fatalf("%v: %s", line, got)
		}
	}
	content := invented(s.t)
	url := s.fake.Host("station.csv", content)
	in2 := s.fake.CommandWithFile(in, room, leader, "weather file", fakechat.Attachment{ID: "9", Name: "station.csv", URL: url, Size: len(content)},
		fakechat.Option{Name: "file", Type: 11, Value: "9"})
	if got := s.wait(in2).Say(); !strings.Contains(got, "new") {
		s.t.Fatalf("weather file: %s", got)
	}
}

// invented is half a year of the demo's invented weather.
func invented(t testing.TB) []byte {
	t.Helper()
	var out bytes.Buffer
	fmt.Fprintln(&out, "date,high_c,low_c")
	for day := time.Date(2024, 1, 1, 0, 0, 0, 0, time.UTC); day.Before(time.Date(2024, 6, 4, 0, 0, 0, 0, time.UTC)); day = day.AddDate(0, 0, 1) {
		low := float64(day.YearDay())/10 - 2
		fmt.Fprintf(&out, "%s,%.1f,%.1f\n", day.Format("2006-01-02"), low+11, low)
	}
	return out.Bytes()
}

// tuesday is a morning in New York: 05:29 on 4 June 2024.
var tuesday = time.Date(2024, 6, 4, 9, 29, 0, 0, time.UTC)

func fixed(at time.Time) func() time.Time { return func() time.Time { return at } }

func TestServeSetsUpAndAnswers(t *testing.T) {
	s := serveFake(t, filepath.Join(t.TempDir(), "course.db"), fixed(tuesday), nil)
	s.setUpSite(server, channel, "Quillmere")
	for _, row := range []struct {
		path  string
		pairs []string
		want  string
	}{
		{"due", nil, "greens regulator"},
		{"briefing", nil, "Quillmere, Tue 4 Jun"},
		{"whatif", []string{"warmer:3", "warm-days:7"}, "greens"},
		{"help", nil, "/due"},
		{"setup people list", nil, "Only a lead"},
	} {
		if got := s.say(server, channel, worker, row.path, row.pairs...); !strings.Contains(got, row.want) {
			t.Errorf("/%s: no %q in\n%s", row.path, row.want, got)
		}
	}
	// Log by a button's form, confirm, undo.
	asked := s.wait(s.fake.Command(server, channel, worker, "done", textOptions([]string{"surfaces:greens", "works:regulator", "when:2024-05-30"})...))
	yes := s.fake.Click(server, channel, worker, asked, asked.Button("Yes"))
	if !s.fake.WaitFollowUp(yes, patience) {
		t.Fatalf("not logged: %s", s.log)
	}
	logged := yes.FollowUps[0]
	if logged.Private || !strings.Contains(logged.Say(), "Logged as entry 1") {
		t.Errorf("private %v: %s", logged.Private, logged.Say())
	}
	undo := s.wait(s.fake.Click(server, channel, worker, logged, logged.Button("Undo")))
	if undo.Private || !strings.Contains(undo.Say(), "ndo") && !strings.Contains(undo.Say(), "back") {
		t.Errorf("undo, private %v: %s", undo.Private, undo.Say())
	}
	complete := s.fake.Complete(server, channel, worker, "due", fakechat.Option{Name: "surface", Type: 3, Value: "gr", Focused: true})
	if !s.fake.Wait(complete, patience) || fmt.Sprint(complete.Choices()) != "[greens]" {
		t.Errorf("completion: %v", complete.Callback)
	}
}

// People: who may manage the server leads; a group may be made lead or crew,
// and once one is crew, others are out.
func TestPeople(t *testing.T) {
	s := serveFake(t, filepath.Join(t.TempDir(), "course.db"), fixed(tuesday), nil)
	const leads, crewed = "400000000000000001", "400000000000000002"
	group := func(id string) fakechat.Option { return fakechat.Option{Name: "group", Type: 8, Value: id} }
	as := func(role string) fakechat.Option { return fakechat.Option{Name: "as", Type: 3, Value: role} }
	boss := fakechat.User{ID: "5", Name: "Kim", Groups: []string{leads}}
	hand := fakechat.User{ID: "6", Name: "Jo", Groups: []string{crewed}}
	if got := s.wait(s.fake.Command(server, channel, boss, "setup people add", group(leads), as("lead"))).Say(); !strings.Contains(got, "Only a lead") {
		t.Errorf("before: %s", got)
	}
	s.wait(s.fake.Command(server, channel, leader, "setup people add", group(leads), as("lead")))
	got := s.wait(s.fake.Command(server, channel, boss, "setup people add", group(crewed), as("crew"))).Say()
	if !strings.Contains(got, "<@&"+crewed+"> is crew") || !strings.Contains(got, "From now on only") {
		t.Errorf("by a lead: %s", got)
	}
	if got := s.say(server, channel, worker, "help"); !strings.Contains(got, "not on the crew") {
		t.Errorf("outside: %s", got)
	}
	if got := s.say(server, channel, hand, "help"); !strings.Contains(got, "/due") {
		t.Errorf("crew: %s", got)
	}
	if got := s.say(server, channel, hand, "setup people list"); !strings.Contains(got, "Only a lead") {
		t.Errorf("crew: %s", got)
	}
	if got := s.say(otherServer, otherChannel, worker, "help"); !strings.Contains(got, "/due") {
		t.Errorf("another server: %s", got)
	}
}

// Nothing of one server is seen, offered or hit from another: by command,
// completion, button id, file and form.
func TestWalls(t *testing.T) {
	s := serveFake(t, filepath.Join(t.TempDir(), "course.db"), fixed(tuesday), nil)
	s.setUpSite(server, channel, "Hiddenvale")
	long := strings.Repeat("hidden words ", 12)
	asked := s.wait(s.fake.Command(server, channel, worker, "done", textOptions([]string{"surfaces:greens", "works:regulator", "when:2024-05-30", "note:" + long})...))
	yes := asked.Button("Yes") // too long for a button: kept in the store
	if !strings.Contains(yes, "#") {
		t.Fatalf("the line is in the button: %s", yes)
	}
	undo := "r1::/log undo entry:1"
	secret := func(where, got string) {
		t.Helper()
		for _, word := range []string{"Hiddenvale", "regulator", "hidden words", "entry 1 "} {
			if strings.Contains(got, word) {
				t.Errorf("%s shows %q:\n%s", where, word, got)
			}
		}
	}
	outsider := fakechat.User{ID: leader.ID, Name: "Robin", Permissions: 8} // the same person, an administrator there
	for _, row := range [][]string{
		{"due"}, {"briefing"}, {"due", "site:Hiddenvale"}, {"briefing", "site:Hiddenvale"}, {"log list"}, {"log undo", "entry:1"},
		{"setup site list"}, {"setup data export", "site:Hiddenvale"}, {"setup data erase", "site:Hiddenvale", "sure:yes"}, {"setup post list"},
	} {
		got := s.say(otherServer, otherChannel, outsider, row[0], row[1:]...)
		for _, said := range row[1:] { // what they typed themselves comes back
			_, value, _ := strings.Cut(said, ":")
			got = strings.ReplaceAll(got, value, "")
		}
		secret("/"+strings.Join(row, " "), got)
	}
	post := s.wait(s.fake.Command(otherServer, otherChannel, outsider, "setup channel add", fakechat.Option{Name: "channel", Type: 7, Value: channel}))
	if !strings.Contains(post.Say(), "no such channel") {
		t.Errorf("another server's channel: %s", post.Say())
	}
	for _, option := range [][2]string{{"due", "surface"}, {"due", "site"}, {"done", "works"}, {"setup work change", "name"}} {
		in := s.fake.Complete(otherServer, otherChannel, outsider, option[0], fakechat.Option{Name: option[1], Type: 3, Value: "", Focused: true})
		if !s.fake.Wait(in, patience) || len(in.Choices()) > 0 {
			t.Errorf("completion of %v: %v", option, in.Choices())
		}
	}
	for _, id := range []string{yes, undo, "r1::#1", "a1:note:#1", "f1::#1"} {
		in := s.fake.Click(otherServer, otherChannel, outsider, asked, id)
		secret("button "+id, s.wait(in).Say())
	}
	for _, id := range []string{"f1::#1", "f1::/log undo entry:1", "f1::/due"} {
		in := s.fake.Submit(otherServer, otherChannel, outsider, id, map[string]string{"surface": "greens", "site": "Hiddenvale"})
		secret("form "+id, strings.ReplaceAll(s.wait(in).Say(), "Hiddenvale", ""))
	}
	// A file of one server, given in another by its number only.
	in := s.fake.Command(otherServer, otherChannel, outsider, "weather file", fakechat.Option{Name: "file", Type: 11, Value: "9"})
	secret("file", s.wait(in).Say())
	if got := s.say(server, channel, worker, "due"); !strings.Contains(got, "greens regulator") {
		t.Errorf("the team's own: %s", got)
	}
}

// A second serve on the file says so and stops; the first goes on.
func TestSecondServe(t *testing.T) {
	path := filepath.Join(t.TempDir(), "course.db")
	s := serveFake(t, path, fixed(tuesday), nil)
	out, errOut, status := programWith(t, map[string]string{"SWARDBOOK_TOKEN": fakechat.Token, "SWARDBOOK_CHAT_URL": s.fake.URL()}, "serve", "--db", path)
	if status != 1 || !strings.Contains(errOut, "nother serve is running") {
		t.Errorf("status %d: %s%s", status, out, errOut)
	}
	if got := s.say(server, channel, worker, "help"); !strings.Contains(got, "/due") {
		t.Errorf("the first: %s", got)
	}
	// What does not serve may use the file all the time.
	if _, errOut, status := program(t, "", "chat", "--db", path, "--team", "chat:"+server, "/help"); status != 0 {
		t.Errorf("chat beside serve: %s", errOut)
	}
}

// programWith runs the program with an environment.
func programWith(t *testing.T, env map[string]string, args ...string) (out, errOut string, status int) {
	t.Helper()
	var stdout, stderr bytes.Buffer
	ctx, cancel := context.WithTimeout(context.Background(), patience)
	defer cancel()
	status = run(ctx, args, func(key string) string { return env[key] }, strings.NewReader(""), &stdout, &stderr)
	return stdout.String(), stderr.String(), status
}

func TestServeRefusals(t *testing.T) {
	folder := t.TempDir()
	path := filepath.Join(folder, "course.db")
	open := filepath.Join(folder, "open")
	empty := filepath.Join(folder, "empty")
	for name, mode := range map[string]os.FileMode{open: 0o644, empty: 0o600} {
		content := fakechat.Token
		if name == empty {
			content = "\n"
		}
		if err := os.WriteFile(name, []byte(content), mode); err != nil {
			t.Fatal(err)
		}
	}
	fake := fakechat.Start()
	defer fake.Close()
	token := map[string]string{"SWARDBOOK_TOKEN": "wrong.token.here"}
	for _, row := range []struct {
		env  map[string]string
		args []string
		want string
	}{
		{nil, []string{"--db", path}, "SWARDBOOK_TOKEN"},
		{token, nil, "Which database?"},
		{nil, []string{"--db", path, "--token-file", open}, "can be read by others"},
		{nil, []string{"--db", path, "--token-file", empty}, "does not hold one token"},
		{nil, []string{"--db", path, "--token-file", filepath.Join(folder, "none")}, "There is no token file"},
		{token, []string{"--db", path, "--listen", "0.0.0.0:0"}, "loopback"},
		{map[string]string{"SWARDBOOK_TOKEN": "wrong.token.here", "SWARDBOOK_CHAT_URL": "ftp://x"}, []string{"--db", path}, "no address of a chat service"},
		{map[string]string{"SWARDBOOK_TOKEN": "wrong.token.here", "SWARDBOOK_CHAT_URL": fake.URL()}, []string{"--db", path}, "does not know the token"},
	} {
		out, errOut, status := programWith(t, row.env, append([]string{"serve"}, row.args...)...)
		if status != 1 || !strings.Contains(errOut, row.want) {
			t.Errorf("%v: status %d, want %q:\n%s%s", row.args, status, row.want, out, errOut)
		}
		if strings.Contains(errOut, "wrong.token.here") || strings.Contains(errOut, fakechat.Token) {
			t.Errorf("%v: the token is printed", row.args)
		}
	}
}

// What is asked in a channel that is about a site is asked about that site, by
// command, completion, button and form alike; a site that is named wins.
func TestChannelIsAboutASite(t *testing.T) {
	const second = "110000000000000002"
	s := serveFake(t, filepath.Join(t.TempDir(), "course.db"), fixed(tuesday), nil)
	s.fake.AddGuild(server, channel, second)
	s.setUpSite(server, channel, "Quillmere")
	for _, line := range [][]string{
		{"setup site add", "name:Elsewhere", "lat:40.69", "lon:-74.17", "zone:America/New_York", "units:c"},
		{"setup surface add", "name:pitch", "grass:cool", "ceiling:3", "site:Elsewhere"},
		{"setup work add", "surface:pitch", "name:cut", "counts:days", "target:3", "site:Elsewhere"},
	} {
		s.say(server, channel, leader, line[0], line[1:]...)
	}
	if got := s.say(server, second, worker, "due"); !strings.Contains(got, "site:") {
		t.Errorf("it does not ask which: %s", got)
	}
	s.say(server, second, leader, "setup channel add", "site:Elsewhere")
	if got := s.say(server, second, worker, "due"); !strings.Contains(got, "pitch cut") {
		t.Errorf("command: %s", got)
	}
	if got := s.say(server, second, worker, "due", "site:Quillmere"); !strings.Contains(got, "greens regulator") {
		t.Errorf("named: %s", got)
	}
	in := s.fake.Complete(server, second, worker, "due", fakechat.Option{Name: "surface", Type: 3, Value: "", Focused: true})
	if !s.fake.Wait(in, patience) || fmt.Sprint(in.Choices()) != "[pitch]" {
		t.Errorf("completion: %v", in.Choices())
	}
	m := &fakechat.Message{ID: "1", Channel: second, Body: map[string]any{}}
	if got := s.wait(s.fake.Click(server, second, worker, m, "r1::/due")).Say(); !strings.Contains(got, "pitch cut") {
		t.Errorf("button: %s", got)
	}
	if got := s.wait(s.fake.Submit(server, second, worker, "f1::/done", map[string]string{"surfaces": "pitch", "works": "cut", "note": `a site:Quillmere "note"`})).Say(); !strings.Contains(got, "pitch cut") {
		t.Errorf("form: %s", got)
	}
}

// What the bot lacks in a channel is told when a post is set up, not at the
// first post.
func TestLackingPermissions(t *testing.T) {
	s := serveFake(t, filepath.Join(t.TempDir(), "course.db"), fixed(tuesday), nil)
	s.setUpSite(server, channel, "Quillmere")
	if got := s.say(server, channel, leader, "setup post add", "at:05:30"); strings.Contains(got, "lack") {
		t.Errorf("nothing is lacking: %s", got)
	}
	s.fake.SetPermissions(1<<10 | 1<<11)
	got := s.say(server, channel, leader, "setup post add", "at:05:45")
	if !strings.Contains(got, "still lack: Embed Links, Attach Files, Read Message History.") {
		t.Errorf("got %s", got)
	}
	if got := s.say(server, channel, worker, "due"); strings.Contains(got, "lack") {
		t.Errorf("told where it does not matter: %s", got)
	}
}

func TestTokenFromSystemd(t *testing.T) {
	folder := t.TempDir()
	token := filepath.Join(folder, "token")
	if err := os.WriteFile(token, []byte("Bot abc.def\n"), 0o440); err != nil {
		t.Fatal(err)
	}
	if got, err := (serving{tokenFile: token, credentials: folder}).secret(); err != nil || got != "abc.def" {
		t.Errorf("%q, %v", got, err)
	}
	if _, err := (serving{tokenFile: token, credentials: "/somewhere"}).secret(); err == nil {
		t.Error("a group's file was taken")
	}
}

func TestServeUnit(t *testing.T) {
	out, _, status := programWith(t, nil, "serve", "--unit", "--db", "/srv/turf/course.db")
	for _, want := range []string{"[Service]", "serve --db /srv/turf/course.db", "LoadCredential=token:", "--token-file %d/token", "ReadWritePaths=-/srv/turf", "NoNewPrivileges=yes"} {
		if status != 0 || !strings.Contains(out, want) {
			t.Errorf("status %d, no %q in\n%s", status, want, out)
		}
	}
}

func TestHealthAndMetrics(t *testing.T) {
	s := serveFake(t, filepath.Join(t.TempDir(), "course.db"), time.Now, func(s *serving) { s.listen = "127.0.0.1:0" })
	_, after, _ := strings.Cut(s.log.String(), `"msg":"listening","address":"`)
	address, _, found := strings.Cut(after, `"`)
	if !found {
		t.Fatalf("it does not say where it listens:\n%s", s.log)
	}
	s.say(server, channel, worker, "help")
	for path, want := range map[string]string{"healthz": "ok", "metrics": `swardbook_interactions_total{kind="ApplicationCommand",outcome="ok"} 1`} {
		got := ""
		for end := time.Now().Add(patience); time.Now().Before(end); time.Sleep(10 * time.Millisecond) {
			resp, err := http.Get("http://" + address + "/" + path)
			if err != nil {
				continue
			}
			raw, err := io.ReadAll(resp.Body)
			_ = resp.Body.Close()
			if got = string(raw); err == nil && strings.Contains(got, want) {
				break
			}
		}
		if !strings.Contains(got, want) {
			t.Errorf("/%s: no %q in\n%s", path, want, got)
		}
	}
}

func TestHealthSaysWhenStuck(t *testing.T) {
	now := tuesday
	h := &health{now: func() time.Time { return now }}
	status := func() int {
		w := &recorder{header: http.Header{}, status: 200}
		h.ServeHTTP(w, nil)
		return w.status
	}
	if got := status(); got != 200 {
		t.Errorf("at the start: %d", got)
	}
	now = now.Add(mostSilence + time.Second)
	if got := status(); got != 503 {
		t.Errorf("stuck: %d", got)
	}
	h.ticked()
	if got := status(); got != 200 {
		t.Errorf("after a tick: %d", got)
	}
}

type recorder struct {
	header http.Header
	status int
}

func (r *recorder) Header() http.Header         { return r.header }
func (r *recorder) Write(p []byte) (int, error) { return len(p), nil }
func (r *recorder) WriteHeader(status int)      { r.status = status }

// Export gives open files; erasing asks twice and takes everything.
func TestExportAndErase(t *testing.T) {
	s := serveFake(t, filepath.Join(t.TempDir(), "course.db"), fixed(tuesday), nil)
	s.setUpSite(server, channel, "Quillmere")
	s.setUpSite(otherServer, otherChannel, "Elsewhere")
	out := s.wait(s.fake.Command(server, channel, leader, "setup data export"))
	if !out.Private || len(out.Names) != 1 || out.Names[0] != "quillmere-data.zip" {
		t.Fatalf("private %v, files %v: %s", out.Private, out.Names, out.Say())
	}
	content := out.Files["quillmere-data.zip"]
	archive, err := zip.NewReader(bytes.NewReader(content), int64(len(content)))
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, file := range archive.File {
		names = append(names, file.Name)
	}
	for _, want := range []string{"site.csv", "daily.csv", "work_setting.csv", "change.csv", "day_fact.csv"} {
		if !strings.Contains(fmt.Sprint(names), want) {
			t.Errorf("no %s among %v", want, names)
		}
	}
	first := s.wait(s.fake.Command(server, channel, leader, "setup data erase"))
	second := s.wait(s.fake.Click(server, channel, leader, first, first.Button("Erase…")))
	if !strings.Contains(second.Say(), "for good?") || second.Button("Yes") == "" {
		t.Fatalf("the second question: %s", second.JSON())
	}
	if got := s.say(server, channel, worker, "due"); !strings.Contains(got, "greens") {
		t.Errorf("erased before the second yes: %s", got)
	}
	done := s.wait(s.fake.Click(server, channel, leader, second, second.Button("Yes")))
	if !strings.Contains(done.Say(), "Erased") {
		t.Errorf("got %s", done.Say())
	}
	if got := s.say(server, channel, worker, "due"); strings.Contains(got, "greens") {
		t.Errorf("still there: %s", got)
	}
	if got := s.say(otherServer, otherChannel, worker, "due"); !strings.Contains(got, "greens regulator") {
		t.Errorf("the other server's is gone: %s", got)
	}
	// Everything of a server, at once.
	all := s.wait(s.fake.Command(otherServer, otherChannel, leader, "setup data erase", fakechat.Option{Name: "everything", Type: 5, Value: true}))
	all = s.wait(s.fake.Click(otherServer, otherChannel, leader, all, all.Button("Erase…")))
	all = s.wait(s.fake.Click(otherServer, otherChannel, leader, all, all.Button("Yes")))
	if got := s.say(otherServer, otherChannel, leader, "setup site list"); !strings.Contains(all.Say(), "Erased everything") || strings.Contains(got, "Elsewhere") {
		t.Errorf("got %s, then %s", all.Say(), got)
	}
}
