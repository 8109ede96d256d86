package workbook_test

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"
)

// LibreOffice recalculates every formula from scratch; it is the reference that
// the cached values are held against.

// alwaysRecalculate is the profile setting under which LibreOffice computes
// every formula when it opens a file.
const alwaysRecalculate = `<?xml version="1.0" encoding="UTF-8"?>
<oor:items xmlns:oor="http://openoffice.org/2001/registry" xmlns:xs="http://www.w3.org/2001/XMLSchema" xmlns:xsi="http://www.w3.org/2001/XMLSchema-instance">
<item oor:path="/org.openoffice.Office.Calc/Formula/Load"><prop oor:name="OOXMLRecalcMode" oor:op="fuse"><value>0</value></prop></item>
</oor:items>
`

// recalculated are the workbooks as LibreOffice computes them.
func recalculated(t *testing.T, books [][]byte) [][]byte {
	t.Helper()
	office, err := exec.LookPath("soffice")
	if err != nil {
		t.Fatal("soffice is not installed: apt-get install libreoffice-calc-nogui")
	}
	dir := t.TempDir()
	profile, out := filepath.Join(dir, "profile"), filepath.Join(dir, "out")
	if err := os.MkdirAll(filepath.Join(profile, "user"), 0o755); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(profile, "user", "registrymodifications.xcu"), []byte(alwaysRecalculate), 0o644); err != nil {
		t.Fatal(err)
	}
	args := []string{"--headless", "--norestore", "-env:UserInstallation=file://" + profile, "--convert-to", "xlsx", "--outdir", out}
	for i, book := range books {
		path := filepath.Join(dir, fmt.Sprintf("book%d.xlsx", i))
		if err := os.WriteFile(path, book, 0o644); err != nil {
			t.Fatal(err)
		}
		args = append(args, path)
	}
	if text, err := exec.Command(office, args...).CombinedOutput(); err != nil {
		t.Fatalf("%v: %s", err, text)
	}
	var read [][]byte
	for i := range books {
		content, err := os.ReadFile(filepath.Join(out, fmt.Sprintf("book%d.xlsx", i)))
		if err != nil {
			t.Fatal(err)
		}
		read = append(read, content)
	}
	return read
}

// differences are the formula cells whose cached value is not what the other
// workbook holds, and how many formula cells there are.
func differences(t *testing.T, cached, computed []byte) (faults []string, cells int) {
	t.Helper()
	ours, theirs := open(t, cached), open(t, computed)
	for _, sheet := range ours.GetSheetList() {
		rows, err := ours.GetRows(sheet, excelize.Options{RawCellValue: true})
		if err != nil {
			t.Fatal(err)
		}
		for r := range rows {
			for c := range rows[r] {
				name, _ := excelize.CoordinatesToCellName(c+1, r+1)
				formula, err := ours.GetCellFormula(sheet, name)
				if err != nil {
					t.Fatal(err)
				}
				if formula == "" {
					continue
				}
				cells++
				got, err := theirs.GetCellValue(sheet, name, excelize.Options{RawCellValue: true})
				if err != nil {
					t.Fatal(err)
				}
				if want := rows[r][c]; !same(want, got) {
					faults = append(faults, fmt.Sprintf("%s!%s: cached %q, computed %q, %s", sheet, name, want, got, formula))
				}
			}
		}
	}
	return faults, cells
}

func same(a, b string) bool {
	x, errX := strconv.ParseFloat(a, 64)
	y, errY := strconv.ParseFloat(b, 64)
	if errX != nil || errY != nil {
		return a == b || truth(a) == truth(b) && truth(a) != ""
	}
	return math.Abs(x-y) <= 1e-9*math.Max(1, math.Abs(x)/1000)
}

func truth(text string) string {
	switch strings.ToLower(text) {
	case "0", "false":
		return "false"
	case "1", "true":
		return "true"
	}
	return ""
}

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

// slowPlans is how many plans are recalculated; 0 in an ordinary run.
func slowPlans() int {
	switch {
	case os.Getenv("SWARDBOOK_FULL") == "1":
		return 500
	case os.Getenv("SWARDBOOK_SLOW") == "1":
		return 60
	}
	return 0
}

func TestLibreOfficeRecalculatesTheSame(t *testing.T) {
	plans := slowPlans()
	if plans == 0 {
		t.Skip("recalculates in LibreOffice with SWARDBOOK_SLOW=1")
	}
	const batch = 20
	for first := 0; first < plans; first += batch {
		var books [][]byte
		for number := first; number < min(first+batch, plans); number++ {
			books = append(books, build(t, randomPlan(uint64(number))))
		}
		for i, computed := range recalculated(t, books) {
			faults, cells := differences(t, books[i], computed)
			if cells < 500 {
				t.Errorf("plan %d: only %d formula cells", first+i, cells)
			}
			for j, fault := range faults {
				if j < 4 {
					t.Errorf("plan %d: %s", first+i, fault)
				}
			}
		}
	}
}

// A wrong cached value and a wrong formula, planted on purpose, are each caught.
func TestPlantedFaultsAreCaught(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("recalculates in LibreOffice with SWARDBOOK_SLOW=1")
	}
	sound := build(t, randomPlan(2))
	for _, planted := range []struct{ name, old, new string }{
		{"formula", "(B3+C3)/2,", "(B3+C3)/3,"},
		{"cached value", "", ""},
	} {
		book := plant(t, sound, planted.old, planted.new)
		faults, _ := differences(t, book, recalculated(t, [][]byte{book})[0])
		if len(faults) == 0 {
			t.Errorf("a wrong %s was not caught", planted.name)
		}
	}
}
