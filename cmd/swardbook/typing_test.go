package main

import (
	"bytes"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
)

// The shell is told flags, the chat its options; a line to type into the chat
// stays as it is.
func TestAsFlags(t *testing.T) {
	for text, want := range map[string]string{
		"again: dates:d/m/y or dates:m/d/y.":                    "again: --dates d/m/y or --dates m/d/y.",
		`sensor:"Grün 7 Temp (°C)", sensor:"a \"b\"".`:          `--sensor "Grün 7 Temp (°C)", --sensor "a \"b\"".`,
		"clock:wall or clock:-05:00":                            "--clock wall or --clock -05:00",
		"Say units:c or units:f.":                               "Say --units c or --units f.",
		"A lead adds one:\n/setup site add name:Links units:c":  "A lead adds one:\n/setup site add name:Links units:c",
		"Which station? station:roof\n/setup station list":      "Which station? --station roof\n/setup station list",
		"the dates: none":                                       "the dates: none",
		"There is: roof.":                                       "There is: roof.",
		"the order d/m/y of dates:d/m/y is that of /weather it": "the order d/m/y of dates:d/m/y is that of /weather it",
	} {
		if got := asFlags(text); got != want {
			t.Errorf("%q becomes %q, want %q", text, got, want)
		}
	}
}

// Nobody is shown the words of the system where ours say more.
func TestTellOfSystem(t *testing.T) {
	for _, row := range []struct {
		cause error
		want  string
	}{
		{fs.ErrNotExist, "There is no file or folder out.csv.\n"},
		{syscall.ENOTDIR, "The path out.csv has a file where a folder is needed.\n"},
		{syscall.EISDIR, "The path out.csv is a folder, not a file.\n"},
		{fs.ErrPermission, "The path out.csv cannot be used.\n"},
		{syscall.EIO, "The path out.csv cannot be used: input/output error.\n"},
	} {
		var out bytes.Buffer
		tell(&out, fmt.Errorf("look: %w", &fs.PathError{Op: "stat", Path: "out.csv", Err: row.cause}))
		if got := out.String(); !strings.HasPrefix(got, row.want) || strings.Contains(got, "stat ") {
			t.Errorf("%v is told as %q, want %q", row.cause, got, row.want)
		}
	}
	var out bytes.Buffer
	tell(&out, errors.New("the moon is in the way"))
	if out.String() != "The moon is in the way.\n" {
		t.Errorf("told as %q", out.String())
	}
}

// A program that was called wrongly points to its help, file names keep their
// small letters.
func TestWrongCallsPointOn(t *testing.T) {
	t.Parallel()
	dir := t.TempDir()
	database, text := filepath.Join(dir, "course.db"), filepath.Join(dir, "text.txt")
	writeFile(t, text, "not a database, only a text that is long enough to be looked at as one, and some more of it")
	for _, row := range []struct {
		args []string
		want string
	}{
		{[]string{"import", "--bogus"}, "Unknown flag: --bogus.\nType swardbook import --help to see what there is.\n"},
		{[]string{"chat", "--as"}, "Flag needs an argument: --as.\nType swardbook chat --help to see what there is.\n"},
		{[]string{"import", "--every", "often"}, "Type swardbook import --help to see what there is.\n"},
		{[]string{"fly"}, "Unknown command \"fly\" for \"swardbook\".\nType swardbook --help to see what there is.\n"},
		{[]string{"version", "x"}, "Type swardbook version --help to see what there is.\n"},
		{[]string{"chat", "--db", dir, "/due"}, "The path " + dir + " is a folder.\n"},
		{[]string{"chat", "--db", text, "/due"}, "The file of the store " + text + " is damaged or is no database.\n"},
		{[]string{"chat", "--db", filepath.Join(text, "course.db"), "/due"}, "The path " + text + " is a file, not a folder.\n"},
		{[]string{"serve", "--db", database, "--token-file", filepath.Join(dir, "none")}, "There is no token file " + filepath.Join(dir, "none")},
		{[]string{"serve", "--db", database, "--token-file", dir}, "The token file " + dir + " is a folder.\n"},
	} {
		out, errOut, status := program(t, "", row.args...)
		if status != 1 || !strings.Contains(errOut, row.want) {
			t.Errorf("%v: status %d, want 1 and %q:\n%s%s", row.args, status, row.want, out, errOut)
		}
	}
}

func TestColumnsOfNoTerminal(t *testing.T) {
	null, err := os.Open(os.DevNull)
	if err != nil {
		t.Fatal(err)
	}
	defer null.Close()
	for _, stream := range []any{null, &bytes.Buffer{}, nil} {
		if got := columnsOf(stream); got != 0 || isTerminal(stream) {
			t.Errorf("%T has %d columns", stream, got)
		}
	}
}
