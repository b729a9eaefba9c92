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

var coefficients = Picture{Name: "coefficients", perResponse: true, ready: hasRegression,
	Caption: "Standardized coefficients of the regression on components with their intervals, largest first, beside those of ordinary least squares on all channels. Least-squares coefficients far outside are an arrow and a number at the edge.",
	check:   checkTerms,
	words: func(m *Material, r int) (title, subtitle string) {
		model := m.Regression.Models[r]
		subtitle = "regression on " + components(model.Components)
		if anyOf(standardized(model), func(t drawnTerm) float64 { return t.low }) {
			subtitle += "; bars: "
			if m.Confidence > 0 {
				subtitle += fmt.Sprintf("%g %% ", 100*m.Confidence)
			}
			subtitle += "intervals that take components and their number as given"
		}
		if p := len(model.Terms); p > mostRows {
			subtitle += fmt.Sprintf("; the %d largest of %d coefficients", mostRows, p)
		}
		return coefficientsTitle(model), subtitle
	},
	height: func(m *Material, r int) vg.Length {
		p := max(min(len(m.Regression.Models[r].Terms), mostRows), 1)
		return rowHeight(p)*vg.Length(p) + 3*rowStep + 9
	},
	draw: func(m *Material, r int, c draw.Canvas) {
		terms := standardized(m.Regression.Models[r])
		key := []entry{{"on components", swatch(dot(kept, 2.6))}}
		if anyOf(terms, func(t drawnTerm) float64 { return t.ordinary }) {
			key = append(key, entry{"ordinary least squares", swatch(glyph(againstInk, 2.8, draw.RingGlyph{}))})
		} else {
			key = append(key, entry{"ordinary least squares has no unique answer", func(draw.Canvas, vg.Point) {}})
		}
		drawTerms(c, terms, key)
	}}

// drawnTerm is a term in standardized units; NaN where a number does not exist.
type drawnTerm struct {
	name                       string
	value, low, high, ordinary float64
}

// standardized brings intervals to the scale of the standardized coefficients, by the
// ratio that the term itself shows; sorted by value, the largest of many.
func standardized(model *pcr.Model) []drawnTerm {
	var out []drawnTerm
	for _, j := range largest(fileOrder(len(model.Terms)), mostRows, func(j int) float64 { return math.Abs(model.Terms[j].Standardized) }) {
		t := model.Terms[j]
		d := drawnTerm{name: t.Name, value: t.Standardized, low: math.NaN(), high: math.NaN(), ordinary: t.OrdinaryStandardized}
		if t.Coefficient != 0 {
			ratio := t.Standardized / t.Coefficient
			d.low, d.high = t.Lower*ratio, t.Upper*ratio
		}
		out = append(out, d)
	}
	slices.SortStableFunc(out, func(a, b drawnTerm) int { return cmp.Compare(b.value, a.value) })
	return out
}

func anyOf(terms []drawnTerm, value func(drawnTerm) float64) bool {
	for _, t := range terms {
		if !math.IsNaN(value(t)) {
			return true
		}
	}
	return false
}

func coefficientsTitle(model *pcr.Model) string {
	most, name := 0.0, ""
	for _, t := range model.Terms {
		if math.Abs(t.Standardized) > math.Abs(most) {
			most, name = t.Standardized, t.Name
		}
	}
	switch {
	case most > 0:
		return fmt.Sprintf("%s rises most with %s", brief(model.Response), brief(name))
	case most < 0:
		return fmt.Sprintf("%s falls most with %s", brief(model.Response), brief(name))
	}
	return fmt.Sprintf("%s follows no channel: its mean predicts it", brief(model.Response))
}

func drawTerms(c draw.Canvas, terms []drawnTerm, key []entry) {
	limit := coefficientLimit(terms)
	names := make([]string, len(terms))
	left, right := vg.Length(0), vg.Length(0) // gutters for what lies outside
	outside := textStyle(smallSize, againstInk, text.XLeft, text.YCenter)
	for i, t := range terms {
		names[i] = t.name
		if room := outside.Width(number(t.ordinary, 3)) + 14; t.ordinary > limit {
			right = max(right, room)
		} else if t.ordinary < -limit {
			left = max(left, room)
		}
	}
	// The gutters belong to the frame's range: as much of it as they take of its width.
	marks := nameMarks(names)
	width := c.Max.X - c.Min.X - labelRoom(marks) - 2
	per := 2 * limit / float64(width-left-right)
	x := axis{low: -limit, high: limit}
	x = axis{title: "standardized coefficient", low: -limit - per*float64(left), high: limit + per*float64(right), grid: true,
		marks: x.marked(width-left-right, outside.Width, 9)}
	f := layout{x: x, y: axis{low: float64(len(terms)) - .5, high: -.5, marks: marks}, key: key}.on(c)
	fifths(f, len(terms), f.right)
	f.c.StrokeLine2(line(ink, hairline), f.x(0), f.low, f.x(0), f.high)
	for i, t := range terms {
		y := f.y(float64(i))
		if !math.IsNaN(t.low) {
			f.c.StrokeLine2(line(kept, strongLine), f.x(math.Max(t.low, -limit)), y, f.x(math.Min(t.high, limit)), y)
		}
		f.c.DrawGlyphNoClip(dot(kept, 2.3), vg.Point{X: f.x(t.value), Y: y})
		switch {
		case t.ordinary > limit:
			f.arrow(f.x(limit)+3, 6, y)
			outside.XAlign = text.XLeft
			f.c.FillText(outside, vg.Point{X: f.x(limit) + 12, Y: y}, number(t.ordinary, 3))
		case t.ordinary < -limit:
			f.arrow(f.x(-limit)-3, -6, y)
			outside.XAlign = text.XRight
			f.c.FillText(outside, vg.Point{X: f.x(-limit) - 12, Y: y}, number(t.ordinary, 3))
		case !math.IsNaN(t.ordinary):
			f.c.DrawGlyphNoClip(glyph(againstInk, 2.8, draw.RingGlyph{}), vg.Point{X: f.x(t.ordinary), Y: y})
		}
	}
}

// arrow points from x by length.
func (f *frame) arrow(x, length, y vg.Length) {
	f.c.FillPolygon(against, []vg.Point{{X: x, Y: y - 2.5}, {X: x, Y: y + 2.5}, {X: x + length, Y: y}})
}

// coefficientLimit frames the coefficients and their intervals, and least squares as far
// as it stays within twice of that.
func coefficientLimit(terms []drawnTerm) float64 {
	own, all := 0.0, 0.0
	for _, t := range terms {
		for _, v := range []float64{t.value, t.low, t.high} {
			if !math.IsNaN(v) {
				own = math.Max(own, math.Abs(v))
			}
		}
		if !math.IsNaN(t.ordinary) {
			all = math.Max(all, math.Abs(t.ordinary))
		}
	}
	if own == 0 {
		own = all / 2
	}
	if own == 0 {
		own = 1
	}
	return 1.04 * math.Max(own, math.Min(all, 2*own))
}

func checkTerms(m *Material, r int) error {
	model := m.Regression.Models[r]
	if len(model.Terms) == 0 {
		return fmt.Errorf("%s: no coefficients", model.Response)
	}
	for _, t := range model.Terms {
		for _, err := range []error{finite("standardized coefficient", t.Standardized), finiteOrNone("lower end of the interval", t.Lower),
			finiteOrNone("upper end of the interval", t.Upper), finiteOrNone("least-squares coefficient", t.OrdinaryStandardized)} {
			if err != nil {
				return fmt.Errorf("%s, channel %q: %w", model.Response, t.Name, err)
			}
		}
	}
	return nil
}
