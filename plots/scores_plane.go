package plots

import (
	"fmt"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

var scoresPlane = Picture{Name: "scores-plane",
	ready: func(m *Material) bool { return twoKept(m) && m.ScoreRows > 0 },
	size:  func(*Material) (vg.Length, vg.Length) { return pageWidth, 13 * vg.Centimeter },
	draw: func(m *Material, _ int, c draw.Canvas) {
		xs, ys := make([]float64, m.ScoreRows), make([]float64, m.ScoreRows)
		for i := range xs {
			xs[i], ys[i] = m.Scores[2*i], m.Scores[2*i+1]
		}
		subtitle := fmt.Sprintf("%d rows", m.ScoreRows)
		if int64(m.ScoreRows) < m.TotalRows {
			subtitle = fmt.Sprintf("%d of %d rows, evenly spaced", m.ScoreRows, m.TotalRows)
		}
		c = page(c, fmt.Sprintf("Rows in the plane of C1 and C2: %s of the variance", percent(m.Decomposition.CumulativeShare(1))), subtitle)
		x0, x1 := extent(xs)
		y0, y1 := extent(ys)
		x0, x1 = padded(x0, x1, .04)
		y0, y1 = padded(y0, y1, .04)
		f := newFrame(c, 46, 6, 30, 16, x0, x1, y0, y1)
		f.xAxis(axisName(m, 0), true)
		f.yAxis(axisName(m, 1), true)
		alpha := .75
		if m.ScoreRows > 800 {
			alpha = .45
		}
		for i := range xs {
			g := 0
			if len(m.Groups) == m.ScoreRows && len(m.GroupNames) <= len(groupColors) {
				g = m.Groups[i]
			}
			f.c.DrawGlyphNoClip(draw.GlyphStyle{Color: fade(groupColors[g], alpha), Radius: 1.7, Shape: groupShapes[g]}, f.at(xs[i], ys[i]))
		}
		if n := len(m.GroupNames); n > 1 && n <= len(groupColors) {
			var entries []entry
			for g, name := range m.GroupNames {
				entries = append(entries, entry{name, swatch(draw.GlyphStyle{Color: groupColors[g], Radius: 2.6, Shape: groupShapes[g]})})
			}
			f.legend(entries...)
		}
	}}
