package plots

import (
	"cmp"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"axisfold/pcr"
)

// strongestPaths is how many channels are told apart in a picture of paths.
const strongestPaths = 6

var coefficientPath = Picture{Name: "coefficient-path", perResponse: true,
	Caption: "Standardized coefficients against the number of components that enter; the strongest of the model have names, the others are grey. With all components they are those of least squares.",
	ready: func(m *Material) bool {
		return hasRegression(m) && len(m.Decomposition.Channels) > 1 && len(m.Regression.Models[0].Coefficients) > 2
	},
	check: func(m *Material, r int) error {
		model := m.Regression.Models[r]
		for _, s := range model.Coefficients {
			if err := counts("coefficients", len(s.Standardized), len(m.Regression.Decomposition.Channels)); err != nil {
				return err
			}
			if err := allFinite("standardized coefficient", s.Standardized); err != nil {
				return fmt.Errorf("%s on %s: %w", model.Response, components(s.Components), err)
			}
		}
		return nil
	},
	words: func(m *Material, r int) (title, subtitle string) {
		model := m.Regression.Models[r]
		title = fmt.Sprintf("How the coefficients of %s come about", brief(model.Response))
		subtitle = "standardized coefficients by number of components"
		if _, cut := pathLimit(model); cut {
			subtitle += "; what runs out of the frame is cut off"
		}
		if steps := shownSteps(model); len(steps) < len(model.Coefficients) {
			subtitle += fmt.Sprintf("; up to %d of %d", steps[len(steps)-1].Components, len(model.Path)-1)
		}
		return title, subtitle
	},
	height: func(*Material, int) vg.Length { return 9 * vg.Centimeter },
	draw: func(m *Material, r int, c draw.Canvas) {
		model := m.Regression.Models[r]
		p := len(m.Regression.Decomposition.Channels)
		steps := shownSteps(model)
		last := steps[len(steps)-1].Components
		limit, _ := pathLimit(model)
		column := vg.Length(3.4 * vg.Centimeter) // names at the right
		key := []entry{{"chosen", stroke(line(pale, 5))}, {"other channels", stroke(line(pale, hairline*1.4))}}
		inner := c
		inner.Max.X -= column
		f := layout{x: axis{title: "number of components", low: 0, high: float64(last), marks: counted(0, last, inner.Max.X-inner.Min.X-30)},
			y: axis{title: "standardized coefficient", low: -limit, high: limit, grid: true}, key: key}.on(inner)
		x := f.x(float64(model.Components))
		f.c.StrokeLine2(line(pale, 5), x, f.low, x, f.high)
		f.base(0)
		in := f.inside()
		path := func(j int) []vg.Point {
			var out []vg.Point
			for _, s := range steps {
				out = append(out, f.at(float64(s.Components), s.Standardized[j]))
			}
			return out
		}
		order := fileOrder(p)
		slices.SortStableFunc(order, func(a, b int) int {
			return cmp.Compare(math.Abs(model.Terms[b].Standardized), math.Abs(model.Terms[a].Standardized))
		})
		strong := order[:min(strongestPaths, p)]
		for _, j := range order[len(strong):] {
			in.StrokeLines(line(pale, hairline*1.4), in.ClipLinesXY(path(j))...)
		}
		// Names stand at the right in the order of where their lines leave the frame.
		ends := slices.Clone(strong)
		end := func(j int) vg.Length {
			points := path(j)
			return max(f.low, min(f.high, points[len(points)-1].Y))
		}
		slices.SortStableFunc(ends, func(a, b int) int { return cmp.Compare(end(b), end(a)) })
		places := spread(len(ends), func(i int) vg.Length { return end(ends[i]) }, f.low+rowStep/2, f.high-rowStep/2)
		style := textStyle(smallSize, ink, text.XLeft, text.YCenter)
		for i, j := range ends {
			color := groupColors[slices.Index(strong, j)%len(groupColors)]
			points := path(j)
			in.StrokeLines(line(color, strongLine), in.ClipLinesXY(points)...)
			c.StrokeLine2(line(color, hairline), f.right, end(j), f.right+10, places[i])
			style.Color = color
			if color == groupColors[1] {
				style.Color = againstInk
			} else if color == groupColors[4] {
				style.Color = ink // too light for small letters
			}
			c.FillText(style, vg.Point{X: f.right + 13, Y: places[i]}, shorten(named(m.Regression.Decomposition.Channels[j]), column-20, style))
		}
	}}

// shownSteps leaves out what lies far beyond the number chosen where there are many: there
// the coefficients run wild, and nothing can be made out. Nor does it go on past numbers
// that a long path leaves out.
func shownSteps(model *pcr.Model) []pcr.PathStep {
	most := max(40, 2*model.Components+6)
	for k, s := range model.Coefficients {
		if s.Components > most || s.Components != k {
			return model.Coefficients[:k]
		}
	}
	return model.Coefficients
}

// pathLimit is the range of a picture of paths: what the coefficients of the model and of
// fewer components need, with room; cut tells whether others leave it.
func pathLimit(model *pcr.Model) (limit float64, cut bool) {
	top := 0.0
	for _, s := range shownSteps(model) {
		most := 0.0
		for _, v := range s.Standardized {
			most = math.Max(most, math.Abs(v))
		}
		if s.Components <= model.Components {
			limit = math.Max(limit, most)
		}
		top = math.Max(top, most)
	}
	if limit == 0 {
		limit = top
	}
	if limit = 2 * limit; limit >= top {
		limit = 1.05 * top
	}
	if limit == 0 {
		limit = 1
	}
	return limit, top > limit
}

// spread gives n labels, wanted at falling heights, places at least a row apart between
// low and high.
func spread(n int, wanted func(i int) vg.Length, low, high vg.Length) []vg.Length {
	out := make([]vg.Length, n)
	for i := range out {
		out[i] = min(wanted(i), high-vg.Length(i)*rowStep)
		if i > 0 {
			out[i] = min(out[i], out[i-1]-rowStep)
		}
	}
	for i := n - 1; i >= 0; i-- {
		floor := low + vg.Length(n-1-i)*rowStep
		if i < n-1 {
			floor = max(floor, out[i+1]+rowStep)
		}
		out[i] = max(out[i], floor)
	}
	return out
}
