package pca

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"
)

// Adequacy says whether a table is worth decomposing. Everything is about the correlation
// matrix R.
type Adequacy struct {
	// Defined is false when R is singular to working precision; then only Reason holds.
	Defined bool
	Reason  string
	// KMO is the Kaiser-Meyer-Olkin measure Σr²/(Σr²+Σa²) over pairs of channels, a the
	// partial correlation of a pair given all others (Kaiser 1970; Kaiser & Rice 1974):
	// near 1 when channels share stories, near 0 when pairs share theirs with nobody else.
	KMO     float64
	Channel []float64 // the same over the pairs of one channel
	// Sphericity is Bartlett's statistic -(n-1-(2p+5)/6)·ln|R| (1951) on Freedom =
	// p(p-1)/2 degrees of freedom, and P its probability when channels are independent.
	Sphericity, P float64
	Freedom       int
	// Log10Det is log10|R|.
	Log10Det float64
}

// Adequate measures R, p×p row-major, taken from n rows.
func Adequate(correlations []float64, p, n int) *Adequacy {
	a := &Adequacy{}
	if p < 2 {
		a.Reason = "one channel has no correlations"
		return a
	}
	if n <= p {
		a.Reason = fmt.Sprintf("%d rows for %d channels leave R singular", n, p)
		return a
	}
	var chol mat.Cholesky
	r := mat.NewSymDense(p, correlations)
	// Beyond a condition of 1e13 partial correlations are rounding.
	if !chol.Factorize(r) || chol.Cond() > 1e13 {
		a.Reason = "R is singular: some channels are combinations of others"
		return a
	}
	var q mat.SymDense
	if err := chol.InverseTo(&q); err != nil {
		a.Reason = "R is singular: some channels are combinations of others"
		return a
	}
	a.Defined = true
	a.Channel = make([]float64, p)
	simple, partial := 0.0, 0.0
	for i := range p {
		s, t := 0.0, 0.0
		for j := range p {
			if i == j {
				continue
			}
			v := r.At(i, j)
			u := q.At(i, j)
			s += v * v
			t += u * u / (q.At(i, i) * q.At(j, j))
		}
		a.Channel[i] = ratio(s, t)
		simple, partial = simple+s, partial+t
	}
	a.KMO = ratio(simple, partial)
	log := chol.LogDet()
	a.Log10Det = log / math.Ln10
	a.Sphericity = math.Max(0, -(float64(n-1)-float64(2*p+5)/6)*log)
	a.Freedom = p * (p - 1) / 2
	a.P = 1 - distuv.ChiSquared{K: float64(a.Freedom)}.CDF(a.Sphericity)
	return a
}

// ratio is s/(s+t), ½ when nothing correlates at all.
func ratio(s, t float64) float64 {
	if s+t == 0 {
		return .5
	}
	return s / (s + t)
}

// Grade words a Kaiser-Meyer-Olkin measure; the bounds are Kaiser's (1974).
func Grade(kmo float64) string {
	switch {
	case kmo >= .9:
		return "very good"
	case kmo >= .8:
		return "good"
	case kmo >= .7:
		return "fair"
	case kmo >= .6:
		return "poor"
	case kmo >= .5:
		return "very poor"
	}
	return "not acceptable"
}
