package terminal

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"syscall"

	"swardbook/bot/reply"
	"swardbook/planner"
)

// mostCopies bounds the search for a free name.
const mostCopies = 1000

// saveFiles writes the reply's files and pictures into the folder and gives
// the reply with the names they got. Without a folder files go to the working
// folder and pictures nowhere: their words are shown. After an error the reply holds those that
// were saved, and of pictures their words.
func saveFiles(dir string, r reply.Reply) (reply.Reply, []Saved, error) {
	var (
		blocks []reply.Block
		saved  []Saved
		failed error
	)
	save := func(name string, content []byte) (Saved, bool) {
		if failed != nil {
			return Saved{}, false
		}
		one, err := saveFile(dir, name, content)
		if err != nil {
			failed = err
			return Saved{}, false
		}
		saved = append(saved, one)
		return one, true
	}
	for _, block := range r.Blocks {
		switch b := block.(type) {
		case reply.File:
			if one, ok := save(b.Name, b.Content); ok {
				b.Name = one.Name
				blocks = append(blocks, b)
			}
		case reply.Picture:
			if dir == "" {
				blocks = append(blocks, reply.Text(b.Alt))
			} else if one, ok := save(b.Name, b.PNG); ok {
				b.Name = one.Name
				blocks = append(blocks, b)
			} else {
				blocks = append(blocks, reply.Text(b.Alt))
			}
		default:
			blocks = append(blocks, block)
		}
	}
	r.Blocks = blocks
	return r, saved, failed
}

// saveFile writes one file under a name that is free: never over another file,
// never outside the folder, never half.
func saveFile(dir, name string, content []byte) (Saved, error) {
	if dir == "" {
		dir = "."
	}
	if err := os.MkdirAll(dir, 0o755); err != nil {
		return Saved{}, cannotSave(name, dir, err)
	}
	for copies := 1; copies <= mostCopies; copies++ {
		free := numbered(safeName(name), copies)
		path := filepath.Join(dir, free)
		file, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o644)
		if errors.Is(err, fs.ErrExist) {
			continue
		}
		if err != nil {
			return Saved{}, cannotSave(name, dir, err)
		}
		_, err = file.Write(content)
		if err = errors.Join(err, file.Close()); err != nil {
			return Saved{}, cannotSave(name, dir, errors.Join(err, os.Remove(path)))
		}
		return Saved{Name: free, Path: path}, nil
	}
	return Saved{}, cannotSave(name, dir, fmt.Errorf("%d files have that name", mostCopies))
}

func cannotSave(name, dir string, err error) error {
	var path *fs.PathError
	reason := err.Error()
	switch {
	case errors.Is(err, fs.ErrPermission):
		reason = "you may not write there"
	case errors.Is(err, syscall.ENOTDIR):
		reason = "it is a file, or goes through one"
	case errors.Is(err, syscall.ENOSPC):
		reason = "the disk is full"
	case errors.As(err, &path):
		reason = path.Err.Error()
	}
	return planner.Problemf(planner.Refused, "the file %s cannot be saved in %s: %s", safeName(name), dir, reason).
		WithHint("Give --out a folder that can be written to.").WithCause(err)
}

// safeName keeps letters, digits, dots and hyphens of a file name, and lets it
// begin with no dot.
func safeName(name string) string {
	name = strings.Map(func(r rune) rune {
		switch {
		case r >= 'a' && r <= 'z', r >= 'A' && r <= 'Z', r >= '0' && r <= '9', r == '.', r == '-':
			return r
		}
		return '-'
	}, name)
	if name = strings.TrimLeft(name, ".-"); name == "" {
		return "file"
	}
	return name
}

// numbered puts a number before the name's ending: plan-2.xlsx.
func numbered(name string, number int) string {
	if number == 1 {
		return name
	}
	ending := filepath.Ext(name)
	return fmt.Sprintf("%s-%d%s", strings.TrimSuffix(name, ending), number, ending)
}
