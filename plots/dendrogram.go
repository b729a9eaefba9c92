package plots

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"axisfold/pca"
)

// closeJoin is the mean 1-|r| up to which a join is drawn strongly: the channels tell one
// story, as the choice of channels sees it.
const closeJoin = 0.1

var dendrogram = Picture{Name: "dendrogram",
	Caption: "How channels join into clusters by their correlations, whatever the sign: the farther left two branches meet, the more alike are their channels on average. Dark branches meet at 0.9 or above.",
	ready: func(m *Material) bool {
		p := len(m.Decomposition.Channels)
		return m.Tree != nil && p >= 3 && p <= mostMapped
	},
	check: func(m *Material, _ int) error {
		p := len(m.Decomposition.Channels)
		if err := checkOrder(m.Tree.Order, p); err != nil {
			return err
		}
		if err := counts("joins of channels", len(m.Tree.Joins), p-1); err != nil {
			return err
		}
		for i, j := range m.Tree.Joins {
			if j.A < 0 || j.B < 0 || j.A >= p+i || j.B >= p+i {
				return fmt.Errorf("join %d puts together what comes after it", i+1)
			}
			if err := finite("distance of a join", j.Distance); err != nil {
				return err
			}
		}
		return nil
	},
	words: func(m *Material, _ int) (title, subtitle string) {
		p := len(m.Decomposition.Channels)
		clusters := m.Tree.Cut(closeJoin)
		joined := 0
		for _, c := range clusters {
			joined += len(c)
		}
		switch {
		case len(clusters) == 0:
			title = fmt.Sprintf("None of %d channels is nearly another", p)
		case len(clusters) == 1:
			title = fmt.Sprintf("%d of %d channels tell one story", joined, p)
		default:
			title = fmt.Sprintf("%d of %d channels fall into %d clusters of like ones", joined, p, len(clusters))
		}
		subtitle = "branches meet at the mean correlation between their channels, whatever its sign; dark: 0.9 or above"
		if m.Reduction != nil {
			subtitle += "; bold: kept"
		}
		return title, subtitle
	},
	height: func(m *Material, _ int) vg.Length {
		p := min(len(m.Decomposition.Channels), mostRows)
		return rowHeight(p)*vg.Length(p) + 2*rowStep
	},
	draw: func(m *Material, _ int, c draw.Canvas) {
		p := len(m.Decomposition.Channels)
		l := layout{x: axis{title: "mean |correlation| at which they join", high: joinAt(1), marks: joinMarks(m.Tree)},
			y: axis{low: float64(p) - .5, high: -.5, marks: leafMarks(m, c)}}
		l.x.high = l.x.marks[len(l.x.marks)-1].at
		f := l.on(c)
		for _, x := range l.x.marks {
			f.c.StrokeLine2(line(grid, hairline), f.x(x.at), f.low, f.x(x.at), f.high)
		}
		height := make([]float64, 2*p-1) // place down the page, by channel and join
		depth := make([]float64, 2*p-1)
		for i, j := range m.Tree.Order {
			height[j] = float64(i)
		}
		for i, j := range m.Tree.Joins {
			height[p+i], depth[p+i] = (height[j.A]+height[j.B])/2, joinAt(j.Distance)
			style := line(quiet, hairline)
			if j.Distance <= closeJoin {
				style = line(kept, strongLine)
			}
			f.c.StrokeLines(style, []vg.Point{f.at(depth[j.A], height[j.A]), f.at(depth[p+i], height[j.A]),
				f.at(depth[p+i], height[j.B]), f.at(depth[j.B], height[j.B])})
		}
	}}

// joinAt is where a join of that distance lies: the root spreads out near copies.
func joinAt(distance float64) float64 { return math.Sqrt(math.Max(distance, 0)) }

// joinMarks labels the axis by correlation, no farther than the last join needs.
func joinMarks(t *pca.Tree) []mark {
	top := 0.0
	for _, j := range t.Joins {
		top = math.Max(top, j.Distance)
	}
	var out []mark
	for _, r := range []struct {
		value float64
		label string
	}{{1, "1"}, {.999, "0.999"}, {.99, "0.99"}, {.95, "0.95"}, {.9, "0.9"}, {.8, "0.8"}, {.6, "0.6"}, {.4, "0.4"}, {.2, "0.2"}, {0, "0"}} {
		out = append(out, mark{at: joinAt(1 - r.value), label: r.label})
		if 1-r.value >= top {
			break
		}
	}
	// Marks too close to the next are left out, from the right, where joins are few.
	apart := out[len(out)-1].at / 14
	kept := out[:1]
	for i := 1; i < len(out); i++ {
		if out[i].at-kept[len(kept)-1].at >= apart {
			kept = append(kept, out[i])
		} else if i == len(out)-1 {
			kept[len(kept)-1] = out[i]
		}
	}
	return kept
}

// leafMarks names the channels, as many as find room; those that were kept are bold.
func leafMarks(m *Material, c draw.Canvas) []mark {
	p := len(m.Decomposition.Channels)
	names := make([]string, p)
	for i, j := range m.Tree.Order {
		names[i] = m.Decomposition.Channels[j]
	}
	marks := nameMarks(names)
	every := int(math.Ceil(float64(vg.Length(p) * smallSize * 1.1 / (c.Max.Y - c.Min.Y - 2*rowStep))))
	var out []mark
	for i := range marks {
		marks[i].strong = m.Reduction != nil && slices.Contains(m.Reduction.Kept, m.Tree.Order[i])
		if i%every == 0 {
			out = append(out, marks[i])
		}
	}
	return out
}
