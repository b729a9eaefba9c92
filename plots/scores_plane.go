package plots

import (
	"fmt"
	"image/color"
	"slices"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

var scoresPlane = Picture{Name: "scores-plane",
	Caption: "Rows by their scores on the first two components, with colour and shape by group.",
	ready:   func(m *Material) bool { return twoKept(m) && m.ScoreRows > 0 },
	check:   checkScores,
	words: func(m *Material, _ int) (title, subtitle string) {
		return fmt.Sprintf("Rows in the plane of C1 and C2: %s of the variance", percent(m.Decomposition.CumulativeShare(1))),
			sampled(m.ScoreRows, m.TotalRows, "") + groupsOf(m).note
	},
	height: func(m *Material, _ int) vg.Length { return 50 + vg.Length(scoresPerWidth(m))*(inner-20) },
	draw: func(m *Material, _ int, c draw.Canvas) {
		xs, ys := m.score(0), m.score(1)
		groups := groupsOf(m)
		x0, x1 := extent(xs)
		y0, y1 := extent(ys)
		equal := span(x0, x1) <= 4*span(y0, y1) && span(y0, y1) <= 4*span(x0, x1)
		x0, x1 = padded(x0, x1, .03)
		y0, y1 = padded(y0, y1, .03)
		var key []entry
		for g, name := range groups.names {
			key = append(key, entry{name, swatch(glyph(groups.color(g), 2.7, groups.shape(g)))})
		}
		f := layout{x: axis{title: axisName(m, 0), low: x0, high: x1, grid: true},
			y: axis{title: axisName(m, 1), low: y0, high: y1, grid: true}, equal: equal, key: key}.on(c)
		for i := range xs {
			g := groups.of(i)
			f.c.DrawGlyphNoClip(glyph(fade(groups.color(g), seeThrough(len(xs))), 1.8, groups.shape(g)), f.at(xs[i], ys[i]))
		}
	}}

func twoKept(m *Material) bool { return keptOf(m) >= 2 }

func span(low, high float64) float64 { return high - low }

// scoresPerWidth is the height of the frame over its width: that of the cloud, within
// bounds.
func scoresPerWidth(m *Material) float64 {
	x0, x1 := extent(m.score(0))
	y0, y1 := extent(m.score(1))
	if !(x1 > x0) {
		return .8
	}
	return max(.5, min((y1-y0)/(x1-x0), .9))
}

func (m *Material) score(a int) []float64 {
	out := make([]float64, m.ScoreRows)
	for i := range out {
		out[i] = m.Scores[2*i+a]
	}
	return out
}

func axisName(m *Material, a int) string {
	return fmt.Sprintf("%s, %s of the variance", componentName(a), percent(m.Decomposition.Share(a)))
}

// groups is how rows are told apart.
type groups struct {
	names []string
	note  string
	codes []int // by row; nil makes one group of all
	shown []int // by code: the place among names, the last of which takes the rest
	rest  bool
}

func (g *groups) of(row int) int {
	if g.codes == nil {
		return 0
	}
	return g.shown[g.codes[row]]
}

func (g *groups) color(i int) color.RGBA {
	if g.rest && i == len(g.names)-1 {
		return pale
	}
	return groupColors[i]
}

func (g *groups) shape(i int) draw.GlyphDrawer { return groupShapes[i] }

// groupsOf shows up to as many groups as there are colours; of more, the largest in the
// sample, and the rest together in grey.
func groupsOf(m *Material) *groups {
	n := len(m.GroupNames)
	if len(m.Groups) == 0 || n < 2 {
		return &groups{}
	}
	g := &groups{names: m.GroupNames, codes: m.Groups, shown: make([]int, n)}
	for i := range g.shown {
		g.shown[i] = i
	}
	most := len(groupColors)
	if n <= most {
		return g
	}
	sizes := make([]int, n)
	for _, code := range m.Groups {
		sizes[code]++
	}
	bySize := fileOrder(n)
	slices.SortStableFunc(bySize, func(a, b int) int { return sizes[b] - sizes[a] })
	largest := slices.Clone(bySize[:most-1])
	slices.Sort(largest)
	g.names = nil
	for i := range g.shown {
		g.shown[i] = most - 1
	}
	for i, code := range largest {
		g.names = append(g.names, m.GroupNames[code])
		g.shown[code] = i
	}
	g.names = append(g.names, fmt.Sprintf("%d other groups", n-most+1))
	g.rest, g.note = true, fmt.Sprintf("; the %d largest of %d groups are told apart", most-1, n)
	return g
}

func checkScores(m *Material, _ int) error {
	if err := counts("scores", len(m.Scores), 2*m.ScoreRows); err != nil {
		return err
	}
	if err := allFinite("score", m.Scores); err != nil {
		return err
	}
	if len(m.Groups) == 0 {
		return nil
	}
	if err := counts("group codes", len(m.Groups), m.ScoreRows); err != nil {
		return err
	}
	for i, code := range m.Groups {
		if code < 0 || code >= len(m.GroupNames) {
			return fmt.Errorf("row %d is of group %d, but %d groups have names", i+1, code, len(m.GroupNames))
		}
	}
	return nil
}
