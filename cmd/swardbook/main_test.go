package main

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"unicode/utf8"

	"github.com/rogpeppe/go-internal/testscript"
)

func noEnv(string) string { return "" }

// TestMain lets the scripts run the program itself as "swardbook".
func TestMain(m *testing.M) {
	if os.Getenv(childOf) != "" { // see TestYearOfKills
		tickingChild()
		return
	}
	testscript.Main(m, map[string]func(){"swardbook": main})
}

// TestScripts plays sessions as a crew and its lead would type them, wrong
// input included.
func TestScripts(t *testing.T) {
	open, err := filepath.Abs(filepath.Join("..", "..", "testdata", "open"))
	if err != nil {
		t.Fatal(err)
	}
	testscript.Run(t, testscript.Params{
		Dir:                 filepath.Join("..", "..", "testdata", "sessions"),
		RequireUniqueNames:  true,
		RequireExplicitExec: true,
		UpdateScripts:       os.Getenv("UPDATE") != "",
		Setup: func(env *testscript.Env) error {
			env.Setenv("OPEN", open) // open data of the project
			return nil
		},
	})
}

// program runs the program and returns what it wrote and its exit status.
func program(t *testing.T, in string, args ...string) (out, errOut string, status int) {
	t.Helper()
	var stdout, stderr bytes.Buffer
	status = run(context.Background(), args, noEnv, strings.NewReader(in), &stdout, &stderr)
	return stdout.String(), stderr.String(), status
}

// answer is what --json prints of one command, as a script reads it.
type answer struct {
	Command string
	OK      bool
	Text    string
	Figures map[string]any
	Error   *struct{ Kind, Message, Hint string }
}

// number returns a figure of an answer.
func (a answer) number(t *testing.T, key string) float64 {
	t.Helper()
	value, ok := a.Figures[key].(float64)
	if !ok {
		t.Fatalf("%s: no number %q among %v", a.Command, key, a.Figures)
	}
	return value
}

// session runs command lines as a lead on a database and returns an answer for
// each; any failure ends the test.
func session(t *testing.T, database, now string, lines ...string) []answer {
	t.Helper()
	out, errOut, status := program(t, strings.Join(lines, "\n"), "chat", "--db", database, "--as", "lead", "--now", now, "--json", "--out", t.TempDir())
	if status != 0 {
		t.Fatalf("status %d\n%s\n%s", status, out, errOut)
	}
	var answers []answer
	decoder := json.NewDecoder(strings.NewReader(out))
	for decoder.More() {
		var one answer
		if err := decoder.Decode(&one); err != nil {
			t.Fatal(err)
		}
		answers = append(answers, one)
	}
	if len(answers) != len(lines) {
		t.Fatalf("%d answers to %d lines:\n%s", len(answers), len(lines), out)
	}
	return answers
}

// The demo is the program's face: it must work in an empty folder, fit a
// phone, and not lose an earlier demo's database.
func TestDemo(t *testing.T) {
	folder := filepath.Join(t.TempDir(), demoFolder)
	var first, second, errOut bytes.Buffer
	if err := demo(context.Background(), folder, &first, &errOut); err != nil {
		t.Fatalf("%v\n%s", err, errOut.String())
	}
	for _, want := range []string{"> /briefing", "> /due", "> /whatif", "> /why compare", "greens regulator", "24-hour mean", "chat --db"} {
		if !strings.Contains(first.String(), want) {
			t.Errorf("the demo does not show %q:\n%s", want, first.String())
		}
	}
	inTour := true
	for _, line := range strings.Split(first.String(), "\n") {
		if strings.HasPrefix(line, "Kept in") {
			inTour = false
		}
		if inTour && !strings.HasPrefix(line, "> ") && !strings.HasPrefix(line, "Quillmere is") && utf8.RuneCountInString(line) > 34 {
			t.Errorf("wider than 34 columns: %q", line)
		}
	}
	if err := demo(context.Background(), folder, &second, &errOut); err != nil {
		t.Fatal(err)
	}
	if _, err := os.Stat(filepath.Join(folder, "demo.db.before")); err != nil {
		t.Error(err)
	}
	_, tour, _ := strings.Cut(second.String(), "\n")
	if tour != first.String() {
		t.Error("the same demo twice shows different things")
	}
}

func TestWrongFlags(t *testing.T) {
	database := filepath.Join(t.TempDir(), "course.db")
	for _, row := range []struct {
		args []string
		want string
	}{
		{[]string{"chat", "/due"}, "--db"},
		{[]string{"chat", "--db", database, "--as", "boss", "/due"}, "--as crew or --as lead"},
		{[]string{"chat", "--db", database, "--now", "noon", "/due"}, "2013-07-01T05:30"},
		{[]string{"chat", "--db", filepath.Join(t.TempDir(), "no", "such", "course.db"), "/due"}, "folder"},
		{[]string{"import", "--db", database}, "Which file?"},
		{[]string{"fly"}, "Unknown command"},
	} {
		out, errOut, status := program(t, "", row.args...)
		if status != 1 || !strings.Contains(errOut, row.want) {
			t.Errorf("%v: status %d, want 1 and %q:\n%s%s", row.args, status, row.want, out, errOut)
		}
	}
}

// A shell takes quotes off and splits at spaces; commands must survive that.
func TestLines(t *testing.T) {
	for _, row := range []struct {
		args []string
		want []string
	}{
		{[]string{"/due greens"}, []string{"/due greens"}},
		{[]string{"/due", "greens", "/briefing"}, []string{"/due greens", "/briefing"}},
		{[]string{"briefing"}, []string{"briefing"}},
		{[]string{"/done", "greens", "cut", "note:wet and cold"}, []string{`/done greens cut note:"wet and cold"`}},
		{[]string{"/due", "north greens"}, []string{`/due "north greens"`}},
		{[]string{"/weather", "file", "file:/tmp/a.csv"}, []string{"/weather file file:/tmp/a.csv"}},
		{[]string{"/log", "list", "/bogus"}, []string{"/log list", "/bogus"}},
		{[]string{"/weather", "file", "/tmp/a.csv"}, []string{"/weather file /tmp/a.csv"}},
	} {
		if got := lines(row.args); fmt.Sprint(got) != fmt.Sprint(row.want) {
			t.Errorf("%q: got %q, want %q", row.args, got, row.want)
		}
	}
}

func TestVersion(t *testing.T) {
	out, _, status := program(t, "", "version")
	if status != 0 || !strings.HasPrefix(out, "swardbook "+release) {
		t.Errorf("status %d: %q", status, out)
	}
}
