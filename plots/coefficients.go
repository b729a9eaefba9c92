package plots

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"axisfold/pcr"
)

var coefficients = Picture{Name: "coefficients", perResponse: true, ready: hasRegression,
	size: func(m *Material) (vg.Length, vg.Length) {
		p := len(m.Regression.Models[0].Terms)
		return pageWidth, rowHeight(p)*vg.Length(p) + 110
	},
	draw: func(m *Material, r int, c draw.Canvas) {
		model := m.Regression.Models[r]
		terms := standardized(model)
		title := fmt.Sprintf("What %s follows, by %s", model.Response, components(model.Components))
		subtitle := "standardized coefficients; bars: conditional intervals"
		if m.Confidence > 0 {
			subtitle = fmt.Sprintf("standardized coefficients; bars: %g %% intervals, components and their number taken as given", 100*m.Confidence)
		}
		c = page(c, title, subtitle)
		names := textStyle(smallSize, ink, text.XRight, text.YCenter)
		column := vg.Length(0)
		for _, t := range terms {
			column = max(column, names.Width(drawable(t.name)))
		}
		column = min(column, 4.6*vg.Centimeter) + 6
		limit := coefficientLimit(terms)
		f := newFrame(c, column, 40, 30, 16, -limit, limit, float64(len(terms))-.5, -.5)
		f.xAxis("standardized coefficient", true)
		f.c.StrokeLine2(line(quiet, hairline), f.x(0), f.low, f.x(0), f.high)
		anyOrdinary := false
		for i, t := range terms {
			y := f.y(float64(i))
			f.c.FillText(names, vg.Point{X: f.left - 5, Y: y}, shorten(t.name, column-6, names))
			if !math.IsNaN(t.ordinary) {
				anyOrdinary = true
				f.ordinary(t.ordinary, limit, y)
			}
			if !math.IsNaN(t.low) {
				f.c.StrokeLine2(line(kept, strongLine), f.x(math.Max(t.low, -limit)), y, f.x(math.Min(t.high, limit)), y)
			}
			f.c.DrawGlyphNoClip(draw.GlyphStyle{Color: kept, Radius: 2.4, Shape: draw.CircleGlyph{}}, vg.Point{X: f.x(t.value), Y: y})
		}
		entries := []entry{{"on components", swatch(draw.GlyphStyle{Color: kept, Radius: 2.6, Shape: draw.CircleGlyph{}})}}
		if anyOrdinary {
			entries = append(entries, entry{"least squares", swatch(draw.GlyphStyle{Color: against, Radius: 3, Shape: draw.RingGlyph{}})})
		}
		f.legend(entries...)
	}}

// ordinary marks a least-squares coefficient; one beyond the frame becomes an arrow with
// its number, so that it cannot squash the rest.
func (f *frame) ordinary(v, limit float64, y vg.Length) {
	if math.Abs(v) <= limit {
		f.c.DrawGlyphNoClip(draw.GlyphStyle{Color: against, Radius: 3, Shape: draw.RingGlyph{}}, vg.Point{X: f.x(v), Y: y})
		return
	}
	style := textStyle(smallSize, against, text.XLeft, text.YCenter)
	x, step := f.right+2, vg.Length(7)
	if v < 0 {
		style.XAlign = text.XLeft
		x, step = f.left+9, -7
	}
	f.c.FillPolygon(against, []vg.Point{{X: x, Y: y - 2.5}, {X: x, Y: y + 2.5}, {X: x + step, Y: y}})
	f.c.FillText(style, vg.Point{X: max(x, x+step) + 2, Y: y}, fmt.Sprintf("%.3g", v))
}

// drawnTerm is a term in standardized units.
type drawnTerm struct {
	name                       string
	value, low, high, ordinary float64
}

// standardized brings intervals and least squares to the scale of the standardized
// coefficients, by the ratio that the term itself shows; sorted by value.
func standardized(model *pcr.Model) []drawnTerm {
	var out []drawnTerm
	for _, t := range model.Terms {
		d := drawnTerm{name: t.Name, value: t.Standardized, low: math.NaN(), high: math.NaN(), ordinary: t.OrdinaryStandardized}
		if t.Coefficient != 0 {
			ratio := t.Standardized / t.Coefficient
			d.low, d.high = t.Lower*ratio, t.Upper*ratio
		}
		out = append(out, d)
	}
	slices.SortStableFunc(out, func(a, b drawnTerm) int {
		switch {
		case a.value > b.value:
			return -1
		case a.value < b.value:
			return 1
		}
		return 0
	})
	return out
}

// coefficientLimit frames the coefficients and their intervals, and least squares as far
// as it stays within twice of that.
func coefficientLimit(terms []drawnTerm) float64 {
	own, all := 0.0, 0.0
	for _, t := range terms {
		for _, v := range []float64{t.value, t.low, t.high} {
			if !math.IsNaN(v) {
				own = math.Max(own, math.Abs(v))
			}
		}
		if !math.IsNaN(t.ordinary) {
			all = math.Max(all, math.Abs(t.ordinary))
		}
	}
	if own == 0 {
		own = math.Max(all, 1)
	}
	return 1.08 * math.Max(own, math.Min(all, 2*own))
}
