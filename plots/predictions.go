package plots

import (
	"fmt"

	"gonum.org/v1/plot/vg/draw"
)

var predictions = Picture{Name: "predictions", perResponse: true,
	ready: func(m *Material) bool { return hasRegression(m) && len(m.Observed) > 0 && len(m.Observed[0]) > 0 },
	size:  squarePage,
	draw: func(m *Material, r int, c draw.Canvas) {
		model := m.Regression.Models[r]
		observed, predicted := m.Observed[r], m.Predicted[r]
		subtitle := fmt.Sprintf("%d rows of the fit", len(observed))
		if int64(len(observed)) < m.TotalRows {
			subtitle = fmt.Sprintf("%d of %d rows of the fit, evenly spaced", len(observed), m.TotalRows)
		}
		c = page(c, fmt.Sprintf("%s observed and predicted: R2 %.4f", model.Response, model.R2), subtitle+"; on the line they agree")
		low, high := extent(observed, predicted)
		low, high = padded(low, high, .03)
		f := newFrame(c, 52, 6, 30, 4, low, high, low, high)
		side := min(f.right-f.left, f.high-f.low)
		f.right, f.low = f.left+side, f.high-side
		unit := ""
		if r < len(m.Units) && m.Units[r] != "" {
			unit = " (" + m.Units[r] + ")"
		}
		f.xAxis("predicted"+unit, true)
		f.yAxis("observed"+unit, true)
		f.c.StrokeLine2(line(against, strongLine), f.x(low), f.y(low), f.x(high), f.y(high))
		alpha := .8
		if len(observed) > 500 {
			alpha = .4
		}
		for i := range observed {
			f.c.DrawGlyphNoClip(draw.GlyphStyle{Color: fade(kept, alpha), Radius: 1.8, Shape: draw.CircleGlyph{}}, f.at(predicted[i], observed[i]))
		}
	}}
