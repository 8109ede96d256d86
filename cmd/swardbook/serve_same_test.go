package main

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"log/slog"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/rogpeppe/go-internal/txtar"

	"swardbook/bot/command"
	"swardbook/bot/discord"
	"swardbook/bot/discord/fakechat"
	"swardbook/bot/reply"
	"swardbook/bot/terminal"
	"swardbook/storage/sqlite"
)

// answered is what a handler answered to a line.
type answered struct {
	mu  sync.Mutex
	all []string
}

// watched is the table with every answer that is not a question written down.
func (a *answered) watched(table command.Table) command.Table {
	var commands []command.Command
	for _, one := range table.All() {
		run := one.Run
		watched := *one
		watched.Run = func(ctx context.Context, req command.Request) (reply.Reply, error) {
			r, err := run(ctx, req)
			if err != nil || !req.Ask && r.Confirm == nil {
				raw, _ := json.Marshal(r)
				kinds := ""
				for _, block := range r.Blocks {
					kinds += fmt.Sprintf(" %T", block)
				}
				a.mu.Lock()
				defer a.mu.Unlock()
				a.all = append(a.all, fmt.Sprintf("/%s\n%s%s\n%v", req.Command.Path, raw, kinds, err))
			}
			return r, err
		}
		commands = append(commands, watched)
	}
	return command.New(slog.New(slog.DiscardHandler), commands...)
}

// watchedTeams are teams whose answers are written down.
type watchedTeams struct {
	*teams
	answered *answered
}

func (w watchedTeams) Team(ctx context.Context, server string) (*discord.Team, error) {
	team, err := w.teams.Team(ctx, server)
	if err != nil {
		return nil, err
	}
	copied := *team
	copied.Table = w.answered.watched(team.Table)
	return &copied, nil
}

// script is a part of a session: lines, who types them and when.
type script struct {
	lines []string
	lead  bool
	now   time.Time // on the site's clock, as UTC
}

var (
	execChat  = regexp.MustCompile(`^!? ?exec swardbook chat --db course\.db (--as lead )?--now (\S+)`)
	stdinFrom = regexp.MustCompile(`^stdin (\S+)$`)
	copyOpen  = regexp.MustCompile(`^cp \$OPEN/(\S+) (\S+)$`)
)

// readSession reads the scripts of a session file and the files they name.
func readSession(t *testing.T, path string) (scripts []script, files map[string][]byte) {
	t.Helper()
	archive, err := txtar.ParseFile(path)
	if err != nil {
		t.Fatal(err)
	}
	files = map[string][]byte{}
	for _, file := range archive.Files {
		files[file.Name] = file.Data
	}
	from := ""
	for _, line := range strings.Split(string(archive.Comment), "\n") {
		if match := copyOpen.FindStringSubmatch(line); match != nil {
			if files[match[2]], err = os.ReadFile(filepath.Join("..", "..", "testdata", "open", match[1])); err != nil {
				t.Fatal(err)
			}
		}
		if match := stdinFrom.FindStringSubmatch(line); match != nil {
			from = match[1]
		}
		match := execChat.FindStringSubmatch(line)
		if match == nil || from == "" {
			continue
		}
		now, err := time.Parse("2006-01-02T15:04", match[2])
		if err != nil {
			continue
		}
		one := script{lead: match[1] != "", now: now}
		for _, typed := range strings.Split(string(files[from]), "\n") {
			if typed = command.WithoutComment(typed); typed != "" {
				one.lines = append(one.lines, typed)
			}
		}
		scripts, from = append(scripts, one), ""
	}
	return scripts, files
}

var zoneOf = regexp.MustCompile(`zone:(\S+)`)

// The same scripts, typed in the terminal and given in the chat, are answered
// with equal replies: blocks, figures, errors.
func TestSameRepliesInTerminalAndChat(t *testing.T) {
	for _, name := range []string{"morning", "hourly", "fahrenheit", "work_rules"} {
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			scripts, files := readSession(t, filepath.Join("..", "..", "testdata", "sessions", name+".txt"))
			zone := time.UTC
			count := 0
			for _, one := range scripts {
				for _, line := range one.lines {
					count++
					if match := zoneOf.FindStringSubmatch(line); match != nil {
						zone, _ = time.LoadLocation(match[1])
					}
				}
			}
			if count < 5 {
				t.Fatalf("only %d lines", count)
			}
			typed := inTerminal(t, scripts, files, zone)
			given := inChat(t, scripts, files, zone)
			if len(typed) != len(given) {
				t.Errorf("%d answers in the terminal, %d in the chat", len(typed), len(given))
			}
			for i := range min(len(typed), len(given)) {
				if typed[i] != given[i] {
					t.Fatalf("terminal:\n%s\nchat:\n%s", typed[i], given[i])
				}
			}
			t.Logf("%d equal answers", len(typed))
		})
	}
}

func instant(local time.Time, zone *time.Location) time.Time {
	return time.Date(local.Year(), local.Month(), local.Day(), local.Hour(), local.Minute(), 0, 0, zone)
}

// chatCan says whether a line can be given in a chat: the chat's own forms keep
// unreadable ones out.
func chatCan(line string) (command.Call, bool) {
	call, err := command.Desk{}.Table(nil).ParseLine(line)
	return call, err == nil
}

func inTerminal(t *testing.T, scripts []script, files map[string][]byte, zone *time.Location) []string {
	t.Helper()
	folder := t.TempDir()
	house, err := open(context.Background(), filepath.Join(folder, "course.db"), "home")
	if err != nil {
		t.Fatal(err)
	}
	defer house.close()
	var answers answered
	for _, one := range scripts {
		session := terminal.Session{Table: withFiles(answers.watched(house.desk.Table(nil)), files), Caller: command.Caller{ID: "t", Name: "Robin", Role: roleOf(one.lead)},
			Now: func() (time.Time, bool) { return instant(one.now, zone), false }, Out: io.Discard, Err: io.Discard, Dir: folder}
		for _, line := range one.lines {
			if _, ok := chatCan(line); ok {
				session.RunLine(context.Background(), line)
			}
		}
	}
	return answers.all
}

// withFiles makes a table whose files are those of the session.
func withFiles(table command.Table, files map[string][]byte) command.Table {
	var commands []command.Command
	for _, one := range table.All() {
		run := one.Run
		changed := *one
		changed.Run = func(ctx context.Context, req command.Request) (reply.Reply, error) {
			req.OpenFile = func(name string) (io.ReadCloser, error) {
				content, ok := files[name]
				if !ok {
					return nil, errors.New("no such file in the session")
				}
				return io.NopCloser(bytes.NewReader(content)), nil
			}
			return run(ctx, req)
		}
		commands = append(commands, changed)
	}
	return command.New(nil, commands...)
}

func roleOf(lead bool) command.Role {
	if lead {
		return command.Lead
	}
	return command.Crew
}

func inChat(t *testing.T, scripts []script, files map[string][]byte, zone *time.Location) []string {
	t.Helper()
	db, err := sqlite.Open(context.Background(), filepath.Join(t.TempDir(), "course.db"))
	if err != nil {
		t.Fatal(err)
	}
	defer db.Close()
	fake := fakechat.Start()
	defer fake.Close()
	fake.SetAnswerLimit(patience)
	fake.AddGuild(server, channel)
	var answers answered
	var now moment
	log := &syncBuffer{}
	handler := slog.New(slog.NewTextHandler(log, nil))
	bot, err := discord.New(discord.Config{Token: fakechat.Token, BaseURL: fake.URL(), House: watchedTeams{newTeams(db, handler), &answers},
		Table: command.Desk{}.Table(nil), Log: handler, Timing: quickly(), Now: now.get})
	if err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	done := make(chan error, 1)
	go func() { done <- bot.Run(ctx) }()
	defer func() {
		cancel()
		<-done
	}()
	if !fake.WaitConnected(patience) {
		t.Fatal("not connected")
	}
	for _, one := range scripts {
		now.set(instant(one.now, zone))
		user := fakechat.User{ID: "300000000000000001", Name: "Robin"}
		if one.lead {
			user.Permissions = 32
		}
		for _, line := range one.lines {
			giveInChat(t, fake, user, line, files, log)
		}
	}
	for _, problem := range fake.Problems() {
		t.Error(problem)
	}
	return answers.all
}

// giveInChat gives the line as the chat's own form of it, and says yes when it
// asks. What is waited for comes after the line was run; what follows it, in
// public, may come while the next one runs.
func giveInChat(t *testing.T, fake *fakechat.Fake, user fakechat.User, line string, files map[string][]byte, log fmt.Stringer) {
	t.Helper()
	call, ok := chatCan(line)
	if !ok {
		return
	}
	var options []fakechat.Option
	file := fakechat.Attachment{}
	for _, option := range call.Command.Options {
		text, given := call.Values.Text(option.Name)
		if !given {
			continue
		}
		one := fakechat.Option{Name: option.Name, Type: 3, Value: text}
		switch option.Kind {
		case command.Yes:
			yes, _ := call.Values.Yes(option.Name)
			one.Type, one.Value = 5, yes
		case command.Number:
			number, _ := call.Values.Number(option.Name)
			one.Type, one.Value = 10, number
		case command.Whole:
			number, _ := call.Values.Whole(option.Name)
			one.Type, one.Value = 4, number
		case command.File:
			file = fakechat.Attachment{ID: "77", Name: text, URL: fake.Host(filepath.Base(text), files[text]), Size: len(files[text])}
			one.Type, one.Value = 11, "77"
		}
		options = append(options, one)
	}
	var in *fakechat.Interaction
	if file.ID != "" {
		in = fake.CommandWithFile(server, channel, user, call.Command.Path, file, options...)
	} else {
		in = fake.Command(server, channel, user, call.Command.Path, options...)
	}
	if !fake.Wait(in, patience) {
		t.Fatalf("no answer to %s\n%s", line, log)
	}
	if yes := in.Message.Button("Yes"); yes != "" {
		in = fake.Click(server, channel, user, in.Message, yes)
		if !fake.Wait(in, patience) {
			t.Fatalf("no answer to yes after %s\n%s", line, log)
		}
	}
}
