package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"axisfold/pcr"
)

var validation = Picture{Name: "validation", perResponse: true, ready: hasRegression,
	Caption: "Root mean squared error against the number of components, of the rows the model was fitted to and of rows held out, with one standard error over the folds either way. Where the first components dwarf the rest, a second frame looks closer at the number chosen.",
	check:   checkPath,
	words: func(m *Material, r int) (title, subtitle string) {
		model := m.Regression.Models[r]
		title = fmt.Sprintf("%s from %s", brief(model.Response), components(model.Components))
		if model.Components == 0 {
			title = brief(model.Response) + " from its mean alone"
		}
		if cv := model.Path[model.Components].CV; !math.IsNaN(cv) {
			title += fmt.Sprintf(": off by %s%s on held-out rows", number(cv, 3), spaced(m.unit(r)))
		}
		switch {
		case !anyHeldOut(model):
			return title, "no rows were held out"
		case model.Folds > 0:
			return title, fmt.Sprintf("bars: one standard error over the %d folds", model.Folds)
		}
		return title, "bars: one standard error over the folds"
	},
	height: func(m *Material, r int) vg.Length {
		if _, _, ok := closerErrors(m.Regression.Models[r]); ok {
			return 11.5 * vg.Centimeter
		}
		return 7.5 * vg.Centimeter
	},
	draw: func(m *Material, r int, c draw.Canvas) {
		model := m.Regression.Models[r]
		unit := m.unit(r)
		n := len(model.Path)
		key := []entry{{"rows of the fit", stroke(line(against, strongLine))}, {"chosen", stroke(line(pale, 5))}}
		if anyHeldOut(model) {
			key = append([]entry{{"held-out rows", stroke(line(kept, strongLine))}}, key...)
		}
		top := highestError(model) * 1.05
		x := axis{title: "number of components", low: -.5, high: float64(n) - .5, marks: counted(0, n-1, c.Max.X-c.Min.X-30)}
		whole := axis{title: "root mean squared error" + bracketed(unit), high: top, grid: true}
		low, high, ok := closerErrors(model)
		if !ok {
			f := layout{x: x, y: whole, key: key}.on(c)
			errorCurves(f, model)
			f.base(0)
			return
		}
		near := axis{title: "closer: the same errors, not from 0", low: low, high: high, grid: true}
		room := max(whole.room(), near.room())
		upper, lower := split(c, .43)
		bare := axis{low: x.low, high: x.high, marks: []mark{}}
		f := layout{x: bare, y: whole, key: key, room: room}.on(upper)
		errorCurves(f, model)
		f.base(0)
		errorCurves(layout{x: x, y: near, room: room}.on(lower), model)
	}}

// errorCurves draws both errors and marks the number chosen; what lies outside the frame
// is cut off.
func errorCurves(f *frame, model *pcr.Model) {
	inside := f.inside()
	x := f.x(float64(model.Components))
	f.c.StrokeLine2(line(pale, 5), x, f.low, x, f.high)
	var fit, cv []vg.Point
	var bars [][]vg.Point
	for k, s := range model.Path {
		fit = append(fit, f.at(float64(k), s.RootMean))
		if math.IsNaN(s.CV) {
			continue
		}
		cv = append(cv, f.at(float64(k), s.CV))
		if !math.IsNaN(s.CVError) {
			bars = append(bars, []vg.Point{f.at(float64(k), math.Max(s.CV-s.CVError, 0)), f.at(float64(k), s.CV+s.CVError)})
		}
	}
	inside.StrokeLines(line(mix(white, kept, .6), hairline*1.6), inside.ClipLinesXY(bars...)...)
	f.curve(fit, line(against, strongLine), draw.BoxGlyph{})
	f.curve(cv, line(kept, strongLine), draw.CircleGlyph{})
}

func anyHeldOut(model *pcr.Model) bool {
	for _, s := range model.Path {
		if !math.IsNaN(s.CV) {
			return true
		}
	}
	return false
}

func highestError(model *pcr.Model) float64 {
	top := 0.0
	for _, s := range model.Path {
		for _, v := range []float64{s.RootMean, s.CV, s.CV + s.CVError} {
			if v > top { // not for NaN
				top = v
			}
		}
	}
	if top == 0 {
		return 1
	}
	return top
}

// closerErrors is the range of a closer look: around the errors, with their bars, of the
// number chosen and of the best one; ok is false where the whole picture shows it well.
func closerErrors(model *pcr.Model) (low, high float64, ok bool) {
	best := model.Path[model.Components]
	if math.IsNaN(best.CV) || len(model.Path) < 4 {
		return 0, 0, false
	}
	for _, s := range model.Path {
		if s.CV < best.CV {
			best = s
		}
	}
	low, high = math.Inf(1), math.Inf(-1)
	for _, s := range []pcr.Step{best, model.Path[model.Components]} {
		for _, v := range []float64{s.RootMean, s.CV, s.CV - s.CVError, s.CV + s.CVError} {
			if !math.IsNaN(v) {
				low, high = math.Min(low, v), math.Max(high, v)
			}
		}
	}
	low, high = padded(low, high, .5)
	low = math.Max(low, 0)
	return low, high, high-low < .35*highestError(model)
}

func checkPath(m *Material, r int) error {
	model := m.Regression.Models[r]
	if k := model.Components; k < 0 || k >= len(model.Path) {
		return fmt.Errorf("%s: a model on %s, but errors of only %d", model.Response, components(k), len(model.Path)-1)
	}
	for _, s := range model.Path {
		for _, err := range []error{finite("error of the fit", s.RootMean), finiteOrNone("error of held-out rows", s.CV),
			finiteOrNone("standard error", s.CVError)} {
			if err != nil {
				return fmt.Errorf("%s on %s: %w", model.Response, components(s.Components), err)
			}
		}
	}
	return nil
}

func hasRegression(m *Material) bool { return m.Regression != nil && len(m.Regression.Models) > 0 }

// unit is that of response r, empty where unknown.
func (m *Material) unit(r int) string {
	if r < len(m.Units) {
		return m.Units[r]
	}
	return ""
}

func bracketed(unit string) string {
	if unit == "" {
		return ""
	}
	return " (" + unit + ")"
}

func spaced(unit string) string {
	if unit == "" {
		return ""
	}
	return " " + unit
}
