package workbook_test

import (
	"archive/zip"
	"bytes"
	"fmt"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"swardbook/planner"
)

// planted is a fault put into one cell of a workbook on purpose.
type planted struct {
	name  string
	sheet string
	where func(gridCell) bool // of the first such cell of the sheet
	// change is made to the cell as the file spells it.
	old, new string              // in its formula
	value    func(string) string // of its cached value
	kind     string              // of its cached value, as the file spells it
}

func formulaWith(text string) func(gridCell) bool {
	return func(cell gridCell) bool { return strings.Contains(cell.formula, text) && cell.text != "" }
}

// littleMore is a number just far enough off to be wrong.
func littleMore(value string) string {
	number, _ := strconv.ParseFloat(value, 64)
	return strconv.FormatFloat(number+2e-9, 'g', 15, 64)
}

// faults are the kinds of faults that recalculating must catch.
func faults(dates map[int]bool) []planted {
	addDay := func(value string) string {
		day, _ := strconv.ParseFloat(value, 64)
		return fmt.Sprint(day + 1)
	}
	date := func(cell gridCell) bool {
		_, number := cell.number()
		return cell.formula != "" && dates[cell.style] && number
	}
	return []planted{
		{name: "cached number", sheet: "days", where: formulaWith("(B4+C4)/2"), value: func(string) string { return "77.25" }},
		{name: "cached number, little off", sheet: "days", where: formulaWith("SUMIFS("), value: littleMore},
		{name: "cached date on the first sheet", sheet: "week", where: date, value: addDay},
		{name: "cached date of the works", sheet: "works and log", where: date, value: addDay},
		{name: "cached text", sheet: "week", where: func(cell gridCell) bool { return cell.formula != "" && cell.kind == "text" }, value: func(string) string { return "pitch work z; " }},
		{name: "cached truth", sheet: "works and log", where: func(cell gridCell) bool { return cell.kind == "bool" && cell.text == "0" }, value: func(string) string { return "1" }},
		{name: "number cached as text", sheet: "days", where: formulaWith("EXP("), kind: "str"},
		{name: "mean formula", sheet: "days", where: formulaWith(")/2,\"\")"), old: ")/2,", new: ")/3,"},
		{name: "growth formula", sheet: "days", where: formulaWith("EXP("), old: "EXP(-0.5*", new: "EXP(-0.4*"},
		{name: "optimum of another grass", sheet: "days", where: formulaWith("in_s1_t1_optimum"), old: "in_s1_t1_optimum", new: "in_s2_t1_optimum"},
		{name: "sine formula", sheet: "days", where: formulaWith("ACOS("), old: "ACOS(", new: "ASIN("},
		{name: "days of another month", sheet: "days", where: formulaWith("EOMONTH("), old: ",0))", new: ",1))"},
		{name: "running total", sheet: "days", where: func(cell gridCell) bool { return strings.Contains(cell.formula, "SUMIFS(d_w1_") && len(cell.text) > 3 }, old: "&lt;=", new: "&lt;"},
		{name: "total of the works", sheet: "works and log", where: formulaWith("SUMIFS(d_w1_"), old: "&lt;", new: "&lt;="},
		{name: "passage on the path", sheet: "works and log", where: formulaWith("d_w1_hourly_total"), old: "d_w1_hourly_total", new: "d_w1_midrange_total"},
		{name: "early date read off the late curve", sheet: "works and log", where: formulaWith("d_w1_hourly_early"), old: "d_w1_hourly_early", new: "d_w1_hourly_late"},
		{name: "week lookup, the day after", sheet: "week", where: formulaWith("INDEX(d_high,MATCH("), old: ",d_date,0", new: "+1,d_date,0"},
		{name: "week lookup, another column", sheet: "week", where: formulaWith("INDEX(d_low,MATCH("), old: "INDEX(d_low", new: "INDEX(d_high"},
		{name: "key number of another work", sheet: "week", where: formulaWith("'works and log'!K"), old: "!K", new: "!L"},
		{name: "means compared", sheet: "means compared", where: formulaWith("AVERAGE("), old: "AVERAGE(", new: "MAX("},
		{name: "nitrogen left", sheet: "nitrogen", where: func(cell gridCell) bool { return cell.formula != "" && len(cell.text) > 3 }, value: littleMore},
	}
}

// plant puts the fault into a copy of the workbook, and says where.
func plant(t *testing.T, content []byte, g grid, fault planted) (book []byte, at string) {
	t.Helper()
	cell := ""
	for _, name := range g.order[fault.sheet] {
		if fault.where(g.at(fault.sheet, name)) {
			cell = name
			break
		}
	}
	spelled := regexp.MustCompile(`(?s)<c [^>]*\br="` + cell + `"[^>]*>.*?</c>`)
	value := regexp.MustCompile(`(<v>)([^<]*)(</v>)`)
	var out bytes.Buffer
	writer := zip.NewWriter(&out)
	changed := false
	for name, text := range parts(t, content) {
		if name == g.part[fault.sheet] && cell != "" {
			before := string(spelled.Find(text))
			after := before
			if fault.old != "" {
				after = strings.ReplaceAll(after, fault.old, fault.new)
			}
			if fault.value != nil {
				parts := value.FindStringSubmatch(after)
				if parts == nil {
					t.Fatalf("%s: no value in %s", fault.name, after)
				}
				after = strings.Replace(after, parts[0], parts[1]+fault.value(parts[2])+parts[3], 1)
			}
			if fault.kind != "" {
				after = strings.Replace(after, "<c ", `<c t="`+fault.kind+`" `, 1)
			}
			changed = before != after
			text = bytes.Replace(text, []byte(before), []byte(after), 1)
		}
		to, err := writer.Create(name)
		if err != nil {
			t.Fatal(err)
		}
		if _, err := to.Write(text); err != nil {
			t.Fatal(err)
		}
	}
	if err := writer.Close(); err != nil || !changed {
		t.Fatalf("%s: the fault was not planted in %s!%s: %v", fault.name, fault.sheet, cell, err)
	}
	return out.Bytes(), fault.sheet + "!" + cell
}

// Wrong cached values and wrong formulas, planted on purpose, are each caught,
// and in the cell that they were planted in; the sound copy has none.
func TestPlantedFaultsAreCaught(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("recalculates in LibreOffice with SWARDBOOK_SLOW=1")
	}
	t.Parallel()
	plan := edited(planner.Celsius, false)
	plan.Works = slices.DeleteFunc(plan.Works, func(work planner.Work) bool { return work.ID > feedWork || work.ID == growthWork })
	plan.Outlook.Path, plan.Outlook.Members = plan.Outlook.Path[:50], plan.Outlook.Members[:3]
	for i := range plan.Outlook.Members {
		plan.Outlook.Members[i] = plan.Outlook.Members[i][:50]
	}
	sound := build(t, plan)
	g := gridOf(t, sound)
	books, places := [][]byte{sound}, []string{""}
	kinds := faults(g.dates)
	for _, fault := range kinds {
		book, at := plant(t, sound, g, fault)
		books, places = append(books, book), append(places, at)
	}
	for i, computed := range recalculated(t, books) {
		found, cells := differences(t, books[i], computed)
		if i == 0 {
			if len(found) > 0 || cells < 500 {
				t.Errorf("the sound copy has %d faults in %d formula cells: %q", len(found), cells, found)
			}
			continue
		}
		if !slices.ContainsFunc(found, func(fault string) bool { return strings.HasPrefix(fault, places[i]+":") }) {
			t.Errorf("a wrong %s in %s was not caught", kinds[i-1].name, places[i])
		}
	}
}
