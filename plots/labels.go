package plots

import (
	"cmp"
	"math"
	"slices"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

const (
	pointRadius = vg.Length(2.2)
	labelHeight = vg.Length(smallSize * 1.1)
	longestTag  = 3.2 * vg.Centimeter
	// mostLabels bounds how many names are tried: a page holds no more.
	mostLabels = 150
)

// label is a name with its place and the line that leads to it from its point.
type label struct {
	text       string
	point, end vg.Point
	box        vg.Rectangle
}

func (l *label) style() text.Style { return textStyle(smallSize, ink, text.XLeft, text.YCenter) }

// Where names are tried: distances from the point, and turns from the direction that
// leads away from the middle.
var (
	reaches = []vg.Length{5, 10, 16, 24, 34, 46, 60, 76, 96}
	turns   = []float64{0, .2, -.2, .4, -.4, .6, -.6, .8, -.8, 1, -1, 1.2, -1.2, 1.6, -1.6, 2, -2, 2.5, -2.5, math.Pi}
)

// placeLabels finds a place within area for as many names as it can: the points farthest
// from the middle first, each at the shortest distance at which name and leader touch no
// other name, leader or point.
func placeLabels(area vg.Rectangle, middle vg.Point, names []string, points []vg.Point) []label {
	distance := func(j int) float64 {
		return math.Hypot(float64(points[j].X-middle.X), float64(points[j].Y-middle.Y))
	}
	order := fileOrder(len(points))
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(distance(b), distance(a)) })
	var placed []label
	style := textStyle(smallSize, ink, text.XLeft, text.YCenter)
	for _, j := range order[:min(len(order), mostLabels)] {
		name := shorten(named(names[j]), longestTag, style)
		outward := math.Atan2(float64(points[j].Y-middle.Y), float64(points[j].X-middle.X))
		if l, ok := place(area, name, style.Width(name), outward, j, points, placed); ok {
			placed = append(placed, l)
		}
	}
	return placed
}

func place(area vg.Rectangle, name string, width vg.Length, outward float64, j int, points []vg.Point, placed []label) (label, bool) {
	for _, reach := range reaches {
		for _, turn := range turns {
			s, c := math.Sincos(outward + turn)
			l := label{text: name, point: points[j], end: vg.Point{X: points[j].X + reach*vg.Length(c), Y: points[j].Y + reach*vg.Length(s)}}
			// The name continues the leader: beside its end, or above or below it where
			// it is steep.
			x, y := l.end.X+1.5, l.end.Y-labelHeight/2
			switch {
			case math.Abs(s) > .92:
				x = l.end.X - width/2
				y = l.end.Y
				if s < 0 {
					y -= labelHeight
				}
			case c < 0:
				x = l.end.X - width - 1.5
			}
			l.box = vg.Rectangle{Min: vg.Point{X: x, Y: y}, Max: vg.Point{X: x + width, Y: y + labelHeight}}
			if l.fits(area, j, points, placed) {
				return l, true
			}
		}
	}
	return label{}, false
}

// fits tells whether the label of point j lies within area and touches nothing.
func (l *label) fits(area vg.Rectangle, j int, points []vg.Point, placed []label) bool {
	b := l.box
	if b.Min.X < area.Min.X || b.Max.X > area.Max.X || b.Min.Y < area.Min.Y || b.Max.Y > area.Max.Y {
		return false
	}
	for i := range placed {
		o := &placed[i]
		if overlap(grown(b, 1.5), o.box) || crosses(o.point, o.end, b) || crosses(l.point, l.end, o.box) ||
			meet(l.point, l.end, o.point, o.end) {
			return false
		}
	}
	for i, p := range points {
		if inside(grown(b, pointRadius), p) {
			return false
		}
		// A leader may leave a point beside it, but not come closer to one.
		if near := fromSegment(p, l.point, l.end); i != j && near < pointRadius+.5 && near < away(p, l.point)-.1 {
			return false
		}
	}
	return true
}

func grown(r vg.Rectangle, by vg.Length) vg.Rectangle {
	return vg.Rectangle{Min: vg.Point{X: r.Min.X - by, Y: r.Min.Y - by}, Max: vg.Point{X: r.Max.X + by, Y: r.Max.Y + by}}
}

func overlap(a, b vg.Rectangle) bool {
	return a.Min.X < b.Max.X && b.Min.X < a.Max.X && a.Min.Y < b.Max.Y && b.Min.Y < a.Max.Y
}

func inside(r vg.Rectangle, p vg.Point) bool {
	return p.X > r.Min.X && p.X < r.Max.X && p.Y > r.Min.Y && p.Y < r.Max.Y
}

func away(a, b vg.Point) vg.Length {
	return vg.Length(math.Hypot(float64(a.X-b.X), float64(a.Y-b.Y)))
}

// fromSegment is the distance of p from the segment.
func fromSegment(p, a, b vg.Point) vg.Length {
	d := b.Sub(a)
	t := (p.X-a.X)*d.X + (p.Y-a.Y)*d.Y
	if square := d.X*d.X + d.Y*d.Y; square > 0 {
		t = max(0, min(1, t/square))
	}
	return away(p, vg.Point{X: a.X + t*d.X, Y: a.Y + t*d.Y})
}

// crosses tells whether the segment passes through the rectangle: an end lies within, or
// it meets a diagonal.
func crosses(a, b vg.Point, r vg.Rectangle) bool {
	return inside(r, a) || inside(r, b) || meet(a, b, r.Min, r.Max) ||
		meet(a, b, vg.Point{X: r.Min.X, Y: r.Max.Y}, vg.Point{X: r.Max.X, Y: r.Min.Y})
}

// meet tells whether segments ab and cd cross.
func meet(a, b, c, d vg.Point) bool {
	side := func(p, q, r vg.Point) vg.Length { return (q.X-p.X)*(r.Y-p.Y) - (q.Y-p.Y)*(r.X-p.X) }
	return side(a, b, c)*side(a, b, d) < 0 && side(c, d, a)*side(c, d, b) < 0
}
