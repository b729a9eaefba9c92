package symeig

import (
	"math"
	"testing"
)

// Iterations at the lower end of the range of numbers: rotations stay rotations, and the
// sum of the eigenvalues stays.
func TestTurnLeftNearZero(t *testing.T) {
	for _, m := range []struct{ d, e []float64 }{
		{[]float64{0, 0, 0}, []float64{1e-170, 2e-170}},
		{[]float64{1e-165, 0, 3e-170}, []float64{1e-161, 2e-161}},
		{[]float64{0, 0, 1}, []float64{0x1p-1074, 1e-10}}, // falls apart on the way
	} {
		before, after, size := 0.0, 0.0, 0.0
		for _, v := range m.d {
			before += v
		}
		turnLeft(m.d, m.e, func(i int, cos, sin float64) {
			if e := math.Abs(cos*cos + sin*sin - 1); !(e < 8*epsilon) {
				t.Errorf("%g: cos² + sin² is off by %g", m.d, e)
			}
		})
		for _, v := range append(m.e, m.d...) {
			size = math.Max(size, math.Abs(v))
		}
		for _, v := range m.d {
			after += v
		}
		if !(math.Abs(after-before) <= 8*epsilon*size) {
			t.Errorf("sum of the diagonal %g, was %g", after, before)
		}
	}
}
