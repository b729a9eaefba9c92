package plots

import (
	"fmt"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

var tradeoff = Picture{Name: "tradeoff",
	Caption: "How well the dropped channels are rebuilt from the kept ones, the worst of them and their mean, against the number of channels kept.",
	ready:   func(m *Material) bool { return m.Reduction != nil && len(m.Reduction.Curve) > 1 },
	check: func(m *Material, _ int) error {
		for _, point := range m.Reduction.Curve {
			for _, err := range []error{finite("R² of the worst channel", point.WorstR2), finite("mean R²", point.MeanR2)} {
				if err != nil {
					return fmt.Errorf("with %d kept: %w", point.Kept, err)
				}
			}
		}
		return finite("the share to rebuild", m.Rebuild)
	},
	words: func(m *Material, _ int) (title, subtitle string) {
		p, count := len(m.Decomposition.Channels), len(m.Reduction.Kept)
		title = fmt.Sprintf("%d of %d channels kept", count, p)
		for _, point := range m.Reduction.Curve {
			if point.Kept == count && count < p {
				title += fmt.Sprintf(": they rebuild each of the others to R² %.3f or better", point.WorstR2)
			}
		}
		subtitle = "R² of the dropped channels from the kept ones, on the rows of the fit"
		if m.Rebuild > 0 {
			subtitle += fmt.Sprintf("; asked for: %g", m.Rebuild)
		}
		return title, subtitle
	},
	height: func(*Material, int) vg.Length { return 7.5 * vg.Centimeter },
	draw: func(m *Material, _ int, c draw.Canvas) {
		p := len(m.Decomposition.Channels)
		key := []entry{{"worst channel", stroke(line(kept, strongLine))}, {"mean", stroke(line(against, strongLine))}, {"chosen", stroke(line(pale, 5))}}
		if m.Rebuild > 0 {
			key = append(key, entry{"asked for", stroke(line(quiet, hairline, 3, 3))})
		}
		f := layout{x: axis{title: "number of channels kept", low: .4, high: float64(p) + .6, marks: counted(1, p, c.Max.X-c.Min.X-30)},
			y: axis{title: "R² of the dropped channels", high: 1.02, grid: true}, key: key}.on(c)
		x := f.x(float64(len(m.Reduction.Kept)))
		f.c.StrokeLine2(line(pale, 5), x, f.low, x, f.high)
		f.base(0)
		if m.Rebuild > 0 {
			f.c.StrokeLine2(line(quiet, hairline, 3, 3), f.left, f.y(m.Rebuild), f.right, f.y(m.Rebuild))
		}
		var worst, mean []vg.Point
		for _, point := range m.Reduction.Curve {
			if point.Kept < p {
				worst = append(worst, f.at(float64(point.Kept), point.WorstR2))
				mean = append(mean, f.at(float64(point.Kept), point.MeanR2))
			}
		}
		f.curve(mean, line(against, strongLine), draw.BoxGlyph{})
		f.curve(worst, line(kept, strongLine), draw.CircleGlyph{})
	}}
