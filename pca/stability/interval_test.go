package stability

import (
	"math"
	"testing"

	"axisfold/pca"
)

// Values computed from the formula of Anderson 1963 (Ann. Math. Stat. 34:122) as given by
// Jolliffe, Principal Component Analysis, 2nd ed., section 3.7.1, with 1.959964 for z.
func TestAsymptotic(t *testing.T) {
	for _, c := range []struct {
		l            float64
		n            int
		lower, upper float64
	}{
		{1.4465, 15, 0.830941, 5.580563},
		{2.79, 72, 2.099397, 4.157682},
		{1, 8, 1 / (1 + 1.959964*math.Sqrt(2.0/7)), math.Inf(1)},
	} {
		got := asymptotic(c.l, c.n, 0.95)
		off := math.Abs(got.Upper - c.upper)
		if got.Upper == c.upper {
			off = 0
		}
		if got.Estimate != c.l || math.Abs(got.Lower-c.lower) > 1e-6 || off > 1e-6 {
			t.Errorf("l=%g n=%d: %v, expected %g to %g", c.l, c.n, got, c.lower, c.upper)
		}
	}
}

// Order statistics 1..5: quartiles fall on them; 0.1 lies at 0.4 of the first step.
func TestQuantile(t *testing.T) {
	x := []float64{1, 2, 3, 4, 5}
	for q, want := range map[float64]float64{0: 1, 0.25: 2, 0.5: 3, 1: 5, 0.1: 1.4} {
		if got := quantile(x, q); math.Abs(got-want) > 1e-15 {
			t.Errorf("quantile %g: %g, expected %g", q, got, want)
		}
	}
	if got := percentile([]float64{5, 1, 4, 2, 3}, 7, 0.5); got != (Interval{7, 2, 4}) {
		t.Errorf("percentile %v", got)
	}
}

// The theory covers roots of the covariance matrix in the unit of the data, apart from
// their neighbours, and nothing else.
func TestAsymptoticOnlyWhereValid(t *testing.T) {
	const p = 3
	run := func(deviations []float64, method pca.Method, matrix pca.Matrix) *Result {
		blocks := split(table(400, deviations, 2), p, 10, pca.CrossProducts, 0)
		o := Options{Decompose: options(p, method, matrix), Retained: 1, Replicates: 20}
		res, err := Bootstrap(blocks, whole(blocks, o.Decompose), o)
		if err != nil {
			t.Fatal(err)
		}
		return res
	}
	apart := run([]float64{9, 3, 1}, pca.CenterOnly, pca.Covariance)
	for a, i := range apart.Asymptotic {
		if !(i.Lower < i.Estimate && i.Estimate < i.Upper) || i.Estimate != apart.Eigenvalues[a].Estimate {
			t.Errorf("root %d: %v", a, i)
		}
	}
	close := run([]float64{9, 2, 2}, pca.CenterOnly, pca.Covariance)
	if math.IsNaN(close.Asymptotic[0].Lower) {
		t.Error("root 1 is apart from the rest")
	}
	if len(close.Tied) != 0 && close.Tied[0][0] == 0 {
		t.Errorf("tied %v", close.Tied)
	}
	for _, res := range []*Result{
		run([]float64{9, 3, 1}, pca.CenterOnly, pca.Correlation),
		run([]float64{9, 3, 1}, pca.Pareto, pca.Covariance),
	} {
		if i := res.Asymptotic[0]; !math.IsNaN(i.Lower) || !math.IsNaN(i.Upper) {
			t.Errorf("theory does not hold, yet %v", i)
		}
	}
}
