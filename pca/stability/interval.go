package stability

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"
)

// quantile interpolates linearly between order statistics at ·q.
func quantile(sorted []float64, q float64) float64 {
	h := q * float64(len(sorted)-1)
	i := int(h)
	if i+1 >= len(sorted) {
		return sorted[len(sorted)-1]
	}
	return sorted[i] + (h-float64(i))*(sorted[i+1]-sorted[i])
}

// percentile returns the two-sided percentile interval of draws, which it sorts.
func percentile(draws []float64, estimate, confidence float64) Interval {
	slices.Sort(draws)
	tail := (1 - confidence) / 2
	return Interval{estimate, quantile(draws, tail), quantile(draws, 1-tail)}
}

// asymptotic returns l/(1±τz), τ = √(2/(n-1)), for a root l of the covariance matrix of
// n independent normal rows, distinct in the population (Anderson 1963).
func asymptotic(l float64, n int, confidence float64) Interval {
	z := distuv.UnitNormal.Quantile((1 + confidence) / 2)
	reach := z * math.Sqrt(2/float64(n-1))
	upper := math.Inf(1)
	if reach < 1 {
		upper = l / (1 - reach)
	}
	return Interval{l, l / (1 + reach), upper}
}
