package workbook_test

import (
	"fmt"
	"runtime"
	"runtime/debug"
	"runtime/metrics"
	"strconv"
	"testing"
	"time"

	"github.com/xuri/excelize/v2"

	"swardbook/calc"
	"swardbook/planner"
	"swardbook/planner/workbook"
)

// seasonInput is a season's sheet: twelve works last done so many days ago, eight
// weeks, both means, ten members.
func seasonInput(tb testing.TB, ago planner.Day) workbook.Input {
	tb.Helper()
	plan := edited(planner.Celsius, false)
	plan.Log = nil
	asOf := plan.AsOf
	plan.Record.Facts = nil
	for day := asOf - ago - 10; day < asOf; day++ {
		low := float64((day%17)+(day%5)) / 2
		plan.Record.Facts = append(plan.Record.Facts, planner.DayFacts{Day: day, HasExtremes: true, LowC: low, HighC: low + 8 + float64(day%7)/2,
			HasHourly: true, HourlyC: low + 4.3, ExtremesFrom: planner.FromStation})
	}
	mean := planner.Counting{Counts: planner.ByDegreeDays, Method: calc.MethodMean}
	countings := []planner.WorkSettings{
		{Counting: mean, Target: 200}, {Counting: mean, Target: 2500}, {Counting: mean, Target: 1800},
		{Counting: planner.Counting{Counts: planner.ByGrowthDays}, Target: 40}, {Counting: planner.Counting{Counts: planner.ByGrowthDays}, Target: 90},
		{Counting: planner.Counting{Counts: planner.ByNitrogen}, Target: 0.2}, {Counting: planner.Counting{Counts: planner.ByNitrogen}, Target: 0},
		{Counting: planner.Counting{Counts: planner.ByDays}, Target: 220}, {Counting: planner.Counting{Counts: planner.ByDays}, Target: 14},
		{Counting: planner.Counting{Counts: planner.ByDegreeDays, Method: calc.MethodSingleSine, Thresholds: calc.Thresholds{LowerC: 5, UpperC: 25, Cutoff: calc.CutoffHorizontal}}, Target: 900},
		{Counting: planner.Counting{Counts: planner.ByDegreeDays, Method: calc.MethodDoubleSine, Thresholds: calc.Thresholds{LowerC: 5}}, Target: 1000},
		{Counting: planner.Counting{Counts: planner.ByDegreeDays, Method: calc.MethodSingleTriangle, Thresholds: calc.Thresholds{LowerC: 10}}, Target: 500},
	}
	plan.Works = nil
	for i, settings := range countings {
		id := planner.WorkID(i + 1)
		settings.Basis = planner.Hourly
		plan.Works = append(plan.Works, planner.Work{ID: id, Surface: planner.SurfaceID(1 + i%2), Name: fmt.Sprintf("work %d", id), Settings: planner.Always(settings)})
		entry := planner.Entry{ID: planner.EntryID(id), Site: 1, Day: asOf - ago + planner.Day(i%3), Passes: []planner.Pass{{Work: id}}}
		if settings.Counts == planner.ByNitrogen {
			entry.Passes[0].NitrogenGM2, entry.Passes[0].SlowShare, entry.Passes[0].SlowWeeks = 4.5, 0.5, 12
		}
		plan.Log = append(plan.Log, entry)
	}
	return inputOf(tb, plan, 8)
}

// BenchmarkSeason writes a season's sheet with 12 works, and beside it in the
// same turn a bare StreamWriter writes the same cells; "ratio" is the sheet's
// time over the bare writer's. With two seasons memory must grow as the cells do.
func BenchmarkSeason(b *testing.B) {
	for _, size := range []struct {
		name string
		ago  planner.Day
	}{{"one", 200}, {"two", 398}} {
		input := seasonInput(b, size.ago)
		content, err := workbook.Build(input)
		if err != nil {
			b.Fatal(err)
		}
		bare := bareOf(b, content)
		b.Run(size.name, func(b *testing.B) {
			var ours, theirs time.Duration
			var before, after runtime.MemStats
			allocated := uint64(0)
			for b.Loop() {
				runtime.GC()
				runtime.ReadMemStats(&before)
				start := time.Now()
				if _, err := workbook.Build(input); err != nil {
					b.Fatal(err)
				}
				ours += time.Since(start)
				runtime.ReadMemStats(&after)
				allocated += after.TotalAlloc - before.TotalAlloc
				runtime.GC()
				start = time.Now()
				bare.write(b)
				theirs += time.Since(start)
			}
			b.ReportMetric(float64(ours)/float64(theirs), "ratio")
			b.ReportMetric(float64(ours.Milliseconds())/float64(b.N), "ms/sheet")
			b.ReportMetric(float64(bare.cells), "cells")
			b.ReportMetric(float64(allocated)/float64(b.N)/1e6, "MB/sheet")
			b.ReportMetric(float64(peakHeap(func() {
				if _, err := workbook.Build(input); err != nil {
					b.Fatal(err)
				}
			}))/1e6, "peakMB")
		})
	}
}

// peakHeap is the most that lives on the heap while the work runs, over what
// lived before, with the collector running often.
func peakHeap(work func()) uint64 {
	defer debug.SetGCPercent(debug.SetGCPercent(10))
	runtime.GC()
	sample := []metrics.Sample{{Name: "/memory/classes/heap/objects:bytes"}}
	read := func() uint64 { metrics.Read(sample); return sample[0].Value.Uint64() }
	start, most, done, ended := read(), uint64(0), make(chan struct{}), make(chan struct{})
	go func() {
		defer close(ended)
		for {
			select {
			case <-done:
				return
			case <-time.After(200 * time.Microsecond):
				most = max(most, read())
			}
		}
	}()
	work()
	close(done)
	<-ended
	return most - min(start, most)
}

// bareBook are the cells of a workbook as a StreamWriter takes them.
type bareBook struct {
	sheets []string
	rows   map[string][][]any
	styles int
	cells  int
}

func bareOf(b *testing.B, content []byte) bareBook {
	g := gridOf(b, content)
	bare := bareBook{sheets: g.sheets, rows: map[string][][]any{}}
	for _, sheet := range g.sheets {
		for _, name := range g.order[sheet] {
			read := g.at(sheet, name)
			column, row, err := excelize.CellNameToCoordinates(name)
			if err != nil {
				b.Fatal(err)
			}
			cell := excelize.Cell{StyleID: read.style, Formula: read.formula, Value: read.text}
			switch read.kind {
			case "number":
				cell.Value, _ = strconv.ParseFloat(read.text, 64)
			case "bool":
				cell.Value = read.text == "1"
			}
			for len(bare.rows[sheet]) < row {
				bare.rows[sheet] = append(bare.rows[sheet], nil)
			}
			at := &bare.rows[sheet][row-1]
			for len(*at) < column-1 {
				*at = append(*at, nil)
			}
			*at = append(*at, cell)
			bare.styles, bare.cells = max(bare.styles, read.style), bare.cells+1
		}
	}
	return bare
}

// write is the least that writes the cells: sheets, as many styles, rows.
func (bare bareBook) write(b *testing.B) {
	file := excelize.NewFile()
	defer file.Close()
	for i := range bare.styles {
		if _, err := file.NewStyle(&excelize.Style{Font: &excelize.Font{Size: float64(8 + i)}}); err != nil {
			b.Fatal(err)
		}
	}
	for i, sheet := range bare.sheets {
		if i == 0 {
			if err := file.SetSheetName("Sheet1", sheet); err != nil {
				b.Fatal(err)
			}
		} else if _, err := file.NewSheet(sheet); err != nil {
			b.Fatal(err)
		}
	}
	for _, sheet := range bare.sheets {
		stream, err := file.NewStreamWriter(sheet)
		if err != nil {
			b.Fatal(err)
		}
		for r, row := range bare.rows[sheet] {
			if row == nil {
				continue
			}
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
