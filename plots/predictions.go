package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

var predictions = Picture{Name: "predictions", perResponse: true,
	Caption: "Observed against predicted values of the rows of the fit; on the line they agree.",
	ready:   func(m *Material) bool { return hasRegression(m) && len(m.Observed) > 0 && len(m.Observed[0]) > 0 },
	check:   checkPredictions,
	words: func(m *Material, r int) (title, subtitle string) {
		model := m.Regression.Models[r]
		title = brief(model.Response) + " observed and predicted"
		if !math.IsNaN(model.R2) {
			title += fmt.Sprintf(": R² %.3f", model.R2)
		}
		return title, sampled(len(m.Observed[r]), m.TotalRows, " of the fit")
	},
	height: func(*Material, int) vg.Length { return 13.5 * vg.Centimeter },
	draw: func(m *Material, r int, c draw.Canvas) {
		observed, predicted := m.Observed[r], m.Predicted[r]
		low, high := extent(observed, predicted)
		low, high = padded(low, high, .03)
		unit := bracketed(m.unit(r))
		f := layout{x: axis{title: "predicted" + unit, low: low, high: high, grid: true},
			y: axis{title: "observed" + unit, low: low, high: high, grid: true}, equal: true,
			key: []entry{{"observed as predicted", stroke(line(against, strongLine))}}}.on(c)
		f.diagonal()
		for i := range observed {
			f.c.DrawGlyphNoClip(dot(fade(kept, seeThrough(len(observed))), 1.8), f.at(predicted[i], observed[i]))
		}
	}}

// sampled says how many rows are shown of how many; what follows the word rows.
func sampled(rows int, total int64, what string) string {
	if int64(rows) < total {
		return fmt.Sprintf("%d of %d rows%s, evenly spaced", rows, total, what)
	}
	if rows == 1 {
		return "the one row" + what
	}
	return fmt.Sprintf("all %d rows%s", rows, what)
}

// seeThrough is the opacity of the points of a cloud of n: the more, the fainter.
func seeThrough(n int) float64 {
	switch {
	case n <= 300:
		return .8
	case n <= 1500:
		return .55
	}
	return .45
}

func checkPredictions(m *Material, r int) error {
	response := m.Regression.Models[r].Response
	if len(m.Observed) <= r || len(m.Predicted) <= r || len(m.Observed[r]) != len(m.Predicted[r]) || len(m.Observed[r]) == 0 {
		return fmt.Errorf("%s: want as many predicted as observed rows, and at least one", response)
	}
	for _, err := range []error{allFinite("observed value", m.Observed[r]), allFinite("predicted value", m.Predicted[r]),
		finiteOrNone("R²", m.Regression.Models[r].R2)} {
		if err != nil {
			return fmt.Errorf("%s: %w", response, err)
		}
	}
	return nil
}
