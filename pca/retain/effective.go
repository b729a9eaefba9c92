package retain

import "math"

// EffectiveRows is the number of independent rows between whose channels chance
// correlations vary as much as between independent channels of n rows that follow one
// another, with the given autocorrelations at lag one. For two series of first order that
// variance is (1 + r_i·r_j)/(1 - r_i·r_j)/n (Bartlett 1935, J. R. Stat. Soc. 98:536); the
// mean over all pairs of channels counts. A number within one part in twenty of n says
// nothing and gives n; it is never above n nor below 3.
func EffectiveRows(n int, autocorrelations []float64) int {
	p := len(autocorrelations)
	sum, pairs := 0.0, 0
	for i, a := range autocorrelations {
		for _, b := range autocorrelations[:i] {
			if product := a * b; !math.IsNaN(product) {
				product = math.Max(-mostFollowing, math.Min(mostFollowing, product))
				sum += (1 + product) / (1 - product)
				pairs++
			}
		}
	}
	if p < 2 || pairs == 0 {
		return n
	}
	effective := float64(n) / (sum / float64(pairs))
	if effective > .95*float64(n) {
		return n
	}
	return max(3, int(effective))
}

// mostFollowing bounds the product of autocorrelations: nearer to 1 a series is a trend,
// of which one cannot say how many independent rows it holds.
const mostFollowing = 0.9999
