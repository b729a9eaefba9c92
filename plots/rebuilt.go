package plots

import (
	"cmp"
	"fmt"
	"slices"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// mostRebuilt is how many dropped channels, the worst, are drawn.
const mostRebuilt = 4

var rebuilt = Picture{Name: "rebuilt",
	Caption: "Dropped channels as measured against as rebuilt from the kept ones, those with the smallest R²; on the line they agree.",
	ready: func(m *Material) bool {
		return m.Reduction != nil && len(m.Reduction.Dropped) > 0 && m.ChannelRows > 1
	},
	check: checkRebuilt,
	words: func(m *Material, _ int) (title, subtitle string) {
		dropped := len(m.Reduction.Dropped)
		switch {
		case dropped == 1:
			title = "The dropped channel, rebuilt from the others"
		case dropped <= mostRebuilt:
			title = fmt.Sprintf("The %d dropped channels, rebuilt from the others", dropped)
		default:
			title = fmt.Sprintf("The %d of %d dropped channels that are rebuilt worst", mostRebuilt, dropped)
		}
		return title, sampled(m.ChannelRows, m.TotalRows, "") + "; on the line they agree"
	},
	height: func(m *Material, _ int) vg.Length {
		if len(m.Reduction.Dropped) <= 2 {
			return 8 * vg.Centimeter
		}
		return 15.5 * vg.Centimeter
	},
	draw: func(m *Material, _ int, c draw.Canvas) {
		worst := worstRebuilt(m)
		down := (len(worst) + 1) / 2
		const gap = vg.Length(14)
		w := (c.Max.X - c.Min.X - gap) / 2
		h := (c.Max.Y - c.Min.Y - gap*vg.Length(down-1)) / vg.Length(down)
		for i, j := range worst {
			panel := c
			panel.Min.X += vg.Length(i%2) * (w + gap)
			panel.Max.X = panel.Min.X + w
			panel.Max.Y -= vg.Length(i/2) * (h + gap)
			panel.Min.Y = panel.Max.Y - h
			drawRebuilt(panel, m, j)
		}
	}}

// worstRebuilt lists the dropped channels that are drawn, the worst first.
func worstRebuilt(m *Material) []int {
	worst := slices.Clone(m.Reduction.Dropped)
	slices.SortStableFunc(worst, func(a, b int) int {
		return cmp.Compare(m.Reduction.Channels[a].R2FromKept, m.Reduction.Channels[b].R2FromKept)
	})
	return worst[:min(len(worst), mostRebuilt)]
}

// asMade returns a dropped channel as measured and as rebuilt, by row of the sample.
func asMade(m *Material, j int) (measured, made []float64) {
	p, ch := len(m.Decomposition.Channels), m.Reduction.Channels[j]
	measured, made = make([]float64, m.ChannelRows), make([]float64, m.ChannelRows)
	for i := range measured {
		row := m.ChannelSample[i*p : (i+1)*p]
		measured[i], made[i] = row[j], ch.Intercept
		for k, b := range ch.Coefficients {
			made[i] += b * row[m.Reduction.Kept[k]]
		}
	}
	return measured, made
}

func drawRebuilt(c draw.Canvas, m *Material, j int) {
	head := textStyle(textSize, ink, text.XLeft, text.YTop)
	r2 := fmt.Sprintf("  R² %.3f", m.Reduction.Channels[j].R2FromKept)
	name := shorten(named(m.Decomposition.Channels[j]), c.Max.X-c.Min.X-head.Width(r2), head)
	c.FillText(head, vg.Point{X: c.Min.X, Y: c.Max.Y}, name+r2)
	c.Max.Y -= 14
	measured, made := asMade(m, j)
	low, high := extent(measured, made)
	low, high = padded(low, high, .03)
	f := layout{x: axis{title: "rebuilt", low: low, high: high, grid: true}, y: axis{title: "measured", low: low, high: high, grid: true}, equal: true}.on(c)
	f.diagonal()
	for i := range measured {
		f.c.DrawGlyphNoClip(dot(fade(kept, seeThrough(len(measured))), 1.4), f.at(made[i], measured[i]))
	}
}

func checkRebuilt(m *Material, _ int) error {
	r, p := m.Reduction, len(m.Decomposition.Channels)
	if err := counts("channels judged", len(r.Channels), p); err != nil {
		return err
	}
	if err := counts("measured values", len(m.ChannelSample), m.ChannelRows*p); err != nil {
		return err
	}
	if err := allFinite("measured value", m.ChannelSample); err != nil {
		return err
	}
	for _, j := range worstRebuilt(m) {
		_, made := asMade(m, j)
		if err := allFinite("rebuilt value", made); err != nil {
			return fmt.Errorf("channel %q: %w", m.Decomposition.Channels[j], err)
		}
	}
	return nil
}
