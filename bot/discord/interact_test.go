package discord

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"net/http"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/bwmarrin/discordgo"
	"github.com/prometheus/client_golang/prometheus"

	"swardbook/bot/command"
	"swardbook/bot/discord/fakechat"
)

func text(name, value string) fakechat.Option {
	return fakechat.Option{Name: name, Type: 3, Value: value}
}

func TestCommandIsAnsweredPrivately(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	m := s.wait(s.fake.Command(home, homeRoom, crew, "hello", text("name", `*all* "of" you: @everyone <@123>`)))
	if !m.Private {
		t.Error("a question is answered in public")
	}
	want := `Hello \*all\* "of" you: \@everyone \<\@123\> from Sasha, crew.`
	if m.Say() != want {
		t.Errorf("got  %s\nwant %s", m.Say(), want)
	}
}

func TestQuestionYesAndNo(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	asked := s.fake.Command(home, homeRoom, crew, "log", text("what", "cut"))
	m := s.wait(asked)
	if !m.Private || !strings.Contains(m.Say(), "Log this?") || m.Button("Yes") == "" {
		t.Fatalf("private %v: %s", m.Private, m.JSON())
	}
	// Somebody else's yes does not count.
	other := s.wait(s.fake.Click(home, homeRoom, lead, m, m.Button("Yes")))
	if !strings.Contains(other.Say(), "does not confirm") {
		t.Errorf("another's yes: %s", other.Say())
	}
	yes := s.fake.Click(home, homeRoom, crew, m, m.Button("Yes"))
	if !s.fake.WaitFollowUp(yes, patience) {
		t.Fatalf("nothing came of it: %s", s.log)
	}
	public := yes.FollowUps[0]
	if public.Private || public.Say() != "Logged cut by Sasha." || public.Button("Hello") == "" {
		t.Errorf("private %v: %s", public.Private, public.JSON())
	}
	if labels, _ := yes.Message.Buttons(); len(labels) > 0 || yes.Message.Say() != "Done." {
		t.Errorf("the question stays: %s", yes.Message.JSON())
	}
	// The button under it goes on working, after a restart too: its id is all
	// there is to it.
	if got := s.wait(s.fake.Click(home, homeRoom, lead, public, public.Button("Hello"))).Say(); got != "Hello again from Robin, lead." {
		t.Errorf("got %q", got)
	}
	no := s.fake.Click(home, homeRoom, crew, m, m.Button("No"))
	if got := s.wait(no); got.Say() != "Nothing was changed." {
		t.Errorf("got %q", got.Say())
	}
}

func TestFormAsksForWhatIsMissing(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	id, err := press{kind: runLine, line: "/log"}.encode(t.Context(), nil, time.Now())
	if err != nil {
		t.Fatal(err)
	}
	m := &fakechat.Message{ID: "1", Channel: homeRoom, Body: map[string]any{}}
	in := s.fake.Click(home, homeRoom, crew, m, id)
	if !s.fake.Wait(in, patience) || in.Callback["type"] != float64(9) {
		t.Fatalf("no form: %v", in.Callback)
	}
	form, inputs := in.Form()
	if fmt.Sprint(inputs) != "[what note]" {
		t.Errorf("inputs %v", inputs)
	}
	got := s.wait(s.fake.Submit(home, homeRoom, crew, form, map[string]string{"what": `two "words": yes`, "note": ""}))
	if !strings.Contains(got.Say(), `Logs two "words": yes.`) || got.Button("Yes") == "" {
		t.Errorf("got %s", got.JSON())
	}
	// An option that only the handler misses is asked for with a button.
	late := s.wait(s.fake.Command(home, homeRoom, crew, "need", text("a", "1")))
	in = s.fake.Click(home, homeRoom, crew, late, late.Button("Fill in…"))
	s.fake.Wait(in, patience)
	form, inputs = in.Form()
	if len(inputs) == 0 || inputs[0] != "b" {
		t.Fatalf("inputs %v of %s", inputs, late.JSON())
	}
	if got := s.wait(s.fake.Submit(home, homeRoom, crew, form, map[string]string{"b": "2"})).Say(); got != "b is 2" {
		t.Errorf("got %q", got)
	}
}

func TestRightsAreCheckedAtEveryUse(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	button, err := press{kind: runLine, line: "/setup thing add"}.encode(t.Context(), nil, time.Now())
	if err != nil {
		t.Fatal(err)
	}
	form, err := press{kind: formLine, line: "/setup thing add"}.encode(t.Context(), nil, time.Now())
	if err != nil {
		t.Fatal(err)
	}
	m := &fakechat.Message{ID: "1", Channel: homeRoom, Body: map[string]any{}}
	for name, in := range map[string]*fakechat.Interaction{
		"command": s.fake.Command(home, homeRoom, crew, "setup thing add"),
		"button":  s.fake.Click(home, homeRoom, crew, m, button),
		"form":    s.fake.Submit(home, homeRoom, crew, form, nil),
	} {
		if got := s.wait(in).Say(); !strings.Contains(got, "Only a lead may") {
			t.Errorf("%s: %s", name, got)
		}
	}
	if got := s.wait(s.fake.Command(home, homeRoom, lead, "setup thing add")).Say(); got != "Added." {
		t.Errorf("lead: %s", got)
	}
}

func TestOldAndForeignButtons(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	m := &fakechat.Message{ID: "1", Channel: homeRoom, Body: map[string]any{}}
	for _, id := range []string{"r0::/hello", "x1::/hello", "nonsense", "r1:/hello", "r1::#77", "r1::#x", ":", "r1::"} {
		in := s.fake.Click(home, homeRoom, crew, m, id)
		if got := s.wait(in); !got.Private || got.Say() == "" {
			t.Errorf("%q: private %v, %s", id, got.Private, got.Say())
		}
	}
}

func TestPanicIsAnApologyAndALogLine(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	// A handler's panic is the table's to catch; this one is in the adapter.
	s.house.mu.Lock()
	s.house.teams[home].Book = nil
	s.house.mu.Unlock()
	got := s.wait(s.fake.Command(home, homeRoom, crew, "hello"))
	if !strings.Contains(got.Say(), "Something went wrong on our side") {
		t.Errorf("got %s", got.Say())
	}
	s.eventually("a stack in the log", func() bool { return strings.Contains(s.log.String(), "stack=") })
	s.house.mu.Lock()
	s.house.teams[home].Book = s.house.teams[away].Book
	s.house.mu.Unlock()
	s.answers()
	if got := s.wait(s.fake.Command(home, homeRoom, lead, "crash")).Say(); !strings.Contains(got, "went wrong on our side") {
		t.Errorf("got %s", got)
	}
}

// An event told twice is done once.
func TestReplay(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	in := s.fake.Command(home, homeRoom, crew, "hello")
	s.wait(in)
	s.fake.Replay(in, crew, "hello")
	s.answers()
	callbacks := 0
	for _, request := range s.fake.Requests() {
		if strings.HasPrefix(request.Path, "interactions/"+in.ID) {
			callbacks++
		}
	}
	if callbacks != 1 {
		t.Errorf("%d callbacks", callbacks)
	}
}

func TestAnswersThroughFaults(t *testing.T) {
	for _, row := range []struct {
		name  string
		fault fakechat.Fault
		on    string
		times int
	}{
		{"answer lost on the way back", fakechat.Fault{CutAfter: true}, "callback", 1},
		{"answer lost on the way there", fakechat.Fault{CutBefore: true}, "callback", 1},
		{"bad gateway", fakechat.Fault{Status: 502}, "callback", 1},
		{"unavailable", fakechat.Fault{Status: 503}, "@original", 2},
		{"edit's answer lost", fakechat.Fault{CutAfter: true}, "@original", 1},
		{"rate limit", fakechat.Fault{Status: 429, Body: `{"message":"slow down","retry_after":0.01,"global":false}`, Header: map[string]string{"Content-Type": "application/json"}}, "@original", 1},
		{"a page instead of JSON", fakechat.Fault{Status: 500, Body: "<html>"}, "@original", 1},
	} {
		t.Run(row.name, func(t *testing.T) {
			t.Parallel()
			s := newStage(t, small(), nil)
			left := make(chan bool, row.times)
			for range row.times {
				left <- true
			}
			s.fake.SetFault(func(_, path string) *fakechat.Fault {
				if !strings.HasSuffix(path, row.on) {
					return nil
				}
				select {
				case <-left:
					fault := row.fault
					return &fault
				default:
					return nil
				}
			})
			if got := s.wait(s.fake.Command(home, homeRoom, crew, "hello", text("name", "there"))).Say(); !strings.Contains(got, "Hello there") {
				t.Errorf("got %q\n%s", got, s.log)
			}
		})
	}
}

// Commands, taps and forms have their first answer before the team is looked
// up, however long that takes.
func TestAnsweredBeforeTheTeamIsLookedUp(t *testing.T) {
	t.Parallel()
	let := make(chan struct{})
	s := newIdleStage(t, small(), nil)
	s.house.lookUp = func() { <-let }
	s.start()
	if !s.fake.WaitConnected(patience) {
		t.Fatalf("not connected:\n%s", s.log)
	}
	m := &fakechat.Message{ID: "1", Channel: homeRoom, Body: map[string]any{}}
	all := []*fakechat.Interaction{
		s.fake.Command(home, homeRoom, crew, "hello"),
		s.fake.Click(home, homeRoom, crew, m, "r1::/hello"),
		s.fake.Submit(home, homeRoom, crew, "f1::/hello", nil),
	}
	for i, in := range all {
		if !s.fake.WaitAnswer(in, patience) {
			t.Errorf("interaction %d waits for the team", i)
		}
	}
	close(let)
	for _, in := range all {
		s.wait(in)
	}
}

// A command whose time is over, while it waits for a place to run or while it
// runs, is told so: an answer was promised.
func TestTimeIsOver(t *testing.T) {
	for _, row := range []struct {
		name string
		full bool // other commands have all places, and do not end
		want string
	}{{"waiting", true, "Too many commands are running."}, {"running", false, "My time is over."}} {
		t.Run(row.name, func(t *testing.T) {
			t.Parallel()
			registry := prometheus.NewRegistry()
			s := newIdleStage(t, waiting(nil), func(c *Config) { // it is never connected
				var err error
				if c.Metrics, err = NewMetrics(registry); err != nil {
					t.Fatal(err)
				}
			})
			for range cap(s.bot.work) {
				if row.full {
					s.bot.work <- struct{}{}
				}
			}
			in := s.fake.Command(home, homeRoom, crew, "hello")
			ctx, over := context.WithCancel(t.Context())
			done := make(chan error, 1)
			go func() {
				done <- s.bot.take(ctx, &discordgo.Interaction{ID: in.ID, AppID: fakechat.AppID, Token: in.Token, GuildID: home, ChannelID: homeRoom,
					Type: discordgo.InteractionApplicationCommand, Data: discordgo.ApplicationCommandInteractionData{Name: "hello"},
					Member: &discordgo.Member{User: &discordgo.User{ID: crew.ID, Username: crew.Name}}})
			}()
			s.eventually("an answer is promised", func() bool { return countOf(t, registry, "swardbook_first_answer_seconds") == 1 })
			over()
			select {
			case err := <-done:
				if err != nil {
					t.Error(err)
				}
			case <-time.After(patience):
				t.Fatal("it waits without end")
			}
			if got := s.wait(in).Say(); !strings.Contains(got, row.want) {
				t.Errorf("got %q", got)
			}
		})
	}
}

// countOf is how much a histogram has counted.
func countOf(t *testing.T, registry *prometheus.Registry, name string) uint64 {
	t.Helper()
	families, err := registry.Gather()
	if err != nil {
		t.Fatal(err)
	}
	for _, family := range families {
		if family.GetName() == name {
			return family.GetMetric()[0].GetHistogram().GetSampleCount()
		}
	}
	return 0
}

// An edit comes again when the service said it may, not before.
func TestEditWaitsAsLongAsItIsTold(t *testing.T) {
	for name, refusal := range map[string]fakechat.Fault{
		"rate limit": {Status: 429, Body: `{"message":"slow down","retry_after":0.5,"global":false}`, Header: map[string]string{"Content-Type": "application/json"}},
		"overloaded": {Status: 503, Header: map[string]string{"Retry-After": "0.5"}},
	} {
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			s := newStage(t, small(), nil)
			var mu sync.Mutex
			var first time.Time
			s.fake.SetFault(func(_, path string) *fakechat.Fault {
				if !strings.HasSuffix(path, "@original") {
					return nil
				}
				mu.Lock()
				defer mu.Unlock()
				if first.IsZero() {
					first = time.Now()
				}
				if time.Since(first) >= 500*time.Millisecond {
					return nil
				}
				fault := refusal
				return &fault
			})
			if got := s.wait(s.fake.Command(home, homeRoom, crew, "hello", text("name", "there"))).Say(); !strings.Contains(got, "Hello there") {
				t.Errorf("got %q\n%s", got, s.log)
			}
		})
	}
}

func TestRetryAfter(t *testing.T) {
	answered := func(value string) error {
		return &discordgo.RESTError{Response: &http.Response{Header: http.Header{"Retry-After": {value}}}}
	}
	for _, row := range []struct {
		err  error
		want time.Duration
	}{
		{&discordgo.RateLimitError{RateLimit: &discordgo.RateLimit{TooManyRequests: &discordgo.TooManyRequests{RetryAfter: 3 * time.Second}}}, 3 * time.Second},
		{answered("2"), 2 * time.Second},
		{answered("0.25"), 250 * time.Millisecond},
		{answered(""), 0},
		{answered("soon"), 0},
		{answered("-1"), 0},
		{answered("NaN"), 0},
		{answered("1e300"), 0},
		{&discordgo.RESTError{}, 0},
		{errors.New("cut"), 0},
		{nil, 0},
	} {
		if got := retryAfter(row.err); got != row.want {
			t.Errorf("%v: %s, want %s", row.err, got, row.want)
		}
	}
}

// What the fake hands out stays as it is, and changes nothing of the fake's.
func TestFakeHandsOutCopies(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	asked := s.wait(s.fake.Command(home, homeRoom, crew, "log", text("what", "cut")))
	in := s.fake.Click(home, homeRoom, crew, asked, asked.Button("Yes"))
	if !s.fake.WaitFollowUp(in, patience) {
		t.Fatalf("nothing came of it: %s", s.log)
	}
	spoil := func(m *fakechat.Message) {
		m.Body["embeds"].([]any)[0].(map[string]any)["description"] = "spoilt"
		m.Body["content"] = "spoilt"
	}
	spoil(in.Message)
	spoil(in.FollowUps[0])
	spoil(s.fake.Messages(homeRoom)[0])
	s.fake.Wait(in, patience)
	for _, m := range []*fakechat.Message{in.Message, in.FollowUps[0], s.fake.Messages(homeRoom)[0]} {
		if strings.Contains(m.JSON(), "spoilt") {
			t.Errorf("the fake's own was changed: %s", m.JSON())
		}
	}
}

func TestFiles(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	content := []byte("time,temp_c\n2024-06-01 00:00,12\n")
	good := s.fake.Host("week.csv", content)
	picture := s.fake.Host("week2.csv", append([]byte("\x89PNG\r\n\x1a\n"), bytes.Repeat([]byte{0}, 100)...))
	large := s.fake.Host("large.csv", bytes.Repeat([]byte("12345678,1\n"), maxDownload/11+2))
	for _, row := range []struct {
		name, url string
		size      int
		want      string
	}{
		{"../../week.csv", good, len(content), fmt.Sprintf("%d bytes", len(content))},
		{"other host", strings.Replace(good, "cdn.discordapp.com", "cdn.discordapp.com.example.org", 1), 10, "own file host"},
		{"user in front", strings.Replace(good, "https://", "https://cdn.discordapp.com@example.org/", 1), 10, "own file host"},
		{"port", strings.Replace(good, "cdn.discordapp.com", "cdn.discordapp.com:8443", 1), 10, "own file host"},
		{"no encryption", strings.Replace(good, "https", "http", 1), 10, "own file host"},
		{"not there", "https://cdn.discordapp.com/attachments/1/none.csv", 10, "could not be fetched"},
		{"too large as told", good, maxDownload + 1, "more than 25 MB"},
		{"too large in truth", large, 10, "more than 25 MB"},
		{"not text in truth", picture, 10, "looks like image/png"},
	} {
		in := s.fake.CommandWithFile(home, homeRoom, crew, "read", fakechat.Attachment{ID: "77", Name: row.name, URL: row.url, ContentType: "text/csv", Size: row.size},
			fakechat.Option{Name: "file", Type: 11, Value: "77"})
		if got := s.wait(in).Say(); !strings.Contains(got, row.want) {
			t.Errorf("%s: got %q, want %q", row.name, got, row.want)
		}
	}
}

func TestFileHosts(t *testing.T) {
	for address, fine := range map[string]bool{
		"https://cdn.discordapp.com/attachments/1/2/a.csv?ex=1": true,
		"https://media.discordapp.net/attachments/1/2/a.csv":    true,
		"https://CDN.discordapp.com/a":                          false, // to the letter
		"https://cdn.discordapp.com./a":                         false,
		"https://169.254.169.254/latest":                        false,
		"file:///etc/passwd":                                    false,
		"//cdn.discordapp.com/a":                                false,
		"https://cdn.discordapp.com%2eexample.org/a":            false,
		"": false,
	} {
		if err := fromFileHost(address); (err == nil) != fine {
			t.Errorf("%q: %v", address, err)
		}
	}
}

// A server's own words and rights say nothing in another one.
func TestDirectMessage(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	in := s.fake.Command("", homeRoom, crew, "hello")
	if got := s.wait(in).Say(); !strings.Contains(got, "in your server") {
		t.Errorf("got %q", got)
	}
}

func TestCompletion(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	in := s.fake.Complete(home, homeRoom, crew, "hello", fakechat.Option{Name: "name", Type: 3, Value: "x", Focused: true})
	if !s.fake.Wait(in, patience) || len(in.Choices()) != 0 {
		t.Errorf("got %v", in.Callback)
	}
	in = s.fake.Complete(home, homeRoom, crew, "no such", fakechat.Option{Name: "name", Type: 3, Value: "x", Focused: true})
	if !s.fake.Wait(in, patience) {
		t.Error("no answer")
	}
}

// The whole table of commands is registered once, and again only when it is
// another one.
func TestRegistration(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), func(c *Config) { c.Table = command.Desk{}.Table(nil) })
	s.settled(2)
	commands, overwrites := s.fake.Commands()
	if overwrites != 1 {
		t.Fatalf("%d overwrites, want 1\n%s", overwrites, s.log)
	}
	s.fake.Cut()
	s.begun(2)
	s.settled(4)
	if _, overwrites := s.fake.Commands(); overwrites != 1 {
		t.Errorf("%d overwrites of the same commands, want 1", overwrites)
	}
	hidden := map[string]bool{}
	for _, raw := range commands {
		var one struct {
			Name       string
			Permission *string `json:"default_member_permissions"`
			Contexts   []int
		}
		if err := json.Unmarshal(raw, &one); err != nil {
			t.Fatal(err)
		}
		hidden[one.Name] = one.Permission != nil && *one.Permission == "32"
		if fmt.Sprint(one.Contexts) != "[0]" {
			t.Errorf("/%s in contexts %v", one.Name, one.Contexts)
		}
	}
	for name, want := range map[string]bool{"briefing": false, "due": false, "done": false, "whatif": false, "help": false, "setup": true, "weather": true} {
		if got, there := hidden[name]; !there || got != want {
			t.Errorf("/%s: registered %v, hidden %v", name, there, got)
		}
	}
}

func TestRedaction(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), nil)
	s.fake.SetFault(func(_, path string) *fakechat.Fault {
		if strings.Contains(path, "callback") || strings.Contains(path, "@original") {
			return &fakechat.Fault{CutBefore: true}
		}
		return nil
	})
	in := s.fake.Command(home, homeRoom, crew, "hello")
	s.eventually("something in the log", func() bool { return strings.Contains(s.log.String(), "went wrong") })
	s.bot.Log.Error("x", "error", fmt.Errorf("get https://discord.com/api/v9/webhooks/1/%s/messages/@original: refused, Bot %s", in.Token, fakechat.Token))
	if log := s.log.String(); strings.Contains(log, in.Token) || strings.Contains(log, fakechat.Token) {
		t.Errorf("a token is in the log:\n%s", log)
	}
	if !strings.Contains(s.log.String(), "[token]") {
		t.Error("nothing was redacted")
	}
}
