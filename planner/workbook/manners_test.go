package workbook_test

import (
	"encoding/xml"
	"fmt"
	"reflect"
	"regexp"
	"slices"
	"strings"
	"testing"
	"unicode/utf16"

	"github.com/xuri/excelize/v2"

	"swardbook/planner"
	"swardbook/planner/workbook"
)

// Limits of the office programs: Excel's own messages of data validation take a
// title of 32 characters, a prompt of 255 and an error of 225, a header 255
// ("Excel specifications and limits", support.microsoft.com; ECMA-376 part 1,
// 18.3.1.32); a formula takes 8192, a text in it 255.
const (
	longestTitle   = 32
	longestPrompt  = 255
	longestError   = 224
	longestHeader  = 255
	longestFormula = 8192
	longestLiteral = 255
	longestCell    = 32767
)

func characters(text string) int { return len(utf16.Encode([]rune(text))) }

// sheetManners is what a sheet says about itself beside its cells.
type sheetManners struct {
	Panes []struct {
		State string `xml:"state,attr"`
	} `xml:"sheetViews>sheetView>pane"`
	Protection *struct {
		Attributes []xml.Attr `xml:",any,attr"`
	} `xml:"sheetProtection"`
	Rules []struct {
		Cells       string `xml:"sqref,attr"`
		ShowError   string `xml:"showErrorMessage,attr"`
		ShowPrompt  string `xml:"showInputMessage,attr"`
		ErrorTitle  string `xml:"errorTitle,attr"`
		Error       string `xml:"error,attr"`
		PromptTitle string `xml:"promptTitle,attr"`
		Prompt      string `xml:"prompt,attr"`
	} `xml:"dataValidations>dataValidation"`
	Header string `xml:"headerFooter>oddHeader"`
	Footer string `xml:"headerFooter>oddFooter"`
}

func mannersOf(t *testing.T, content []byte, g grid) map[string]sheetManners {
	t.Helper()
	all, read := parts(t, content), map[string]sheetManners{}
	for _, sheet := range g.sheets {
		var manners sheetManners
		if err := xml.Unmarshal(all[g.part[sheet]], &manners); err != nil {
			t.Fatal(err)
		}
		read[sheet] = manners
	}
	return read
}

// look is what a cell style says of locks and frames.
type look struct {
	locked, filled bool
	frame          string
}

// looksOf are the cell styles of a book.
func looksOf(t *testing.T, content []byte) []look {
	t.Helper()
	var styles struct {
		Fills []struct {
			Pattern struct {
				Type string `xml:"patternType,attr"`
			} `xml:"patternFill"`
		} `xml:"fills>fill"`
		Borders []struct {
			Sides []struct {
				XMLName xml.Name
				Style   string `xml:"style,attr"`
			} `xml:",any"`
		} `xml:"borders>border"`
		Cells []struct {
			Fill       int `xml:"fillId,attr"`
			Border     int `xml:"borderId,attr"`
			Protection *struct {
				Locked string `xml:"locked,attr"`
			} `xml:"protection"`
		} `xml:"cellXfs>xf"`
	}
	if err := xml.Unmarshal(parts(t, content)["xl/styles.xml"], &styles); err != nil {
		t.Fatal(err)
	}
	var looks []look
	for _, cell := range styles.Cells {
		l := look{locked: cell.Protection == nil || cell.Protection.Locked != "0" && cell.Protection.Locked != "false", filled: styles.Fills[cell.Fill].Pattern.Type == "solid"}
		for _, side := range styles.Borders[cell.Border].Sides {
			if side.Style != "" {
				l.frame += side.XMLName.Local + " " + side.Style + ";"
			}
		}
		looks = append(looks, l)
	}
	return looks
}

// Every sheet is protected without a password, and cells can be selected; its
// heads stand still; its header and footer fit.
func TestMannersOfTheSheets(t *testing.T) {
	for _, input := range []workbook.Input{inputOf(t, edited(planner.Celsius, true), 1), randomInput(t, 3)} {
		content := written(t, input)
		g := gridOf(t, content)
		for sheet, manners := range mannersOf(t, content, g) {
			if manners.Protection == nil {
				t.Fatalf("%s is not protected", sheet)
			}
			set := map[string]string{}
			for _, attribute := range manners.Protection.Attributes {
				set[attribute.Name.Local] = attribute.Value
			}
			if on := set["sheet"]; on != "1" && on != "true" {
				t.Errorf("%s is not protected: %v", sheet, set)
			}
			for _, secret := range []string{"password", "hashValue", "saltValue", "algorithmName"} {
				if set[secret] != "" {
					t.Errorf("%s is protected by a password: %v", sheet, set)
				}
			}
			for _, barred := range []string{"selectLockedCells", "selectUnlockedCells"} {
				if set[barred] == "1" || set[barred] == "true" {
					t.Errorf("%s: no cell can be selected: %v", sheet, set)
				}
			}
			if frozen := len(manners.Panes) == 1 && manners.Panes[0].State == "frozen"; !frozen && slices.Contains([]string{"week", "days", "means compared", "curves"}, sheet) {
				t.Errorf("the heads of %s do not stand still", sheet)
			}
			for what, text := range map[string]string{"header": manners.Header, "footer": manners.Footer} {
				if text == "" || characters(text) > longestHeader {
					t.Errorf("%s: a %s of %d characters", sheet, what, characters(text))
				}
			}
			if !strings.Contains(manners.Header, "&L"+strings.ReplaceAll(input.Plan.Site.Name, "&", "&&")+"&C") || !strings.Contains(manners.Header, input.Plan.AsOf.String()) ||
				!strings.Contains(manners.Footer, input.Outlook().String()) {
				t.Errorf("%s: header %q, footer %q", sheet, manners.Header, manners.Footer)
			}
		}
	}
}

// A site's name of any length, with signs that headers read as codes, gives a
// header that fits, and no sign of it is read as a code.
func TestLongNamesInHeaders(t *testing.T) {
	for _, name := range []string{strings.Repeat("Quill & mere ", 40), strings.Repeat("&", 300), "a" + strings.Repeat("&", 300), "&P&N&\"x\"&12", strings.Repeat("𝄞", 300)} {
		plan := edited(planner.Celsius, false)
		plan.Site.Name = name
		content := build(t, plan)
		g := gridOf(t, content)
		for sheet, manners := range mannersOf(t, content, g) {
			left, _, found := strings.Cut(strings.TrimPrefix(manners.Header, "&L"), "&C"+sheet)
			if !found || characters(manners.Header) > longestHeader {
				t.Fatalf("%s: header %q of %d characters", sheet, manners.Header, characters(manners.Header))
			}
			if shown := strings.ReplaceAll(left, "&&", ""); strings.Contains(shown, "&") {
				t.Errorf("%s: %q holds a code", sheet, left)
			}
		}
	}
}

// Every cell that is not locked takes one kind of thing only, and says so before
// and after, in words that the office programs can show.
func TestInputsSayWhatTheyTake(t *testing.T) {
	for _, input := range []workbook.Input{inputOf(t, edited(planner.Celsius, true), 1), inputOf(t, nastyPlan(), 2), randomInput(t, 1), randomInput(t, 2)} {
		content := written(t, input)
		g, looks := gridOf(t, content), looksOf(t, content)
		for sheet, manners := range mannersOf(t, content, g) {
			ruled := map[string]bool{}
			for _, rule := range manners.Rules {
				for _, cells := range strings.Fields(rule.Cells) {
					for _, cell := range cellsIn(t, cells) {
						ruled[cell] = true
					}
				}
				if rule.ShowError == "" || rule.ShowPrompt == "" || rule.Error == "" || rule.Prompt == "" || rule.ErrorTitle == "" || rule.PromptTitle == "" {
					t.Errorf("%s: the rule of %s is silent: %+v", sheet, rule.Cells, rule)
				}
				for text, longest := range map[string]int{rule.ErrorTitle: longestTitle, rule.PromptTitle: longestTitle, rule.Prompt: longestPrompt, rule.Error: longestError} {
					if characters(text) > longest {
						t.Errorf("%s: %q has %d characters of %d", sheet, text, characters(text), longest)
					}
				}
			}
			for _, name := range g.order[sheet] {
				if cell := g.at(sheet, name); !looks[cell.style].locked && !ruled[name] {
					t.Fatalf("%s!%s is not locked and takes anything", sheet, name)
				}
			}
		}
	}
}

// cellsIn are the names of the cells of a range.
func cellsIn(t *testing.T, cells string) (names []string) {
	t.Helper()
	from, to, isRange := strings.Cut(cells, ":")
	if !isRange {
		to = from
	}
	left, top, err := excelize.CellNameToCoordinates(from)
	if err != nil {
		t.Fatal(err)
	}
	right, bottom, err := excelize.CellNameToCoordinates(to)
	if err != nil {
		t.Fatal(err)
	}
	for column := left; column <= right; column++ {
		for row := top; row <= bottom; row++ {
			name, _ := excelize.CoordinatesToCellName(column, row)
			names = append(names, name)
		}
	}
	return names
}

// An unlocked cell is told by its frame too, not by its colour alone: no locked
// cell has the frame of an input.
func TestInputsAreFramed(t *testing.T) {
	content := build(t, edited(planner.Celsius, false))
	locked := map[string]bool{}
	looks := looksOf(t, content)
	for _, l := range looks {
		if l.locked {
			locked[l.frame] = true
		}
	}
	inputs := 0
	for i, l := range looks {
		if l.locked || !l.filled { // room to write by hand is empty and needs no mark
			continue
		}
		inputs++
		if strings.Count(l.frame, ";") < 4 || locked[l.frame] {
			t.Errorf("style %d is an input with the frame %q", i, l.frame)
		}
	}
	if inputs < 3 {
		t.Errorf("%d styles of inputs", inputs)
	}
}

// Names and notes that would be formulas, codes or markup are kept as texts.
func nasty() []string {
	return []string{"=1+1", "+1", "-2+3", "@x", "\ttab", "=HYPERLINK(\"http://127.0.0.1\",\"x\")", "'quoted", "a\x00b\x07c\x1bd", "bad \xff utf",
		"_x000D_", "<c>&amp;", "]]>", "line\nbreak\r\nagain", strings.Repeat("long note ", 30), strings.Repeat("=", 300), "é 𝄞 ☐", "1e5", "0012", "TRUE", "#REF!"}
}

// nastyPlan has such texts for every name that a user types.
func nastyPlan() planner.Plan {
	plan := edited(planner.Celsius, true)
	texts := nasty()
	plan.Site.Name = texts[0]
	for i := range plan.Surfaces {
		plan.Surfaces[i].Name = texts[i]
	}
	for i := range plan.Works {
		plan.Works[i].Name = texts[i+2]
	}
	for i, text := range texts {
		plan.Log = append(plan.Log, planner.Entry{ID: planner.EntryID(500 + i), Site: 1, Day: plan.AsOf - 1, By: texts[len(texts)-1-i], Note: text, Passes: []planner.Pass{{Work: daysWork}}})
	}
	for i, text := range texts[:6] {
		plan.Closed = append(plan.Closed, planner.Closed{ID: planner.ClosedID(i + 1), Site: 1, Name: text, From: plan.AsOf, To: plan.AsOf + 3})
	}
	return plan
}

// clean is a text as a file can hold it: what no XML may hold becomes a sign for
// it.
func clean(text string) string {
	text = strings.ToValidUTF8(text, "\uFFFD")
	return strings.Map(func(r rune) rune {
		if r < ' ' && r != '\t' && r != '\n' && r != '\r' {
			return '\uFFFD'
		}
		return r
	}, text)
}

// What a user typed never becomes a formula and never breaks the file.
func TestTypedTextStaysText(t *testing.T) {
	input := inputOf(t, nastyPlan(), 1)
	input.Ahead, input.Caution = nasty()[0], nasty()[5]
	content := written(t, input)
	g := gridOf(t, content)
	typedText := map[string]bool{}
	for _, text := range nasty() {
		typedText[clean(text)] = false
	}
	for _, sheet := range g.sheets {
		for _, name := range g.order[sheet] {
			cell := g.at(sheet, name)
			for _, text := range nasty() {
				if len(text) > 4 && strings.Contains(cell.formula, text) || cell.formula == strings.TrimPrefix(text, "=") {
					t.Errorf("%s!%s holds %q as a formula: %s", sheet, name, text, cell.formula)
				}
			}
			if _, is := typedText[cell.text]; is && cell.kind == "text" {
				typedText[cell.text] = true
			}
			if characters(cell.text) > longestCell {
				t.Errorf("%s!%s is %d characters long", sheet, name, characters(cell.text))
			}
		}
	}
	for text, found := range typedText {
		if !found {
			t.Errorf("no cell holds the text %q", text)
		}
	}
	// excelize opens it again.
	if got, err := open(t, content).GetCellValue("week", "A1"); err != nil || !strings.HasPrefix(got, "=1+1, ") {
		t.Errorf("the title reads %q, %v", got, err)
	}
}

// LibreOffice opens a book full of such texts, computes it to the same values,
// keeps the texts and the rows that every page repeats.
func TestLibreOfficeTakesTheBookAsItIs(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("opens in LibreOffice with SWARDBOOK_SLOW=1")
	}
	t.Parallel()
	content := build(t, nastyPlan())
	computed := recalculated(t, [][]byte{content})[0]
	if faults, _ := differences(t, content, computed); len(faults) > 0 {
		t.Errorf("%d faults: %q", len(faults), faults[:min(len(faults), 5)])
	}
	ours, theirs := gridOf(t, content), gridOf(t, computed)
	plain := func(text string) string { return strings.NewReplacer("\r", "", "\n", " ").Replace(text) }
	for _, sheet := range ours.sheets {
		for _, name := range ours.order[sheet] {
			if want := ours.at(sheet, name); want.kind == "text" && want.formula == "" && plain(theirs.at(sheet, name).text) != plain(want.text) {
				t.Errorf("%s!%s reads %q, was %q", sheet, name, theirs.at(sheet, name).text, want.text)
			}
		}
	}
	for name, refers := range ours.names {
		if strings.ReplaceAll(theirs.names[name], "'", "") != strings.ReplaceAll(refers, "'", "") {
			t.Errorf("the name %s refers to %q, was %q", name, theirs.names[name], refers)
		}
	}
	if titles := titlesOf(t, computed); len(titles) != 3 || !slices.Equal(titles, titlesOf(t, content)) {
		t.Errorf("the pages repeat %q, were to repeat %q", titles, titlesOf(t, content))
	}
}

// titlesOf are the rows and columns that every printed page repeats.
func titlesOf(t *testing.T, content []byte) []string {
	t.Helper()
	var titles []string
	for _, name := range open(t, content).GetDefinedName() {
		if name.Name == "_xlnm.Print_Titles" {
			refers := strings.NewReplacer("'", "", "$A:$A", "A", "$", "").Replace(name.RefersTo)
			titles = append(titles, name.Scope+" "+refers)
		}
	}
	slices.Sort(titles)
	return titles
}

// functions that compute the same in Excel from 2016, LibreOffice and Google
// Sheets, in every language and on every day, and need no array entry.
var functions = []string{"IF", "AND", "OR", "NOT", "ISNUMBER", "IFERROR", "COUNT", "COUNTIF", "COUNTIFS", "SUM", "SUMIF", "SUMIFS", "SUMPRODUCT", "AVERAGE", "STDEV",
	"MIN", "MAX", "LARGE", "ABS", "ROUND", "INT", "EXP", "SQRT", "ACOS", "PI", "DAY", "EOMONTH", "INDEX", "MATCH", "LEFT", "MID", "ISTEXT", "SIN", "REPT", "FIXED", "N", "CHOOSE", "LOOKUP"}

var (
	literal  = regexp.MustCompile(`"(?:[^"]|"")*"`)
	sheetRef = regexp.MustCompile(`'(?:[^']|'')*'!`)
	call     = regexp.MustCompile(`([A-Za-z_][A-Za-z0-9_.]*)\(`)
)

// No formula needs a newer program, a language, a clock or a wider cell.
func TestFormulasAreOrdinary(t *testing.T) {
	var inputs []workbook.Input
	for number := range uint64(6) { // all methods and cutoffs
		inputs = append(inputs, randomInput(t, number))
	}
	inputs = append(inputs, inputOf(t, nastyPlan(), 8), seasonInput(t, 200))
	checked, alike := map[string]bool{}, map[string]bool{}
	for _, input := range inputs {
		g := gridOf(t, written(t, input))
		for _, sheet := range g.sheets {
			for _, name := range g.order[sheet] {
				formula := g.at(sheet, name).formula
				if without := withoutDigits(formula); formula == "" || alike[without] {
					continue
				} else {
					alike[without] = true
				}
				if fault := unusual(formula, checked); fault != "" {
					t.Fatalf("%s!%s: %s in %s", sheet, name, fault, formula)
				}
			}
		}
	}
	for _, common := range []string{"IF", "SUMIFS", "SUMPRODUCT", "ACOS", "EXP", "INDEX", "EOMONTH", "STDEV"} {
		if !checked[common] {
			t.Errorf("no formula has %s: what was walked?", common)
		}
	}
}

// withoutDigits is the same for the formulas of two rows.
func withoutDigits(formula string) string {
	return strings.Map(func(r rune) rune {
		if r >= '0' && r <= '9' {
			return -1
		}
		return r
	}, formula)
}

// unusual says what is unusual in a formula; "" when nothing is.
func unusual(formula string, seen map[string]bool) string {
	if characters(formula) > longestFormula {
		return fmt.Sprintf("%d characters", characters(formula))
	}
	for _, text := range literal.FindAllString(formula, -1) {
		if characters(text) > longestLiteral {
			return "a text of " + fmt.Sprint(characters(text)) + " characters"
		}
	}
	bare := literal.ReplaceAllString(formula, `""`)
	if strings.HasPrefix(bare, "=") {
		return "a doubled equals sign"
	}
	bare = sheetRef.ReplaceAllString(bare, "")
	if at := strings.IndexAny(bare, "[]{}@#;!|`\\?"); at >= 0 {
		return fmt.Sprintf("the sign %q", bare[at])
	}
	for _, found := range call.FindAllStringSubmatch(bare, -1) {
		if !slices.Contains(functions, found[1]) {
			return "the function " + found[1]
		}
		seen[found[1]] = true
	}
	return ""
}

// The check of formulas refuses what it is there for.
func TestUnusualFormulasAreRefused(t *testing.T) {
	for _, formula := range []string{"TODAY()", "NOW()", "OFFSET(A1,1,1)", "INDIRECT(\"A1\")", "TEXT(A1,\"yyyy\")", "FILTER(A1:A2,B1:B2)", "_xlfn.XLOOKUP(1,A1:A2,B1:B2)",
		"LET(x,1,x)", "Table[Col]", "A1#", "@A1:A2", "{1,2}", "SUM(A1;A2)", "=A1", "HYPERLINK(\"x\")", "IF(A1," + "\"" + strings.Repeat("x", 256) + "\",1)", strings.Repeat("A1+", 3000)} {
		if unusual(formula, map[string]bool{}) == "" {
			t.Errorf("%.40s was taken", formula)
		}
	}
	if fault := unusual(`IF('works and log'!A1="a;b!","TODAY()",'week'!B2)`, map[string]bool{}); fault != "" {
		t.Error(fault)
	}
}

// Many works do not make a formula longer than a cell takes.
func TestSixtyWorks(t *testing.T) {
	plan := edited(planner.Celsius, false)
	plan.Works = nil
	for id := planner.WorkID(1); id <= 60; id++ {
		plan.Works = append(plan.Works, planner.Work{ID: id, Surface: planner.SurfaceID(1 + id%2), Name: fmt.Sprintf("work %d", id),
			Settings: planner.Always(planner.WorkSettings{Counting: planner.Counting{Counts: planner.ByDays}, Target: float64(10 + id)})})
		plan.Log = append(plan.Log, planner.Entry{ID: planner.EntryID(id), Site: 1, Day: plan.AsOf - 3, Passes: []planner.Pass{{Work: id}}})
	}
	g := gridOf(t, build(t, plan))
	for _, name := range g.order["week"] {
		if fault := unusual(g.at("week", name).formula, map[string]bool{}); fault != "" {
			t.Fatalf("week!%s: %s", name, fault)
		}
	}
}

// The same input gives the same cells, names and styles twice.
func TestTheSameBookTwice(t *testing.T) {
	for number := range uint64(3) {
		once, again := gridOf(t, written(t, randomInput(t, number))), gridOf(t, written(t, randomInput(t, number)))
		if !reflect.DeepEqual(once, again) {
			t.Errorf("plan %d gives two books", number)
		}
	}
}

// excelize opens the book again and finds its sheets; the first is shown, the
// curves are hidden.
func TestTheBookOpensAgain(t *testing.T) {
	file := open(t, build(t, edited(planner.Fahrenheit, true)))
	if file.GetActiveSheetIndex() != 0 || file.GetSheetName(0) != "week" {
		t.Errorf("%s is shown first", file.GetSheetName(file.GetActiveSheetIndex()))
	}
	if visible, err := file.GetSheetVisible("curves"); err != nil || visible {
		t.Errorf("the curves are shown: %v", err)
	}
	// Some readers trust the range that a sheet says it has.
	for _, sheet := range file.GetSheetList() {
		said, err := file.GetSheetDimension(sheet)
		if err != nil {
			t.Fatal(err)
		}
		rows, err := file.GetRows(sheet)
		if err != nil {
			t.Fatal(err)
		}
		_, to, _ := strings.Cut(said, ":")
		wide, high, err := excelize.CellNameToCoordinates(to)
		if err != nil {
			t.Fatalf("%s says %s: %v", sheet, said, err)
		}
		if high < len(rows) {
			t.Errorf("%s says %s and has %d rows", sheet, said, len(rows))
		}
		for i, row := range rows {
			if len(row) > wide {
				t.Errorf("%s says %s and has %d columns in row %d", sheet, said, len(row), i+1)
			}
		}
	}
}
