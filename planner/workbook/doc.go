// Package workbook writes a plan as a live spreadsheet: the week first, then
// the days' arithmetic as formulas over input cells, each with the value that
// the plan's own figures give.
//
// It must not compute a figure that a reader takes for the plan's: every cached
// value comes from planner, and a formula only repeats it. It must not know who
// asked for the sheet or where it is kept, and it builds no formula from what a
// user typed.
package workbook
