package terminal

import (
	"bytes"
	"context"
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/peterh/liner"

	"swardbook/bot/command"
	"swardbook/bot/reply"
	"swardbook/planner"
)

// table is a small table of commands.
func table() command.Table {
	say := func(text string) command.Handler {
		return func(_ context.Context, req command.Request) (reply.Reply, error) {
			return reply.Of(reply.Text(text)), nil
		}
	}
	return command.New(nil,
		command.Command{Path: "due", Run: func(_ context.Context, req command.Request) (reply.Reply, error) {
			if surface, given := req.Values.Text("surface"); given && surface != "greens" {
				return reply.Reply{}, planner.Problemf(planner.NotFound, "no surface %s", surface).WithHint("there is greens")
			}
			return reply.Of(reply.Textf("%s says %s", req.Caller.Name, req.NowAt(nil).Format("15:04"))), nil
		}, Options: []command.Option{{Name: "surface", Kind: command.Name, Help: "which"}}},
		command.Command{Path: "done", Asks: true, Run: func(_ context.Context, req command.Request) (reply.Reply, error) {
			if req.Ask {
				return reply.Of(reply.Text("It would be logged.")), nil
			}
			return reply.Of(reply.Text("Logged.")), nil
		}},
		command.Command{Path: "sheet", Run: func(context.Context, command.Request) (reply.Reply, error) {
			return reply.Of(reply.File{Name: "week.xlsx", Content: []byte("cells")},
				reply.Picture{Name: "week.png", Alt: "A line.", PNG: []byte("dots")}), nil
		}},
		command.Command{Path: "read", Run: func(_ context.Context, req command.Request) (reply.Reply, error) {
			file, err := req.Open("file")
			if err != nil {
				return reply.Reply{}, err
			}
			defer file.Close()
			content, err := io.ReadAll(file)
			return reply.Of(reply.Text(content)), err
		}, Options: []command.Option{{Name: "file", Kind: command.File, Help: "the file"}}},
		command.Command{Path: "setup", Who: command.Lead, Run: say("Set up.")},
	)
}

type recorded struct {
	*Session
	out, err *bytes.Buffer
}

func session(t *testing.T) recorded {
	out, errs := new(bytes.Buffer), new(bytes.Buffer)
	at := time.Date(2013, 6, 20, 5, 30, 0, 0, time.UTC)
	return recorded{&Session{
		Table: table(), Caller: command.Caller{ID: "1", Name: "Ann"}, Dir: t.TempDir(), Out: out, Err: errs,
		Now: func() (time.Time, bool) { return at, true },
	}, out, errs}
}

func TestRunLine(t *testing.T) {
	tests := []struct {
		line     string
		ok       bool
		out, err string
	}{
		{"/due", true, "Ann says 05:30\n", ""},
		{" due surface:greens ", true, "Ann says 05:30\n", ""},
		{"/due tees", false, "", "No surface tees.\nThere is greens.\n"},
		{"/setup", false, "", "Only a lead may use /setup.\nAsk a lead to do it.\n"},
		{"/done", true, "Logged.\n", ""},
		{"/read", false, "", "Still needed: file (the file).\nLike: /read file:week.csv\n"},
		{"/read nowhere.csv", false, "", "There is no file nowhere.csv.\nGive its path from the folder you\nare in.\n"},
		{"/read session.go/x.csv", false, "", "There is no file session.go/x.csv.\nGive its path from the folder you\nare in.\n"},
		{"/read ..", false, "", "The path .. is a folder, not a\nfile.\nGive the path of a file in it.\n"},
		{"/read testdata/table.txt", true, "Degree days\n", ""},
	}
	for _, test := range tests {
		s := session(t)
		ok := s.RunLine(context.Background(), test.line)
		if ok != test.ok || !strings.HasPrefix(s.out.String(), test.out) || s.err.String() != test.err {
			t.Errorf("%s: %t\n%s%s, want %t\n%s%s", test.line, ok, s.out, s.err, test.ok, test.out, test.err)
		}
	}
	s := session(t)
	s.Out = brokenPipe{}
	if s.RunLine(context.Background(), "/due") {
		t.Error("a reply that cannot be written went well")
	}
}

func TestReword(t *testing.T) {
	s := session(t)
	s.Reword = strings.ToUpper
	s.RunLine(context.Background(), "/due")
	s.RunLine(context.Background(), "/due tees")
	if got := s.out.String() + s.err.String(); got != "ANN SAYS 05:30\nNO SURFACE TEES.\nTHERE IS GREENS.\n" {
		t.Errorf("got %q", got)
	}
}

func TestConfirmOnlyWhenAskedFor(t *testing.T) {
	s := session(t)
	s.Session.Confirm = true
	if !s.RunLine(context.Background(), "/done") {
		t.Fatal(s.err)
	}
	lines := strings.Split(strings.TrimSpace(s.out.String()), "\n")
	if got := strings.Join(lines[:len(lines)-1], "\n"); got != "It would be logged.\n\nDo this?\nTo say yes, type:" {
		t.Errorf("asked:\n%s", got)
	}
	s.out.Reset()
	if !s.RunLine(context.Background(), lines[len(lines)-1]) || s.out.String() != "Logged.\n" {
		t.Errorf("%s: %s%s", lines[len(lines)-1], s.out, s.err)
	}
}

func TestRunScript(t *testing.T) {
	const script = "\ufeff# a week\r\n\r\n/due # who\n   \n/due tees\n/done\n/nonsense"
	s := session(t)
	if failed := s.RunScript(context.Background(), strings.NewReader(script)); failed != 2 {
		t.Errorf("%d failed, want 2", failed)
	}
	if got, want := s.out.String(), "> /due\nAnn says 05:30\n\n> /due tees\n\n> /done\nLogged.\n\n> /nonsense\n"; got != want {
		t.Errorf("output\n%s\nwant\n%s", got, want)
	}
	if got, want := s.err.String(), "No surface tees.\nThere is greens.\nThere is no command /nonsense.\nType /help to see what there is.\n"; got != want {
		t.Errorf("errors\n%s\nwant\n%s", got, want)
	}
	s = session(t)
	s.Session.JSON = true
	if failed := s.RunScript(context.Background(), strings.NewReader(script)); failed != 2 {
		t.Errorf("JSON: %d failed, want 2", failed)
	}
	if got := strings.Count(s.out.String(), "\n"); got != 4 || s.err.Len() > 0 || strings.Contains(s.out.String(), "> /due") {
		t.Errorf("JSON: %d lines, want 4 objects and nothing on the side: %s%s", got, s.out, s.err)
	}
}

func TestRunScriptStops(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	s := session(t)
	if failed := s.RunScript(ctx, strings.NewReader("/due\n/due\n")); failed != 1 || s.out.Len() > 0 {
		t.Errorf("stopped: %d failed, output %q", failed, s.out)
	}
	s = session(t)
	if failed := s.RunScript(context.Background(), io.MultiReader(strings.NewReader("/due\n"), broken{})); failed != 1 ||
		!strings.HasPrefix(s.err.String(), "The script cannot be read any") {
		t.Errorf("broken script: %d failed, errors %q", failed, s.err)
	}
	s = session(t)
	if failed := s.RunScript(context.Background(), strings.NewReader(strings.Repeat("x", maxScriptLine+1))); failed != 1 || s.err.Len() == 0 {
		t.Errorf("endless line: %d failed, errors %q", failed, s.err)
	}
}

type broken struct{}

func (broken) Read([]byte) (int, error) { return 0, errors.New("disk") }

func TestFilesAreSavedUnderFreeNames(t *testing.T) {
	s := session(t)
	s.Session.Dir = filepath.Join(s.Session.Dir, "new", "folder")
	for range 2 {
		if !s.RunLine(context.Background(), "/sheet") {
			t.Fatal(s.err)
		}
	}
	if got, want := s.out.String(), "saved: week.xlsx\n\nA line.\nsaved: week.png\nsaved: week-2.xlsx\n\nA line.\nsaved: week-2.png\n"; got != want {
		t.Errorf("output\n%s\nwant\n%s", got, want)
	}
	for name, want := range map[string]string{"week.xlsx": "cells", "week-2.xlsx": "cells", "week.png": "dots", "week-2.png": "dots"} {
		if got, err := os.ReadFile(filepath.Join(s.Session.Dir, name)); err != nil || string(got) != want {
			t.Errorf("%s holds %q (%v), want %q", name, got, err, want)
		}
	}
}

func TestFileThatCannotBeSaved(t *testing.T) {
	s := session(t)
	s.Session.Dir = filepath.Join(s.Session.Dir, "taken")
	if err := os.WriteFile(s.Session.Dir, []byte("mine"), 0o644); err != nil {
		t.Fatal(err)
	}
	if s.RunLine(context.Background(), "/sheet") {
		t.Error("a file saved in a file")
	}
	if got := s.out.String(); got != "A line.\n" || !strings.HasPrefix(s.err.String(), "The file week.xlsx cannot be saved") {
		t.Errorf("output %q, errors %q", got, s.err)
	}
}

func TestSafeName(t *testing.T) {
	for name, want := range map[string]string{
		"week.xlsx": "week.xlsx", "../../etc/passwd": "etc-passwd", `C:\week.csv`: "C--week.csv", ".hidden": "hidden",
		"": "file", "...": "file", "größe °C.csv": "gr--e--C.csv", "a\x00b": "a-b", "a_b": "a-b",
	} {
		if got := safeName(name); got != want {
			t.Errorf("%q is saved as %q, want %q", name, got, want)
		}
	}
	dir := t.TempDir()
	outside := filepath.Join(t.TempDir(), "outside")
	if err := os.WriteFile(outside, []byte("mine"), 0o644); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink(outside, filepath.Join(dir, "week.csv")); err != nil {
		t.Fatal(err)
	}
	saved, err := saveFile(dir, "week.csv", []byte("new"))
	if err != nil || saved.Name != "week-2.csv" {
		t.Errorf("saved as %v (%v), want week-2.csv", saved, err)
	}
	if got, _ := os.ReadFile(outside); string(got) != "mine" {
		t.Errorf("the file outside holds %q", got)
	}
}

// person types prepared lines; a nil error after the last is ctrl-D.
type person struct {
	lines   []string
	prompts []string
	history []string
	end     error
}

func (p *person) Prompt(prompt string) (string, error) {
	p.prompts = append(p.prompts, prompt)
	if len(p.lines) == 0 {
		if p.end != nil {
			return "", p.end
		}
		return "", io.EOF
	}
	line := p.lines[0]
	p.lines = p.lines[1:]
	if line == "^C" {
		return "", liner.ErrPromptAborted
	}
	return line, nil
}

func (p *person) AppendHistory(line string) { p.history = append(p.history, line) }

func TestTalk(t *testing.T) {
	const neither = "That is neither yes nor no. Nothing is done yet: type y or n.\n"
	tests := []struct {
		name          string
		lines         []string
		out, err      string
		prompts, kept string
	}{
		{"leaves by ctrl-D", []string{"/due", ""}, "Ann says 05:30\n\n", "", "> |> |> ", "/due"},
		{"leaves by exit", []string{" exit ", "/due"}, "", "", "> ", ""},
		{"leaves by /quit", []string{"/quit", "/due"}, "", "", "> ", ""},
		{"goes on after an error", []string{"/due tees", "due", "exit"}, "Ann says 05:30\n", "No surface tees.\nThere is greens.\n", "> |> |> ", "/due tees|due"},
		{"says yes", []string{"/done", "Y", "exit"}, "It would be logged.\n\nDo this?\nLogged.\n", "", "> |y/n |> ", "/done"},
		{"says no", []string{"/done", "n", "exit"}, "It would be logged.\n\nDo this?\nNot done.\n", "", "> |y/n |> ", "/done"},
		{"says yes in a word", []string{"/done", "yes", "exit"}, "It would be logged.\n\nDo this?\nLogged.\n", "", "> |y/n |> ", "/done"},
		{"says nothing", []string{"/done", "", "", "exit"}, "It would be logged.\n\nDo this?\n" + neither + "Not done.\n", "", "> |y/n |y/n |> ", "/done"},
		{"pastes half a line, then says yes", []string{"/done", "works:regulator", "y", "exit"}, "It would be logged.\n\nDo this?\n" + neither + "Logged.\n", "", "> |y/n |y/n |> ", "/done"},
		{"says neither twice", []string{"/done", "works:regulator", "/due", "exit"}, "It would be logged.\n\nDo this?\n" + neither + "Not done.\n", "", "> |y/n |y/n |> ", "/done"},
		{"ctrl-C at the question", []string{"/done", "^C", "exit"}, "It would be logged.\n\nDo this?\nNot done.\n", "", "> |y/n |> ", "/done"},
		{"ctrl-D at the question", []string{"/done"}, "It would be logged.\n\nDo this?\nNot done.\n\n", "", "> |y/n |> ", "/done"},
		{"ctrl-C drops the line", []string{"^C", "exit"}, "", "", "> |> ", ""},
	}
	for _, test := range tests {
		s := session(t)
		p := &person{lines: test.lines}
		if err := s.talk(context.Background(), p); err != nil {
			t.Errorf("%s: %v", test.name, err)
		}
		if s.out.String() != test.out || s.err.String() != test.err {
			t.Errorf("%s: output %q, errors %q; want %q, %q", test.name, s.out, s.err, test.out, test.err)
		}
		if got, kept := strings.Join(p.prompts, "|"), strings.Join(p.history, "|"); got != test.prompts || kept != test.kept {
			t.Errorf("%s: prompts %q, history %q; want %q, %q", test.name, got, kept, test.prompts, test.kept)
		}
	}
	s := session(t)
	if err := s.talk(context.Background(), &person{end: errors.New("no terminal")}); err == nil {
		t.Error("a broken terminal gives no error")
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	p := &person{lines: []string{"/due"}}
	if err := s.talk(ctx, p); err != nil || len(p.prompts) > 0 {
		t.Errorf("after the end: %v, prompts %q", err, p.prompts)
	}
}
