package workbook_test

import (
	"archive/zip"
	"bytes"
	"encoding/xml"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"swardbook/calc"
	"swardbook/planner"
	"swardbook/planner/workbook"
)

// chartPart is a chart of a written file, read by its own parser.
type chartPart struct {
	Title cellText `xml:"chart>title>tx>strRef"`
	Areas []struct {
		Series []chartSeries `xml:"ser"`
	} `xml:"chart>plotArea>areaChart"`
	Bars []struct {
		Series []chartSeries `xml:"ser"`
	} `xml:"chart>plotArea>barChart"`
	Lines []struct {
		Series []chartSeries `xml:"ser"`
	} `xml:"chart>plotArea>lineChart"`
	AxisTitle cellText `xml:"chart>plotArea>valAx>title>tx>strRef"`
	Unseen    []struct {
		Index struct {
			Value int `xml:"val,attr"`
		} `xml:"idx"`
	} `xml:"chart>legend>legendEntry"`
}

type chartSeries struct {
	Index struct {
		Value int `xml:"val,attr"`
	} `xml:"idx"`
	Name  cellText  `xml:"tx>strRef"`
	Dates cellRange `xml:"cat>numRef"`
	Cells cellRange `xml:"val>numRef"`
	Line  struct {
		Width int `xml:"w,attr"`
		Fill  struct {
			Ink struct {
				Value string `xml:"val,attr"`
			} `xml:"srgbClr"`
		} `xml:"solidFill"`
		Dash struct {
			Value string `xml:"val,attr"`
		} `xml:"prstDash"`
	} `xml:"spPr>ln"`
}

type cellText struct {
	At   string `xml:"f"`
	Text string `xml:"strCache>pt>v"`
}

type cellRange struct {
	At    string `xml:"f"`
	Cache struct {
		Count struct {
			Value int `xml:"val,attr"`
		} `xml:"ptCount"`
		Points []struct {
			Index int    `xml:"idx,attr"`
			Text  string `xml:"v"`
		} `xml:"pt"`
	} `xml:"numCache"`
}

func (c chartPart) series() []chartSeries {
	var all []chartSeries
	for _, group := range [][]struct {
		Series []chartSeries `xml:"ser"`
	}{c.Areas, c.Bars, c.Lines} {
		for _, one := range group {
			all = append(all, one.Series...)
		}
	}
	return all
}

// chartsOf are the charts of a workbook in their order, and their alt texts.
func chartsOf(t *testing.T, content []byte) (charts []chartPart, alts []string) {
	t.Helper()
	archive, err := zip.NewReader(bytes.NewReader(content), int64(len(content)))
	if err != nil {
		t.Fatal(err)
	}
	parts := map[string][]byte{}
	for _, part := range archive.File {
		from, err := part.Open()
		if err != nil {
			t.Fatal(err)
		}
		text, err := io.ReadAll(from)
		if err != nil {
			t.Fatal(err)
		}
		if bytes.Contains(text, []byte("#REF!")) {
			t.Errorf("%s refers to nothing", part.Name)
		}
		parts[part.Name] = text
	}
	for n := 1; n <= 200; n++ { // LibreOffice numbers on from file to file
		part, ok := parts[fmt.Sprintf("xl/charts/chart%d.xml", n)]
		if !ok {
			continue
		}
		var chart chartPart
		if err := xml.Unmarshal(part, &chart); err != nil {
			t.Fatal(err)
		}
		charts = append(charts, chart)
	}
	var drawing struct {
		Frames []struct {
			Alt string `xml:"descr,attr"`
		} `xml:"twoCellAnchor>graphicFrame>nvGraphicFramePr>cNvPr"`
	}
	if part, ok := parts["xl/drawings/drawing1.xml"]; ok {
		if err := xml.Unmarshal(part, &drawing); err != nil {
			t.Fatal(err)
		}
	}
	for _, frame := range drawing.Frames {
		alts = append(alts, frame.Alt)
	}
	return charts, alts
}

// withSeasons adds season totals to the plan's input, on a record of years.
func withSeasons(t testing.TB, plan planner.Plan) workbook.Input {
	t.Helper()
	input := inputOf(t, plan, 1)
	older := plan
	older.Record.Facts = nil
	for day := plan.AsOf - 1200; day < plan.AsOf; day++ {
		older.Record.Facts = append(older.Record.Facts, planner.DayFacts{Day: day, HasExtremes: true, HighC: 18, LowC: 4 + 8*math.Sin(float64(day)/58), HasHourly: true, HourlyC: 11})
	}
	for id, counting := range []planner.Counting{{Counts: planner.ByDegreeDays, Thresholds: calc.Thresholds{LowerC: 4}}, {Counts: planner.ByGrowthDays}} {
		total := planner.Total{ID: planner.TotalID(id + 1), Site: 1, Name: []string{`"=gdd" <4>`, "growth"}[id],
			Settings: planner.Always(planner.TotalSettings{Counting: counting, Curve: calc.CoolSeason(), Start: planner.MonthDay{Month: 1, Day: 1}})}
		season, err := planner.CompareSeason(older, total)
		if err != nil {
			t.Fatal(err)
		}
		curves, err := season.Curves(older)
		if err != nil {
			t.Fatal(err)
		}
		input.Seasons = append(input.Seasons, curves)
	}
	return input
}

// readBook is a workbook with its sheets read once.
type readBook struct {
	*excelize.File
	rows map[string][][]string
}

func readSheets(file *excelize.File) readBook { return readBook{file, map[string][][]string{}} }

// sheet are the rows of a sheet.
func (r readBook) sheet(t *testing.T, name string) [][]string {
	t.Helper()
	if r.rows[name] == nil {
		rows, err := r.GetRows(name, excelize.Options{RawCellValue: true})
		if err != nil {
			t.Fatal(err)
		}
		r.rows[name] = rows
	}
	return r.rows[name]
}

// cellsAt are the texts of the cells that a reference names; a sheet or a cell
// that is not there is a fault.
func cellsAt(t *testing.T, file readBook, at string) []string {
	t.Helper()
	sheet, cells, ok := strings.Cut(strings.TrimPrefix(at, "'"), "'!")
	if index, err := file.GetSheetIndex(sheet); !ok || err != nil || index < 0 {
		t.Fatalf("%s names no sheet", at)
	}
	from, to, isRange := strings.Cut(strings.ReplaceAll(cells, "$", ""), ":")
	if !isRange {
		to = from
	}
	col, first, err := excelize.CellNameToCoordinates(from)
	if err != nil {
		t.Fatal(err)
	}
	last, end, err := excelize.CellNameToCoordinates(to)
	if err != nil || col != last || end < first {
		t.Fatalf("%s is no column of cells", at)
	}
	rows := file.sheet(t, sheet)
	if len(rows) < end {
		t.Fatalf("%s lies outside its sheet of %d rows", at, len(rows))
	}
	var texts []string
	for row := first; row <= end; row++ {
		text := ""
		if cells := rows[row-1]; col <= len(cells) {
			text = cells[col-1]
		}
		texts = append(texts, text)
	}
	return texts
}

// holds compares a reference's numbers in the chart with the cells.
func holds(t *testing.T, file readBook, what string, at cellRange) []string {
	t.Helper()
	texts := cellsAt(t, file, at.At)
	if at.Cache.Count.Value != len(texts) {
		t.Errorf("%s: %d points of %d cells at %s", what, at.Cache.Count.Value, len(texts), at.At)
	}
	points := map[int]float64{}
	for _, point := range at.Cache.Points {
		number, err := strconv.ParseFloat(point.Text, 64)
		if err != nil {
			t.Errorf("%s: point %d of %s is %q", what, point.Index, at.At, point.Text)
		}
		points[point.Index] = number
	}
	for i, text := range texts {
		value, known := points[i]
		number, err := strconv.ParseFloat(text, 64)
		if known != (err == nil) || known && math.Abs(number-value) > 1e-9 {
			t.Errorf("%s: point %d of %s is %v, its cell holds %q", what, i, at.At, value, text)
			break
		}
	}
	return texts
}

// Every series names cells that are there, as many as its dates, with the
// values that they hold; titles and names are read from cells.
func TestChartsReferToTheirCells(t *testing.T) {
	for number := range uint64(6) {
		input := withSeasons(t, randomPlan(number))
		content, err := workbook.Build(input)
		if err != nil {
			t.Fatal(err)
		}
		file := readSheets(open(t, content))
		charts, alts := chartsOf(t, content)
		want := min(6, len(input.Data.Works)) + 2
		if slices.ContainsFunc(input.Data.Days, func(day planner.SheetDay) bool {
			facts := input.Plan.Record.At(day.Facts.Day)
			return facts.HasExtremes && facts.HasHourly && facts.Day < input.Plan.AsOf
		}) {
			want++ // the means compared
		}
		if len(charts) != want || len(alts) != want {
			t.Fatalf("plan %d: %d charts and %d alt texts, want %d", number, len(charts), len(alts), want)
		}
		for i, chart := range charts {
			what := fmt.Sprintf("plan %d, %s", number, chart.Title.Text)
			for _, words := range []cellText{chart.Title, chart.AxisTitle} {
				if got := cellsAt(t, file, words.At); words.Text == "" || got[0] != words.Text {
					t.Errorf("%s: %q is not what stands in %s: %q", what, words.Text, words.At, got)
				}
			}
			if name, _, _ := strings.Cut(chart.Title.Text, ": season"); !strings.HasPrefix(alts[i], name) || !strings.Contains(alts[i], chart.AxisTitle.Text) {
				t.Errorf("%s: the alt text is %q", what, alts[i])
			}
			series := chart.series()
			if len(series) < 2 || len(series) > 5 {
				t.Errorf("%s: %d series", what, len(series))
			}
			dashes := map[string]bool{}
			for n, one := range series {
				if one.Index.Value != n {
					t.Errorf("%s: series %d has the index %d", what, n, one.Index.Value)
				}
				if got := cellsAt(t, file, one.Name.At); got[0] == "" || got[0] != one.Name.Text {
					t.Errorf("%s: a series is named %q at %s", what, got, one.Name.At)
				}
				dates, values := holds(t, file, what, one.Dates), holds(t, file, what, one.Cells)
				if len(dates) != len(values) || len(dates) < 2 {
					t.Errorf("%s: %d dates for %d values", what, len(dates), len(values))
				}
				if !slices.IsSorted(dates) { // numbers of five digits
					t.Errorf("%s: the dates do not ascend", what)
				}
				if dash := one.Line.Dash.Value; dash != "" {
					if dashes[dash] {
						t.Errorf("%s: two lines are told apart by colour alone", what)
					}
					dashes[dash] = true
				}
			}
		}
	}
}

// The works with a chart are the soonest due; what the band stands on is left
// out of the legend, and a count of days has no band.
func TestChartsOfWorks(t *testing.T) {
	plan := edited(planner.Celsius, false)
	for i := range 6 { // twelve works, of which six are drawn
		work := plan.Works[i]
		work.ID += 6
		work.Name += " again"
		plan.Works = append(plan.Works, work)
		plan.Log = append(plan.Log, planner.Entry{Day: plan.AsOf - 1, Passes: []planner.Pass{{Work: work.ID, NitrogenGM2: 1}}})
	}
	plan.Works = append(plan.Works, planner.Work{ID: 99, Surface: 1, Name: "aeration", Settings: plan.Works[0].Settings})
	input := inputOf(t, plan, 1)
	content, err := workbook.Build(input)
	if err != nil {
		t.Fatal(err)
	}
	due := map[string]planner.Day{}
	var days []planner.Day
	byDays, spread := map[string]bool{}, map[string]bool{}
	for _, work := range input.Data.Works {
		own, _ := work.State.OwnFacts()
		name := work.State.Surface.Name + " " + work.State.Work.Name
		due[name] = planner.DayMax
		if told := own.Date(); told.Known {
			due[name] = told.Day
		}
		days = append(days, due[name])
		byDays[name], spread[name] = work.State.Settings.Counts == planner.ByDays, own.SpreadKnown
	}
	slices.Sort(days)
	charts, _ := chartsOf(t, content)
	var drawn []planner.Day
	for _, chart := range charts[:6] {
		name := chart.Title.Text
		drawn = append(drawn, due[name])
		want := 5
		if byDays[name] || !spread[name] {
			want = 3
		}
		if got := len(chart.series()); got != want || len(chart.Unseen) != max(0, want-4) {
			t.Errorf("%s: %d series and %d left out of the legend, want %d", name, got, len(chart.Unseen), want)
		}
	}
	if !slices.Equal(drawn, days[:6]) {
		t.Errorf("drawn are works due on %v, the soonest are %v", drawn, days[:6])
	}
	if words := wordsOf(t, content); !strings.Contains(words, "greens aeration is not started.") || !strings.Contains(words, "Of 12 works the 6 ") || !strings.Contains(words, "No season total") {
		t.Errorf("the sheet says %q", words)
	}
}

// wordsOf is what stands in the cells of the sheet of charts.
func wordsOf(t *testing.T, content []byte) string {
	t.Helper()
	rows, err := open(t, content).GetRows("charts")
	if err != nil {
		t.Fatal(err)
	}
	var words []string
	for _, row := range rows {
		words = append(words, strings.Join(row, " "))
	}
	return strings.Join(words, "\n")
}

// A plan with nothing to draw says so in words; a season of which no day is
// over has no chart.
func TestNothingToDraw(t *testing.T) {
	plan := randomPlan(4)
	plan.Works, plan.Log = nil, nil
	plan.Record.Facts, plan.Outlook.Path, plan.Outlook.Members, plan.Outlook.Start = nil, nil, nil, plan.AsOf
	input := inputOf(t, plan, 1)
	input.Seasons = []planner.SeasonCurves{{Season: planner.Season{State: planner.TotalState{Total: planner.Total{Name: "=gdd"}}}}}
	content, err := workbook.Build(input)
	if err != nil {
		t.Fatal(err)
	}
	if charts, _ := chartsOf(t, content); len(charts) > 0 {
		t.Errorf("%d charts of nothing", len(charts))
	}
	words := wordsOf(t, content)
	for _, want := range []string{"No work is started.", "=gdd: no day of its season is over.", "No day of this sheet has both means."} {
		if !strings.Contains(words, want) {
			t.Errorf("%q does not say %q", words, want)
		}
	}
	if slowPlans() > 0 {
		recalculated(t, [][]byte{content})
	}
}

// LibreOffice opens the charts and writes them again with all their series.
func TestLibreOfficeRedrawsTheCharts(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("opens charts in LibreOffice with SWARDBOOK_SLOW=1")
	}
	var books [][]byte
	for number := range uint64(6) {
		content, err := workbook.Build(withSeasons(t, randomPlan(number)))
		if err != nil {
			t.Fatal(err)
		}
		books = append(books, content)
	}
	for i, redrawn := range recalculated(t, books) {
		if faults, _ := differences(t, books[i], redrawn); len(faults) > 0 {
			t.Errorf("plan %d: %s", i, faults[0])
		}
		ours, _ := chartsOf(t, books[i])
		theirs, _ := chartsOf(t, redrawn)
		if len(theirs) != len(ours) {
			t.Fatalf("plan %d: %d charts of %d", i, len(theirs), len(ours))
		}
		count := func(charts []chartPart) (sizes []int) {
			for _, chart := range charts {
				points := 0
				for _, one := range chart.series() {
					points += len(one.Cells.Cache.Points)
				}
				sizes = append(sizes, 100000*len(chart.series())+points)
			}
			slices.Sort(sizes)
			return sizes
		}
		if !slices.Equal(count(ours), count(theirs)) {
			t.Errorf("plan %d: series and points %v, redrawn %v", i, count(ours), count(theirs))
		}
	}
}

// A changed input moves the lines: they are then those of Evaluate with the same
// edits. The band closes when only the bot could tell it.
func TestEditsMoveTheLines(t *testing.T) {
	if slowPlans() == 0 {
		t.Skip("types edits in LibreOffice with SWARDBOOK_SLOW=1")
	}
	plan := randomPlan(8)
	for number := uint64(8); len(plan.Outlook.Members) < 3; number += 4 {
		plan = randomPlan(number)
	}
	i := slices.IndexFunc(plan.Works, func(work planner.Work) bool {
		settings := work.Settings.On(plan.AsOf)
		return settings.Counts == planner.ByDegreeDays && settings.Season == planner.WorkSeason{}
	})
	plan.Works, plan.Closed = plan.Works[i:i+1], nil
	plan.Works[0].Settings = planner.Always(plan.Works[0].Settings.On(plan.AsOf))
	plan.Works[0].Settings[0].Value.Target, plan.Works[0].Settings[0].Value.Limits = 120, planner.Limits{}
	id := plan.Works[0].ID
	last := plan.AsOf - 25
	plan.Log = []planner.Entry{{Day: last, Passes: []planner.Pass{{Work: id}}}}
	input := inputOf(t, plan, 1)
	book := build(t, plan)
	chart, _ := chartsOf(t, book)
	moved := plan
	moved.Log = []planner.Entry{{Day: last + 6, Passes: []planner.Pass{{Work: id}}}}
	day := plan.AsOf + 2
	row := int(day-input.Data.Days[0].Facts.Day) + 3
	for _, trial := range []struct {
		name  string
		typed []map[string]any
		plan  planner.Plan
		edits []planner.Edit
		band  bool
	}{
		{"another target", []map[string]any{{"name": fmt.Sprintf("in_w%d_target", id), "value": 150}}, plan,
			[]planner.Edit{planner.SetTarget{Work: id, Target: 150, Unit: planner.DegreeDays}}, true},
		{"another last date", []map[string]any{{"name": fmt.Sprintf("in_w%d_last", id), "value": int(last+6) + 25569}}, moved, nil, true},
		{"a warm day ahead", []map[string]any{
			{"sheet": "days", "cell": fmt.Sprintf("B%d", row), "value": 33.5},
			{"sheet": "days", "cell": fmt.Sprintf("C%d", row), "value": 21},
			{"sheet": "days", "cell": fmt.Sprintf("D%d", row), "value": nil},
			{"sheet": "days", "insert": row - 3},
		}, plan, []planner.Edit{planner.SetDay{Day: day, HighC: 33.5, LowC: 21}}, false},
	} {
		changed, refused := planner.Apply(trial.plan, trial.edits...)
		if len(refused) > 0 {
			t.Fatal(refused)
		}
		after := inputOf(t, changed, 1)
		work := after.Data.Works[0]
		count := work.Counts[0]
		if work.State.Own == planner.Midrange {
			count = work.Counts[1]
		}
		file := readSheets(typed(t, book, trial.typed))
		series := map[string][]string{}
		for _, one := range chart[0].series() {
			series[one.Name.Text] = cellsAt(t, file, one.Cells.At)
		}
		dates := cellsAt(t, file, chart[0].series()[0].Dates.At)
		for i, text := range dates {
			serial, err := strconv.ParseFloat(text, 64)
			if err != nil {
				t.Fatal(err)
			}
			on := planner.Day(serial) - 25569
			want := 0.0
			if at := int(on - after.Data.Days[0].Facts.Day); at >= 0 {
				want = count.Running[at]
			}
			total := series["so far"][i]
			if on >= plan.AsOf {
				total = series["days ahead"][i]
			}
			near(t, trial.name+", total on "+on.String(), total, want)
			near(t, trial.name+", target", series["target"][i], count.Due.Target)
			if at := int(on - plan.AsOf); at >= 0 {
				low, wide := want, 0.0
				if trial.band {
					low = count.Curves[2][at]
					wide = count.Curves[0][at] - low
				}
				near(t, trial.name+", late on "+on.String(), series["late"][i], low)
				near(t, trial.name+", likely on "+on.String(), series["likely"][i], wide)
			}
		}
	}
}

func near(t *testing.T, what, got string, want float64) {
	t.Helper()
	if number, err := strconv.ParseFloat(got, 64); err != nil || math.Abs(number-want) > 1e-8 {
		t.Errorf("%s: %q, want %.9g", what, got, want)
	}
}
