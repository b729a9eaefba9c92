package plots

import (
	"fmt"
	"slices"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// mostRebuilt is how many dropped channels, the worst, are drawn.
const mostRebuilt = 4

var rebuilt = Picture{Name: "rebuilt",
	ready: func(m *Material) bool {
		return m.Reduction != nil && len(m.Reduction.Dropped) > 0 && m.ChannelRows > 1
	},
	size: squarePage,
	draw: func(m *Material, _ int, c draw.Canvas) {
		r := m.Reduction
		p := len(m.Decomposition.Channels)
		worst := slices.Clone(r.Dropped)
		slices.SortStableFunc(worst, func(a, b int) int {
			switch x, y := r.Channels[a].R2FromKept, r.Channels[b].R2FromKept; {
			case x < y:
				return -1
			case x > y:
				return 1
			}
			return 0
		})
		worst = worst[:min(len(worst), mostRebuilt)]
		subtitle := fmt.Sprintf("%d rows", m.ChannelRows)
		if int64(m.ChannelRows) < m.TotalRows {
			subtitle = fmt.Sprintf("%d of %d rows, evenly spaced", m.ChannelRows, m.TotalRows)
		}
		c = page(c, fmt.Sprintf("The dropped channels that are rebuilt worst, of %d", len(r.Dropped)), subtitle+"; on the line they agree")
		across := min(len(worst), 2)
		down := (len(worst) + 1) / 2
		gap := vg.Length(14)
		w := (c.Max.X - c.Min.X - gap*vg.Length(across-1)) / vg.Length(across)
		h := (c.Max.Y - c.Min.Y - gap*vg.Length(down-1)) / vg.Length(down)
		for i, j := range worst {
			panel := c
			panel.Min.X = c.Min.X + vg.Length(i%2)*(w+gap)
			panel.Max.X = panel.Min.X + w
			panel.Max.Y = c.Max.Y - vg.Length(i/2)*(h+gap)
			panel.Min.Y = panel.Max.Y - h
			drawRebuilt(panel, m, j, p)
		}
	}}

func drawRebuilt(c draw.Canvas, m *Material, j, p int) {
	ch := m.Reduction.Channels[j]
	measured, made := make([]float64, m.ChannelRows), make([]float64, m.ChannelRows)
	for i := range measured {
		row := m.ChannelSample[i*p : (i+1)*p]
		measured[i], made[i] = row[j], ch.Intercept
		for k, b := range ch.Coefficients {
			made[i] += b * row[m.Reduction.Kept[k]]
		}
	}
	low, high := extent(measured, made)
	low, high = padded(low, high, .03)
	f := newFrame(c, 46, 4, 30, 14, low, high, low, high)
	f.xAxis("rebuilt", true)
	f.yAxis("measured", true)
	head := textStyle(textSize, ink, text.XLeft, text.YBottom)
	name := fmt.Sprintf("%s, R2 %.3f", m.Decomposition.Channels[j], ch.R2FromKept)
	f.c.FillText(head, vg.Point{X: f.left, Y: f.high + 3}, shorten(name, f.right-f.left, head))
	f.c.StrokeLine2(line(against, strongLine), f.x(low), f.y(low), f.x(high), f.y(high))
	alpha := .8
	if m.ChannelRows > 500 {
		alpha = .35
	}
	for i := range measured {
		f.c.DrawGlyphNoClip(draw.GlyphStyle{Color: fade(kept, alpha), Radius: 1.3, Shape: draw.CircleGlyph{}}, f.at(made[i], measured[i]))
	}
}
