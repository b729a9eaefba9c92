package pca_test

import (
	"math"
	"testing"

	"axisfold/pca"
	"axisfold/testdata/published"
)

// With all correlations equal to r the measure is 1/(1+(1+(p-2)r)⁻²), for every channel
// alike: p = 4, r = ½ gives .8 exactly. Sphericity is -(n-1-(2p+5)/6)·ln|R| with
// |R| = (1-r)^(p-1)·(1+(p-1)r).
func TestAdequacyOfEqualCorrelations(t *testing.T) {
	for _, c := range []struct {
		p int
		r float64
	}{{4, .5}, {3, .2}, {8, .9}, {2, .3}} {
		r := make([]float64, c.p*c.p)
		for i := range r {
			r[i] = c.r
			if i%(c.p+1) == 0 {
				r[i] = 1
			}
		}
		n, p := 100, float64(c.p)
		a := pca.Adequate(r, c.p, n)
		inverse := 1 + (p-2)*c.r
		want := 1 / (1 + 1/(inverse*inverse))
		if math.Abs(a.KMO-want) > 1e-14 || math.Abs(a.Channel[c.p-1]-want) > 1e-14 {
			t.Errorf("p=%d r=%g: %g and %g, closed form %g", c.p, c.r, a.KMO, a.Channel[c.p-1], want)
		}
		log := (p-1)*math.Log(1-c.r) + math.Log(1+(p-1)*c.r)
		if want := -(99 - (2*p+5)/6) * log; published.Digits(a.Sphericity, want) < 12 || a.Freedom != c.p*(c.p-1)/2 {
			t.Errorf("p=%d r=%g: sphericity %g on %d, closed form %g", c.p, c.r, a.Sphericity, a.Freedom, want)
		}
	}
}

// NIST/SEMATECH e-Handbook 6.5.5.2: |R| = .499 printed; the measure .493034 and the
// sphericity 4.985617 (P = .172853) were computed once in NumPy.
func TestAdequacyOfWafers(t *testing.T) {
	table := published.CSV(t, "reference/handbook/pmc552_wafer_10x3.csv")
	a := pca.Adequate(inBlocks(table.Data, 3, pca.Factor, 4).Correlations(), 3, 10)
	if math.Abs(math.Pow(10, a.Log10Det)-.499) > 5e-4 || math.Abs(a.KMO-.493034) > 5e-7 ||
		math.Abs(a.Sphericity-4.985617) > 5e-7 || math.Abs(a.P-.172853) > 5e-7 {
		t.Errorf("%+v", a)
	}
}

func TestInadequate(t *testing.T) {
	copies := []float64{1, 1, .3, 1, 1, .3, .3, .3, 1}
	for _, a := range []*pca.Adequacy{pca.Adequate(copies, 3, 50), pca.Adequate([]float64{1}, 1, 50), pca.Adequate([]float64{1, 0, 0, 1}, 2, 2)} {
		if a.Defined || a.Reason == "" {
			t.Errorf("%+v", a)
		}
	}
}
