// Package plain puts a reply into plain text for a narrow screen: what a
// terminal prints, and what a chat server shows as a table.
//
// It must not know where the text goes.
package plain

import (
	"strings"

	"swardbook/bot/reply"
)

// Text is a reply as text, no line wider than width columns (0 takes
// DefaultWidth; fewer than 12 are taken as 12). Nothing is cut: what is too
// wide is wrapped, and of a table that is too wide each row becomes its first
// cell with "column: value" pairs under it.
func Text(r reply.Reply, width int) string {
	if width <= 0 {
		width = DefaultWidth
	}
	width = max(width, leastWidth)
	var lines []string
	headed := true // nothing to keep apart from yet
	for _, block := range r.Blocks {
		part := blockLines(block, width)
		if len(part) == 0 {
			continue
		}
		if !headed {
			lines = append(lines, "")
		}
		lines = append(lines, part...)
		_, headed = block.(reply.Heading)
	}
	if r.Confirm != nil {
		if len(lines) > 0 {
			lines = append(lines, "")
		}
		lines = append(lines, wrap(r.Confirm.Question, width, 0)...)
		if r.Confirm.Code != "" {
			lines = append(lines, wrap("To say yes, type:", width, 0)...)
			lines = append(lines, wrap(r.Confirm.Answer(), width, 2)...)
		}
	}
	if len(lines) == 0 {
		return ""
	}
	return strings.Join(lines, "\n") + "\n"
}

func blockLines(block reply.Block, width int) []string {
	switch b := block.(type) {
	case reply.Heading:
		return wrap(string(b), width, 2)
	case reply.Text:
		return wrap(string(b), width, 0)
	case reply.Table:
		return tableLines(b, width)
	case reply.Fields:
		return fieldLines(b, width)
	case reply.File:
		return wrap("saved: "+b.Name, width, 2)
	case reply.Picture:
		return append(wrap(b.Alt, width, 0), wrap("saved: "+b.Name, width, 2)...)
	case reply.Actions:
		var lines []string
		for _, action := range b {
			lines = append(lines, wrap("→ "+action.Line, width, 2)...)
		}
		return lines
	}
	return nil
}

// gap is the space between two columns.
const gap = 2

func tableLines(t reply.Table, width int) []string {
	var lines []string
	if t.Title != "" {
		lines = wrap(t.Title, width, 2)
	}
	widths, total := columnWidths(t)
	switch {
	case total > width:
		return append(lines, rowBlocks(t, width)...)
	case len(t.Rows) == 0:
		return append(lines, "none")
	}
	names := make([]string, len(t.Columns))
	for i, column := range t.Columns {
		names[i] = column.Name
	}
	for _, row := range append([][]string{names}, t.Rows...) {
		cells := make([]string, len(t.Columns))
		for i, column := range t.Columns {
			cells[i] = pad(oneLine(cell(row, i)), widths[i], column.Right)
		}
		lines = append(lines, strings.TrimRight(strings.Join(cells, strings.Repeat(" ", gap)), " "))
	}
	return lines
}

// cell is the row's cell in the column; a short row ends in empty ones.
func cell(row []string, column int) string {
	if column < len(row) {
		return row[column]
	}
	return ""
}

func columnWidths(t reply.Table) (widths []int, total int) {
	widths = make([]int, len(t.Columns))
	total = gap * (len(t.Columns) - 1)
	for i, column := range t.Columns {
		widths[i] = widthOf(column.Name)
		for _, row := range t.Rows {
			widths[i] = max(widths[i], widthOf(oneLine(cell(row, i))))
		}
		total += widths[i]
	}
	return widths, total
}

// rowBlocks shows each row as its first cell and, under it, the other columns
// by name; empty cells are left out.
func rowBlocks(t reply.Table, width int) []string {
	if len(t.Rows) == 0 {
		return []string{"none"}
	}
	var lines []string
	for _, row := range t.Rows {
		lines = append(lines, wrap(oneLine(cell(row, 0)), width, 2)...)
		var rest []string
		for i := 1; i < len(t.Columns); i++ {
			if text := oneLine(cell(row, i)); text != "" {
				rest = append(rest, t.Columns[i].Name+": "+text)
			}
		}
		for _, line := range wrap(strings.Join(rest, ", "), width-2, 0) {
			lines = append(lines, "  "+line)
		}
	}
	return lines
}

// fieldLines stands values beside their names, or below them as soon as one
// name takes more than two fifths of the width.
func fieldLines(fields reply.Fields, width int) []string {
	widest, longest := 0, 0
	for _, field := range fields {
		widest = max(widest, widthOf(oneLine(field.Name)))
		longest = max(longest, widthOf(oneLine(field.Value)))
	}
	var lines []string
	if widest > width*2/5 && widest+gap+longest > width {
		for _, field := range fields {
			lines = append(lines, wrap(oneLine(field.Name), width, 2)...)
			for _, line := range wrap(field.Value, width-2, 0) {
				lines = append(lines, "  "+line)
			}
		}
		return lines
	}
	for _, field := range fields {
		name := oneLine(field.Name)
		for _, line := range wrap(field.Value, width-widest-gap, 0) {
			lines = append(lines, strings.TrimRight(pad(name, widest+gap, false)+line, " "))
			name = ""
		}
	}
	return lines
}
