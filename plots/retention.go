package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

var retention = Picture{Name: "retention",
	ready: func(m *Material) bool { return len(m.Overview) > 1 },
	size: func(m *Material) (vg.Length, vg.Length) {
		return pageWidth, vg.Length(len(m.Overview))*14 + 100
	},
	draw: func(m *Material, _ int, c draw.Canvas) {
		spoke, agree := 0, 0
		most := m.Verdict.Components
		for _, v := range m.Overview {
			if v.Abstains {
				continue
			}
			spoke++
			most = max(most, v.Components)
			if v.Components == m.Verdict.Components {
				agree++
			}
		}
		c = page(c, fmt.Sprintf("%s kept; %d of %d rules say the same", components(m.Verdict.Components), agree, spoke),
			"how many components each rule keeps; rules that abstain are named without a mark")
		names := textStyle(smallSize, ink, text.XRight, text.YCenter)
		column := 5.6 * vg.Centimeter
		n := float64(len(m.Overview))
		f := newFrame(c, column+6, 24, 30, 4, -.5, math.Max(float64(most), 3)+.5, n-.5, -.5)
		f.xAxis("number of components", true)
		x := f.x(float64(m.Verdict.Components))
		f.c.StrokeLine2(line(pale, 5), x, f.low, x, f.high)
		number := textStyle(smallSize, ink, text.XLeft, text.YCenter)
		for i, v := range m.Overview {
			y := f.y(float64(i))
			style := names
			if i == 0 {
				style.Font = face(smallSize, true)
			}
			name := v.Rule
			if v.Setting != "" {
				name += " " + v.Setting
			}
			if v.Abstains {
				style.Color = quiet
			}
			f.c.FillText(style, vg.Point{X: f.left - 6, Y: y}, shorten(name, column, style))
			if v.Abstains {
				continue
			}
			glyph := draw.GlyphStyle{Color: kept, Radius: 2.6, Shape: draw.CircleGlyph{}}
			if v.Components != m.Verdict.Components {
				glyph.Color = against
				glyph.Shape = draw.BoxGlyph{}
			}
			at := vg.Point{X: f.x(float64(v.Components)), Y: y}
			f.c.DrawGlyphNoClip(glyph, at)
			f.c.FillText(number, vg.Point{X: at.X + 6, Y: y}, fmt.Sprint(v.Components))
		}
	}}
