package workbook_test

import (
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"testing"
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
// workbook holds, and how many formula cells there are. Numbers agree to 1e-9,
// dates on the day, texts and truths to the letter; a number never stands for a
// text, and no formula may give an error.
func differences(t testing.TB, cached, computed []byte) (faults []string, cells int) {
	t.Helper()
	ours, theirs := gridOf(t, cached), gridOf(t, computed)
	for _, sheet := range ours.sheets {
		for _, name := range ours.order[sheet] {
			want := ours.at(sheet, name)
			if want.formula == "" {
				continue
			}
			cells++
			if got := theirs.at(sheet, name); got.formula == "" || !same(want, got, ours.dates[want.style]) {
				faults = append(faults, fmt.Sprintf("%s!%s: cached %s %q, computed %s %q, %s", sheet, name, want.kind, want.text, got.kind, got.text, want.formula))
			}
		}
	}
	return faults, cells
}

// same compares a cached value with a computed one.
func same(want, got gridCell, isDate bool) bool {
	x, isNumber := want.number()
	y, other := got.number()
	switch {
	case want.kind != got.kind || want.kind == "error" || isNumber != other:
		return false
	case !isNumber:
		return want.text == got.text
	case isDate:
		return x == math.Trunc(x) && x == y
	}
	return math.Abs(x-y) <= 1e-9*math.Max(1, math.Abs(x)/1000)
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
	t.Parallel()
	const batch = 20 // of one start of LibreOffice
	for first := 0; first < plans; first += batch {
		last := min(first+batch, plans) - 1
		t.Run(fmt.Sprintf("plans %d to %d", first, last), func(t *testing.T) {
			t.Parallel()
			recalculatePlans(t, first, last)
		})
	}
}

// recalculatePlans holds the books of random plans against LibreOffice.
func recalculatePlans(t *testing.T, first, last int) {
	t.Helper()
	var books [][]byte
	for number := first; number <= last; number++ {
		books = append(books, written(t, randomInput(t, uint64(number))))
	}
	for i, computed := range recalculated(t, books) {
		faults, cells := differences(t, books[i], computed)
		if cells < 500 {
			t.Errorf("plan %d: only %d formula cells", first+i, cells)
		}
		for _, fault := range faults[:min(len(faults), 4)] {
			t.Errorf("plan %d: %s", first+i, fault)
		}
		if len(faults) > 4 {
			t.Errorf("plan %d: %d faults more", first+i, len(faults)-4)
		}
	}
}
