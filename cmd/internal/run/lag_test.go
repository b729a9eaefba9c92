package run

import (
	"math"
	"math/rand/v2"
	"testing"

	"axisfold/pca/table"
	"axisfold/testdata/published"
)

// The certified lag-one autocorrelation of NIST StRD series (ours leaves out the factor
// (n-1)/n between the two usual divisors): Lew -.307, Mavro .938, Michelso .535, and an
// independent series, which is not notable.
func TestLag(t *testing.T) {
	for name, want := range map[string]float64{"Lew": -0.307304800605679, "Mavro": 0.937989183438248, "Michelso": 0.535199668621283} {
		u := published.StRDUnivariate(t, name)
		l := newLag(1)
		b := &table.Block{Rows: len(u.Y), Offset: make([]int32, len(u.Y))}
		for i, y := range u.Y {
			b.Offset[i] = int32(i)
			l.add(b, i, false, []float64{y - u.Mean})
		}
		n := float64(len(u.Y))
		if got := l.correlation(0) * (n - 1) / n; published.Digits(got, want) < 10 {
			t.Errorf("%s: %.15g, certified %.15g", name, got, want)
		}
		if l.notable(0) != (want > .2) {
			t.Errorf("%s: notable %v", name, l.notable(0))
		}
	}
	rng := rand.New(rand.NewPCG(1, 2))
	l := newLag(1)
	b := &table.Block{Rows: 500, Offset: make([]int32, 500)}
	for i := range 500 {
		b.Offset[i] = int32(2 * i) // every other row is missing: no pairs
		l.add(b, i, false, []float64{rng.NormFloat64()})
	}
	if l.pairs != 0 || !math.IsNaN(l.correlation(0)) {
		t.Errorf("%d pairs of rows that do not follow", l.pairs)
	}
}
