package plots

import (
	"fmt"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

var tradeoff = Picture{Name: "tradeoff",
	ready: func(m *Material) bool { return m.Reduction != nil && len(m.Reduction.Curve) > 1 },
	size:  widePage,
	draw: func(m *Material, _ int, c draw.Canvas) {
		r := m.Reduction
		p, count := len(m.Decomposition.Channels), len(r.Kept)
		subtitle := "R2 of the dropped channels from the kept ones, on the rows of the fit"
		if m.Rebuild > 0 {
			subtitle += fmt.Sprintf("; asked for: %g", m.Rebuild)
		}
		c = page(c, fmt.Sprintf("%d of %d channels kept", count, p), subtitle)
		f := newFrame(c, 46, 6, 30, 16, .4, float64(p)+.6, 0, 1.04)
		f.yAxis("R2 of the dropped channels", true)
		f.base(0)
		x := f.x(float64(count))
		f.c.StrokeLine2(line(pale, 5), x, f.low, x, f.high)
		if m.Rebuild > 0 {
			f.c.StrokeLine2(line(quiet, hairline, 3, 3), f.left, f.y(m.Rebuild), f.right, f.y(m.Rebuild))
		}
		var worst, mean []vg.Point
		for _, point := range r.Curve {
			if point.Kept < p {
				worst = append(worst, f.at(float64(point.Kept), point.WorstR2))
				mean = append(mean, f.at(float64(point.Kept), point.MeanR2))
			}
		}
		f.c.StrokeLines(line(against, strongLine), mean)
		f.c.StrokeLines(line(kept, strongLine), worst)
		if p <= 60 {
			for i := range worst {
				f.c.DrawGlyphNoClip(draw.GlyphStyle{Color: against, Radius: 2, Shape: draw.BoxGlyph{}}, mean[i])
				f.c.DrawGlyphNoClip(draw.GlyphStyle{Color: kept, Radius: 2.2, Shape: draw.CircleGlyph{}}, worst[i])
			}
		}
		f.numberTicks(p)
		f.xTitle("number of channels kept")
		f.legend(entry{"worst channel", stroke(line(kept, strongLine))}, entry{"mean", stroke(line(against, strongLine))}, entry{"chosen", stroke(line(pale, 5))})
	}}
