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
	nitrogen map[planner.SurfaceID]nitrogenPlace
	works    []workPlace
	counts   int // all counts of all works
	worksEnd int // last row of works and log
	firstRow int // of the days
	lastRow  int
	issued   []issuedInput
	flags    map[string]string // name of an input → the cell that says it was changed
}

// nitrogenPlace is where the nitrogen of a surface stands.
type nitrogenPlace struct {
	used map[planner.Basis]string // column of the sheet days
	slow string                   // column of the sheet days
}

// workPlace is where a work stands.
type workPlace struct {
	hours  string // column of what is as issued; "" for none
	counts []countPlace
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
		nitrogen: map[planner.SurfaceID]nitrogenPlace{}, flags: map[string]string{},
		firstRow: daysHead + 1, lastRow: daysHead + max(len(b.Data.Days), 1)}
	for name, col := range map[string]string{"d_date": "A", "d_high": "B", "d_low": "C", "d_mean": "D", "d_from": "F"} {
		b.refs[name] = b.dayRange(col)
	}
	b.placeSurfaces()
	row := b.placeWorks()
	b.refs["c_date"] = fmt.Sprintf("'%s'!$A$2:$A$%d", curvesSheet, 1+b.ahead())
	for name, cell := range map[string]string{"wb_asof": "$B$2", "wb_weather": "$D$2", "wb_changed": "$F$2"} {
		b.refs[name] = fmt.Sprintf("'%s'!%s", worksSheet, cell)
	}
	row += 2 // a free row and the heads
	for _, surface := range b.Plan.Surfaces {
		for i, turf := range surface.Turf {
			row++
			b.input(turfName(surface, i, "optimum"), worksSheet, "C", row, b.units.Temperature(turf.Value.Curve.OptimumC))
			b.input(turfName(surface, i, "width"), worksSheet, "D", row, b.units.Difference(turf.Value.Curve.WidthC))
			b.input(turfName(surface, i, "ceiling"), worksSheet, "E", row, turf.Value.CeilingGM2)
			if i == 0 {
				b.input(areaName(surface), worksSheet, "F", row, b.area(surface))
			}
		}
	}
	row += 2
	first := row + 1
	row += len(b.feeds()) + 1 // the row that ends the feeds, inside the names
	for name, col := range map[string]string{"log_surface": "A", "log_date": "C", "log_quick": "D", "log_slow": "E", "log_days": "F"} {
		b.refs[name] = fmt.Sprintf("'%s'!$%s$%d:$%s$%d", worksSheet, col, first, col, row)
	}
	row += 2 + len(b.passes())
	b.at.worksEnd = row
}

// nextColumn takes another column of the sheet days.
func (b *book) nextColumn() string { b.at.columns++; return column(b.at.columns) }

// placeSurfaces takes the columns of growth and of the nitrogen used.
func (b *book) placeSurfaces() {
	for _, surface := range b.Plan.Surfaces {
		b.at.growth[surface.ID] = map[planner.Basis]string{planner.Hourly: b.nextColumn(), planner.Midrange: b.nextColumn()}
	}
	for _, nitrogen := range b.Data.Nitrogen {
		place := nitrogenPlace{used: map[planner.Basis]string{}, slow: b.nextColumn()}
		for _, facts := range nitrogen.State.Bases {
			place.used[facts.Basis] = b.nextColumn()
			b.refs[usedName(nitrogen.State.Surface, facts.Basis)] = b.dayRange(place.used[facts.Basis])
		}
		b.at.nitrogen[nitrogen.State.Surface.ID] = place
	}
}

// placeWorks takes the columns and rows of the works and returns the last row.
func (b *book) placeWorks() (row int) {
	row = worksHead
	for _, work := range b.Data.Works {
		var place workPlace
		if work.State.Settings.Method == calc.MethodDegreeHours {
			place.hours = b.nextColumn()
		}
		for i, count := range work.Counts {
			row++
			at := countPlace{units: b.nextColumn(), total: b.nextColumn(), row: row, curve: 2 + 3*b.at.counts}
			b.refs[countName(work, count, "units")] = b.dayRange(at.units)
			b.refs[countName(work, count, "total")] = b.dayRange(at.total)
			for j, which := range curveNames {
				col := column(at.curve + j)
				b.refs[countName(work, count, which)] = fmt.Sprintf("'%s'!$%s$2:$%s$%d", curvesSheet, col, col, 1+b.ahead())
			}
			if i == 0 {
				for j, input := range b.workInputs(work) {
					b.refs[workName(work, input.name)] = fmt.Sprintf("'%s'!$%s$%d", worksSheet, column(6+j), row)
					if input.known && input.fixed == "" {
						b.input(workName(work, input.name), worksSheet, column(6+j), row, input.value)
					}
				}
				b.placeRate(work, row)
			}
			b.at.counts++
			place.counts = append(place.counts, at)
		}
		b.at.works = append(b.at.works, place)
	}
	return row
}

// input names an input and has its value as issued kept.
func (b *book) input(name, sheet, col string, row int, value float64) {
	b.refs[name] = fmt.Sprintf("'%s'!$%s$%d", sheet, col, row)
	b.at.issued = append(b.at.issued, issuedInput{name, value})
	b.at.flags[name] = fmt.Sprintf("'%s'!$C$%d", issuedSheet, issuedHead+len(b.at.issued))
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

func usedName(surface planner.Surface, basis planner.Basis) string {
	return fmt.Sprintf("d_s%d_%s_used", surface.ID, basis)
}

func turfName(surface planner.Surface, i int, what string) string {
	return fmt.Sprintf("in_s%d_t%d_%s", surface.ID, i+1, what)
}

func areaName(surface planner.Surface) string { return fmt.Sprintf("in_s%d_area", surface.ID) }

// feedOf is a feed and the surface it was given to.
type feedOf struct {
	surface planner.Surface
	planner.Feed
}

// feeds are the feeds that the balances count.
func (b *book) feeds() []feedOf {
	var all []feedOf
	for _, nitrogen := range b.Data.Nitrogen {
		for _, feed := range nitrogen.Feeds {
			all = append(all, feedOf{nitrogen.State.Surface, feed})
		}
	}
	return all
}

// passes are the newest lines of the log about works of the sheet, newest
// first.
func (b *book) passes() []planner.Entry {
	const most = 60
	var entries []planner.Entry
	for i := len(b.Plan.Log) - 1; i >= 0 && len(entries) < most; i-- {
		if b.what(b.Plan.Log[i]) != "" {
			entries = append(entries, b.Plan.Log[i])
		}
	}
	return entries
}
