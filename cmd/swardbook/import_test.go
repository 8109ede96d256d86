package main

import (
	"bytes"
	"context"
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"swardbook/planner"
)

func writeFile(t *testing.T, path, content string) {
	t.Helper()
	if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, []byte(content), 0o644); err != nil {
		t.Fatal(err)
	}
}

// namesIn lists the files below the folder.
func namesIn(t *testing.T, folder string) string {
	t.Helper()
	var names []string
	err := filepath.WalkDir(folder, func(path string, entry os.DirEntry, err error) error {
		if err == nil && !entry.IsDir() {
			name, _ := filepath.Rel(folder, path)
			names = append(names, filepath.ToSlash(name))
		}
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return strings.Join(names, " ")
}

const (
	july  = "time,temp_c\n2013-07-01T05:00Z,17.8\n2013-07-01T06:00Z,18.9\n"
	wrong = "nothing,known\n1,2\n"
)

func TestImportFolders(t *testing.T) {
	t.Parallel()
	dir := t.TempDir()
	database := filepath.Join(dir, "course.db")
	session(t, database, "2013-07-02T05:30", "/setup site add name:Quillmere lat:40 lon:-74 zone:UTC", "/setup station add name:roof")
	writeFile(t, filepath.Join(dir, "in", "a.csv"), july)
	writeFile(t, filepath.Join(dir, "in", "b.csv"), wrong)
	writeFile(t, filepath.Join(dir, "in", "deeper", "c.csv"), strings.ReplaceAll(july, "07-01", "07-02"))
	writeFile(t, filepath.Join(dir, "in", ".hidden", "d.csv"), july)
	out, errOut, status := program(t, "", "import", "--db", database, filepath.Join(dir, "in"), filepath.Join(dir, "none.csv"))
	if status != 1 || !strings.Contains(out, "4 files: 2 read, 2 refused.") {
		t.Errorf("status %d\n%s", status, out)
	}
	for _, line := range []string{"a.csv: read, 2 rows\n", "c.csv: read, 2 rows\n", "b.csv: refused. The first line ", "none.csv: refused. There is no file "} {
		if !strings.Contains(out, line) {
			t.Errorf("%q is not listed in\n%s", line, out)
		}
	}
	for _, part := range []string{"b.csv:\n", "none.csv:\n"} {
		if !strings.Contains(errOut, part) {
			t.Errorf("%q is not said in\n%s", part, errOut)
		}
	}
	again, _, _ := program(t, "", "import", "--db", database, filepath.Join(dir, "in", "a.csv"), filepath.Join(dir, "in", "deeper"))
	if !strings.Contains(again, "a.csv: read, 2 rows, 0 of them new\n") {
		t.Errorf("the same again:\n%s", again)
	}
	if _, errOut, status := program(t, "", "import", "--db", database, t.TempDir()); status != 1 || !strings.Contains(errOut, "There is no file in") {
		t.Errorf("an empty folder: %d %s", status, errOut)
	}
	for _, args := range [][]string{{"import", "--db", database}, {"import", "--db", database, "--watch", dir, "a.csv"}, {"import", "--db", database, "--watch", filepath.Join(dir, "none")}} {
		if _, errOut, status := program(t, "", args...); status != 1 || errOut == "" {
			t.Errorf("%v: %d %s", args, status, errOut)
		}
	}
}

// What a station exports goes into another with the same answers.
func TestExportGoesBackIn(t *testing.T) {
	t.Parallel()
	dir := t.TempDir()
	one, two, file := filepath.Join(dir, "one.db"), filepath.Join(dir, "two.db"), filepath.Join(dir, "roof.csv")
	writeFile(t, filepath.Join(dir, "july.csv"), july)
	writeFile(t, filepath.Join(dir, "days.csv"), "date,high_f,low_f\n2013-07-01,77.7,55.1\n")
	const site = "/setup site add name:Quillmere lat:40 lon:-74 zone:UTC"
	session(t, one, "2013-07-03T05:30", site, "/weather file file:"+filepath.Join(dir, "july.csv")+" station:roof", "/weather file file:"+filepath.Join(dir, "days.csv"))
	if out, errOut, status := program(t, "", "export", "--db", one, "--out", file); status != 0 || out+errOut != "" {
		t.Fatalf("%d %s%s", status, out, errOut)
	}
	session(t, two, "2013-07-03T05:30", site, "/weather file file:"+file)
	was, is := session(t, one, "2013-07-03T05:30", "/weather day date:2013-07-01")[0], session(t, two, "2013-07-03T05:30", "/weather day date:2013-07-01")[0]
	if was.Text != is.Text || was.number(t, "day.readings") != 2 {
		t.Errorf("%s\nis now\n%s", was.Text, is.Text)
	}
	printed, _, _ := program(t, "", "export", "--db", two, "--station", "roof")
	if content, err := os.ReadFile(file); err != nil || string(content) != printed {
		t.Errorf("%v, exported again:\n%s", err, printed)
	}
	if _, errOut, status := program(t, "", "export", "--db", one, "--out", file); status != 1 || !strings.Contains(errOut, "is there already") {
		t.Errorf("over a file that is there: %d %s", status, errOut)
	}
	if _, _, status := program(t, "", "export", "--db", one, "--station", "pond"); status != 1 {
		t.Error("a station that is not there was exported")
	}
	if got := namesIn(t, dir); strings.Contains(got, ".part") {
		t.Errorf("left behind: %s", got)
	}
}

// The drop folder takes complete files only, and never the same twice.
func TestDropFolder(t *testing.T) {
	t.Parallel()
	dir := t.TempDir()
	var out bytes.Buffer
	var taken []string
	busy := true
	d := drop{dir: dir, out: &out, seen: map[string]sighting{}, take: func(_ context.Context, path string) (string, error) {
		content, err := os.ReadFile(path)
		switch {
		case err != nil:
			return "", err
		case string(content) == wrong:
			return "", planner.Problemf(planner.Refused, "the header is not known").WithHint("Send another.")
		case strings.HasPrefix(string(content), "later") && busy:
			return "", planner.Problemf(planner.Busy, "the store is busy")
		}
		taken = append(taken, filepath.Base(path))
		return "2 new", nil
	}}
	now := time.Date(2013, 7, 1, 5, 0, 0, 0, time.UTC)
	sweep := func(after time.Duration) {
		t.Helper()
		now = now.Add(after)
		if err := d.sweep(t.Context(), now); err != nil {
			t.Fatal(err)
		}
	}
	check := func(what, want string) {
		t.Helper()
		if got := namesIn(t, dir); got != want {
			t.Errorf("%s: %s, want %s", what, got, want)
		}
	}
	writeFile(t, filepath.Join(dir, "a.csv"), "time,")
	writeFile(t, filepath.Join(dir, "half.csv.part"), july)
	writeFile(t, filepath.Join(dir, ".hidden"), july)
	sweep(0)
	sweep(settle - time.Second)
	writeFile(t, filepath.Join(dir, "a.csv"), july) // still being written
	sweep(time.Second)
	sweep(settle - time.Second)
	check("a file that grows", ".hidden a.csv half.csv.part")
	sweep(time.Second)
	check("a file that is complete", ".hidden done/a.csv half.csv.part")

	writeFile(t, filepath.Join(dir, "a.csv"), july)
	writeFile(t, filepath.Join(dir, "bad.csv"), wrong)
	writeFile(t, filepath.Join(dir, "empty.csv"), "")
	writeFile(t, filepath.Join(dir, "later.csv"), "later")
	sweep(0)
	sweep(settle)
	check("good, bad, empty and not now", ".hidden done/a-2.csv done/a.csv empty.csv half.csv.part later.csv refused/bad.csv refused/bad.csv.reason.txt")
	reason, err := os.ReadFile(filepath.Join(dir, "refused", "bad.csv.reason.txt"))
	if err != nil || string(reason) != "The header is not known.\nSend another.\n" {
		t.Errorf("%q %v", reason, err)
	}
	busy = false
	sweep(time.Second)
	check("too soon again", ".hidden done/a-2.csv done/a.csv empty.csv half.csv.part later.csv refused/bad.csv refused/bad.csv.reason.txt")
	sweep(retry)
	check("again", ".hidden done/a-2.csv done/a.csv done/empty.csv done/later.csv half.csv.part refused/bad.csv refused/bad.csv.reason.txt")
	if got := strings.Join(taken, " "); got != "a.csv a.csv empty.csv later.csv" {
		t.Errorf("taken: %s", got)
	}
	want := "a.csv: 2 new\na.csv: 2 new\nbad.csv: refused. The header is not known. Send another.\nlater.csv: left for later. The store is busy.\n" +
		"empty.csv: 2 new\nlater.csv: 2 new\n"
	if out.String() != want {
		t.Errorf("said:\n%s\nwant:\n%s", out.String(), want)
	}
}

// A stop while a file is read leaves it where it is.
func TestDropFolderStops(t *testing.T) {
	t.Parallel()
	dir := t.TempDir()
	ctx, stop := context.WithCancel(t.Context())
	d := drop{dir: dir, out: &bytes.Buffer{}, seen: map[string]sighting{}, take: func(context.Context, string) (string, error) {
		stop()
		return "", errors.New("stopped half way")
	}}
	writeFile(t, filepath.Join(dir, "a.csv"), july)
	now := time.Date(2013, 7, 1, 5, 0, 0, 0, time.UTC)
	for range 2 {
		if err := d.sweep(ctx, now); err != nil {
			t.Fatal(err)
		}
		now = now.Add(settle)
	}
	if got := namesIn(t, dir); got != "a.csv" {
		t.Error(got)
	}
}

// The whole of --watch, through the program: it ends well when it is told to.
func TestWatch(t *testing.T) {
	t.Parallel()
	dir := t.TempDir()
	database := filepath.Join(dir, "course.db")
	session(t, database, "2013-07-02T05:30", "/setup site add name:Quillmere lat:40 lon:-74 zone:UTC")
	writeFile(t, filepath.Join(dir, "drop", "a.csv"), july)
	writeFile(t, filepath.Join(dir, "drop", "b.csv"), wrong)
	ctx, stop := context.WithCancel(t.Context())
	var out, errOut bytes.Buffer
	done := make(chan int)
	go func() {
		done <- run(ctx, []string{"import", "--db", database, "--watch", filepath.Join(dir, "drop"), "--every", "50ms"}, noEnv, strings.NewReader(""), &out, &errOut)
	}()
	const want = "done/a.csv refused/b.csv refused/b.csv.reason.txt"
	for end := time.Now().Add(patience); namesIn(t, filepath.Join(dir, "drop")) != want && time.Now().Before(end); {
		time.Sleep(50 * time.Millisecond)
	}
	stop()
	if status := <-done; status != 0 || errOut.Len() > 0 {
		t.Errorf("status %d, %s", status, errOut.String())
	}
	if got := namesIn(t, filepath.Join(dir, "drop")); got != want {
		t.Errorf("%s, want %s", got, want)
	}
	if !strings.Contains(out.String(), "a.csv: 2 new, 0 changed, 0 same, 0 empty, 0 refused\n") {
		t.Error(out.String())
	}
}
