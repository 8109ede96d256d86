// Package chart draws pictures of a plan: a running total with its band to the
// target, a season beside past years, the two means compared. They are drawn to
// be read at the width of a phone, in grey and by the colour-blind: lines differ
// by dash and width, the legend stands below them, and the words with a picture
// say what it shows.
//
// It must not compute a figure of its own, and must not know where a picture is
// shown.
package chart

import (
	"bytes"
	"fmt"
	"image/color"
	"math"
	"strconv"
	"time"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"

	"swardbook/bot/reply"
	"swardbook/planner"
)

// Size of a picture: large letters on few centimetres, so that it is read at
// the width of a phone.
const (
	width, height = 4.6 * vg.Inch, 3.9 * vg.Inch
	dotsPerInch   = 190
	letters       = 10.5 // points
)

// The ink. Blue and orange differ in lightness too.
var (
	dark    = color.RGBA{R: 0x12, G: 0x2b, B: 0x4a, A: 0xff}
	light   = color.RGBA{R: 0xb8, G: 0x5c, B: 0x0c, A: 0xff}
	faint   = color.RGBA{R: 0x90, G: 0x90, B: 0x90, A: 0xff}
	middle  = color.RGBA{R: 0x73, G: 0x93, B: 0xb7, A: 0xff}
	shade   = color.RGBA{R: 0xbf, G: 0xcf, B: 0xe2, A: 0xff}
	black   = color.RGBA{R: 0x20, G: 0x20, B: 0x20, A: 0xff}
	hair    = color.RGBA{R: 0xe0, G: 0xe0, B: 0xe0, A: 0xff}
	dashes  = []vg.Length{vg.Points(6), vg.Points(3)}
	dots    = []vg.Length{vg.Points(1.5), vg.Points(3)}
	dotDash = []vg.Length{vg.Points(7), vg.Points(2.5), vg.Points(1.5), vg.Points(2.5)}
)

// canvas is a picture being drawn.
type canvas struct {
	*plot.Plot
	legend [legendColumns]plot.Legend
	named  int // in the legend
	err    error
}

// legendColumns is how many names stand beside each other.
const legendColumns = 2

func newCanvas(title, axis string, dates bool) *canvas {
	const plain = "Sans"
	p := plot.New()
	p.Title.Text, p.Y.Label.Text = title, axis
	p.Title.TextStyle.Font.Size, p.Title.TextStyle.Font.Variant = letters+1.5, plain
	p.Title.Padding = vg.Points(5)
	p.BackgroundColor = color.White
	for _, a := range []*plot.Axis{&p.X, &p.Y} {
		a.Label.TextStyle.Font.Size, a.Tick.Label.Font.Size = letters, letters
		a.Label.TextStyle.Font.Variant, a.Tick.Label.Font.Variant = plain, plain
		a.Color, a.Tick.Label.Color = black, black
	}
	p.Y.Tick.Marker = plot.TickerFunc(valueTicks)
	if dates {
		p.X.Tick.Marker = plot.TickerFunc(dayTicks)
	}
	grid := plotter.NewGrid()
	grid.Vertical.Color, grid.Horizontal.Color = nil, hair
	p.Add(grid)
	c := &canvas{Plot: p}
	for i := range c.legend {
		c.legend[i] = plot.NewLegend()
		c.legend[i].TextStyle.Font.Size, c.legend[i].TextStyle.Font.Variant = letters-0.5, plain
		c.legend[i].Top, c.legend[i].Left = true, true
		c.legend[i].Padding, c.legend[i].ThumbnailWidth = vg.Points(2), vg.Points(26)
	}
	return c
}

// name puts what was drawn into the legend.
func (c *canvas) name(name string, drawn plot.Thumbnailer) {
	if name != "" {
		c.legend[c.named%legendColumns].Add(name, drawn)
		c.named++
	}
}

// valueTicks marks round values, at most six steps of them.
func valueTicks(lowest, highest float64) []plot.Tick {
	const most = 6
	if !(highest > lowest) {
		return []plot.Tick{{Value: lowest, Label: strconv.FormatFloat(lowest, 'g', 4, 64)}}
	}
	power := math.Pow(10, math.Floor(math.Log10((highest-lowest)/most)))
	step := 10 * power
	for _, round := range []float64{1, 2, 5} {
		if (highest-lowest)/(round*power) <= most {
			step = round * power
			break
		}
	}
	digits := max(0, int(-math.Floor(math.Log10(step)+1e-9)))
	var ticks []plot.Tick
	for n := math.Ceil(lowest/step - 1e-9); n*step <= highest+1e-9*step; n++ {
		ticks = append(ticks, plot.Tick{Value: n * step, Label: strconv.FormatFloat(n*step+0, 'f', digits, 64)})
	}
	return ticks
}

// dayTicks marks at most five days of an axis of day numbers.
func dayTicks(lowest, highest float64) []plot.Tick {
	const most = 4
	step := max(1, (int(highest-lowest)+most-1)/most)
	var ticks []plot.Tick
	for day := int(lowest); day <= int(highest); day += step {
		at := time.Unix(int64(day)*24*60*60, 0).UTC()
		ticks = append(ticks, plot.Tick{Value: float64(day), Label: at.Format("2 Jan")})
	}
	return ticks
}

// line draws a line and names it in the legend, when it has a name.
func (c *canvas) line(name string, points plotter.XYs, ink color.Color, thick float64, dash []vg.Length) {
	if c.err != nil || len(points) == 0 {
		return
	}
	line, err := plotter.NewLine(points)
	if err != nil {
		c.err = fmt.Errorf("draw %s: %w", name, err)
		return
	}
	line.Color, line.Width, line.Dashes = ink, vg.Points(thick), dash
	c.Add(line)
	c.name(name, line)
}

// band fills between two lines.
func (c *canvas) band(name string, lower, upper plotter.XYs) {
	if c.err != nil || len(lower) == 0 {
		return
	}
	edge := append(plotter.XYs{}, upper...)
	for i := len(lower) - 1; i >= 0; i-- {
		edge = append(edge, lower[i])
	}
	area, err := plotter.NewPolygon(edge)
	if err != nil {
		c.err = fmt.Errorf("draw %s: %w", name, err)
		return
	}
	area.Color, area.LineStyle.Width = shade, 0
	c.Add(area)
	c.name(name, area)
}

// picture ends the drawing.
func (c *canvas) picture(name, alt string) (reply.Picture, error) {
	if c.err != nil {
		return reply.Picture{}, c.err
	}
	image := vgimg.NewWith(vgimg.UseWH(width, height), vgimg.UseDPI(dotsPerInch))
	all := draw.Crop(draw.New(image), vg.Points(4), -vg.Points(10), vg.Points(4), -vg.Points(4))
	lines := vg.Length((c.named + legendColumns - 1) / legendColumns)
	below := lines * vg.Points(1.4*letters)
	c.Draw(draw.Crop(all, 0, 0, below+vg.Points(4), 0))
	for i := range c.legend {
		const indent = 0.1 // of the width
		each := all.Size().X * (1 - indent) / legendColumns
		left := all.Size().X*indent + vg.Length(i)*each
		c.legend[i].Draw(draw.Crop(all, left, 0, 0, below-all.Size().Y))
	}
	var out bytes.Buffer
	if _, err := (vgimg.PngCanvas{Canvas: image}).WriteTo(&out); err != nil {
		return reply.Picture{}, fmt.Errorf("write the picture: %w", err)
	}
	return reply.Picture{Name: name, Alt: alt, PNG: out.Bytes()}, nil
}

// level is a straight line at a height.
func level(from, to planner.Day, at float64) plotter.XYs {
	return plotter.XYs{{X: float64(from), Y: at}, {X: float64(to), Y: at}}
}
