package workbook

import (
	"fmt"

	"github.com/xuri/excelize/v2"

	"swardbook/calc"
	"swardbook/planner"
)

// places are where things stand in the book, fixed before a cell is written.
type places struct {
	columns  int                                            // of the sheet days
	growth   map[planner.SurfaceID]map[planner.Basis]string // column of growth potential
	works    []workPlace
	counts   int // all counts of all works
	worksEnd int // last row of works and log
	firstRow int // of the days
	lastRow  int
}

// workPlace is where a work stands.
type workPlace struct {
	hours, slow string // column of what is as issued; "" for none
	counts      []countPlace
}

// countPlace is where a count of a work stands.
type countPlace struct {
	units, total string // columns of the sheet days
	row          int    // of works and log
	curve        int    // first column of the sheet curves
}

const (
	daysHead   = 2 // row of the heads of the sheet days
	worksHead  = 4
	dayColumns = 11 // A to K
)

func column(number int) string {
	name, _ := excelize.ColumnNumberToName(number)
	return name
}

// place fixes rows and columns, and the names that formulas use.
func (b *book) place() {
	b.at = places{columns: dayColumns, growth: map[planner.SurfaceID]map[planner.Basis]string{},
		firstRow: daysHead + 1, lastRow: daysHead + max(len(b.Data.Days), 1)}
	next := func() string { b.at.columns++; return column(b.at.columns) }
	for name, col := range map[string]string{"d_date": "A", "d_high": "B", "d_low": "C", "d_mean": "D"} {
		b.refs[name] = b.dayRange(col)
	}
	for _, surface := range b.Plan.Surfaces {
		b.at.growth[surface.ID] = map[planner.Basis]string{planner.Hourly: next(), planner.Midrange: next()}
	}
	row := worksHead
	for _, work := range b.Data.Works {
		var place workPlace
		if work.State.Settings.Method == calc.MethodDegreeHours {
			place.hours = next()
		}
		if work.State.Settings.Counts == planner.ByNitrogen {
			place.slow = next()
		}
		for i, count := range work.Counts {
			row++
			at := countPlace{units: next(), total: next(), row: row, curve: 2 + 3*b.at.counts}
			b.refs[countName(work, count, "units")] = b.dayRange(at.units)
			b.refs[countName(work, count, "total")] = b.dayRange(at.total)
			for j, which := range curveNames {
				col := column(at.curve + j)
				b.refs[countName(work, count, which)] = fmt.Sprintf("'%s'!$%s$2:$%s$%d", curvesSheet, col, col, 1+b.ahead())
			}
			if i == 0 {
				for _, input := range []struct{ name, col string }{{"base", "F"}, {"upper", "G"}, {"target", "H"}, {"last", "I"}, {"gap", "J"}} {
					b.refs[workName(work, input.name)] = fmt.Sprintf("'%s'!$%s$%d", worksSheet, input.col, row)
				}
			}
			b.at.counts++
			place.counts = append(place.counts, at)
		}
		b.at.works = append(b.at.works, place)
	}
	b.refs["c_date"] = fmt.Sprintf("'%s'!$A$2:$A$%d", curvesSheet, 1+b.ahead())
	for name, cell := range map[string]string{"wb_asof": "$B$2", "wb_weather": "$D$2", "wb_changed": "$F$2"} {
		b.refs[name] = fmt.Sprintf("'%s'!%s", worksSheet, cell)
	}
	row += 2 // a free row and the heads
	for _, surface := range b.Plan.Surfaces {
		for i := range surface.Turf {
			row++
			for _, input := range []struct{ name, col string }{{"optimum", "C"}, {"width", "D"}, {"ceiling", "E"}} {
				b.refs[turfName(surface, i, input.name)] = fmt.Sprintf("'%s'!$%s$%d", worksSheet, input.col, row)
			}
		}
	}
	row += 2
	first := row + 1
	row += max(len(b.feeds()), 1)
	for name, col := range map[string]string{"log_surface": "A", "log_date": "C", "log_quick": "D", "log_slow": "E", "log_days": "F"} {
		b.refs[name] = fmt.Sprintf("'%s'!$%s$%d:$%s$%d", worksSheet, col, first, col, row)
	}
	row += 2 + len(b.passes())
	b.at.worksEnd = row
}

var curveNames = [3]string{"early", "middle", "late"}

func (b *book) dayRange(col string) string {
	return fmt.Sprintf("'%s'!$%s$%d:$%s$%d", daysSheet, col, b.at.firstRow, col, b.at.lastRow)
}

func workName(work planner.SheetWork, what string) string {
	return fmt.Sprintf("in_w%d_%s", work.State.Work.ID, what)
}

func countName(work planner.SheetWork, count planner.SheetCount, what string) string {
	return fmt.Sprintf("d_w%d_%s_%s", work.State.Work.ID, count.Due.Basis, what)
}

func turfName(surface planner.Surface, i int, what string) string {
	return fmt.Sprintf("in_s%d_t%d_%s", surface.ID, i+1, what)
}

// feedOf is a feed and the surface it was given to.
type feedOf struct {
	surface planner.Surface
	planner.Feed
}

// feeds are the feeds of the surfaces with a work that counts by nitrogen,
// each surface once.
func (b *book) feeds() []feedOf {
	var all []feedOf
	seen := map[planner.SurfaceID]bool{}
	for _, work := range b.Data.Works {
		surface := work.State.Surface
		if seen[surface.ID] || work.State.Settings.Counts != planner.ByNitrogen {
			continue
		}
		seen[surface.ID] = true
		for _, feed := range work.Feeds {
			all = append(all, feedOf{surface, feed})
		}
	}
	return all
}

// passes are the newest lines of the log, newest first.
func (b *book) passes() []planner.Entry {
	const most = 60
	var entries []planner.Entry
	for i := len(b.Plan.Log) - 1; i >= 0 && len(entries) < most; i-- {
		entries = append(entries, b.Plan.Log[i])
	}
	return entries
}
