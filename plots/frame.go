package plots

import (
	"math"
	"strconv"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// frame is a rectangle of the page with two linear axes.
type frame struct {
	c                      draw.Canvas
	left, right, low, high vg.Length
	x0, x1, y0, y1         float64
}

// page draws title and subtitle and returns what is left of the canvas.
func page(c draw.Canvas, title, subtitle string) draw.Canvas {
	margin := vg.Length(10)
	c = draw.Crop(c, margin, -margin, margin, -margin)
	t := textStyle(titleSize, ink, text.XLeft, text.YTop)
	t.Font = face(titleSize, true)
	width := c.Max.X - c.Min.X
	c.FillText(t, vg.Point{X: c.Min.X, Y: c.Max.Y}, shorten(title, width, t))
	used := vg.Length(titleSize * 1.35)
	if subtitle != "" {
		s := textStyle(textSize, quiet, text.XLeft, text.YTop)
		c.FillText(s, vg.Point{X: c.Min.X, Y: c.Max.Y - used}, shorten(subtitle, width, s))
		used += textSize * 1.4
	}
	return draw.Crop(c, 0, 0, 0, -used-6)
}

// newFrame makes a frame with room for labels on the sides given.
func newFrame(c draw.Canvas, left, right, bottom, top vg.Length, x0, x1, y0, y1 float64) *frame {
	return &frame{c: c, left: c.Min.X + left, right: c.Max.X - right, low: c.Min.Y + bottom, high: c.Max.Y - top, x0: x0, x1: x1, y0: y0, y1: y1}
}

func (f *frame) x(v float64) vg.Length {
	return f.left + (f.right-f.left)*vg.Length((v-f.x0)/(f.x1-f.x0))
}

func (f *frame) y(v float64) vg.Length {
	return f.low + (f.high-f.low)*vg.Length((v-f.y0)/(f.y1-f.y0))
}

func (f *frame) at(x, y float64) vg.Point { return vg.Point{X: f.x(x), Y: f.y(y)} }

// xAxis draws ticks with their labels, grid lines if asked, and the axis title.
func (f *frame) xAxis(title string, gridded bool) {
	style := textStyle(smallSize, ink, text.XCenter, text.YTop)
	for _, t := range ticks(f.x0, f.x1) {
		x := f.x(t)
		if gridded {
			f.c.StrokeLine2(line(grid, hairline), x, f.low, x, f.high)
		}
		f.c.FillText(style, vg.Point{X: x, Y: f.low - 4}, tickLabel(t))
	}
	f.xTitle(title)
}

func (f *frame) xTitle(title string) {
	style := textStyle(textSize, ink, text.XCenter, text.YTop)
	f.c.FillText(style, vg.Point{X: (f.left + f.right) / 2, Y: f.low - 6 - smallSize*1.2}, shorten(title, f.right-f.left, style))
}

func (f *frame) yAxis(title string, gridded bool) {
	style := textStyle(smallSize, ink, text.XRight, text.YCenter)
	for _, t := range ticks(f.y0, f.y1) {
		y := f.y(t)
		if gridded {
			f.c.StrokeLine2(line(grid, hairline), f.left, y, f.right, y)
		}
		f.c.FillText(style, vg.Point{X: f.left - 4, Y: y}, tickLabel(t))
	}
	turned := textStyle(textSize, ink, text.XCenter, text.YTop)
	turned.Rotation = math.Pi / 2
	f.c.FillText(turned, vg.Point{X: f.c.Min.X, Y: (f.low + f.high) / 2}, shorten(title, f.high-f.low, turned))
}

// base draws the line that bars stand on.
func (f *frame) base(y float64) {
	f.c.StrokeLine2(line(ink, hairline), f.left, f.y(y), f.right, f.y(y))
}

// ticks are round numbers within the range, about five: multiples of 1, 2, 2.5 or 5 times
// a power of ten.
func ticks(low, high float64) []float64 {
	span := high - low
	if !(span > 0) {
		return nil
	}
	raw := span / 5
	power := math.Pow(10, math.Floor(math.Log10(raw)))
	step := 10 * power
	for _, m := range []float64{1, 2, 2.5, 5} {
		if m*power >= raw*.999 {
			step = m * power
			break
		}
	}
	var out []float64
	for i := math.Ceil(low/step - 1e-9); i*step <= high+1e-9*span; i++ {
		out = append(out, i*step)
	}
	return out
}

func tickLabel(v float64) string {
	if math.Abs(v) < 1e-12 {
		return "0"
	}
	return strconv.FormatFloat(v, 'g', 5, 64)
}

// padded widens a range by a share of its length; a range of no length becomes one.
func padded(low, high, share float64) (float64, float64) {
	span := high - low
	if span == 0 {
		span = math.Max(math.Abs(low), 1)
	}
	return low - share*span, high + share*span
}

func extent(lists ...[]float64) (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for _, l := range lists {
		for _, v := range l {
			if !math.IsNaN(v) && !math.IsInf(v, 0) {
				low, high = math.Min(low, v), math.Max(high, v)
			}
		}
	}
	return low, high
}

// entry is a line of a legend.
type entry struct {
	label string
	draw  func(c draw.Canvas, at vg.Point)
}

// legend writes entries in a row that ends at the right edge of the frame, above it.
func (f *frame) legend(entries ...entry) {
	style := textStyle(smallSize, ink, text.XLeft, text.YCenter)
	x := f.right
	for i := len(entries) - 1; i >= 0; i-- {
		x -= style.Width(drawable(entries[i].label)) + 20
	}
	x = max(x, f.left)
	for _, e := range entries {
		e.draw(f.c, vg.Point{X: x + 6, Y: f.high + 8})
		label := drawable(e.label)
		f.c.FillText(style, vg.Point{X: x + 14, Y: f.high + 8}, label)
		x += style.Width(label) + 20
	}
}

func swatch(col draw.GlyphStyle) func(draw.Canvas, vg.Point) {
	return func(c draw.Canvas, at vg.Point) { c.DrawGlyphNoClip(col, at) }
}

func stroke(s draw.LineStyle) func(draw.Canvas, vg.Point) {
	return func(c draw.Canvas, at vg.Point) { c.StrokeLine2(s, at.X-6, at.Y, at.X+6, at.Y) }
}
