package intake

import (
	"bytes"
	"errors"
	"fmt"
	"io"

	"swardbook/planner"
)

const (
	// longestLine bounds a line, and a row over several lines, in bytes. A
	// station's row has some hundred; what is longer is no station file.
	longestLine = 1 << 20
	// headBytes is how much of a file the formats may look at to know it.
	headBytes = 4 << 10
	// binaryBytes is how far a NUL byte is looked for: text files have none.
	binaryBytes = 1 << 10
	firstBuffer = 64 << 10
)

// errLineTooLong is what end returns for a line over longestLine.
var errLineTooLong = errors.New("line too long")

// lineReader cuts a stream into lines in one buffer that grows to hold the
// longest line, to at most twice longestLine.
type lineReader struct {
	source     io.Reader
	buffer     []byte
	start, end int // buffer[start:end] is read and not yet consumed
	line       int // number of the line at start, from 1
	failed     error
}

func newLineReader(source io.Reader) *lineReader {
	return &lineReader{source: source, buffer: make([]byte, firstBuffer), line: 1}
}

// head returns up to headBytes of the file without consuming them, a byte order
// mark taken off.
func (l *lineReader) head() ([]byte, error) {
	for l.end-l.start < headBytes && l.failed == nil {
		l.fill()
	}
	if l.failed != nil && l.failed != io.EOF {
		return nil, fmt.Errorf("read the file: %w", l.failed)
	}
	if bytes.HasPrefix(l.buffer[l.start:l.end], []byte("\xEF\xBB\xBF")) {
		l.start += 3
	}
	return l.buffer[l.start:min(l.end, l.start+headBytes)], nil
}

// atEnd reports whether nothing follows what head returned.
func (l *lineReader) atEnd() bool { return l.failed == io.EOF && l.end-l.start <= headBytes }

// fill reads once more from the source, making room first. Whoever calls it
// holds no more than longestLine, so that the buffer is doubled to no more than
// twice that.
func (l *lineReader) fill() {
	if l.start > 0 {
		l.end = copy(l.buffer, l.buffer[l.start:l.end])
		l.start = 0
	}
	if l.end == len(l.buffer) {
		grown := make([]byte, 2*len(l.buffer))
		copy(grown, l.buffer)
		l.buffer = grown
	}
	// io.Reader may return nothing without an error; one that does so for ever
	// must not hold us.
	for range 100 {
		n, err := l.source.Read(l.buffer[l.end:])
		if n < 0 || n > len(l.buffer)-l.end {
			l.failed = errors.New("the reader returned an impossible count")
			return
		}
		l.end += n
		if err != nil {
			l.failed = err
		}
		if n > 0 || err != nil {
			return
		}
	}
	l.failed = io.ErrNoProgress
}

// lineEnd finds the end of the line that begins from bytes after the start:
// length counts to its last byte before LF or CRLF, next to the first byte of
// the next line, both from the start. io.EOF when no byte is left.
func (l *lineReader) lineEnd(from int) (length, next int, err error) {
	scanned := from
	for {
		if i := bytes.IndexByte(l.buffer[l.start+scanned:l.end], '\n'); i >= 0 {
			length, next = scanned+i, scanned+i+1
			break
		}
		scanned = l.end - l.start
		if scanned > longestLine {
			return 0, 0, errLineTooLong
		}
		if l.failed == io.EOF {
			if scanned == from {
				return 0, 0, io.EOF
			}
			length, next = scanned, scanned
			break
		}
		if l.failed != nil {
			return 0, 0, l.failed
		}
		l.fill()
	}
	if length > longestLine {
		return 0, 0, errLineTooLong
	}
	if length > from && l.buffer[l.start+length-1] == '\r' {
		length--
	}
	return length, next, nil
}

// text returns the first length bytes, valid until the next call that reads.
func (l *lineReader) text(length int) []byte { return l.buffer[l.start : l.start+length] }

// consume steps over the first next bytes, which are so many lines.
func (l *lineReader) consume(next, lines int) {
	l.start += next
	l.line += lines
}

// problem turns an error of lineEnd into one for the caller.
func (l *lineReader) problem(err error) error {
	switch {
	case errors.Is(err, io.EOF):
		return io.EOF
	case errors.Is(err, errLineTooLong):
		return planner.Problemf(planner.Refused, "line %d is longer than 1 MiB", l.line).
			WithHint("Check that the file is a station file with one row a line.")
	}
	return fmt.Errorf("read line %d: %w", l.line, err)
}

// firstLine returns the first line of the head that is not blank.
func firstLine(head []byte) []byte {
	head = bytes.TrimLeft(head, "\r\n\t ")
	if i := bytes.IndexByte(head, '\n'); i >= 0 {
		head = head[:i]
	}
	return bytes.TrimRight(head, "\r\n\t ")
}
