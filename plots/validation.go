package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

var validation = Picture{Name: "validation", perResponse: true, ready: hasRegression, size: widePage, draw: func(m *Material, r int, c draw.Canvas) {
	model := m.Regression.Models[r]
	unit := ""
	if r < len(m.Units) && m.Units[r] != "" {
		unit = " " + m.Units[r]
	}
	var fit, cv, low, high []float64
	for _, s := range model.Path {
		fit = append(fit, s.RootMean)
		cv = append(cv, s.CV)
		low, high = append(low, s.CV-s.CVError), append(high, s.CV+s.CVError)
	}
	title := fmt.Sprintf("%s from %s", model.Response, components(model.Components))
	if chosen := model.Path[model.Components].CV; !math.IsNaN(chosen) {
		title += fmt.Sprintf(": off by %.4g%s on held-out rows", chosen, unit)
	}
	subtitle := "root mean squared error"
	if model.Folds > 0 {
		subtitle += fmt.Sprintf(" over %d folds; bars: one standard error over folds", model.Folds)
	}
	c = page(c, title, subtitle)
	n := len(model.Path)
	_, top := extent(fit, cv, high)
	if !(top > 0) {
		top = 1
	}
	f := newFrame(c, 46, 6, 30, 16, -.5, float64(n)-.5, 0, top*1.05)
	f.yAxis("root mean squared error"+brackets(unit), true)
	f.base(0)
	x := f.x(float64(model.Components))
	f.c.StrokeLine2(line(pale, 5), x, f.low, x, f.high)
	curve := func(values []float64, style draw.LineStyle, shape draw.GlyphDrawer) {
		var points []vg.Point
		for k, v := range values {
			if !math.IsNaN(v) {
				points = append(points, f.at(float64(k), v))
			}
		}
		f.c.StrokeLines(style, points)
		if n <= 60 {
			for _, p := range points {
				f.c.DrawGlyphNoClip(draw.GlyphStyle{Color: style.Color, Radius: 2.2, Shape: shape}, p)
			}
		}
	}
	for k := range n {
		if !math.IsNaN(low[k]) && !math.IsNaN(high[k]) {
			f.c.StrokeLine2(line(mix(kept, grid, .4), hairline), f.x(float64(k)), f.y(math.Max(low[k], 0)), f.x(float64(k)), f.y(high[k]))
		}
	}
	curve(fit, line(against, strongLine), draw.BoxGlyph{})
	curve(cv, line(kept, strongLine), draw.CircleGlyph{})
	f.countTicks(n)
	f.legend(entry{"held-out rows", stroke(line(kept, strongLine))}, entry{"rows of the fit", stroke(line(against, strongLine))},
		entry{"chosen", stroke(line(pale, 5))})
}}

// countTicks labels numbers of components from 0 to n-1.
func (f *frame) countTicks(n int) {
	every := 1
	if n > 21 {
		every = 5 * (1 + n/101)
	}
	for k := 0; k < n; k += every {
		f.c.FillText(tickStyle, vg.Point{X: f.x(float64(k)), Y: f.low - 4}, fmt.Sprint(k))
	}
	f.xTitle("number of components")
}

func brackets(unit string) string {
	if unit == "" {
		return ""
	}
	return " (" + unit[1:] + ")"
}
