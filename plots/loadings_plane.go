package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"axisfold/pca"
)

var loadingsPlane = Picture{Name: "loadings-plane", ready: twoKept,
	Caption: "Channels by their loadings on the first two components. Under the correlation matrix the circle is the farthest a channel can lie; the closer to it, the more of the channel these two tell. Channels close together or opposite say the same.",
	check:   func(m *Material, _ int) error { return checkLoadings(m, 2) },
	words: func(m *Material, _ int) (title, subtitle string) {
		title = fmt.Sprintf("Channels in the plane of C1 and C2: %s of the variance", percent(m.Decomposition.CumulativeShare(1)))
		if m.Decomposition.Matrix == pca.Correlation {
			return title, "loadings; closer to the circle: better told by these two"
		}
		return title, "loadings; farther from the middle: more of the channel's variance told by these two"
	},
	height: func(*Material, int) vg.Length { return 14 * vg.Centimeter },
	draw: func(m *Material, _ int, c draw.Canvas) {
		d := m.Decomposition
		p := len(d.Channels)
		circle := d.Matrix == pca.Correlation
		limit := 1.06
		if !circle {
			limit = 0
			for j := range p {
				limit = math.Max(limit, largestLoading(d, j, 2))
			}
			if limit == 0 {
				limit = 1
			}
			limit *= 1.12
		}
		f := layout{x: axis{title: axisName(m, 0), low: -limit, high: limit},
			y: axis{title: axisName(m, 1), low: -limit, high: limit}, equal: true}.on(c)
		points := make([]vg.Point, p)
		for j := range p {
			points[j] = f.at(d.Loading(j, 0), d.Loading(j, 1))
		}
		labels := placeLabels(f.inside().Rectangle, f.at(0, 0), d.Channels, points)
		drawPlane(f, circle, points, labels)
		if left := p - len(labels); left > 0 {
			c.FillText(textStyle(smallSize, quiet, text.XLeft, text.YBottom), c.Min, fmt.Sprintf("no room for %d of %d names", left, p))
		}
	}}

func drawPlane(f *frame, circle bool, points []vg.Point, labels []label) {
	f.c.StrokeLine2(line(grid, hairline), f.left, f.y(0), f.right, f.y(0))
	f.c.StrokeLine2(line(grid, hairline), f.x(0), f.low, f.x(0), f.high)
	if circle {
		var ring vg.Path
		ring.Move(f.at(1, 0))
		ring.Arc(f.at(0, 0), f.x(1)-f.x(0), 0, 2*math.Pi)
		ring.Close()
		f.c.SetLineStyle(line(pale, strongLine))
		f.c.Stroke(ring)
	}
	for _, l := range labels {
		fill(f.c, white, l.box.Min.X-1, l.box.Min.Y, l.box.Max.X+1, l.box.Max.Y)
	}
	for _, l := range labels {
		f.c.StrokeLine2(line(quiet, .4), l.point.X, l.point.Y, l.end.X, l.end.Y)
	}
	for _, at := range points {
		f.c.DrawGlyphNoClip(dot(kept, pointRadius), at)
	}
	for _, l := range labels {
		f.c.FillText(l.style(), vg.Point{X: l.box.Min.X, Y: (l.box.Min.Y + l.box.Max.Y) / 2}, l.text)
	}
}
