package intake

import (
	"archive/zip"
	"bufio"
	"bytes"
	"compress/gzip"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"strings"

	"golang.org/x/text/encoding/unicode"

	"swardbook/planner"
)

const (
	// mostBytes bounds a file once it is unpacked: some 50 million rows.
	mostBytes = 2 << 30
	// mostJSON bounds JSON, whose lines are not: a year of a service's answers.
	mostJSON = 256 << 20
	// mostPacked bounds a zip, which must be kept whole to be read.
	mostPacked = 256 << 20
	// mostRatio is how many times its size a packed file may unpack to, once it
	// is over freeBytes. Station files pack to a tenth or a twentieth.
	mostRatio = 200
	freeBytes = 64 << 20
	// mostDirectory bounds the list of files at the end of a zip, in bytes.
	mostDirectory = 64 << 10
)

// unpack reads the whole content, plain, gzip or a zip of one file, in UTF-8,
// UTF-16 or an 8-bit encoding, into a spool of lines ending in LF or CRLF. What
// is no text, has a line over 1 MiB (JSON excepted) or is a packed file that
// unpacks beyond all measure is a planner.Problem of the kind Refused.
func unpack(content io.Reader) (*spool, error) {
	in := bufio.NewReaderSize(content, firstBuffer)
	magic, err := in.Peek(4)
	if err != nil && err != io.EOF {
		return nil, fmt.Errorf("read the file: %w", err)
	}
	switch {
	case bytes.HasPrefix(magic, []byte("\x1f\x8b")):
		packed := &countingReader{source: in}
		plain, err := gzip.NewReader(packed)
		if err != nil {
			return nil, brokenPack("gzip", err)
		}
		return spoolText(&ratioReader{source: plain, packed: func() int64 { return packed.read }, kind: "gzip"})
	case bytes.HasPrefix(magic, []byte("PK\x03\x04")):
		return unzip(in)
	}
	return spoolText(in)
}

func brokenPack(kind string, err error) error {
	return planner.Problemf(planner.Refused, "the %s file is broken: %v", kind, err).WithCause(err).
		WithHint("Pack it again, or send the file as it is.")
}

// unzip reads the one file of a zip.
func unzip(in io.Reader) (*spool, error) {
	packed := &spool{}
	defer packed.Close()
	size, err := io.Copy(packed, io.LimitReader(in, mostPacked+1))
	if err != nil {
		return nil, fmt.Errorf("read the file: %w", err)
	}
	if size > mostPacked {
		return nil, planner.Problemf(planner.Refused, "the zip is over %d MiB", mostPacked>>20).WithHint("Send its files one by one.")
	}
	if err := checkDirectory(packed); err != nil {
		return nil, err
	}
	archive, err := zip.NewReader(packed, size)
	if err != nil {
		return nil, brokenPack("zip", err)
	}
	var found []*zip.File
	for _, file := range archive.File {
		hidden := strings.HasPrefix(file.Name, "__MACOSX/") || strings.HasPrefix(file.Name, ".")
		if !hidden && !strings.HasSuffix(file.Name, "/") {
			found = append(found, file)
		}
	}
	if len(found) != 1 {
		return nil, planner.Problemf(planner.Refused, "the zip holds %d files", len(found)).WithHint("Send one file at a time.")
	}
	plain, err := found[0].Open()
	if err != nil {
		return nil, brokenPack("zip", err)
	}
	defer plain.Close()
	return spoolText(&ratioReader{source: plain, packed: func() int64 { return size }, kind: "zip"})
}

// checkDirectory bounds what archive/zip would hold in memory: it reads the
// list of files up to the end, whatever its length.
func checkDirectory(packed *spool) error {
	const endBytes, comment = 22, 1<<16 - 1
	from := max(0, packed.size-endBytes-comment)
	tail := make([]byte, packed.size-from)
	if _, err := packed.ReadAt(tail, from); err != nil && err != io.EOF {
		return fmt.Errorf("read the zip: %w", err)
	}
	at := bytes.LastIndex(tail, []byte("PK\x05\x06"))
	if at < 0 || len(tail)-at < endBytes {
		return brokenPack("zip", errors.New("its list of files is missing"))
	}
	start := int64(binary.LittleEndian.Uint32(tail[at+16:]))
	if length := from + int64(at) - start; length < 0 || length > mostDirectory {
		return planner.Problemf(planner.Refused, "the zip's list of files cannot be read or is too long").WithHint("Send one file at a time.")
	}
	return nil
}

// countingReader counts what is read.
type countingReader struct {
	source io.Reader
	read   int64
}

func (c *countingReader) Read(p []byte) (int, error) {
	n, err := c.source.Read(p)
	c.read += int64(n)
	return n, err
}

// ratioReader stops a packed file that unpacks to far more than any station
// file does.
type ratioReader struct {
	source io.Reader
	packed func() int64
	kind   string
	read   int64
}

func (r *ratioReader) Read(p []byte) (int, error) {
	n, err := r.source.Read(p)
	r.read += int64(n)
	if r.read > freeBytes && r.read > mostRatio*r.packed() {
		return 0, planner.Problemf(planner.Refused, "the %s file unpacks to more than %d times its size", r.kind, mostRatio).
			WithHint("If it is a station file after all, unpack it and send it as it is.")
	}
	if err != nil && err != io.EOF {
		err = brokenPack(r.kind, err)
	}
	return n, err
}

// spoolText decodes the text and spools it.
func spoolText(content io.Reader) (*spool, error) {
	in := bufio.NewReaderSize(content, firstBuffer)
	// Peek reads until it has the bytes; what a reader breaks with comes again.
	head, err := in.Peek(headBytes)
	if err != nil && err != io.EOF {
		return nil, readProblem(1, err)
	}
	text, head := decoded(in, head)
	out := &spool{}
	if err := out.fill(text, isJSON(head)); err != nil {
		return nil, errors.Join(err, out.Close())
	}
	return out, nil
}

func readProblem(line int, err error) error {
	var problem *planner.Problem
	if errors.As(err, &problem) {
		return problem
	}
	return fmt.Errorf("read line %d: %w", line, err)
}

// decoded turns UTF-16 into UTF-8 and lone CRs into LFs, as the head of the
// file shows what it is. 8-bit text is left as it is: only names of columns can
// hold other letters than ASCII, and headerText reads them.
func decoded(in io.Reader, head []byte) (io.Reader, []byte) {
	if order, is16 := utf16Order(head); is16 {
		decoder := unicode.UTF16(order, unicode.UseBOM).NewDecoder()
		in = decoder.Reader(in)
		head, _ = unicode.UTF16(order, unicode.UseBOM).NewDecoder().Bytes(head[:len(head)&^1])
	}
	if bytes.IndexByte(head, '\r') >= 0 && bytes.IndexByte(head, '\n') < 0 {
		in = &lineFeeds{source: in}
	}
	return in, head
}

// utf16Order finds UTF-16 by its mark or, without one, by the zero bytes that
// every other byte of mostly ASCII text is.
func utf16Order(head []byte) (unicode.Endianness, bool) {
	switch {
	case bytes.HasPrefix(head, []byte{0xFE, 0xFF}):
		return unicode.BigEndian, true
	case bytes.HasPrefix(head, []byte{0xFF, 0xFE}):
		return unicode.LittleEndian, true
	}
	var zeros [2]int
	for i, c := range head {
		if c == 0 {
			zeros[i%2]++
		}
	}
	const share = 4 // a quarter of all bytes, and of the other half almost none
	switch {
	case zeros[0]*share >= len(head) && zeros[1]*100 <= len(head) && len(head) > 1:
		return unicode.BigEndian, true
	case zeros[1]*share >= len(head) && zeros[0]*100 <= len(head) && len(head) > 1:
		return unicode.LittleEndian, true
	}
	return unicode.LittleEndian, false
}

// isJSON tells JSON, which may stand in one long line.
func isJSON(head []byte) bool {
	head = bytes.TrimLeft(bytes.TrimPrefix(head, []byte("\xEF\xBB\xBF")), " \t\r\n")
	return len(head) > 0 && (head[0] == '{' || head[0] == '[' && bytes.ContainsAny(head, "{"))
}

// lineFeeds writes LF for CR.
type lineFeeds struct{ source io.Reader }

func (l *lineFeeds) Read(p []byte) (int, error) {
	n, err := l.source.Read(p)
	for i := range p[:n] {
		if p[i] == '\r' {
			p[i] = '\n'
		}
	}
	return n, err
}
