package discord

import (
	"bytes"
	"encoding/json"
	"fmt"
	"strings"
	"testing"
	"time"

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
	if !s.fake.WaitFollowUp(yes, 5*time.Second) {
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
	if !s.fake.Wait(in, 5*time.Second) || in.Callback["type"] != float64(9) {
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
	s.fake.Wait(in, 5*time.Second)
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
	for end := time.Now().Add(5 * time.Second); !strings.Contains(s.log.String(), "stack="); time.Sleep(time.Millisecond) {
		if time.Now().After(end) {
			t.Fatalf("no stack in the log: %s", s.log)
		}
	}
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
	if !s.fake.Wait(in, 5*time.Second) || len(in.Choices()) != 0 {
		t.Errorf("got %v", in.Callback)
	}
	in = s.fake.Complete(home, homeRoom, crew, "no such", fakechat.Option{Name: "name", Type: 3, Value: "x", Focused: true})
	if !s.fake.Wait(in, 5*time.Second) {
		t.Error("no answer")
	}
}

// The whole table of commands is registered once, and again only when it is
// another one.
func TestRegistration(t *testing.T) {
	t.Parallel()
	s := newStage(t, small(), func(c *Config) { c.Table = command.Desk{}.Table(nil) })
	waitFor := func(n int) []json.RawMessage {
		t.Helper()
		for end := time.Now().Add(5 * time.Second); time.Now().Before(end); time.Sleep(5 * time.Millisecond) {
			if commands, overwrites := s.fake.Commands(); overwrites == n {
				return commands
			}
		}
		_, overwrites := s.fake.Commands()
		t.Fatalf("%d overwrites, want %d\n%s", overwrites, n, s.log)
		return nil
	}
	commands := waitFor(1)
	s.fake.Cut()
	time.Sleep(50 * time.Millisecond)
	s.answers()
	waitFor(1)
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
	for end := time.Now().Add(10 * time.Second); !strings.Contains(s.log.String(), "went wrong"); time.Sleep(5 * time.Millisecond) {
		if time.Now().After(end) {
			t.Fatalf("nothing was logged: %s", s.log)
		}
	}
	s.bot.Log.Error("x", "error", fmt.Errorf("get https://discord.com/api/v9/webhooks/1/%s/messages/@original: refused, Bot %s", in.Token, fakechat.Token))
	if log := s.log.String(); strings.Contains(log, in.Token) || strings.Contains(log, fakechat.Token) {
		t.Errorf("a token is in the log:\n%s", log)
	}
	if !strings.Contains(s.log.String(), "[token]") {
		t.Error("nothing was redacted")
	}
}
