package retain_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"axisfold/pca"
	"axisfold/pca/retain"
)

// autoregressive fills n×p with independent series of first order and unit variance.
func autoregressive(rng *rand.Rand, n, p int, rho float64) []float64 {
	x := make([]float64, n*p)
	for j := range p {
		v := rng.NormFloat64()
		for i := range n {
			if i > 0 {
				v = rho*v + math.Sqrt(1-rho*rho)*rng.NormFloat64()
			}
			x[i*p+j] = v
		}
	}
	return x
}

// Chance correlations of independent series of first order vary as among so many rows:
// the variance of r is (1+ρ²)/(1-ρ²)/n (Bartlett 1935) against 1/n of independent rows.
func TestEffectiveRows(t *testing.T) {
	rng := rand.New(rand.NewPCG(61, 62))
	n, tables := 400, 3000
	for _, rho := range []float64{.5, .8} {
		squares := 0.0
		for range tables {
			s := pca.NewBuilder(2, pca.CrossProducts, 0).Summarize(autoregressive(rng, n, 2, rho), n)
			r := s.Correlations()[1]
			squares += r * r / float64(tables)
		}
		effective := retain.EffectiveRows(n, []float64{rho, rho, rho})
		// A mean of 3000 squares of nearly normal numbers errs by √(2/3000), 2.6 %; four times
		// that, and the formula's own error of order 1/n beside it.
		if got := squares * float64(effective); math.Abs(got-1) > .12 {
			t.Errorf("ρ=%g: variance of r times %d effective rows is %.3f, expected 1", rho, effective, got)
		}
	}
	for _, c := range []struct {
		n    int
		r    []float64
		want int
	}{
		{1000, []float64{.8, .8}, 219},    // 1000·(1-.64)/(1+.64)
		{1000, []float64{.9, 0, 0}, 1000}, // one series that follows changes no pair
		{1000, []float64{-.8, -.8}, 219},  // nor does the sign, as long as it is the same
		{1000, []float64{.8, -.8}, 1000},  // never more than there are
		{1000, []float64{.1, .1}, 1000},   // hardly matters
		{1000, []float64{math.NaN(), .8}, 1000},
		{1000, []float64{.9}, 1000},
		{1000, []float64{1, 1}, 3},
	} {
		if got := retain.EffectiveRows(c.n, c.r); got != c.want {
			t.Errorf("%d rows, %v: %d, expected %d", c.n, c.r, got, c.want)
		}
	}
}

// Parallel analysis of independent channels that follow themselves: counting rows finds
// components in nearly all tables, the effective number in about the nominal share.
func TestParallelOfFollowingRows(t *testing.T) {
	rng := rand.New(rand.NewPCG(63, 64))
	n, p, rho, tables := 300, 10, .8, 200
	found := map[string]int{}
	for range tables {
		s := pca.NewBuilder(p, pca.CrossProducts, 0).Summarize(autoregressive(rng, n, p, rho), n)
		o := pca.Options{Matrix: pca.Correlation}
		r := make([]float64, p)
		for j := range p {
			o.Names, o.Methods, r[j] = append(o.Names, string(rune('a'+j))), append(o.Methods, pca.UnitNormal), rho
		}
		d, err := pca.Decompose(s, o)
		if err != nil {
			t.Fatal(err)
		}
		e := retain.EvidenceFor(d, make([]float64, p), 1, 0)
		e.Effective = retain.EffectiveRows(n, r)
		for _, rows := range []string{"counted", "effective"} {
			v := apply(t, "parallel", &e, func(s *retain.Settings) { s.Rows, s.Replicates = rows, 400 })
			if v.Components > 0 {
				found[rows]++
			}
		}
	}
	// 5 % of 200 is 10 give or take 3; the approximation costs some.
	if found["counted"] < 150 || found["effective"] > 25 {
		t.Errorf("components found in noise: %v of %d tables", found, tables)
	}
}
