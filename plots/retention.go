package plots

import (
	"fmt"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"axisfold/pca/retain"
)

var retention = Picture{Name: "retention",
	Caption: "Number of components that each rule keeps, the rule that decided first and in bold. Rules that abstain are named without a mark.",
	ready:   func(m *Material) bool { return len(m.Overview) > 1 },
	check: func(m *Material, _ int) error {
		for _, v := range m.Overview {
			if !v.Abstains && v.Components < 0 {
				return fmt.Errorf("rule %q keeps %d components", v.Rule, v.Components)
			}
		}
		return nil
	},
	words: func(m *Material, _ int) (title, subtitle string) {
		spoke, agree, abstain := 0, 0, 0
		for _, v := range m.Overview {
			switch {
			case v.Abstains:
				abstain++
			case v.Components == keptOf(m):
				agree++
				spoke++
			default:
				spoke++
			}
		}
		subtitle = "number of components that each rule keeps"
		if abstain > 0 {
			subtitle += fmt.Sprintf("; %d in grey abstain", abstain)
		}
		return fmt.Sprintf("%s kept; %d of %d rules say the same", components(keptOf(m)), agree, spoke), subtitle
	},
	height: func(m *Material, _ int) vg.Length { return vg.Length(len(m.Overview))*13 + 2*rowStep + labelGap },
	draw: func(m *Material, _ int, c draw.Canvas) {
		most := max(keptOf(m), 3)
		rows := make([]mark, len(m.Overview))
		for i, v := range m.Overview {
			rows[i] = ruleMark(i, v)
			if !v.Abstains {
				most = max(most, v.Components)
			}
		}
		const room = 22 // for the number beside the last mark
		width := float64(c.Max.X - c.Min.X - labelRoom(rows) - rightInset)
		high := (float64(most) + .5 + .5*room/width) / (1 - room/width)
		f := layout{x: axis{title: "number of components", low: -.5, high: high, marks: counted(0, most, vg.Length(width)), grid: true},
			y: axis{low: float64(len(rows)) - .5, high: -.5, marks: rows}}.on(c)
		x := f.x(float64(keptOf(m)))
		f.c.StrokeLine2(line(pale, 5), x, f.low, x, f.high)
		style := textStyle(smallSize, ink, text.XLeft, text.YCenter)
		for i, v := range m.Overview {
			if v.Abstains {
				continue
			}
			at := f.at(float64(v.Components), float64(i))
			if v.Components == keptOf(m) {
				f.c.DrawGlyphNoClip(dot(kept, 2.7), at)
			} else {
				f.c.DrawGlyphNoClip(glyph(against, 2.7, draw.BoxGlyph{}), at)
			}
			f.c.FillText(style, vg.Point{X: at.X + 6, Y: at.Y}, fmt.Sprint(v.Components))
		}
	}}

// ruleMark names a rule beside row i of an axis.
func ruleMark(i int, v retain.Verdict) mark {
	name := v.Rule
	if v.Setting != "" {
		name += ", " + v.Setting
	}
	m := mark{at: float64(i), strong: i == 0, faint: v.Abstains}
	m.label = shorten(name, 6*vg.Centimeter, m.style())
	return m
}
