package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"time"

	"swardbook/bot/reply"
	"swardbook/planner"
)

const (
	// settle is how long a file must stay as it is to be taken for complete.
	settle = 5 * time.Second
	// settleEmpty is the same for a file with nothing in it: loggers make the file
	// first and write it later.
	settleEmpty = time.Minute
	// retry is how long a file waits that could not be read for no fault of its
	// own: the store was busy, the station is not set up.
	retry = time.Minute
)

// partly are the endings of files that are still being written or fetched.
var partly = []string{".part", ".partial", ".tmp", ".temp", ".crdownload", ".download", ".swp", "~"}

// drop is a folder that loggers write files to.
type drop struct {
	dir  string
	out  io.Writer
	take func(ctx context.Context, path string) (counts string, err error)
	seen map[string]sighting
}

// sighting is a file as it was last seen, and since when.
type sighting struct {
	size     int64
	modified time.Time
	since    time.Time
	waits    time.Time // not before this
}

// watch looks into the folder every so often until it is told to stop.
func watch(ctx context.Context, dir string, every time.Duration, out io.Writer, take func(ctx context.Context, path string) (string, error)) error {
	if info, err := os.Stat(dir); err != nil || !info.IsDir() {
		return planner.Problemf(planner.NotFound, "there is no folder %s", dir).WithHint("Make it first: the loggers' files go in there.")
	}
	if every <= 0 {
		return planner.Problemf(planner.Invalid, "--every must be more than 0.").WithHint("Like --every 2s.")
	}
	d := drop{dir: dir, out: out, take: take, seen: map[string]sighting{}}
	tick := time.NewTicker(every)
	defer tick.Stop()
	for {
		if err := d.sweep(ctx, time.Now()); err != nil {
			return err
		}
		select {
		case <-ctx.Done():
			return nil
		case <-tick.C:
		}
	}
}

// sweep looks into the folder once, and takes the files that are complete.
func (d *drop) sweep(ctx context.Context, now time.Time) error {
	entries, err := os.ReadDir(d.dir)
	if err != nil {
		return fmt.Errorf("look into the folder: %w", err)
	}
	here := map[string]bool{}
	for _, entry := range entries {
		name := entry.Name()
		if !entry.Type().IsRegular() || strings.HasPrefix(name, ".") || slices.ContainsFunc(partly, func(end string) bool {
			return strings.HasSuffix(strings.ToLower(name), end)
		}) {
			continue
		}
		here[name] = true
		info, err := entry.Info()
		if errors.Is(err, fs.ErrNotExist) {
			continue // gone since
		}
		if err != nil {
			return fmt.Errorf("look at %s: %w", name, err)
		}
		if d.complete(name, info, now) {
			if err := d.one(ctx, name, now); err != nil {
				return err
			}
		}
		if ctx.Err() != nil {
			return nil
		}
	}
	for name := range d.seen {
		if !here[name] {
			delete(d.seen, name)
		}
	}
	return nil
}

// complete reports whether a file has stayed as it is for long enough.
func (d *drop) complete(name string, info fs.FileInfo, now time.Time) bool {
	last, known := d.seen[name]
	if !known || last.size != info.Size() || !last.modified.Equal(info.ModTime()) {
		d.seen[name] = sighting{size: info.Size(), modified: info.ModTime(), since: now}
		return false
	}
	wait := settle
	if info.Size() == 0 {
		wait = settleEmpty
	}
	return now.Sub(last.since) >= wait && !now.Before(last.waits)
}

// one reads a file and moves it, or leaves it for later.
func (d *drop) one(ctx context.Context, name string, now time.Time) error {
	counts, err := d.take(ctx, filepath.Join(d.dir, name))
	if ctx.Err() != nil {
		return nil // stopped half way: nothing was kept, the file stays
	}
	if err == nil {
		fmt.Fprintf(d.out, "%s: %s\n", name, counts)
		delete(d.seen, name)
		_, err := d.move(name, "done")
		return err
	}
	message, hint := reply.Wrong(err)
	reason := asFlags(strings.TrimSpace(message + "\n" + hint))
	if kind := planner.KindOf(err); kind != planner.Refused && kind != planner.Invalid {
		fmt.Fprintf(d.out, "%s: left for later. %s\n", name, strings.ReplaceAll(reason, "\n", " "))
		last := d.seen[name]
		last.waits = now.Add(retry)
		d.seen[name] = last
		return nil
	}
	fmt.Fprintf(d.out, "%s: refused. %s\n", name, strings.ReplaceAll(reason, "\n", " "))
	delete(d.seen, name)
	moved, err := d.move(name, "refused")
	if err != nil {
		return err
	}
	if err := os.WriteFile(moved+".reason.txt", []byte(reason+"\n"), 0o644); err != nil {
		return fmt.Errorf("write the reason: %w", err)
	}
	return nil
}

// move moves a file into a folder of the drop folder, under another name where
// one of that name is there: nothing is ever written over.
func (d *drop) move(name, into string) (moved string, err error) {
	folder := filepath.Join(d.dir, into)
	if err := os.MkdirAll(folder, 0o755); err != nil {
		return "", fmt.Errorf("make the folder: %w", err)
	}
	ext := filepath.Ext(name)
	for n := 1; ; n++ {
		moved = filepath.Join(folder, name)
		if n > 1 {
			moved = filepath.Join(folder, fmt.Sprintf("%s-%d%s", strings.TrimSuffix(name, ext), n, ext))
		}
		if _, err := os.Lstat(moved); errors.Is(err, fs.ErrNotExist) {
			break
		}
	}
	if err := os.Rename(filepath.Join(d.dir, name), moved); err != nil {
		return "", fmt.Errorf("move the file: %w", err)
	}
	return moved, nil
}

// countsOf tells the counts of an import in a line.
func countsOf(answer reply.Reply) string {
	var parts []string
	for _, figure := range answer.Figures {
		if name, ok := strings.CutPrefix(figure.Key, "import."); ok {
			parts = append(parts, fmt.Sprintf("%.0f %s", figure.Value, name))
		}
	}
	return strings.Join(parts, ", ")
}

// openPlain opens a file by its path.
func openPlain(name string) (io.ReadCloser, error) {
	file, err := os.Open(name)
	if err != nil {
		return nil, planner.Problemf(planner.Busy, "the file cannot be opened").WithCause(err).WithHint("See that it may be read.")
	}
	return file, nil
}
