package calc_test

import (
	"encoding/csv"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"testing"

	"pgregory.net/rapid"

	"swardbook/calc"
)

// Tolerances against values computed at 50 digits and written with 12: relative,
// and absolute where the value is 0.
const (
	relative = 1e-9
	absolute = 1e-12
)

var (
	nan      = math.NaN()
	infinity = math.Inf(1)
)

// agrees reports whether got is want within 1e-9 relative.
func agrees(got, want float64) bool {
	return math.Abs(got-want) <= relative*math.Abs(want)+absolute
}

// within reports whether got is want within an absolute tolerance.
func within(got, want, tolerance float64) bool { return math.Abs(got-want) <= tolerance }

// must returns the value of a call that may not fail.
func must[T any](value T, err error) T {
	if err != nil {
		panic(fmt.Sprintf("unexpected error: %v", err))
	}
	return value
}

// checkError demands an error of a kind, with a number of 0 beside it.
func checkError(t *testing.T, got float64, err, want error) {
	t.Helper()
	if !errors.Is(err, want) {
		t.Errorf("error %v, want %v", err, want)
	}
	if got != 0 {
		t.Errorf("%g beside an error, want 0", got)
	}
}

// reference reads a CSV of testdata/calc as one map a row, keyed by the header.
func reference(t *testing.T, name string, wantRows int) []map[string]string {
	t.Helper()
	file, err := os.Open(filepath.Join("..", "testdata", "calc", name))
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	records, err := csv.NewReader(file).ReadAll()
	if err != nil {
		t.Fatalf("read %s: %v", name, err)
	}
	var rows []map[string]string
	for _, record := range records[1:] {
		row := make(map[string]string)
		for i, field := range record {
			row[records[0][i]] = field
		}
		rows = append(rows, row)
	}
	if len(rows) != wantRows {
		t.Fatalf("%s has %d rows, want %d", name, len(rows), wantRows)
	}
	return rows
}

// number reads one field of a reference row.
func number(t *testing.T, row map[string]string, column string) float64 {
	t.Helper()
	value, err := strconv.ParseFloat(row[column], 64)
	if err != nil {
		t.Fatalf("row %v, column %s: %v", row, column, err)
	}
	return value
}

// day is a high, a low and a next low, which may lie above the high.
type day struct{ highC, lowC, nextLowC float64 }

// drawDay draws a day between −40 and 60 °C, one in eight of a single temperature.
func drawDay(t *rapid.T) day {
	lowC := rapid.Float64Range(-40, 60).Draw(t, "low")
	highC := lowC
	if rapid.IntRange(0, 7).Draw(t, "flat") > 0 {
		highC = rapid.Float64Range(lowC, 60).Draw(t, "high")
	}
	return day{highC: highC, lowC: lowC, nextLowC: rapid.Float64Range(-40, 60).Draw(t, "next low")}
}

// drawThresholds draws thresholds with a given cutoff.
func drawThresholds(t *rapid.T, cutoff calc.Cutoff) calc.Thresholds {
	lowerC := rapid.Float64Range(-20, 40).Draw(t, "lower")
	return calc.Thresholds{
		LowerC: lowerC,
		UpperC: lowerC + rapid.Float64Range(0.01, 40).Draw(t, "span"),
		Cutoff: cutoff,
	}
}

// onExtremes computes a method that stands on extremes.
func onExtremes(m calc.Method, d day, th calc.Thresholds) (float64, error) {
	switch m {
	case calc.MethodFlooredExtremes:
		return calc.DegreeDaysFlooredExtremes(d.highC, d.lowC, th)
	case calc.MethodFourCase:
		return calc.DegreeDaysFourCase(d.highC, d.lowC, th)
	case calc.MethodSingleTriangle:
		return calc.DegreeDaysSingleTriangle(d.highC, d.lowC, th)
	case calc.MethodDoubleTriangle:
		return calc.DegreeDaysDoubleTriangle(d.highC, d.lowC, d.nextLowC, th)
	case calc.MethodSingleSine:
		return calc.DegreeDaysSingleSine(d.highC, d.lowC, th)
	case calc.MethodDoubleSine:
		return calc.DegreeDaysDoubleSine(d.highC, d.lowC, d.nextLowC, th)
	}
	return 0, fmt.Errorf("method %s does not stand on extremes", m)
}

// anyMethod computes any method for a day: the mean is the midrange, the hours
// are the low and the high.
func anyMethod(m calc.Method, d day, th calc.Thresholds) (float64, error) {
	switch m {
	case calc.MethodMean:
		return calc.DegreeDaysFromMean((d.highC+d.lowC)/2, th)
	case calc.MethodDegreeHours:
		return calc.DegreeDaysFromHours([]float64{d.lowC, d.highC}, th)
	}
	return onExtremes(m, d, th)
}

// short writes a number with at most two decimals and no trailing zeros, as the
// catalogue does; a percentage in whole numbers.
func short(value float64) string {
	if value > 40 {
		return strconv.FormatFloat(value, 'f', 0, 64)
	}
	return strconv.FormatFloat(math.Round(value*100)/100, 'f', -1, 64)
}
