package workbook

import (
	_ "embed"
	"encoding/xml"
	"fmt"
	"math"
	"strconv"
	"strings"
	"text/template"

	"github.com/xuri/excelize/v2"
)

// The library writes a chart without the values of its cells, so that a viewer
// that does not recalculate shows an empty frame; its axis of dates is one of
// words, and what is drawn invisibly stands in its legend. It places the chart;
// what stands in the chart is written here (ECMA-376, part 1, 21.2).

// stroke is how a curve is drawn.
type stroke struct {
	kind  strokeKind
	ink   string // RRGGBB; "" draws nothing and leaves the legend alone
	width float64
	dash  string // of a line: "solid", "dash", "sysDot"
}

// strokeKind is what a curve is drawn as.
type strokeKind int

const (
	area strokeKind = iota // on top of the area before it
	bar
	line
)

// Kinds by which the template asks.
func (s stroke) Area() bool  { return s.kind == area }
func (s stroke) Bar() bool   { return s.kind == bar }
func (s stroke) Line() bool  { return s.kind == line }
func (s stroke) Ink() string { return s.ink }

// Dash is the stroke's dash.
func (s stroke) Dash() string { return s.dash }

// EMU is the width in the unit of drawings: 12,700 to a point.
func (s stroke) EMU() int { return int(12700 * s.width) }

// curve is one series of a chart: cells, and the values that they hold.
type curve struct {
	stroke
	name, nameAt string
	at           string
	values       []float64 // NaN for an empty cell
}

// drawing is a chart.
type drawing struct {
	title, titleAt string
	axis, axisAt   string
	dates          []float64 // serial numbers, ascending
	datesAt        string
	curves         []curve
	alt            string
}

//go:embed chart.xml.tmpl
var chartText string

var chartTemplate = template.Must(template.New("chart").Parse(chartText))

// put places the chart on the page's cell.
func (b *book) put(p *page, cell string, d drawing) error {
	const first = "xl/charts/chart%d.xml"
	b.charts++
	err := b.file.AddChart(p.name, cell, &excelize.Chart{Type: excelize.Line, Dimension: excelize.ChartDimension{Width: chartColumns * columnDots, Height: chartRows * rowDots},
		Format: excelize.GraphicOptions{AltText: d.alt}})
	if err != nil {
		return err
	}
	name := fmt.Sprintf(first, b.charts)
	if _, placed := b.file.Pkg.Load(name); !placed {
		return fmt.Errorf("the chart %s was not placed", name)
	}
	part, err := d.part()
	if err != nil {
		return err
	}
	b.file.Pkg.Store(name, []byte(part))
	return nil
}

// part is the chart's part of the file.
func (d drawing) part() (string, error) {
	const labels = 4 // dates on the axis that a phone can show
	var areas, bars, lines []ser
	for i, curve := range d.curves {
		one := ser{curve: curve, Index: i, drawing: d}
		switch curve.kind {
		case area:
			areas = append(areas, one)
		case bar:
			bars = append(bars, one)
		case line:
			lines = append(lines, one)
		}
	}
	step := 1
	if n := len(d.dates); n > 0 {
		step = max(1, int(math.Ceil((d.dates[n-1]-d.dates[0])/labels)))
	}
	crosses := "midCat"
	if len(bars) > 0 {
		crosses = "between"
	}
	var out strings.Builder
	err := chartTemplate.Execute(&out, map[string]any{
		"Title": words{d.titleAt, d.title}, "Axis": words{d.axisAt, d.axis}, "Areas": areas, "Bars": bars, "Lines": lines,
		"Unseen": d.unseen(), "Legend": len(d.curves) > 1, "Step": step, "Crosses": crosses,
	})
	return out.String(), err
}

// unseen are the curves without a place in the legend.
func (d drawing) unseen() (indexes []int) {
	for i, curve := range d.curves {
		if curve.ink == "" {
			indexes = append(indexes, i)
		}
	}
	return indexes
}

// words is a text that is read from a cell.
type words struct{ at, text string }

// Ref is the reference to the cell, with the text that it holds.
func (w words) Ref() string {
	return fmt.Sprintf(`<c:strRef><c:f>%s</c:f><c:strCache><c:ptCount val="1"/><c:pt idx="0"><c:v>%s</c:v></c:pt></c:strCache></c:strRef>`, escaped(w.at), escaped(w.text))
}

// ser is a curve in its chart.
type ser struct {
	curve
	Index   int
	drawing drawing
}

func (s ser) Name() string  { return words{s.nameAt, s.name}.Ref() }
func (s ser) Dates() string { return cached(s.drawing.datesAt, "d mmm", s.drawing.dates) }
func (s ser) Cells() string { return cached(s.at, "General", s.values) }

// cached is the reference to cells, with the numbers that they hold.
func cached(at, format string, values []float64) string {
	out := make([]byte, 0, 200+48*len(values))
	out = fmt.Appendf(out, `<c:numRef><c:f>%s</c:f><c:numCache><c:formatCode>%s</c:formatCode><c:ptCount val="%d"/>`, escaped(at), escaped(format), len(values))
	for i, value := range values {
		if math.IsNaN(value) {
			continue
		}
		out = append(out, `<c:pt idx="`...)
		out = strconv.AppendInt(out, int64(i), 10)
		out = append(out, `"><c:v>`...)
		out = strconv.AppendFloat(out, tidy(value), 'f', -1, 64)
		out = append(out, `</c:v></c:pt>`...)
	}
	return string(append(out, `</c:numCache></c:numRef>`...))
}

// escaped is the text as it stands in a part of the file.
func escaped(text string) string {
	var out strings.Builder
	_ = xml.EscapeText(&out, []byte(text)) // a Builder never fails
	return out.String()
}
