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
	run := func(x []float64, method pca.Method, matrix pca.Matrix) *Result {
		blocks := split(x, p, 10, pca.CrossProducts, 0)
		o := Options{Decompose: options(p, method, matrix), Retained: 1, Replicates: 20}
		res, err := Bootstrap(blocks, whole(blocks, o.Decompose), o)
		if err != nil {
			t.Fatal(err)
		}
		return res
	}
	apartRows := table(400, []float64{9, 3, 1}, 2)
	apart := run(apartRows, pca.CenterOnly, pca.Covariance)
	for a, i := range apart.Asymptotic {
		if !(i.Lower < i.Estimate && i.Estimate < i.Upper) || i.Estimate != apart.Eigenvalues[a].Estimate {
			t.Errorf("root %d: %v", a, i)
		}
	}
	// Every row turned by quarters in the plane of channels 1 and 2: roots 2 and 3 are equal.
	var turned []float64
	for r, x := 0, table(100, []float64{9, 2, 1}, 2); r < len(x); r += p {
		a, b, c := 5*(x[r]-1000), x[r+1]-1000, x[r+2]-1000
		turned = append(turned, a, b, c, a, -c, b, a, -b, -c, a, c, -b)
	}
	equal := run(turned, pca.CenterOnly, pca.Covariance)
	for a, i := range equal.Asymptotic {
		if math.IsNaN(i.Lower) != (a > 0) || math.IsNaN(i.Upper) != (a > 0) {
			t.Errorf("roots 2 and 3 are equal: interval %d is %v", a+1, i)
		}
	}
	for _, res := range []*Result{
		run(apartRows, pca.CenterOnly, pca.Correlation),
		run(apartRows, pca.Pareto, pca.Covariance),
	} {
		if i := res.Asymptotic[0]; !math.IsNaN(i.Lower) || !math.IsNaN(i.Upper) {
			t.Errorf("theory does not hold, yet %v", i)
		}
	}
}
