package plots

import (
	"fmt"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

var cumulativeShare = Picture{Name: "cumulative-share", ready: always,
	Caption: "Share of the total variance that the first components carry together, the part that is kept shaded.",
	check:   checkRoots,
	words: func(m *Material, _ int) (title, subtitle string) {
		switch k := keptOf(m); k {
		case 0:
			return "No component kept", ruled(m)
		case 1:
			return "One component carries " + percent(m.Decomposition.CumulativeShare(0)) + " of the variance", ruled(m)
		default:
			return fmt.Sprintf("The first %s carry %s of the variance", components(k), percent(m.Decomposition.CumulativeShare(k-1))), ruled(m)
		}
	},
	height: func(*Material, int) vg.Length { return 7 * vg.Centimeter },
	draw: func(m *Material, _ int, c draw.Canvas) {
		d, k := m.Decomposition, keptOf(m)
		n := shownRoots(m)
		y := axis{title: "share of the variance together, %", high: 100, grid: true}
		f := rootsFrame(c, n, y, counted(1, n, c.Max.X-c.Min.X-30), "component", 0, nil)
		var steps []vg.Point
		for a := range n {
			share := 100 * d.CumulativeShare(a)
			x0, x1 := float64(a)+.5, float64(a)+1.5
			if a < k {
				fill(f.c, mix(white, kept, .22), f.x(x0), f.y(0), f.x(x1)+.3, f.y(share))
			}
			steps = append(steps, f.at(x0, share), f.at(x1, share))
		}
		f.c.StrokeLines(line(kept, strongLine), steps)
		f.base(0)
		if k == 0 {
			return
		}
		x, share := f.x(float64(k)+.5), 100*d.CumulativeShare(k-1)
		f.c.StrokeLine2(line(against, strongLine), x, f.low, x, f.y(share))
		f.c.DrawGlyphNoClip(dot(against, 2.6), vg.Point{X: x, Y: f.y(share)})
		style := textStyle(textSize, ink, text.XLeft, text.YTop)
		label := fmt.Sprintf("%d kept: %s", k, percent(share/100))
		at := vg.Point{X: x + 6, Y: f.y(share) - 5}
		if share < 15 {
			style.YAlign, at.Y = text.YBottom, f.y(share)+5
		}
		if at.X+style.Width(label) > f.right {
			style.XAlign, at.X = text.XRight, x-6
		}
		f.c.FillText(style, at, label)
	}}
