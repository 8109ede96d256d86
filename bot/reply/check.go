package reply

import (
	"fmt"
	"regexp"
	"unicode/utf8"
)

// Limits of the parts of a reply, in characters or in number. A reply inside
// them can be shown everywhere: whoever shows it may spread it over several
// messages, but need never cut a part. Most are those of the chat server's open
// documentation, where an embed holds them.
const (
	MaxText      = 4000 // a paragraph
	MaxTitle     = 256  // a heading, a table's title, a column's name, a field's name
	MaxValue     = 1024 // a field's value, a cell, a picture's words, a question
	MaxRows      = 400  // a table: a year of days and some
	MaxColumns   = 12
	MaxFields    = 60
	MaxActions   = 25
	MaxLabel     = 80
	MaxLine      = 4000 // a command line
	MaxFiles     = 10   // files and pictures of a reply
	MaxFileBytes = 8 << 20
	MaxBlocks    = 60
)

// fileName is what a file may be called: safe in every file system and chat.
var fileName = regexp.MustCompile(`^[A-Za-z0-9][A-Za-z0-9.-]{0,99}$`)

// Check says which part of the reply is over its limit, is not text, or does
// not fit the rest (a row with a cell too few). A reply that fails is a mistake
// of its writer, not of the caller.
func (r Reply) Check() error {
	if len(r.Blocks) > MaxBlocks {
		return fmt.Errorf("reply: %d blocks, at most %d", len(r.Blocks), MaxBlocks)
	}
	files := 0
	for i, block := range r.Blocks {
		if err := checkBlock(block); err != nil {
			return fmt.Errorf("reply block %d: %w", i+1, err)
		}
		switch block.(type) {
		case File, Picture:
			files++
		}
	}
	if files > MaxFiles {
		return fmt.Errorf("reply: %d files, at most %d", files, MaxFiles)
	}
	if r.Confirm != nil {
		if err := checkText("question", r.Confirm.Question, MaxValue); err != nil {
			return fmt.Errorf("reply: %w", err)
		}
	}
	return nil
}

func checkBlock(block Block) error {
	switch b := block.(type) {
	case Heading:
		return checkText("heading", string(b), MaxTitle)
	case Text:
		return checkText("text", string(b), MaxText)
	case Table:
		return b.check()
	case Fields:
		return b.check()
	case File:
		return checkFile(b.Name, b.Content)
	case Picture:
		if err := checkText("picture's words", b.Alt, MaxValue); err != nil {
			return err
		}
		return checkFile(b.Name, b.PNG)
	case Actions:
		return b.check()
	}
	return fmt.Errorf("%T is no block", block)
}

func checkText(part, text string, most int) error {
	if !utf8.ValidString(text) {
		return fmt.Errorf("%s is not UTF-8 text", part)
	}
	if n := utf8.RuneCountInString(text); n > most {
		return fmt.Errorf("%s has %d characters, at most %d", part, n, most)
	}
	return nil
}

func checkFile(name string, content []byte) error {
	if !fileName.MatchString(name) {
		return fmt.Errorf("file name %q: 1 to 100 letters, digits, dots and hyphens", name)
	}
	if len(content) > MaxFileBytes {
		return fmt.Errorf("file %s has %d bytes, at most %d", name, len(content), MaxFileBytes)
	}
	return nil
}

func (t Table) check() error {
	if len(t.Columns) == 0 || len(t.Columns) > MaxColumns || len(t.Rows) > MaxRows {
		return fmt.Errorf("table has %d columns and %d rows, at least 1 column, at most %d and %d", len(t.Columns), len(t.Rows), MaxColumns, MaxRows)
	}
	if err := checkText("table title", t.Title, MaxTitle); err != nil {
		return err
	}
	for _, column := range t.Columns {
		if err := checkText("column name", column.Name, MaxTitle); err != nil {
			return err
		}
	}
	for i, row := range t.Rows {
		if len(row) != len(t.Columns) {
			return fmt.Errorf("table row %d has %d cells under %d columns", i+1, len(row), len(t.Columns))
		}
		for _, cell := range row {
			if err := checkText("cell", cell, MaxValue); err != nil {
				return fmt.Errorf("table row %d: %w", i+1, err)
			}
		}
	}
	return nil
}

func (f Fields) check() error {
	if len(f) > MaxFields {
		return fmt.Errorf("%d fields, at most %d", len(f), MaxFields)
	}
	for _, field := range f {
		if field.Name == "" || field.Value == "" {
			return fmt.Errorf("field %q has no name or no value", field.Name+field.Value)
		}
		if err := checkText("field name", field.Name, MaxTitle); err != nil {
			return err
		}
		if err := checkText("field value", field.Value, MaxValue); err != nil {
			return err
		}
	}
	return nil
}

func (a Actions) check() error {
	if len(a) > MaxActions {
		return fmt.Errorf("%d actions, at most %d", len(a), MaxActions)
	}
	for _, action := range a {
		if action.Label == "" || action.Line == "" {
			return fmt.Errorf("action %q has no label or no line", action.Label+action.Line)
		}
		if err := checkText("action label", action.Label, MaxLabel); err != nil {
			return err
		}
		if err := checkText("action line", action.Line, MaxLine); err != nil {
			return err
		}
	}
	return nil
}
