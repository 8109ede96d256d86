// Package chart draws pictures of a plan: a running total with its band to the
// target, a season beside past years, the two means compared. They are drawn to
// be read at the width of a phone, in grey and by the colour-blind: lines differ
// by dash and width, and the words with a picture say what it shows.
//
// It must not compute a figure of its own, and must not know where a picture is
// shown.
package chart

import (
	"bytes"
	"fmt"
	"image/color"
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
	width, height = 4.6 * vg.Inch, 3.4 * vg.Inch
	dotsPerInch   = 190
	letters       = 10.5 // points
)

// The ink. Blue and orange differ in lightness too.
var (
	dark   = color.RGBA{R: 0x12, G: 0x2b, B: 0x4a, A: 0xff}
	light  = color.RGBA{R: 0xd0, G: 0x74, B: 0x1c, A: 0xff}
	faint  = color.RGBA{R: 0xa8, G: 0xa8, B: 0xa8, A: 0xff}
	shade  = color.RGBA{R: 0xc9, G: 0xd6, B: 0xe6, A: 0xff}
	black  = color.RGBA{R: 0x20, G: 0x20, B: 0x20, A: 0xff}
	dashes = []vg.Length{vg.Points(6), vg.Points(3)}
	dots   = []vg.Length{vg.Points(1.5), vg.Points(3)}
)

// canvas is a picture being drawn.
type canvas struct {
	*plot.Plot
	err error
}

func newCanvas(title, axis string, dates bool) *canvas {
	p := plot.New()
	p.Title.Text, p.Y.Label.Text = title, axis
	p.Title.TextStyle.Font.Size = letters + 1.5
	p.Title.Padding = vg.Points(5)
	p.BackgroundColor = color.White
	for _, a := range []*plot.Axis{&p.X, &p.Y} {
		a.Label.TextStyle.Font.Size, a.Tick.Label.Font.Size = letters, letters
		a.Color, a.Tick.Label.Color = black, black
	}
	p.Legend.TextStyle.Font.Size = letters - 1
	p.Legend.Top, p.Legend.Left = true, true
	p.Legend.Padding = vg.Points(2)
	if dates {
		p.X.Tick.Marker = plot.TickerFunc(dayTicks)
	}
	return &canvas{Plot: p}
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
	if name != "" {
		c.Legend.Add(name, line)
	}
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
	c.Legend.Add(name, area)
}

// picture ends the drawing.
func (c *canvas) picture(name, alt string) (reply.Picture, error) {
	if c.err != nil {
		return reply.Picture{}, c.err
	}
	image := vgimg.NewWith(vgimg.UseWH(width, height), vgimg.UseDPI(dotsPerInch))
	c.Draw(draw.Crop(draw.New(image), vg.Points(4), -vg.Points(10), vg.Points(4), -vg.Points(4)))
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
