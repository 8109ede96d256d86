package intake

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"os"

	"swardbook/planner"
)

// inMemory is how much of a file is kept in memory; a longer one goes to a
// temporary file. What the clock of a file is, or whether 4/7 is in April, can
// only be told by all of its rows, so that it is read more than once.
const inMemory = 4 << 20

// spool holds a file while it is read more than once.
type spool struct {
	memory []byte
	file   *os.File
	size   int64
	// stopped, when not nil, ends the reading with its error.
	stopped func() error
}

// Write appends.
func (s *spool) Write(p []byte) (int, error) {
	if s.file == nil && len(s.memory)+len(p) <= inMemory {
		s.memory = append(s.memory, p...)
		s.size += int64(len(p))
		return len(p), nil
	}
	if s.file == nil {
		file, err := os.CreateTemp("", "swardbook-*")
		if err != nil {
			return 0, fmt.Errorf("make a temporary file: %w", err)
		}
		s.file = file
		if _, err := file.Write(s.memory); err != nil {
			return 0, fmt.Errorf("write a temporary file: %w", err)
		}
		s.memory = nil
	}
	n, err := s.file.Write(p)
	s.size += int64(n)
	if err != nil {
		err = fmt.Errorf("write a temporary file: %w", err)
	}
	return n, err
}

// ReadAt reads from any place.
func (s *spool) ReadAt(p []byte, from int64) (int, error) {
	if s.stopped != nil {
		if err := s.stopped(); err != nil {
			return 0, err
		}
	}
	if s.file != nil {
		return s.file.ReadAt(p, from)
	}
	return bytes.NewReader(s.memory).ReadAt(p, from)
}

// reader reads from the beginning; there may be several at a time.
func (s *spool) reader() io.Reader { return io.NewSectionReader(s, 0, s.size) }

// lines reads lines from the beginning, a byte order mark taken off.
func (s *spool) lines() (*lineReader, []byte, error) {
	lines := newLineReader(s.reader())
	head, err := lines.head()
	return lines, head, err
}

// Close gives the temporary file back.
func (s *spool) Close() error {
	s.memory = nil
	if s.file == nil {
		return nil
	}
	file := s.file
	s.file = nil
	return errors.Join(file.Close(), os.Remove(file.Name()))
}

// fill copies the text, bounded in its length and, unless longLines, in that of
// its lines.
func (s *spool) fill(text io.Reader, longLines bool) error {
	chunk := make([]byte, firstBuffer)
	line, open := 1, 0 // the line at work, and how much of it is read
	idle := 0
	for {
		n, err := text.Read(chunk)
		part := chunk[:n]
		if first := bytes.IndexByte(part, '\n'); first < 0 {
			open += n
		} else {
			if open += first; !longLines && open > longestLine+1 {
				return lineTooLong(line)
			}
			line += bytes.Count(part, []byte{'\n'})
			open = n - 1 - bytes.LastIndexByte(part, '\n')
		}
		if !longLines && open > longestLine+1 {
			return lineTooLong(line)
		}
		if _, err := s.Write(part); err != nil {
			return err
		}
		if s.size > mostBytes || longLines && s.size > mostJSON {
			return planner.Problemf(planner.Refused, "the file is too long: over %d MiB", min(s.size, mostBytes)>>20).WithHint("Cut it into several files.")
		}
		if err == io.EOF {
			return nil
		}
		if idle++; n > 0 {
			idle = 0
		}
		if err == nil && idle == 100 {
			err = io.ErrNoProgress
		}
		if err != nil {
			return readProblem(line, err)
		}
	}
}

func lineTooLong(line int) error {
	return planner.Problemf(planner.Refused, "line %d is longer than 1 MiB", line).
		WithHint("Check that the file is a station file with one row a line.")
}
