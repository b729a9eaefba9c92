package pcr_test

import (
	"math"
	"testing"

	"axisfold/pca"
	"axisfold/pcr"
	"axisfold/testdata/published"
)

// Hald's cement on components 1 and 3, which Cp keeps: computed once in NumPy. Every fold
// leaves one row out and takes its own first and third; PRESS is that in order of correlation.
func TestSubsetHald(t *testing.T) {
	table := published.CSV(t, "reference/classic/hald_cement.csv")
	s := defaults(table.Names...)
	s.options.Which, s.options.Components, s.folds, s.options.Nested = []int{0, 2}, 2, 13, true
	m := s.press(t, table.Data).Models[0]
	for j, want := range []float64{1.3227, .2661, -.1546, -.3767} {
		if got := m.Terms[j].Coefficient; math.Abs(got-want) > 6e-5 {
			t.Errorf("%s: %g, want %g", m.Terms[j].Name, got, want)
		}
	}
	step := m.Path[2]
	if math.Abs(m.Intercept.Coefficient-85.860528) > 6e-7 || math.Abs(step.Squares-48.823096) > 6e-7 || math.Abs(step.Cp-1.16037) > 6e-6 {
		t.Errorf("intercept %.8g, squares %.8g, Cp %.6g", m.Intercept.Coefficient, step.Squares, step.Cp)
	}
	if m.Procedure.CV != step.CV {
		t.Errorf("procedure %g, held-out error %g: nothing is chosen", m.Procedure.CV, step.CV)
	}
	total := 0.0
	for row := range 13 {
		at := func(c int) []float64 { return table.Data[c*5 : c*5+5] }
		squares, _ := brute(t, s, at, pca.HoldEachOut(13)[row], 2)
		total += squares
	}
	if want := math.Sqrt(total / 13); math.Abs(step.CV/want-1) > 1e-10 {
		t.Errorf("held out %g, by brute force %g", step.CV, want)
	}
	s.options.Which, s.options.Order = nil, pcr.ByCorrelation
	if other := s.press(t, table.Data).Models[0].Path[2]; math.Abs(other.Press/step.Press-1) > 1e-12 {
		t.Errorf("PRESS %g; by correlation %g", step.Press, other.Press)
	}
	s.options.Which, s.options.Order = []int{0, 4}, pcr.ByVariance
	whole, folds := s.summaries(table.Data)
	x, y := s.positions()
	if _, err := pcr.Fit(whole, folds, x, y, s.fitOptions()); err == nil {
		t.Error("component 5 of 4: no error")
	}
}
