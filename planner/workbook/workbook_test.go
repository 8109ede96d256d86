package workbook_test

import (
	"bytes"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"swardbook/calc"
	"swardbook/planner"
	"swardbook/planner/workbook"
)

// Every formula of the catalogue has its cell text, and none is left over.
func TestEveryFormulaHasACell(t *testing.T) {
	for _, formula := range calc.Catalogue() {
		if text, ok := workbook.CellText(formula.ID); !ok || text == "" {
			t.Errorf("%s has no cell text", formula.ID)
		}
	}
	if _, ok := workbook.CellText("no-such-formula"); ok {
		t.Error("an unknown formula has a cell text")
	}
}

// The spreadsheet's own sine gives the values that calc's tests take from
// numerical integration (the double curves are left to LibreOffice: this engine
// cannot compute them): 2.750945 for 4 to 18 °C over 10.
func TestCellTextComputes(t *testing.T) {
	file := excelize.NewFile()
	t.Cleanup(func() { _ = file.Close() })
	for name, cell := range map[string]string{"base": "$Z$1", "upper": "$Z$2", "optimum": "$Z$3", "width": "$Z$4"} {
		if err := file.SetDefinedName(&excelize.DefinedName{Name: name, RefersTo: "Sheet1!" + cell}); err != nil {
			t.Fatal(err)
		}
	}
	for cell, value := range map[string]float64{"Z1": 10, "Z2": 30, "Z3": 20, "Z4": 5.5, "G2": 15, "I2": 18, "J2": 4, "K2": 7} {
		if err := file.SetCellValue("Sheet1", cell, value); err != nil {
			t.Fatal(err)
		}
	}
	for _, row := range []struct{ id, want string }{
		{"degree-days-single-sine", "2.750945"}, {"degree-days-single-triangle", "2.285714"},
		{"degree-days-four-case", "2.500000"}, {"degree-days-floored-extremes", "4.000000"},
		{"degree-days-mean", "5.000000"}, {"growth-potential", "0.661515"}, // 0.66151, Gelernter & Stowell 2005
	} {
		text, _ := workbook.CellText(row.id)
		if err := file.SetCellFormula("Sheet1", "A9", text); err != nil {
			t.Fatal(err)
		}
		got, err := file.CalcCellValue("Sheet1", "A9", excelize.Options{RawCellValue: true})
		if err != nil {
			t.Fatalf("%s: %v", row.id, err)
		}
		var value float64
		if _, err := fmt.Sscan(got, &value); err != nil || fmt.Sprintf("%.6f", value) != row.want {
			t.Errorf("%s computes %s, want %s", row.id, got, row.want)
		}
	}
}

// What a user typed is never a formula; ids and names are where a returned
// sheet is read from.
func TestMannersOfTheBook(t *testing.T) {
	plan := randomPlan(3)
	file := open(t, build(t, plan))
	names := map[string]bool{}
	for _, name := range file.GetDefinedName() {
		names[name.Name] = true
		if strings.Contains(name.RefersTo, "#REF") {
			t.Errorf("%s refers to %s", name.Name, name.RefersTo)
		}
	}
	for _, want := range []string{"wb_id", "wb_asof", "d_date", "in_w4_base", "in_w4_target", "in_w4_last", "in_w4_gap", "in_s1_t1_optimum", "log_date"} {
		if !names[want] {
			t.Errorf("there is no name %s", want)
		}
	}
	if props, err := file.GetDocProps(); err != nil || props.Identifier != "swardbook-sheet-7-form-1" {
		t.Errorf("identifier %v, %v", props, err)
	}
	if props, err := file.GetCustomProps(); err != nil || len(props) != 1 || props[0].Value != "swardbook-sheet-7-form-1" {
		t.Errorf("custom properties %v, %v", props, err)
	}
	for _, sheet := range file.GetSheetList() {
		rows, err := file.GetRows(sheet)
		if err != nil {
			t.Fatal(err)
		}
		for r := range rows {
			for c, text := range rows[r] {
				cell, _ := excelize.CoordinatesToCellName(c+1, r+1)
				formula, err := file.GetCellFormula(sheet, cell)
				if err != nil || formula != "" && (strings.Contains(formula, "greens") || formula == "1+1") {
					t.Errorf("%s!%s: %q, %v", sheet, cell, formula, err)
				}
				if formula != "" && strings.HasPrefix(text, "=1+1") {
					t.Errorf("%s!%s holds a note as a formula", sheet, cell)
				}
			}
		}
	}
}

// Weeks outside 1 to 8 are brought inside, a plan without works or weather
// still gives a book.
func TestPoorPlans(t *testing.T) {
	plan := randomPlan(4)
	plan.Works, plan.Log = nil, nil
	input := inputOf(t, plan, 1)
	input.Weeks = 99
	if _, err := workbook.Build(input); err != nil {
		t.Error(err)
	}
	plan.Record.Facts, plan.Outlook.Path, plan.Outlook.Members, plan.Outlook.Start = nil, nil, nil, plan.AsOf
	if content := build(t, plan); !bytes.HasPrefix(content, []byte("PK")) {
		t.Error("no book of a plan without weather")
	}
}

// openpyxl never recalculates: it must see every number of the first sheet.
func TestReaderThatNeverRecalculates(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("reads with openpyxl with SWARDBOOK_SLOW=1")
	}
	path := filepath.Join(t.TempDir(), "book.xlsx")
	if err := os.WriteFile(path, build(t, randomPlan(2)), 0o644); err != nil {
		t.Fatal(err)
	}
	const script = `
import openpyxl, sys
live = openpyxl.load_workbook(sys.argv[1]).worksheets[0]
read = openpyxl.load_workbook(sys.argv[1], data_only=True, read_only=True).worksheets[0]
seen = 0
for formulas, values in zip(live.iter_rows(), read.iter_rows()):
    for f, v in zip(formulas, values):
        if isinstance(f.value, str) and f.value.startswith("="):
            seen += v.value is not None and not (isinstance(v.value, str) and v.value.startswith("="))
            if v.value is None and "falls" not in f.value and f.column_letter in "AB": print("empty", f.coordinate)
print("seen", seen)`
	said, err := exec.Command("/usr/bin/python3", "-c", script, path).CombinedOutput()
	var seen int
	if _, scan := fmt.Sscanf(string(said), "seen %d", &seen); err != nil || scan != nil || seen < 60 {
		t.Errorf("%v: %s", err, said)
	}
}

// A season's sheet with 12 works beside a bare writer of the same cells.
func BenchmarkBuild(b *testing.B) {
	plan := randomPlan(2)
	for i := range 6 {
		work := plan.Works[i]
		work.ID += 6
		plan.Works = append(plan.Works, work)
		plan.Log = append(plan.Log, planner.Entry{Day: plan.AsOf - 1, Passes: []planner.Pass{{Work: work.ID, NitrogenGM2: 1}}})
	}
	input := inputOf(b, plan, 8)
	content, err := workbook.Build(input)
	if err != nil {
		b.Fatal(err)
	}
	b.Run("sheet", func(b *testing.B) {
		b.ReportAllocs()
		for range b.N {
			if _, err := workbook.Build(input); err != nil {
				b.Fatal(err)
			}
		}
	})
	cells := bareCells(b, content)
	b.Run("bare", func(b *testing.B) {
		b.ReportAllocs()
		for range b.N {
			writeBare(b, cells)
		}
	})
}

// bareCells are the cells of the book, sheet by sheet.
func bareCells(b *testing.B, content []byte) map[string][][]any {
	file := open(b, content)
	cells := map[string][][]any{}
	for _, sheet := range file.GetSheetList() {
		rows, err := file.GetRows(sheet, excelize.Options{RawCellValue: true})
		if err != nil {
			b.Fatal(err)
		}
		for r := range rows {
			var row []any
			for c, text := range rows[r] {
				name, _ := excelize.CoordinatesToCellName(c+1, r+1)
				formula, _ := file.GetCellFormula(sheet, name)
				style, _ := file.GetCellStyle(sheet, name)
				cell := excelize.Cell{Formula: formula, StyleID: min(style, 0), Value: text}
				var number float64
				if _, err := fmt.Sscan(text, &number); err == nil {
					cell.Value = number
				}
				row = append(row, cell)
			}
			cells[sheet] = append(cells[sheet], row)
		}
	}
	return cells
}

func writeBare(b *testing.B, cells map[string][][]any) {
	file := excelize.NewFile()
	defer file.Close()
	for sheet, rows := range cells {
		if _, err := file.NewSheet(sheet); err != nil {
			b.Fatal(err)
		}
		stream, err := file.NewStreamWriter(sheet)
		if err != nil {
			b.Fatal(err)
		}
		for r, row := range rows {
			if err := stream.SetRow(fmt.Sprintf("A%d", r+1), row); err != nil {
				b.Fatal(err)
			}
		}
		if err := stream.Flush(); err != nil {
			b.Fatal(err)
		}
	}
	if _, err := file.WriteToBuffer(); err != nil {
		b.Fatal(err)
	}
}
