package pcr_test

import (
	"math"
	"slices"
	"testing"

	"axisfold/pcr"
	"axisfold/testdata/published"
)

// Hald's cement: PRESS with directions fixed and with everything made anew in each fold of
// one row (computed once in NumPy; the second is what leave-one-out folds give), equal with all
// components, and SST·(n/(n-1))² without any (closed form).
func TestPressHald(t *testing.T) {
	table := published.CSV(t, "reference/classic/hald_cement.csv")
	s := defaults(table.Names...)
	r := s.press(t, table.Data)
	fixed := []float64{3187.2497, 132.30357, 168.19118, 90.061148, 110.34656}
	for k, want := range fixed {
		if got := r.Models[0].Path[k].Press; math.Abs(got/want-1) > 1e-7 {
			t.Errorf("k = %d: %.8g, want %.8g", k, got, want)
		}
	}
	s.options.Choice = pcr.SmallestPress
	if k := s.press(t, table.Data).Models[0].Components; k != 3 {
		t.Errorf("the smallest PRESS is at %d components, want 3", k)
	}
	s.options.Choice, s.folds = pcr.Given, 13
	refit := []float64{3187.2497, 140.8621, 155.81066, 90.019959, 110.34656}
	for k, step := range s.press(t, table.Data).Models[0].Path {
		if got := 13 * step.CV * step.CV; math.Abs(got/refit[k]-1) > 1e-7 {
			t.Errorf("anew, k = %d: %.8g, want %.8g", k, got, refit[k])
		}
	}
}

// Without an intercept, and with the mean of a scaling that does not centre there, against
// least squares refitted without each row: with all components the two are the same.
func TestPressRefitted(t *testing.T) {
	table := published.CSV(t, "reference/classic/hald_cement.csv")
	s := defaults(table.Names...)
	s.method, s.matrix, s.options.ThroughOrigin, s.folds = "none", "covariance", true, 13
	for range 2 {
		path := s.press(t, table.Data).Models[0].Path
		if last := path[len(path)-1]; math.Abs(last.Press/(13*last.CV*last.CV)-1) > 1e-10 {
			t.Errorf("through origin %t: %.12g, refitted %.12g", s.options.ThroughOrigin, last.Press, 13*last.CV*last.CV)
		}
		s.options.ThroughOrigin = false
	}
}

// A row that alone moves a channel leaves nothing to predict it by.
func TestPressOfADeterminedRow(t *testing.T) {
	data := []float64{0, 1, 3, 0, 2, 1, 0, 4, 2, 1, 3, 9, 0, 7, 5}
	path := defaults("a", "b", "y").press(t, data).Models[0].Path
	if !math.IsNaN(path[2].Press) || math.IsNaN(path[1].Press) {
		t.Errorf("%v, %v: want a number, then none", path[1].Press, path[2].Press)
	}
}

// press fits after a pass over the rows in two parts.
func (s setup) press(t *testing.T, data []float64) *pcr.Result {
	t.Helper()
	whole, folds := s.summaries(data)
	x, y := s.positions()
	o := s.fitOptions()
	p, err := pcr.NewPress(whole, x, y, o)
	if err != nil {
		t.Fatal(err)
	}
	width, half := len(x)+len(y), len(data)/(len(x)+len(y))/2*(len(x)+len(y))
	o.Press = p.Sums()
	for _, part := range [][]float64{data[:half], data[half:]} {
		var rows []float64
		for row := range slices.Chunk(part, width) {
			rows = append(rows, row[:len(x)]...)
		}
		sums := p.Sums()
		p.Rows().Add(sums, rows, func(row, response int) float64 { return part[row*width+len(x)+response] }, len(part)/width)
		o.Press.Merge(sums)
	}
	r, err := pcr.Fit(whole, folds, x, y, o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}
