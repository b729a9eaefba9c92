package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"axisfold/pca"
)

// mostPanels is how many components stand side by side in the picture of loadings.
const mostPanels = 6

// panelHead is the room for the name of a panel.
const panelHead = vg.Length(16)

// panels is how many components are shown: those kept, or the first where none is.
func panels(m *Material) int { return min(max(keptOf(m), 1), mostPanels) }

var loadings = Picture{Name: "loadings", ready: always,
	Caption: "Loadings of the channels on the components kept, like channels beside one another. Under the correlation matrix a loading is the correlation between channel and component.",
	check:   checkPanels,
	words: func(m *Material, _ int) (title, subtitle string) {
		k, p := panels(m), len(m.Decomposition.Channels)
		subtitle = "loading: correlation between channel and component"
		if m.Decomposition.Matrix != pca.Correlation {
			subtitle = "loading: entry of the eigenvector times root of the eigenvalue"
		}
		if len(m.LoadingIntervals) > 0 {
			subtitle += "; lines: intervals from resampled stretches of rows"
		}
		if hidden := keptOf(m) - k; hidden > 0 {
			subtitle += fmt.Sprintf("; %d more kept components are not shown", hidden)
		}
		if p > mostRows {
			subtitle += fmt.Sprintf("; the %d channels of %d with the largest loadings", mostRows, p)
		}
		return loadingsTitle(m, k), subtitle
	},
	height: func(m *Material, _ int) vg.Length {
		p := min(len(m.Decomposition.Channels), mostRows)
		return rowHeight(p)*vg.Length(p) + panelHead + rowStep
	},
	draw: func(m *Material, _ int, c draw.Canvas) {
		d := m.Decomposition
		k := panels(m)
		order := largest(channelOrder(m), mostRows, func(j int) float64 { return largestLoading(d, j, k) })
		limit := 1.0
		if d.Matrix != pca.Correlation {
			limit = 0
			for _, j := range order {
				limit = math.Max(limit, largestLoading(d, j, k))
				for a := range k {
					if low, high, ok := m.interval(j, a); ok {
						limit = math.Max(limit, math.Max(-low, high))
					}
				}
			}
			limit *= 1.04
			if limit == 0 {
				limit = 1
			}
		}
		drawPanels(c, m, order, limit, panelSet{k, componentName, d.Share, d.Loading, m.interval})
	}}

// panelSet is what panels of loadings show: names and shares of components, loadings, and
// their limits where there are any.
type panelSet struct {
	k        int
	name     func(a int) string
	share    func(a int) float64
	loading  func(j, a int) float64
	interval func(j, a int) (low, high float64, ok bool)
}

// interval returns the limits of a loading, where it has any.
func (m *Material) interval(j, a int) (low, high float64, ok bool) {
	at := j*keptOf(m) + a
	if a >= keptOf(m) || at >= len(m.LoadingIntervals) {
		return 0, 0, false
	}
	i := m.LoadingIntervals[at]
	return i.Lower, i.Upper, !math.IsNaN(i.Lower) && !math.IsNaN(i.Upper)
}

func checkPanels(m *Material, _ int) error {
	if n := len(m.LoadingIntervals); n > 0 {
		if err := counts("intervals of loadings", n, len(m.Decomposition.Channels)*keptOf(m)); err != nil {
			return err
		}
	}
	for i, v := range m.LoadingIntervals {
		for _, err := range []error{finiteOrNone("lower limit", v.Lower), finiteOrNone("upper limit", v.Upper)} {
			if err != nil {
				return fmt.Errorf("channel %q on %s: %w", m.Decomposition.Channels[i/keptOf(m)], componentName(i%keptOf(m)), err)
			}
		}
	}
	return checkLoadings(m, panels(m))
}

func loadingsTitle(m *Material, k int) string {
	switch kept := keptOf(m); {
	case kept == 0:
		return "No component kept; what the first is made of"
	case kept == 1:
		return "What the component kept is made of"
	case k < kept:
		return fmt.Sprintf("What the first %d of %d components kept are made of", k, kept)
	}
	return fmt.Sprintf("What the %d components kept are made of", k)
}

func largestLoading(d *pca.Decomposition, j, k int) float64 {
	top := 0.0
	for a := range k {
		top = math.Max(top, math.Abs(d.Loading(j, a)))
	}
	return top
}

// drawPanels draws one panel of bars per component beside one column of names.
func drawPanels(c draw.Canvas, m *Material, order []int, limit float64, set panelSet) {
	d, k := m.Decomposition, set.k
	names := make([]string, len(order))
	for i, j := range order {
		names[i] = d.Channels[j]
	}
	marks := nameMarks(names)
	column := labelRoom(marks)
	const gap = vg.Length(12)
	width := (c.Max.X - c.Min.X - column - gap*vg.Length(k-1)) / vg.Length(k)
	if k == 1 {
		width *= .8 // one panel alone need not be as wide as the page
	}
	ticks := roundMarks(-limit, limit, 4)
	outermost := ticks[len(ticks)-1].at
	head := textStyle(textSize, ink, text.XCenter, text.YBottom)
	small := textStyle(smallSize, ink, text.XCenter, text.YTop)
	for a := range k {
		f := &frame{c: c, left: c.Min.X + column + vg.Length(a)*(width+gap), low: c.Min.Y + rowStep, high: c.Max.Y - panelHead,
			x0: -limit, x1: limit, y0: float64(len(order)) - .5, y1: -.5}
		f.right = f.left + width
		if a == 0 {
			(&layout{}).drawY(f, marks)
			fifths(f, len(order), f.left+vg.Length(k)*(width+gap)-gap)
		}
		for _, x := range []float64{-outermost, outermost} {
			f.c.StrokeLine2(line(grid, hairline), f.x(x), f.low, f.x(x), f.high)
		}
		for i, j := range order {
			v := set.loading(j, a)
			col := kept
			if v < 0 {
				col = against
			}
			fill(f.c, col, f.x(0), f.y(float64(i)-.36), f.x(v), f.y(float64(i)+.36))
			if low, high, ok := set.interval(j, a); ok {
				ends := []vg.Point{f.at(math.Max(low, -limit), float64(i)), f.at(math.Min(high, limit), float64(i))}
				f.c.StrokeLines(line(white, 2.2), ends)
				f.c.StrokeLines(line(ink, .9), ends)
			}
		}
		f.c.StrokeLine2(line(ink, hairline), f.x(0), f.low, f.x(0), f.high)
		f.c.FillText(head, vg.Point{X: f.x(0), Y: f.high + 3}, set.name(a)+"  "+percent(set.share(a)))
		for i, x := range []float64{-outermost, 0, outermost} {
			small.XAlign = []text.XAlignment{text.XLeft, text.XCenter, text.XRight}[i]
			f.c.FillText(small, vg.Point{X: f.x(x) + 2*vg.Length(i-1), Y: f.low - labelGap}, number(x, 3))
		}
	}
}
