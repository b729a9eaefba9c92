package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// mostPanels is how many components stand side by side in the picture of loadings.
const mostPanels = 6

// rowHeight of pictures with one row per channel: closer for many, never below what the
// labels need.
func rowHeight(p int) vg.Length {
	return vg.Length(math.Max(8.2, math.Min(14, 900/float64(p))))
}

func panels(m *Material) int {
	return min(max(m.Verdict.Components, 1), mostPanels, len(m.Decomposition.Values))
}

var loadings = Picture{Name: "loadings", ready: always,
	size: func(m *Material) (vg.Length, vg.Length) {
		p := len(m.Decomposition.Channels)
		return pageWidth, rowHeight(p)*vg.Length(p) + 100
	},
	draw: func(m *Material, _ int, c draw.Canvas) {
		d := m.Decomposition
		k, p := panels(m), len(d.Channels)
		subtitle := "loading: correlation between channel and component"
		limit := 1.0
		if d.Matrix == "covariance" {
			subtitle = "loading: eigenvector times root of the eigenvalue"
			limit = 0
			for j := range p {
				for a := range k {
					limit = math.Max(limit, math.Abs(d.Loading(j, a)))
				}
			}
			limit *= 1.05
		}
		if m.LoadingIntervals != nil {
			subtitle += "; lines: intervals from resampled stretches of rows"
		}
		if more := m.Verdict.Components - k; more > 0 {
			subtitle += fmt.Sprintf("; %d more kept components are in tables/loadings.csv", more)
		}
		title := fmt.Sprintf("What the %s kept are made of", components(k))
		if m.Verdict.Components == 0 {
			title = "No component kept; what the first is made of"
		}
		if k < m.Verdict.Components {
			title = fmt.Sprintf("What the first %d of %d components kept are made of", k, m.Verdict.Components)
		}
		if m.Verdict.Components == 1 {
			title = "What the component kept is made of"
		}
		c = page(c, title, subtitle)
		order := m.SimilarOrder
		if len(order) != p {
			order = fileOrder(p)
		}
		names := textStyle(smallSize, ink, text.XRight, text.YCenter)
		column := vg.Length(0)
		for _, n := range d.Channels {
			column = max(column, names.Width(drawable(n)))
		}
		column = min(column, 4.2*vg.Centimeter) + 6
		gap := vg.Length(9)
		width := (c.Max.X - c.Min.X - column - gap*vg.Length(k-1)) / vg.Length(k)
		for a := range k {
			panel := c
			panel.Min.X = c.Min.X + column + vg.Length(a)*(width+gap)
			panel.Max.X = panel.Min.X + width
			f := newFrame(panel, 0, 0, 16, 16, -limit, limit, float64(p)-.5, -.5)
			for _, x := range []float64{-limit, 0, limit} {
				style := line(grid, hairline)
				if x == 0 {
					style = line(quiet, hairline)
				}
				f.c.StrokeLine2(style, f.x(x), f.low, f.x(x), f.high)
			}
			for i, j := range order {
				v := d.Loading(j, a)
				col := kept
				if v < 0 {
					col = against
				}
				y := float64(i)
				fill(f.c, col, f.x(0), f.y(y-.34), f.x(v), f.y(y+.34))
				if at := j*m.Verdict.Components + a; at < len(m.LoadingIntervals) {
					low, high := m.LoadingIntervals[at].Lower, m.LoadingIntervals[at].Upper
					f.c.StrokeLine2(line(quiet, strongLine), f.x(math.Max(low, -limit)), f.y(y), f.x(math.Min(high, limit)), f.y(y))
				}
				if a == 0 {
					f.c.FillText(names, vg.Point{X: f.left - 5, Y: f.y(y)}, shorten(d.Channels[j], column-6, names))
				}
			}
			head := textStyle(textSize, ink, text.XCenter, text.YBottom)
			f.c.FillText(head, vg.Point{X: (f.left + f.right) / 2, Y: f.high + 3}, fmt.Sprintf("%s  %s", componentName(a), percent(d.Share(a))))
			small := textStyle(smallSize, ink, text.XCenter, text.YTop)
			ends := []float64{-limit, 0, limit}
			if k > 3 {
				ends = []float64{0}
			}
			for _, x := range ends {
				small.XAlign = text.XCenter
				if x < 0 {
					small.XAlign = text.XLeft
				} else if x > 0 {
					small.XAlign = text.XRight
				}
				f.c.FillText(small, vg.Point{X: f.x(x), Y: f.low - 3}, shortNumber(x))
			}
		}
	}}

func fileOrder(p int) []int {
	out := make([]int, p)
	for j := range out {
		out[j] = j
	}
	return out
}

func shortNumber(v float64) string { return fmt.Sprintf("%.3g", v) }
