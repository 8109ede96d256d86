package workbook_test

import (
	"archive/zip"
	"bytes"
	"encoding/xml"
	"errors"
	"io"
	"os"
	"strconv"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"
)

// A reader of workbooks for these tests alone: every cell as the file holds it,
// with its formula, its cached value and the type of that value.

// gridCell is one cell as a file holds it.
type gridCell struct {
	formula string
	text    string // of a number as the file spells it
	kind    string // number, text, bool or error; "" for an empty cell
	style   int
}

// isNumber reports whether the cell holds a number, and which.
func (c gridCell) number() (value float64, ok bool) {
	value, err := strconv.ParseFloat(c.text, 64)
	return value, err == nil && c.kind == "number"
}

// grid is a workbook's cells by sheet and by name, the sheets in order.
type grid struct {
	sheets []string
	part   map[string]string // the part that holds a sheet
	cells  map[string]map[string]gridCell
	order  map[string][]string // the names of a sheet's cells as they stand in the file
	names  map[string]string   // what defined names refer to
	dates  map[int]bool        // the styles that show dates
}

func (g grid) at(sheet, cell string) gridCell { return g.cells[sheet][cell] }

// named is the first cell of a defined name.
func (g grid) named(t testing.TB, name string) (sheet, cell string) {
	t.Helper()
	refers, ok := g.names[name]
	sheet, cell, cut := strings.Cut(refers, "!")
	if !ok || !cut {
		t.Fatalf("the name %s refers to %q", name, refers)
	}
	cell, _, _ = strings.Cut(strings.ReplaceAll(cell, "$", ""), ":")
	return strings.Trim(strings.TrimPrefix(sheet, "$"), "'"), cell
}

// parts are the files inside a workbook.
func parts(t testing.TB, content []byte) map[string][]byte {
	t.Helper()
	archive, err := zip.NewReader(bytes.NewReader(content), int64(len(content)))
	if err != nil {
		t.Fatal(err)
	}
	all := map[string][]byte{}
	for _, part := range archive.File {
		from, err := part.Open()
		if err != nil {
			t.Fatal(err)
		}
		text, err := io.ReadAll(from)
		if err != nil {
			t.Fatal(err)
		}
		all[part.Name] = text
	}
	return all
}

// gridOf reads a workbook.
func gridOf(t testing.TB, content []byte) grid {
	t.Helper()
	all := parts(t, content)
	decode := func(part string, into any) {
		text, ok := all[part]
		if !ok {
			return
		}
		if err := xml.Unmarshal(text, into); err != nil {
			t.Fatalf("%s: %v", part, err)
		}
	}
	var book struct {
		Sheets []struct {
			Name string `xml:"name,attr"`
			ID   string `xml:"http://schemas.openxmlformats.org/officeDocument/2006/relationships id,attr"`
		} `xml:"sheets>sheet"`
		Names []struct {
			Name  string `xml:"name,attr"`
			Scope string `xml:"localSheetId,attr"` // of a name of one sheet
			Text  string `xml:",chardata"`
		} `xml:"definedNames>definedName"`
	}
	var links struct {
		All []struct {
			ID     string `xml:"Id,attr"`
			Target string `xml:",attr"`
		} `xml:"Relationship"`
	}
	type runs struct {
		Text string `xml:"t"`
		Runs []struct {
			Text string `xml:"t"`
		} `xml:"r"`
	}
	var shared struct {
		Items []runs `xml:"si"`
	}
	decode("xl/workbook.xml", &book)
	decode("xl/_rels/workbook.xml.rels", &links)
	decode("xl/sharedStrings.xml", &shared)
	words := func(r runs) string {
		text := r.Text
		for _, run := range r.Runs {
			text += run.Text
		}
		return strings.ReplaceAll(text, "_x005F_", "_") // how a file spells a text that looks like an escape
	}
	g := grid{part: map[string]string{}, cells: map[string]map[string]gridCell{}, order: map[string][]string{}, names: map[string]string{}, dates: dateStyles(all["xl/styles.xml"])}
	for _, name := range book.Names {
		g.names[name.Name+name.Scope] = name.Text
	}
	target := map[string]string{}
	for _, link := range links.All {
		target[link.ID] = "xl/" + strings.TrimPrefix(strings.TrimPrefix(link.Target, "/xl/"), "xl/")
	}
	for _, sheet := range book.Sheets {
		var page struct {
			Cells []struct {
				Name    string  `xml:"r,attr"`
				Type    string  `xml:"t,attr"`
				Style   int     `xml:"s,attr"`
				Formula string  `xml:"f"`
				Value   *string `xml:"v"`
				Inline  *runs   `xml:"is"`
			} `xml:"sheetData>row>c"`
		}
		decode(target[sheet.ID], &page)
		g.sheets = append(g.sheets, sheet.Name)
		g.part[sheet.Name] = target[sheet.ID]
		g.cells[sheet.Name] = make(map[string]gridCell, len(page.Cells))
		for _, cell := range page.Cells {
			read := gridCell{formula: cell.Formula, style: cell.Style}
			switch {
			case cell.Inline != nil:
				read.kind, read.text = "text", words(*cell.Inline)
			case cell.Value == nil:
			case cell.Type == "s":
				at, err := strconv.Atoi(*cell.Value)
				if err != nil || at < 0 || at >= len(shared.Items) {
					t.Fatalf("%s!%s: no shared text %q", sheet.Name, cell.Name, *cell.Value)
				}
				read.kind, read.text = "text", words(shared.Items[at])
			default:
				read.text = *cell.Value
				read.kind = map[string]string{"": "number", "n": "number", "str": "text", "b": "bool", "e": "error"}[cell.Type]
			}
			if read.kind == "text" && read.text == "" {
				read.kind = ""
			}
			g.cells[sheet.Name][cell.Name] = read
			g.order[sheet.Name] = append(g.order[sheet.Name], cell.Name)
		}
	}
	return g
}

// dateStyles are the cell styles whose number format shows a date.
func dateStyles(text []byte) map[int]bool {
	var sheet struct {
		Formats []struct {
			ID   int    `xml:"numFmtId,attr"`
			Code string `xml:"formatCode,attr"`
		} `xml:"numFmts>numFmt"`
		Styles []struct {
			Format int `xml:"numFmtId,attr"`
		} `xml:"cellXfs>xf"`
	}
	_ = xml.Unmarshal(text, &sheet)
	codes, dates := map[int]bool{}, map[int]bool{}
	for _, format := range sheet.Formats {
		codes[format.ID] = strings.Contains(format.Code, "yy") || strings.Contains(format.Code, "mmm")
	}
	for i, style := range sheet.Styles {
		dates[i] = codes[style.Format]
	}
	return dates
}

// open opens a workbook with excelize.
func open(t testing.TB, content []byte) *excelize.File {
	t.Helper()
	file, err := excelize.OpenReader(bytes.NewReader(content))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		if err := file.Close(); err != nil && !errors.Is(err, os.ErrNotExist) {
			t.Error(err)
		}
	})
	return file
}

// columnOf is the letters of a cell's name, rowNumber its number.
func columnOf(cell string) string { return strings.TrimRight(cell, "0123456789") }

func rowNumber(cell string) int {
	row, _ := strconv.Atoi(strings.TrimLeft(cell, "ABCDEFGHIJKLMNOPQRSTUVWXYZ"))
	return row
}

// headed is the column of a sheet whose cell in the row reads so.
func (g grid) headed(t testing.TB, sheet string, row int, head string) string {
	t.Helper()
	for _, name := range g.order[sheet] {
		if rowNumber(name) == row && g.at(sheet, name).text == head {
			return columnOf(name)
		}
	}
	t.Fatalf("no column of %s is headed %q in row %d", sheet, head, row)
	return ""
}

// rowThat is the first row of a sheet whose first cell reads so.
func (g grid) rowThat(t testing.TB, sheet, reads string) int {
	t.Helper()
	for _, name := range g.order[sheet] {
		if columnOf(name) == "A" && g.at(sheet, name).text == reads {
			return rowNumber(name)
		}
	}
	t.Fatalf("no row of %s begins with %q", sheet, reads)
	return 0
}

// The reader itself: a small workbook made by excelize reads as it was written.
func TestReaderOfTheTests(t *testing.T) {
	file := excelize.NewFile()
	stream, err := file.NewStreamWriter("Sheet1")
	if err != nil {
		t.Fatal(err)
	}
	if err := stream.SetRow("A1", []any{1.5, "a & b", excelize.Cell{Formula: "A1*2", Value: 3.0}, excelize.Cell{Formula: `A1&""`, Value: "1.5"}, excelize.Cell{Formula: "A1>1", Value: true}}); err != nil {
		t.Fatal(err)
	}
	if err := stream.Flush(); err != nil {
		t.Fatal(err)
	}
	if err := file.SetDefinedName(&excelize.DefinedName{Name: "one", RefersTo: "'Sheet1'!$A$1:$B$1"}); err != nil {
		t.Fatal(err)
	}
	buffer, err := file.WriteToBuffer()
	if err != nil {
		t.Fatal(err)
	}
	g := gridOf(t, buffer.Bytes())
	for name, want := range map[string]gridCell{
		"A1": {text: "1.5", kind: "number"}, "B1": {text: "a & b", kind: "text"}, "C1": {formula: "A1*2", text: "3", kind: "number"},
		"D1": {formula: `A1&""`, text: "1.5", kind: "text"}, "E1": {formula: "A1>1", text: "1", kind: "bool"}, "F1": {},
	} {
		if got := g.at("Sheet1", name); got != want {
			t.Errorf("%s is %+v, want %+v", name, got, want)
		}
	}
	if sheet, cell := g.named(t, "one"); sheet != "Sheet1" || cell != "A1" {
		t.Errorf("the name stands at %s!%s", sheet, cell)
	}
}
