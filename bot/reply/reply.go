// Package reply is what a command answers: ordered blocks, the figures they
// were read from, and a question when the command asks before it acts.
//
// It must not know who shows the reply. A chat server, a terminal and a test
// read the same value; what differs between them travels as data in it.
package reply

import (
	"fmt"

	"swardbook/planner"
)

// Reply is one answer.
type Reply struct {
	Blocks  []Block         // in the order they are read
	Figures planner.Figures // every number that the blocks show
	Private bool            // for the caller's eyes only
	Confirm *Confirm        // set when nothing was changed yet
}

// Confirm asks the caller to say yes. A confirmation is the same command line
// with confirm:CODE, so it needs no memory of who was asked what.
type Confirm struct {
	// Question is what is asked: "Log this?". Empty asks "Do this?".
	Question string
	// Line is the command line that acts once it is confirmed, without the
	// code. A handler sets it when the typed line would mean something else a
	// few minutes later ("today" just before midnight); left empty it is the
	// typed line.
	Line string
	// Code confirms Line for the caller; the table of commands sets it.
	Code string
}

// Answer is the command line that says yes.
func (c Confirm) Answer() string { return c.Line + " confirm:" + c.Code }

// Of makes a reply of blocks.
func Of(blocks ...Block) Reply { return Reply{Blocks: blocks} }

// Add appends blocks.
func (r *Reply) Add(blocks ...Block) { r.Blocks = append(r.Blocks, blocks...) }

// With returns the reply with more blocks after its own.
func (r Reply) With(blocks ...Block) Reply {
	r.Blocks = append(r.Blocks[:len(r.Blocks):len(r.Blocks)], blocks...)
	return r
}

// Block is one part of a reply: Heading, Text, Table, Fields, File, Picture or
// Actions. The set is closed: whoever shows replies can show all of them.
type Block interface{ block() }

// Heading is a line that names what follows.
type Heading string

// Text is a paragraph; it may hold line breaks.
type Text string

// Textf makes a paragraph as fmt.Sprintf does.
func Textf(format string, args ...any) Text { return Text(fmt.Sprintf(format, args...)) }

// Table is rows under columns. Every row has a cell for every column.
type Table struct {
	Title   string
	Columns []Column
	Rows    [][]string
}

// Column heads a column of a table; numbers stand right.
type Column struct {
	Name  string
	Right bool
}

// Left is a column of words.
func Left(name string) Column { return Column{Name: name} }

// Right is a column of numbers.
func Right(name string) Column { return Column{Name: name, Right: true} }

// Fields are named values, one under the other.
type Fields []Field

// Field is one named value.
type Field struct{ Name, Value string }

// File is a file handed over.
type File struct {
	Name    string
	Content []byte
}

// Picture is a drawing; Alt says in words what it shows.
type Picture struct {
	Name string
	Alt  string
	PNG  []byte
}

// Actions are what can be done next.
type Actions []Action

// Action is a labelled command line: a button in a chat, a line to type in a
// terminal.
type Action struct {
	Label, Line string
	// Ask names options, with commas between, that are asked for before the
	// line is run, where questions can be asked.
	Ask string
}

func (Heading) block() {}
func (Text) block()    {}
func (Table) block()   {}
func (Fields) block()  {}
func (File) block()    {}
func (Picture) block() {}
func (Actions) block() {}
