package plots

import (
	"fmt"
	"image/color"
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// mostMapped is up to how many channels a map of all pairs can be looked at.
const mostMapped = 400

var white = color.RGBA{0xff, 0xff, 0xff, 0xff}

// shade is white for no correlation and darkens faster for positive than for negative
// ones, so that the sign survives grey print.
func shade(r float64) color.RGBA {
	if r >= 0 {
		return mix(white, kept, r)
	}
	return mix(white, against, -r)
}

var correlationMap = Picture{Name: "correlation-map",
	ready: func(m *Material) bool {
		p := len(m.Decomposition.Channels)
		return p >= 2 && p <= mostMapped && len(m.Correlations) == p*p
	},
	size: func(m *Material) (vg.Length, vg.Length) {
		return pageWidth, 17.5 * vg.Centimeter
	},
	draw: func(m *Material, _ int, c draw.Canvas) {
		names := m.Decomposition.Channels
		p := len(names)
		strong, r := strongestPair(m.Correlations, p)
		c = page(c, fmt.Sprintf("Correlations of %d channels, like beside like", p),
			fmt.Sprintf("strongest: %s and %s, %+.4g", names[strong[0]], names[strong[1]], r))
		style := textStyle(smallSize, ink, text.XRight, text.YCenter)
		column := vg.Length(0)
		for _, n := range names {
			column = max(column, style.Width(drawable(n)))
		}
		column = min(column, 3.6*vg.Centimeter) + 5
		key := vg.Length(26)
		side := min(c.Max.X-c.Min.X-column, c.Max.Y-c.Min.Y-column-key)
		left, top := c.Min.X+column, c.Max.Y
		cell := side / vg.Length(p)
		gap := vg.Length(0.5)
		if cell < 5 {
			gap = 0
		}
		for i, a := range m.SimilarOrder {
			for j, b := range m.SimilarOrder {
				x, y := left+vg.Length(j)*cell, top-vg.Length(i+1)*cell
				v := m.Correlations[a*p+b]
				fill(c, shade(v), x, y, x+cell-gap, y+cell-gap)
				if v < -.3 && cell > 5 { // a stroke says "negative" where colour cannot
					c.StrokeLine2(line(white, hairline), x+cell*.25, y+cell*.25, x+cell*.7, y+cell*.7)
				}
			}
		}
		// Names where rows are high enough; else every few.
		every := int(math.Ceil(float64(smallSize * 1.05 / cell)))
		turned := textStyle(smallSize, ink, text.XRight, text.YCenter)
		turned.Rotation = math.Pi / 2
		for i := 0; i < p; i += every {
			name := shorten(names[m.SimilarOrder[i]], column-5, style)
			c.FillText(style, vg.Point{X: left - 4, Y: top - (vg.Length(i)+.5)*cell}, name)
			c.FillText(turned, vg.Point{X: left + (vg.Length(i)+.5)*cell, Y: top - side - 4}, name)
		}
		drawKey(c, left, c.Min.Y, min(side, 6*vg.Centimeter))
		if every > 1 {
			note := textStyle(smallSize, quiet, text.XLeft, text.YBottom)
			c.FillText(note, vg.Point{X: left + 6*vg.Centimeter + 14, Y: c.Min.Y + 2}, fmt.Sprintf("every %d. channel is named", every))
		}
	}}

func strongestPair(r []float64, p int) (pair [2]int, value float64) {
	for i := range p {
		for j := i + 1; j < p; j++ {
			if math.Abs(r[i*p+j]) >= math.Abs(value) {
				pair, value = [2]int{i, j}, r[i*p+j]
			}
		}
	}
	return pair, value
}

// drawKey draws the scale of shades from -1 to 1.
func drawKey(c draw.Canvas, left, low, width vg.Length) {
	const steps = 41
	for i := range steps {
		x := left + width*vg.Length(i)/steps
		fill(c, shade(-1+2*float64(i)/(steps-1)), x, low+10, x+width/steps+.2, low+17)
	}
	small := textStyle(smallSize, ink, text.XCenter, text.YBottom)
	for i, align := range []text.XAlignment{text.XLeft, text.XCenter, text.XRight} {
		small.XAlign = align
		c.FillText(small, vg.Point{X: left + width*vg.Length(i)/2, Y: low}, []string{"-1", "0", "+1"}[i])
	}
}
