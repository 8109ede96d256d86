package workbook

import (
	"fmt"
	"math"
	"strings"
	"unicode/utf8"

	"github.com/xuri/excelize/v2"

	"swardbook/calc"
	"swardbook/planner"
)

// Form is the number of the sheet's form, kept with what is issued; a change
// of what the cells mean gives a new number.
const Form = 1

// Input is what a workbook is written from.
type Input struct {
	ID         planner.SheetID
	Plan       planner.Plan
	Evaluation planner.Evaluation
	Data       planner.SheetData
	Weeks      int    // of the first sheet, 1 to 8
	Letter     bool   // paper of North America instead of A4
	Ahead      string // where the days ahead come from, in words
	Caution    string
	// Seasons are the season totals beside past years; the first three are drawn.
	Seasons []planner.SeasonCurves
}

// Build writes the workbook: the week, the days' arithmetic, works and log, the
// two means compared, nitrogen, the charts with their cells, the issued curves
// and inputs, notes. Text that users typed is written as text and never as a
// formula. Weeks outside 1 to 8 are brought inside.
func Build(in Input) (content []byte, err error) {
	in.Weeks = min(max(in.Weeks, 1), 8)
	b := &book{Input: in, file: excelize.NewFile(), units: in.Plan.Site.Units, refs: map[string]string{}}
	defer func() {
		if closed := b.file.Close(); err == nil {
			err = closed
		}
	}()
	if err := b.makeStyles(); err != nil {
		return nil, fmt.Errorf("make the styles: %w", err)
	}
	b.place()
	b.placeCharts()
	if err := b.file.SetSheetName("Sheet1", weekSheet); err != nil {
		return nil, err
	}
	parts := []struct {
		name  string
		write func(*page) error
	}{{weekSheet, b.week}, {daysSheet, b.days}, {worksSheet, b.works}, {meansSheet, b.means}, {nitrogenSheet, b.nitrogen},
		{chartsSheet, b.chartsPage}, {curvesSheet, b.curves}, {issuedSheet, b.issued}, {chartCellsSheet, b.chartCells}, {notesSheet, b.notes}}
	for _, part := range parts[1:] {
		if _, err := b.file.NewSheet(part.name); err != nil {
			return nil, fmt.Errorf("add the sheet %s: %w", part.name, err)
		}
	}
	// Now, while the sheets are empty: later these would read all of them back.
	for _, name := range []string{curvesSheet, issuedSheet, chartCellsSheet} {
		if err := b.file.SetSheetVisible(name, false); err != nil {
			return nil, fmt.Errorf("hide the sheet %s: %w", name, err)
		}
	}
	b.file.SetActiveSheet(0)
	for _, part := range parts {
		if err := b.write(part.name, part.write); err != nil {
			return nil, fmt.Errorf("write the sheet %s: %w", part.name, err)
		}
	}
	if err := b.identify(); err != nil {
		return nil, fmt.Errorf("name the cells: %w", err)
	}
	buffer, err := b.file.WriteToBuffer()
	if err != nil {
		return nil, fmt.Errorf("write the workbook: %w", err)
	}
	return buffer.Bytes(), nil
}

// The sheets, in order.
const (
	weekSheet       = "week"
	daysSheet       = "days"
	worksSheet      = "works and log"
	meansSheet      = "means compared"
	nitrogenSheet   = "nitrogen"
	chartsSheet     = "charts"
	curvesSheet     = "curves"
	issuedSheet     = "as issued"
	chartCellsSheet = "chart cells"
	notesSheet      = "notes"
)

// book is a workbook being written.
type book struct {
	Input
	file  *excelize.File
	units planner.Units
	look  map[style]int
	// refs are the defined names: name → cells. Names come from ids, never from
	// what a user typed.
	refs map[string]string
	at   places
	// What is drawn, from which cells, and what is not; charts counts those put.
	drawings []drawing
	blocks   []*chartBlock
	without  []string
	charts   int
}

// serial is the spreadsheet's number of a day: 1 January 1970 is 25569.
func serial(day planner.Day) float64 { return float64(day) + 25569 }

// tidy keeps twelve decimals: what a cell holds is cut after 15 digits, and a
// cut 2.9999999999999996 would show as less than 3.
func tidy(value float64) float64 {
	if math.Abs(value) > 1e6 {
		return value
	}
	return math.Round(value*1e12) / 1e12
}

// show is a value in the unit as the site shows it.
func (b *book) show(value float64, unit planner.Unit) float64 {
	if unit == planner.Share {
		return value // shown as percent by its format
	}
	shown, _ := b.units.Show(value, unit)
	return tidy(shown)
}

// page is one sheet being streamed.
type page struct {
	*excelize.StreamWriter
	name  string
	row   int
	rules []*excelize.DataValidation
}

// add writes a row and returns its number.
func (p *page) add(cells ...any) (int, error) {
	p.row++
	return p.row, p.SetRow(fmt.Sprintf("A%d", p.row), cells)
}

// Heights of rows, in points.
const (
	handHeight = 34 // room to write by hand
	lineHeight = 14
)

// tall writes a row with room to write by hand.
func (p *page) tall(cells ...any) (int, error) { return p.high(handHeight, cells...) }

// wrapped writes a row in which the text of its cells has room in columns so
// wide, in letters; at least so high.
func (p *page) wrapped(least float64, wide int, cells ...any) (int, error) {
	lines := 1
	for _, cell := range cells {
		if cell, ok := cell.(excelize.Cell); ok {
			if text, ok := cell.Value.(string); ok {
				lines = max(lines, (utf8.RuneCountInString(text)+wide-1)/wide)
			}
		}
	}
	return p.high(min(max(least, float64(lineHeight*lines)), excelize.MaxRowHeight), cells...)
}

func (p *page) high(points float64, cells ...any) (int, error) {
	p.row++
	return p.row, p.SetRow(fmt.Sprintf("A%d", p.row), cells, excelize.RowOpts{Height: points})
}

func (b *book) write(name string, fill func(*page) error) error {
	if err := b.file.SetSheetProps(name, sheetProps(name)); err != nil {
		return err
	}
	if err := b.file.SetSheetDimension(name, b.dimension(name)); err != nil {
		return err
	}
	stream, err := b.file.NewStreamWriter(name)
	if err != nil {
		return err
	}
	p := &page{StreamWriter: stream, name: name}
	if err := fill(p); err != nil {
		return err
	}
	if err := b.manners(p); err != nil {
		return err
	}
	return p.Flush()
}

// sheetProps fit a sheet's columns to its pages. Those of the charts are broken
// between charts, which stand on columns and rows of known size.
func sheetProps(name string) *excelize.SheetPropsOptions {
	yes, wide, high := true, chartColumnWide, chartRowHigh
	if name == chartsSheet {
		return &excelize.SheetPropsOptions{DefaultColWidth: &wide, DefaultRowHeight: &high, CustomHeight: &yes}
	}
	return &excelize.SheetPropsOptions{FitToPage: &yes}
}

// dimension is the range of a sheet's cells, which some readers trust.
func (b *book) dimension(name string) string {
	last := map[string][2]int{
		weekSheet:       {b.weekEnd(), weekHead + len(b.Evaluation.Works) + 4 + 7*b.Weeks},
		daysSheet:       {b.at.columns, daysHead + len(b.Data.Days)},
		worksSheet:      {len(b.workColumns()), b.at.worksEnd},
		meansSheet:      {6, meansHead + len(b.bothMeans())},
		nitrogenSheet:   {12, 6 + 2*len(b.Data.Nitrogen)},
		issuedSheet:     {3, issuedHead + len(b.at.issued)},
		curvesSheet:     {1 + 3*b.at.counts, 1 + b.ahead()},
		notesSheet:      {4, len(calc.Catalogue()) + 24},
		chartsSheet:     {1, 3 + len(b.without)},
		chartCellsSheet: b.chartCellsEnd(),
	}[name]
	cell, _ := excelize.CoordinatesToCellName(max(last[0], 1), max(last[1], 1))
	return "A1:" + cell
}

// ahead is the number of the sheet's days from the morning on.
func (b *book) ahead() int {
	if n := len(b.Data.Days); n > 0 {
		return int(b.Data.Days[n-1].Facts.Day-b.Plan.AsOf) + 1
	}
	return 0
}

// manners sets print, protection and validation of a sheet.
func (b *book) manners(p *page) error {
	size, high := 9, 0
	if b.Letter {
		size = 1
	}
	orientation, wide, scale := "landscape", 1, uint(100)
	const perPage = 14 // columns that can still be read
	switch p.name {
	case weekSheet:
		high = 1
	case daysSheet:
		wide = (b.at.columns + perPage - 1) / perPage
	case chartsSheet:
		orientation, scale = "portrait", chartsPercent
	case worksSheet:
		wide = (printedColumns + perPage - 1) / perPage
	}
	if err := b.file.SetPageLayout(p.name, &excelize.PageLayoutOptions{Size: &size, Orientation: &orientation, FitToWidth: &wide, FitToHeight: &high, AdjustTo: &scale}); err != nil {
		return err
	}
	edge, top, line := 0.4, 0.75, 0.35 // inches: the week shall be read from a wall
	if err := b.file.SetPageMargins(p.name, &excelize.PageLayoutMarginsOptions{Left: &edge, Right: &edge, Top: &top, Bottom: &top, Header: &line, Footer: &line}); err != nil {
		return err
	}
	site := strings.ReplaceAll(b.Plan.Site.Name, "&", "&&")
	err := b.file.SetHeaderFooter(p.name, &excelize.HeaderFooterOptions{
		OddHeader: fmt.Sprintf("&L%s&C%s&R%s", headerCut(site), p.name, b.Plan.AsOf),
		OddFooter: fmt.Sprintf("&LSheet %d, days ahead issued %s&RPage &P of &N", b.ID, b.Outlook()),
	})
	if err != nil {
		return err
	}
	for _, rule := range p.rules {
		if err := b.file.AddDataValidation(p.name, rule); err != nil {
			return err
		}
	}
	return b.file.ProtectSheet(p.name, &excelize.SheetProtectionOptions{
		SelectLockedCells: true, SelectUnlockedCells: true, FormatColumns: true, FormatRows: true, AutoFilter: true,
	})
}

// headerCut keeps what fits beside the rest into the 255 characters of a header;
// a doubled & is not torn apart.
func headerCut(text string) string {
	const longest = 100
	runes := []rune(text)
	if len(runes) <= longest {
		return text
	}
	cut := string(runes[:longest])
	if signs := len(cut) - len(strings.TrimRight(cut, "&")); signs%2 == 1 {
		cut = cut[:len(cut)-1]
	}
	return cut
}

// Outlook is the day on which the days ahead were issued.
func (in Input) Outlook() planner.Day { return in.Evaluation.Outlook.AsOf }

// identify sets the names and the ids that travel with the file.
func (b *book) identify() error {
	b.refs["wb_id"] = fmt.Sprintf("'%s'!$B$2", notesSheet)
	for name, cells := range b.refs {
		if err := b.file.SetDefinedName(&excelize.DefinedName{Name: name, RefersTo: cells}); err != nil {
			return fmt.Errorf("%s: %w", name, err)
		}
	}
	for _, print := range []struct{ name, sheet, cells string }{
		{"_xlnm.Print_Titles", daysSheet, fmt.Sprintf("$A:$A,'%s'!$%d:$%d", daysSheet, daysHead, daysHead)},
		{"_xlnm.Print_Titles", curvesSheet, "$1:$1"},
		{"_xlnm.Print_Titles", worksSheet, "$A:$B"},
		{"_xlnm.Print_Area", worksSheet, fmt.Sprintf("$A$1:$%s$%d", column(printedColumns), b.at.worksEnd)}, // without what is as issued
	} {
		err := b.file.SetDefinedName(&excelize.DefinedName{Name: print.name, RefersTo: fmt.Sprintf("'%s'!%s", print.sheet, print.cells), Scope: print.sheet})
		if err != nil {
			return err
		}
	}
	id := fmt.Sprintf("swardbook-sheet-%d-form-%d", b.ID, Form)
	if err := b.file.SetCustomProps(excelize.CustomProperty{Name: "WorkbookId", Value: id}); err != nil {
		return err
	}
	recalculate := true
	if err := b.file.SetCalcProps(&excelize.CalcPropsOptions{FullCalcOnLoad: &recalculate}); err != nil {
		return err
	}
	return b.file.SetDocProps(&excelize.DocProperties{Identifier: id, Title: "Sheet of " + b.Plan.Site.Name, Creator: "Swardbook"})
}
