package pcr

import (
	"math"
	"math/rand/v2"
	"testing"

	"axisfold/pca"
)

// The sums give what Duan's definition gives, the mean over the residuals of prediction
// plus residual turned back; in parts too.
func TestSmearingDefinition(t *testing.T) {
	rng := rand.New(rand.NewPCG(51, 52))
	for _, transform := range []pca.Transform{pca.Log, pca.Log10, pca.SquareRoot, pca.NoTransform} {
		whole, part := Smearing{Transform: transform}, Smearing{Transform: transform}
		var residuals []float64
		for i := range 200 {
			e := .3*rng.NormFloat64() + .01
			residuals = append(residuals, e)
			if i < 80 {
				whole.Add(e)
			} else {
				part.Add(e)
			}
		}
		whole.Merge(part)
		for _, predicted := range []float64{2, 5.5} {
			want := 0.0
			for _, e := range residuals {
				want += transform.Invert(predicted+e) / float64(len(residuals))
			}
			if transform == pca.NoTransform {
				want = predicted // the fit is on this scale, and stands
			}
			if got := whole.Mean(predicted); math.Abs(got-want) > 1e-12*want {
				t.Errorf("%s at %g: %.15g, by definition %.15g", transform, predicted, got, want)
			}
		}
	}
}

// For normal residuals of deviation s the mean of a lognormal is exp(s²/2) times its
// median (Aitchison & Brown 1957).
func TestSmearingOfNormalResiduals(t *testing.T) {
	rng := rand.New(rand.NewPCG(53, 54))
	s := Smearing{Transform: pca.Log}
	n, sd := 200000, .8
	for range n {
		s.Add(sd * rng.NormFloat64())
	}
	want := math.Exp(sd * sd / 2)
	// Monte Carlo: the deviation of exp(e) is exp(s²/2)·√(exp(s²)-1).
	slip := want * math.Sqrt((math.Exp(sd*sd)-1)/float64(n))
	if math.Abs(s.Factor()-want) > 4*slip {
		t.Errorf("factor %.5f, lognormal %.5f ± %.5f", s.Factor(), want, slip)
	}
}
