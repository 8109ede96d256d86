package intake

import (
	"bytes"
	"errors"
	"io"
)

const (
	comma = ','
	quote = '"'
	// mostColumns bounds a header; the widest station files have some hundred.
	mostColumns = 1000
	// mostQuotedLines bounds a quoted field that runs over lines (RFC 4180
	// allows it): a quote left open by mistake then costs its own row, not the
	// rest of the file.
	mostQuotedLines = 100
)

// separators is what may stand between the values of a row.
var separators = [...]byte{comma, ';', '\t', '|'}

// csvReader cuts lines into the values between separators.
type csvReader struct {
	lines   *lineReader
	sign    byte     // between two values
	values  [][]byte // of the row read last, at most keep of them
	keep    int      // how many values of a row are kept
	count   int      // how many values the row has
	surplus bool     // a value past keep is not empty
	scratch []byte   // values with doubled quotes, halved
}

// read reads the next row that is not blank (a row of nothing but commas is
// blank too) and returns its line. broken says that its quotes are; the row is
// then its first line.
func (r *csvReader) read() (line int, broken bool, err error) {
	for {
		length, next, lines, broken, err := r.extent()
		if err != nil {
			return 0, false, r.lines.problem(err)
		}
		text := r.lines.text(length)
		line = r.lines.line
		if !broken {
			broken = !r.split(text)
		}
		if broken {
			// Give back what was read in search of the closing quote.
			length, next, err = r.lines.lineEnd(0)
			if err != nil {
				return 0, false, r.lines.problem(err)
			}
			r.values = append(r.values[:0], r.lines.text(length))
			r.lines.consume(next, 1)
			return line, true, nil
		}
		r.lines.consume(next, lines)
		if !r.blank() {
			return line, false, nil
		}
	}
}

// extent finds the end of the next row: that of its line, or of the line that
// closes the quotes its first line leaves open.
func (r *csvReader) extent() (length, next, lines int, broken bool, err error) {
	length, next, err = r.lines.lineEnd(0)
	if err != nil {
		return 0, 0, 0, false, err
	}
	text := r.lines.text(length)
	if bytes.IndexByte(text, quote) < 0 || !r.leavesOpen(text) {
		return length, next, 1, false, nil
	}
	for lines = 2; lines <= mostQuotedLines; lines++ {
		from := next
		length, next, err = r.lines.lineEnd(from)
		if errors.Is(err, io.EOF) || errors.Is(err, errLineTooLong) {
			break
		}
		if err != nil {
			return 0, 0, 0, false, err
		}
		// A line with an even number of quotes leaves open what was open.
		if bytes.Count(r.lines.text(length)[from:], []byte{quote})%2 == 1 {
			return length, next, lines, false, nil
		}
	}
	return 0, 0, 0, true, nil
}

// leavesOpen reports whether the line ends inside a quoted value.
func (r *csvReader) leavesOpen(text []byte) bool {
	for {
		if len(text) == 0 || text[0] != quote {
			i := bytes.IndexByte(text, r.sign)
			if i < 0 {
				return false
			}
			text = text[i+1:]
			continue
		}
		_, rest, closed, _ := quoted(text)
		if !closed {
			return true
		}
		if len(rest) == 0 || rest[0] != r.sign {
			return false
		}
		text = rest[1:]
	}
}

// quoted steps over a quoted value that text begins with. inside is what stands
// between its quotes; doubled says that it holds doubled quotes.
func quoted(text []byte) (inside, rest []byte, closed, doubled bool) {
	at := 1
	for {
		i := bytes.IndexByte(text[at:], quote)
		if i < 0 {
			return nil, nil, false, doubled
		}
		at += i + 1
		if at >= len(text) || text[at] != quote {
			return text[1 : at-1], text[at:], true, doubled
		}
		doubled = true
		at++
	}
}

// split cuts a row into values and reports whether its quotes are sound.
func (r *csvReader) split(text []byte) (sound bool) {
	r.values, r.count, r.surplus, r.scratch = r.values[:0], 0, false, r.scratch[:0]
	for {
		var value []byte
		more := false
		if len(text) > 0 && text[0] == quote {
			inside, rest, closed, doubled := quoted(text)
			if !closed || len(rest) > 0 && rest[0] != r.sign {
				return false
			}
			if value = inside; doubled {
				value = r.halve(inside)
			}
			if more = len(rest) > 0; more {
				text = rest[1:]
			}
		} else {
			value = text
			if i := bytes.IndexByte(text, r.sign); i >= 0 {
				value, text, more = text[:i], text[i+1:], true
			}
			if bytes.IndexByte(value, quote) >= 0 {
				return false
			}
		}
		r.count++
		if len(r.values) < r.keep {
			r.values = append(r.values, value)
		} else if len(bytes.TrimSpace(value)) > 0 {
			r.surplus = true
		}
		if !more {
			return true
		}
	}
}

// halve writes a value with its doubled quotes halved.
func (r *csvReader) halve(inside []byte) []byte {
	from := len(r.scratch)
	for i := 0; i < len(inside); i++ {
		r.scratch = append(r.scratch, inside[i])
		if inside[i] == quote {
			i++
		}
	}
	return r.scratch[from:]
}

func (r *csvReader) blank() bool {
	for _, value := range r.values {
		if len(bytes.TrimSpace(value)) > 0 {
			return false
		}
	}
	return !r.surplus
}
