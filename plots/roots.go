package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// What the pictures of eigenvalues share.

// mostBars is how many components they show; the rest is told in words.
const mostBars = 40

func always(*Material) bool { return true }

// keptOf is the number of components kept.
func keptOf(m *Material) int {
	if m.Verdict.Abstains {
		return 0
	}
	return m.Verdict.Components
}

// shownRoots is how many roots are drawn: all of few, the head of many.
func shownRoots(m *Material) int {
	return min(len(m.Decomposition.Values), max(mostBars, keptOf(m)+5))
}

// ruled says which rule decided and why, and how many roots are not shown.
func ruled(m *Material) string {
	v := m.Verdict
	s := v.Rule
	switch {
	case v.Note != "":
		s += ": " + v.Note
	case v.Setting != "":
		s += ", " + v.Setting
	}
	if hidden := len(m.Decomposition.Values) - shownRoots(m); hidden > 0 {
		if s != "" {
			s += "; "
		}
		s += fmt.Sprintf("the last %d of %d components are not shown", hidden, len(m.Decomposition.Values))
	}
	return s
}

func componentName(a int) string { return fmt.Sprintf("C%d", a+1) }

func components(n int) string {
	if n == 1 {
		return "1 component"
	}
	return fmt.Sprintf("%d components", n)
}

// closer is the eigenvalue up to which a closer look is worth drawing, 0 where the whole
// picture shows well what was decided: a little above the first root left out and its
// reference.
func closer(m *Material, top float64) float64 {
	d, k := m.Decomposition, keptOf(m)
	if k == len(d.Values) {
		return 0
	}
	level := d.Values[k]
	if k > 0 {
		level = math.Max(level, math.Min(d.Values[k-1], 3*level))
	}
	if ref := m.Verdict.Reference; k < len(ref) {
		level = math.Max(level, ref[max(k-1, 0)])
	}
	if limit := 1.6 * level; limit > 0 && limit < top/4 {
		return limit
	}
	return 0
}

// bars draws the roots of m up to limit; higher ones end in a cut.
func bars(f *frame, m *Material, n int, limit float64) {
	d, k := m.Decomposition, keptOf(m)
	for a := range n {
		col := pale
		if a < k {
			col = kept
		}
		x0, x1 := f.x(float64(a)+.64), f.x(float64(a)+1.36)
		fill(f.c, col, x0, f.y(0), x1, f.y(math.Min(math.Max(d.Values[a], 0), limit)))
		if d.Values[a] > limit {
			y, rise := f.high-7, (x1-x0)*.35
			f.c.FillPolygon(white, []vg.Point{{X: x0 - .5, Y: y - rise}, {X: x1 + .5, Y: y + rise}, {X: x1 + .5, Y: y + rise + 2}, {X: x0 - .5, Y: y - rise + 2}})
		}
	}
	f.base(0)
	ref := m.Verdict.Reference
	var points []vg.Point
	for a := range min(n, len(ref)) {
		points = append(points, f.at(float64(a+1), ref[a]))
	}
	inside := f.inside()
	inside.StrokeLines(line(against, strongLine), inside.ClipLinesXY(points)...)
	for _, p := range points {
		inside.DrawGlyph(dot(against, 1.9), p)
	}
}

// rootsFrame is a frame over components 1..n and values up to limit.
func rootsFrame(c draw.Canvas, n int, y axis, x []mark, xTitle string, room vg.Length, key []entry) *frame {
	return layout{x: axis{title: xTitle, low: .4, high: float64(n) + .6, marks: x}, y: y, key: key, room: room}.on(c)
}
