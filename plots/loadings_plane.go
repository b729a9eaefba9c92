package plots

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

func squarePage(*Material) (vg.Length, vg.Length) { return pageWidth, 16.5 * vg.Centimeter }

var loadingsPlane = Picture{Name: "loadings-plane", ready: twoKept, size: squarePage, draw: func(m *Material, _ int, c draw.Canvas) {
	d := m.Decomposition
	p := len(d.Channels)
	circle := d.Matrix == "correlation"
	limit := 1.12
	if !circle {
		limit = 0
		for j := range p {
			limit = math.Max(limit, math.Max(math.Abs(d.Loading(j, 0)), math.Abs(d.Loading(j, 1))))
		}
		limit *= 1.2
	}
	// Labels are placed before the subtitle can say how many found no room.
	inner := page(c, "", " ")
	f := squareFrame(inner, limit)
	points := make([]vg.Point, p)
	for j := range p {
		points[j] = f.at(d.Loading(j, 0), d.Loading(j, 1))
	}
	labels, unlabelled := placeLabels(f, d.Channels, points)
	subtitle := "loadings; closer to the circle: better told by these two"
	if !circle {
		subtitle = "loadings; farther from the middle: more of the channel's variance told by these two"
	}
	if unlabelled > 0 {
		subtitle += fmt.Sprintf("; no room for %d of %d names", unlabelled, p)
	}
	page(c, fmt.Sprintf("Channels in the plane of C1 and C2: %s of the variance", percent(d.CumulativeShare(1))), subtitle)
	f.xAxis(axisName(m, 0), false)
	f.yAxis(axisName(m, 1), false)
	f.c.StrokeLine2(line(grid, hairline), f.left, f.y(0), f.right, f.y(0))
	f.c.StrokeLine2(line(grid, hairline), f.x(0), f.low, f.x(0), f.high)
	if circle {
		var ring []vg.Point
		for i := range 181 {
			s, co := math.Sincos(float64(i) * math.Pi / 90)
			ring = append(ring, f.at(co, s))
		}
		f.c.StrokeLines(line(quiet, hairline), ring)
	}
	for _, l := range labels {
		f.c.StrokeLine2(line(pale, hairline), l.point.X, l.point.Y, l.end.X, l.end.Y)
	}
	for _, at := range points {
		f.c.DrawGlyphNoClip(draw.GlyphStyle{Color: kept, Radius: 2.3, Shape: draw.CircleGlyph{}}, at)
	}
	for _, l := range labels {
		f.c.FillText(l.style, l.at, l.text)
	}
}}

// squareFrame is a frame with the same scale on both axes.
func squareFrame(c draw.Canvas, limit float64) *frame {
	f := newFrame(c, 46, 6, 30, 4, -limit, limit, -limit, limit)
	side := min(f.right-f.left, f.high-f.low)
	f.right, f.low = f.left+side, f.high-side
	if spare := c.Max.X - 6 - f.right; spare > 0 {
		// Wider than high: the range of x grows instead of leaving an empty margin.
		f.x1 += 2 * limit * float64(spare/side) / 2
		f.x0 -= 2 * limit * float64(spare/side) / 2
		f.right += spare
	}
	return f
}

// label is a text with its place and where its leader line ends.
type label struct {
	text       string
	style      text.Style
	at         vg.Point
	point, end vg.Point
	box        vg.Rectangle
}

// placeLabels finds a place for as many names as it can, the outermost points first: at
// eight directions and growing distances, the first that touches no label, no point and
// no edge.
func placeLabels(f *frame, names []string, points []vg.Point) (placed []label, unlabelled int) {
	style := textStyle(smallSize, ink, text.XLeft, text.YCenter)
	middle := vg.Point{X: (f.left + f.right) / 2, Y: (f.low + f.high) / 2}
	order := fileOrder(len(points))
	distance := func(j int) float64 {
		return math.Hypot(float64(points[j].X-middle.X), float64(points[j].Y-middle.Y))
	}
	slices.SortStableFunc(order, func(a, b int) int {
		switch x, y := distance(a), distance(b); {
		case x > y:
			return -1
		case x < y:
			return 1
		}
		return 0
	})
	for _, j := range order {
		name := shorten(names[j], 3.2*vg.Centimeter, style)
		w, h := style.Width(name), vg.Length(smallSize*1.05)
		outward := math.Atan2(float64(points[j].Y-middle.Y), float64(points[j].X-middle.X))
		found := false
		for _, reach := range []vg.Length{5, 12, 20, 30, 42} {
			for _, turn := range []float64{0, .5, -.5, 1, -1, 1.6, -1.6, 2.4, -2.4, math.Pi} {
				s, co := math.Sincos(outward + turn)
				end := vg.Point{X: points[j].X + reach*vg.Length(co), Y: points[j].Y + reach*vg.Length(s)}
				l := label{text: name, style: style, point: points[j], end: end}
				x := end.X + 1
				if co < 0 {
					x = end.X - w - 1
				}
				l.at = vg.Point{X: x, Y: end.Y}
				l.box = vg.Rectangle{Min: vg.Point{X: x, Y: end.Y - h/2}, Max: vg.Point{X: x + w, Y: end.Y + h/2}}
				if l.fits(f, placed, points) {
					placed = append(placed, l)
					found = true
					break
				}
			}
			if found {
				break
			}
		}
		if !found {
			unlabelled++
		}
	}
	return placed, unlabelled
}

func (l *label) fits(f *frame, placed []label, points []vg.Point) bool {
	b := l.box
	if b.Min.X < f.left || b.Max.X > f.right || b.Min.Y < f.low || b.Max.Y > f.high {
		return false
	}
	for _, o := range placed {
		if b.Min.X < o.box.Max.X+2 && o.box.Min.X < b.Max.X+2 && b.Min.Y < o.box.Max.Y && o.box.Min.Y < b.Max.Y {
			return false
		}
		if crosses(o.point, o.end, b) || crosses(l.point, l.end, o.box) {
			return false
		}
	}
	for _, p := range points {
		if p.X > b.Min.X-2.5 && p.X < b.Max.X+2.5 && p.Y > b.Min.Y-2 && p.Y < b.Max.Y+2 {
			return false
		}
	}
	return true
}

// crosses tells whether the segment passes through the box, by looking along it.
func crosses(a, b vg.Point, box vg.Rectangle) bool {
	for i := range 9 {
		t := vg.Length(i) / 8
		x, y := a.X+t*(b.X-a.X), a.Y+t*(b.Y-a.Y)
		if x > box.Min.X && x < box.Max.X && y > box.Min.Y && y < box.Max.Y {
			return true
		}
	}
	return false
}
