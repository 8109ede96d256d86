package workbook_test

import (
	"bytes"
	"fmt"
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

// Ids and names are where a returned sheet is read from.
func TestWhatNamesTheBook(t *testing.T) {
	content := build(t, edited(planner.Celsius, false))
	file, g := open(t, content), gridOf(t, content)
	for name, refers := range g.names {
		if strings.Contains(refers, "#REF") {
			t.Errorf("%s refers to %s", name, refers)
		}
	}
	for _, want := range []string{"wb_id", "wb_asof", "d_date", "d_high", "d_low", "d_mean", "in_w1_base", "in_w1_target", "in_w1_last", "in_w1_gap", "in_w2_upper",
		"in_s1_t2_optimum", "in_s1_t2_width", "in_s1_t2_ceiling", "log_date", "log_quick", "log_slow", "log_days"} {
		if g.names[want] == "" {
			t.Errorf("there is no name %s", want)
		}
	}
	const id = "swardbook-sheet-7-form-1"
	if sheet, cell := g.named(t, "wb_id"); g.at(sheet, cell).text != id {
		t.Errorf("wb_id holds %q", g.at(sheet, cell).text)
	}
	if props, err := file.GetDocProps(); err != nil || props.Identifier != id {
		t.Errorf("identifier %v, %v", props, err)
	}
	if props, err := file.GetCustomProps(); err != nil || len(props) != 1 || props[0].Value != id {
		t.Errorf("custom properties %v, %v", props, err)
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
