package sqlite

import (
	"context"
	"database/sql"
	"strings"
)

// batch inserts many rows with few statements.
type batch struct {
	on     *sql.Conn
	insert string // up to and with VALUES
	width  int    // values of a row
	full   *sql.Stmt
	args   []any // of the rows not written yet
	most   int   // len(args) at which they are
}

// newBatch prepares to insert rows of width values, so many in a statement.
func newBatch(ctx context.Context, on *sql.Conn, rows int, insert string, width int) (*batch, error) {
	b := &batch{on: on, insert: insert, width: width, most: rows * width, args: make([]any, 0, rows*width)}
	full, err := on.PrepareContext(ctx, b.statement(rows))
	b.full = full
	return b, err
}

func (b *batch) statement(rows int) string {
	row := "(?" + strings.Repeat(", ?", b.width-1) + ")"
	return b.insert + " " + row + strings.Repeat(", "+row, rows-1)
}

// add takes a row; every so often it writes those it has.
func (b *batch) add(ctx context.Context, values ...any) error {
	b.args = append(b.args, values...)
	if len(b.args) < b.most {
		return nil
	}
	_, err := b.full.ExecContext(ctx, b.args...)
	b.args = b.args[:0]
	return err
}

// flush writes the rows that are left.
func (b *batch) flush(ctx context.Context) error {
	if len(b.args) == 0 {
		return nil
	}
	_, err := b.on.ExecContext(ctx, b.statement(len(b.args)/b.width), b.args...)
	b.args = b.args[:0]
	return err
}

func (b *batch) close() error { return b.full.Close() }
