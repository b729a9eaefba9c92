package plots

import (
	"testing"

	"gonum.org/v1/plot/vg"

	"axisfold/pcr"
)

// Labels keep their order and a row's distance, and stay within the frame.
func TestSpread(t *testing.T) {
	for _, wanted := range [][]vg.Length{{100, 99, 98, 97}, {5, 4, 3, 2}, {60, 60, 60}, {100, 50, 0}, {200, 200, -50}, {50}} {
		got := spread(len(wanted), func(i int) vg.Length { return wanted[i] }, 0, 100)
		for i, y := range got {
			if y < -1e-9 || y > 100+1e-9 || i > 0 && got[i-1]-y < rowStep-1e-9 {
				t.Errorf("%v: placed at %v", wanted, got)
			}
		}
	}
}

// The frame holds the model; what explodes beyond it is cut off, and far beyond not drawn.
func TestPathLimit(t *testing.T) {
	m := &pcr.Model{Components: 2}
	for k := range 100 {
		v := float64(k) / 2
		if k > 10 {
			v *= 1000
		}
		m.Coefficients = append(m.Coefficients, pcr.PathStep{Components: k, Standardized: []float64{v, -v / 3}})
	}
	if limit, cut := pathLimit(m); limit != 2 || !cut {
		t.Errorf("limit %g, cut %v", limit, cut)
	}
	if got := len(shownSteps(m)); got != 41 {
		t.Errorf("%d steps shown", got)
	}
	m.Coefficients = append(m.Coefficients[:7], m.Coefficients[20:]...)
	if got := len(shownSteps(m)); got != 7 {
		t.Errorf("%d steps shown, though the path leaves out the next", got)
	}
	m.Coefficients = m.Coefficients[:4]
	if limit, cut := pathLimit(m); limit < 1.57 || limit > 1.58 || cut {
		t.Errorf("limit %g, cut %v", limit, cut)
	}
}
