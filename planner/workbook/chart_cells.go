package workbook

import (
	"fmt"
	"math"

	"github.com/xuri/excelize/v2"
)

// chartHead is the row of the heads of the sheet of chart cells: above it stand
// the title and the words of the axis.
const chartHead = 3

// chartBlock is the columns of cells that one chart is drawn from.
type chartBlock struct {
	column      int    // the first
	title, axis string // of the chart, in the first two rows
	// beside are the cells to the right of the axis, in row 2.
	beside  []excelize.Cell
	columns []chartColumn
}

// chartColumn is a column of numbers below its head.
type chartColumn struct {
	head   string
	look   style
	values []float64 // NaN leaves the cell empty
	// formulas are those of the cells; nil for a column of numbers.
	formulas []string
}

// block begins the block of another chart, to the right of the others.
func (b *book) block(title, axis string) *chartBlock {
	at := 1
	if n := len(b.blocks); n > 0 {
		at = b.blocks[n-1].column + b.blocks[n-1].width() + 1
	}
	block := &chartBlock{column: at, title: title, axis: axis}
	b.blocks = append(b.blocks, block)
	return block
}

func (c *chartBlock) width() int { return max(len(c.columns), 1+len(c.beside)) }

// cell is a cell of the block, seen from its own sheet.
func (c *chartBlock) cell(at, row int) string { return fmt.Sprintf("%s%d", column(c.column+at), row) }

// nameAt and cellsAt are a column's head and its numbers, seen from another
// sheet.
func (c *chartBlock) nameAt(at int) string {
	return fmt.Sprintf("'%s'!$%s$%d", chartCellsSheet, column(c.column+at), chartHead)
}

func (c *chartBlock) cellsAt(at int) string {
	col := column(c.column + at)
	return fmt.Sprintf("'%s'!$%s$%d:$%s$%d", chartCellsSheet, col, chartHead+1, col, chartHead+len(c.columns[at].values))
}

func (c *chartBlock) titleAt() string {
	return fmt.Sprintf("'%s'!$%s$1", chartCellsSheet, column(c.column))
}

func (c *chartBlock) axisAt() string {
	return fmt.Sprintf("'%s'!$%s$2", chartCellsSheet, column(c.column))
}

// curve draws the block's column.
func (c *chartBlock) curve(at int, drawn stroke) curve {
	return curve{stroke: drawn, name: c.columns[at].head, nameAt: c.nameAt(at), at: c.cellsAt(at), values: c.columns[at].values}
}

// chartCellsEnd is the last column and row of the sheet of chart cells.
func (b *book) chartCellsEnd() [2]int {
	end := [2]int{1, 1}
	for _, block := range b.blocks {
		end[0] = max(end[0], block.column+block.width()-1)
		end[1] = max(end[1], chartHead)
		for _, col := range block.columns {
			end[1] = max(end[1], chartHead+len(col.values))
		}
	}
	return end
}

// chartCells writes the cells that the charts are drawn from.
func (b *book) chartCells(p *page) error {
	end := b.chartCellsEnd()
	for row := 1; row <= end[1]; row++ {
		cells := make([]any, end[0])
		for _, block := range b.blocks {
			for i, cell := range b.blockRow(block, row) {
				cells[block.column-1+i] = cell
			}
		}
		if _, err := p.add(cells...); err != nil {
			return err
		}
	}
	return nil
}

// blockRow is a row of a block.
func (b *book) blockRow(block *chartBlock, row int) []excelize.Cell {
	switch row {
	case 1:
		return []excelize.Cell{b.value(small, block.title)}
	case 2:
		return append([]excelize.Cell{b.value(small, block.axis)}, block.beside...)
	}
	cells := make([]excelize.Cell, len(block.columns))
	for i, col := range block.columns {
		at := row - chartHead - 1
		switch {
		case at < 0:
			cells[i] = b.value(head, col.head)
		case at >= len(col.values) || math.IsNaN(col.values[at]):
		case col.formulas == nil || col.formulas[at] == "":
			cells[i] = b.value(col.look, col.values[at])
		default:
			cells[i] = b.live(col.look, col.formulas[at], col.values[at])
		}
	}
	return cells
}
