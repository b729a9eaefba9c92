package plots

import (
	"math"

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

func (f *frame) x(v float64) vg.Length {
	return f.left + (f.right-f.left)*vg.Length((v-f.x0)/(f.x1-f.x0))
}

func (f *frame) y(v float64) vg.Length {
	return f.low + (f.high-f.low)*vg.Length((v-f.y0)/(f.y1-f.y0))
}

func (f *frame) at(x, y float64) vg.Point { return vg.Point{X: f.x(x), Y: f.y(y)} }

// base draws the line that bars stand on.
func (f *frame) base(y float64) {
	f.c.StrokeLine2(line(ink, hairline), f.left, f.y(y), f.right, f.y(y))
}

// diagonal draws the line on which both axes agree.
func (f *frame) diagonal() {
	in := f.inside()
	low, high := min(f.x0, f.y0), max(f.x1, f.y1)
	in.StrokeLines(line(against, strongLine), in.ClipLinesXY([]vg.Point{f.at(low, low), f.at(high, high)})...)
}

// curve joins points, as far as they lie in the frame; each has its glyph where there are
// not too many.
func (f *frame) curve(points []vg.Point, style draw.LineStyle, shape draw.GlyphDrawer) {
	in := f.inside()
	in.StrokeLines(style, in.ClipLinesXY(points)...)
	if len(points) <= 60 {
		for _, p := range points {
			in.DrawGlyph(glyph(style.Color, 2.1, shape), p)
		}
	}
}

// inside returns the canvas of the frame, for lines to be clipped to.
func (f *frame) inside() draw.Canvas {
	return draw.Canvas{Canvas: f.c, Rectangle: vg.Rectangle{Min: vg.Point{X: f.left, Y: f.low}, Max: vg.Point{X: f.right, Y: f.high}}}
}

// layout is what surrounds a frame: its axes, and a key above it.
type layout struct {
	x, y  axis
	key   []entry
	equal bool      // one unit has the same length on both axes; the ranges grow to it
	room  vg.Length // at least this much left of the frame, to align frames
}

const (
	labelGap = vg.Length(4)
	// rightInset is room for half of a last label below a frame, the same for frames
	// that stand above one another.
	rightInset = vg.Length(7)
	rowStep    = vg.Length(smallSize * 1.5) // between lines of text around a frame
)

// on lays the frame out on c, draws grid, labels, titles and key, and returns it.
func (l layout) on(c draw.Canvas) *frame {
	f := &frame{c: c, right: c.Max.X - rightInset, x0: l.x.low, x1: l.x.high, y0: l.y.low, y1: l.y.high}
	f.high = c.Max.Y - l.head(c)
	f.low = c.Min.Y + 2
	if len(l.x.marks) > 0 || l.x.marks == nil {
		f.low += rowStep
	}
	if l.x.title != "" {
		f.low += rowStep
	}
	// Labels need room, room changes the ranges, ranges change the labels: settled in
	// a few rounds.
	var xs, ys []mark
	for range 3 {
		ys = l.y.marked(f.high-f.low, func(string) vg.Length { return smallSize }, 12)
		f.left = max(f.left, c.Min.X+labelRoom(ys), c.Min.X+l.room)
		if l.equal {
			l.stretch(f)
		}
		width := textStyle(smallSize, ink, text.XCenter, text.YTop).Width
		xs = l.x.marked(f.right-f.left, width, 9)
		if n := len(xs); n > 0 {
			over := f.x(xs[n-1].at) + width(xs[n-1].label)/2 - c.Max.X
			f.right -= max(over, 0)
		}
	}
	l.drawX(f, xs)
	l.drawY(f, ys)
	return f
}

// stretch widens the range that has less of it per length, keeping its middle.
func (l *layout) stretch(f *frame) {
	w, h := float64(f.right-f.left), float64(f.high-f.low)
	per := math.Max((l.x.high-l.x.low)/w, (l.y.high-l.y.low)/h)
	widen := func(a *axis, length float64) {
		middle := (a.low + a.high) / 2
		a.low, a.high = middle-per*length/2, middle+per*length/2
	}
	widen(&l.x, w)
	widen(&l.y, h)
	f.x0, f.x1, f.y0, f.y1 = l.x.low, l.x.high, l.y.low, l.y.high
}

// head draws the title of y at the left and the key at the right of the same line, or on
// lines above it where they do not both fit; it returns the height they take.
func (l *layout) head(c draw.Canvas) vg.Length {
	style := textStyle(smallSize, quiet, text.XLeft, text.YTop)
	rows, last := keyRows(l.key, c.Max.X-c.Min.X), vg.Length(0)
	height := vg.Length(len(rows)) * rowStep
	if len(rows) == 1 {
		last = keyWidth(rows[0])
	}
	title := shorten(l.y.title, c.Max.X-c.Min.X, style)
	if title == "" && len(rows) == 0 {
		return labelGap
	}
	if title != "" && (len(rows) > 1 || style.Width(title)+12+last > c.Max.X-c.Min.X) {
		height += rowStep
	}
	height = max(height, rowStep)
	y := c.Max.Y
	for _, row := range rows {
		drawKey(c, row, c.Max.X-keyWidth(row), y-rowStep/2)
		y -= rowStep
	}
	c.FillText(style, vg.Point{X: c.Min.X, Y: c.Max.Y - height + rowStep - 1}, title)
	return height + 5
}

func (l *layout) drawX(f *frame, marks []mark) {
	style := textStyle(smallSize, ink, text.XCenter, text.YTop)
	for _, m := range marks {
		x := f.x(m.at)
		if l.x.grid {
			f.c.StrokeLine2(line(grid, hairline), x, f.low, x, f.high)
		}
		f.c.FillText(style, vg.Point{X: x, Y: f.low - labelGap}, m.label)
	}
	if l.x.title != "" {
		style = textStyle(smallSize, quiet, text.XRight, text.YBottom)
		f.c.FillText(style, vg.Point{X: f.right, Y: f.c.Min.Y}, shorten(l.x.title, f.right-f.c.Min.X, style))
	}
}

func (l *layout) drawY(f *frame, marks []mark) {
	for _, m := range marks {
		y := f.y(m.at)
		if l.y.grid {
			f.c.StrokeLine2(line(grid, hairline), f.left, y, f.right, y)
		}
		f.c.FillText(m.style(), vg.Point{X: f.left - labelGap, Y: y}, m.label)
	}
}
