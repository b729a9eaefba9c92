package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// mostBars is how many components the pictures of roots show; the rest is told in words.
const mostBars = 40

func widePage(*Material) (vg.Length, vg.Length) { return pageWidth, 9.5 * vg.Centimeter }

// shownRoots is how many roots are drawn: all of few, the head of many.
func shownRoots(m *Material) int {
	return min(len(m.Decomposition.Values), max(mostBars, m.Verdict.Components+5))
}

func rootsSubtitle(m *Material) string {
	v := m.Verdict
	s := v.Rule
	if v.Setting != "" {
		s += " " + v.Setting
	}
	if n := shownRoots(m); n < len(m.Decomposition.Values) {
		s += fmt.Sprintf("; the first %d of %d roots", n, len(m.Decomposition.Values))
	}
	return s
}

var scree = Picture{Name: "scree", ready: always, size: widePage, draw: func(m *Material, _ int, c draw.Canvas) {
	d, k := m.Decomposition, m.Verdict.Components
	n := shownRoots(m)
	together := ""
	if k > 0 {
		together = fmt.Sprintf(", together %s of the variance", percent(d.CumulativeShare(k-1)))
	}
	c = page(c, fmt.Sprintf("%s of %d kept%s", components(k), len(d.Values), together), rootsSubtitle(m))
	top := d.Values[0]
	if len(m.Verdict.Reference) > 0 {
		top = math.Max(top, m.Verdict.Reference[0])
	}
	f := newFrame(c, 46, 6, 30, 16, .4, float64(n)+.6, 0, top*1.06)
	f.yAxis("eigenvalue of the "+string(d.Matrix)+" matrix", true)
	for a := range n {
		col := pale
		if a < k {
			col = kept
		}
		x := float64(a + 1)
		fill(f.c, col, f.x(x-.36), f.y(0), f.x(x+.36), f.y(d.Values[a]))
	}
	f.base(0)
	entries := []entry{{"kept", swatch(draw.GlyphStyle{Color: kept, Radius: 3.2, Shape: draw.BoxGlyph{}})},
		{"left out", swatch(draw.GlyphStyle{Color: pale, Radius: 3.2, Shape: draw.BoxGlyph{}})}}
	if ref := m.Verdict.Reference; len(ref) > 0 {
		var points []vg.Point
		for a := range min(n, len(ref)) {
			points = append(points, f.at(float64(a+1), ref[a]))
		}
		f.c.StrokeLines(line(against, strongLine), points)
		for _, p := range points {
			f.c.DrawGlyphNoClip(draw.GlyphStyle{Color: against, Radius: 2, Shape: draw.CircleGlyph{}}, p)
		}
		entries = append(entries, entry{"what the rule asks for", stroke(line(against, strongLine))})
	}
	f.numberTicks(n)
	f.xTitle("component")
	f.legend(entries...)
}}

// numberTicks labels 1..n, every few of many.
func (f *frame) numberTicks(n int) {
	every := 1
	if n > 20 {
		every = 5 * (1 + n/101)
	}
	for a := 1; a <= n; a++ {
		if a == 1 || a%every == 0 {
			f.c.FillText(tickStyle, vg.Point{X: f.x(float64(a)), Y: f.low - 4}, fmt.Sprint(a))
		}
	}
}
