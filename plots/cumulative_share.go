package plots

import (
	"fmt"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

var cumulativeShare = Picture{Name: "cumulative-share", ready: always, size: widePage, draw: func(m *Material, _ int, c draw.Canvas) {
	d, k := m.Decomposition, m.Verdict.Components
	n := shownRoots(m)
	title := "No component kept"
	if k > 0 {
		title = fmt.Sprintf("The first %s: %s of the variance", components(k), percent(d.CumulativeShare(k-1)))
	}
	c = page(c, title, rootsSubtitle(m))
	f := newFrame(c, 46, 6, 30, 8, .4, float64(n)+.6, 0, 100)
	f.yAxis("share of the variance together, %", true)
	var steps []vg.Point
	for a := range n {
		y := 100 * d.CumulativeShare(a)
		steps = append(steps, f.at(float64(a)+.5, y), f.at(float64(a)+1.5, y))
	}
	if k > 0 {
		fill(f.c, mix(kept, grid, .88), f.x(.5), f.y(0), f.x(float64(min(k, n))+.5), f.y(100*d.CumulativeShare(min(k, n)-1)))
	}
	f.c.StrokeLines(line(kept, strongLine), steps)
	f.base(0)
	if k > 0 && k <= n {
		x, y := f.x(float64(k)+.5), f.y(100*d.CumulativeShare(k-1))
		f.c.StrokeLine2(line(against, strongLine), x, f.low, x, y)
		style := textStyle(textSize, ink, text.XLeft, text.YTop)
		label := fmt.Sprintf("%d kept", k)
		at := vg.Point{X: x + 5, Y: y - 6}
		if x+5+style.Width(label) > f.right {
			style.XAlign, at.X = text.XRight, x-5
		}
		f.c.FillText(style, at, label)
	}
	f.numberTicks(n)
	f.xTitle("component")
}}
