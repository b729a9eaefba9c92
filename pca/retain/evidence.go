package retain

import (
	"fmt"
	"math"
)

// Minka 2000 (Advances in Neural Information Processing Systems 13): Laplace's
// approximation to the evidence of k components plus equal noise, and the cruder Bayesian
// information criterion of the same model. Roots are taken with divisor n, as the maximum
// likelihood has them.
var (
	laplaceEvidence = Rule{
		Name:     "evidence",
		Summary:  "the number with the largest evidence for components plus equal noise (Minka 2000)",
		variants: []Settings{Defaults()},
		apply: func(e *Evidence, _ Settings) Verdict {
			return largest(e, Verdict{}, "log evidence", logEvidences)
		},
	}
	bayesianInformation = Rule{
		Name:     "bic",
		Summary:  "the Bayesian information criterion of components plus equal noise",
		variants: []Settings{Defaults()},
		apply: func(e *Evidence, _ Settings) Verdict {
			return largest(e, Verdict{}, "criterion", criteria)
		},
	}
)

// largest takes the k with the largest score among 1..p-1; k = 0 has no rotation to
// weigh and is left to other rules. score returns those of 1 to most components.
func largest(e *Evidence, v Verdict, what string, score func(l []float64, most int, n float64) []float64) Verdict {
	p := e.Width()
	n := float64(e.Rows)
	if p < 3 {
		return v.abstain("it needs three channels")
	}
	roots := make([]float64, p)
	for a, l := range e.Values {
		roots[a] = l * (n - 1) / n
	}
	best := math.Inf(-1)
	most := min(p-1, e.Rank-1, e.Rows-2)
	if most < 1 || e.Rank < min(p, e.Rows-1) || e.Values[len(e.Values)-1] <= 0 {
		return v.abstain("some roots are zero: there is no noise to measure")
	}
	scores := score(roots, most, n)
	for i, s := range scores {
		if s > best {
			best, v.Components = s, i+1
		}
	}
	if unequalNoise(&v, e) {
		return v.abstain("the noise differs between channels: no number leaves roots like those of equal noise")
	}
	for a := range e.Values {
		s := scores[min(a, most-1)]
		v.Steps = append(v.Steps, Step{Value: s, Threshold: best, Kept: a < v.Components})
	}
	v.Note = fmt.Sprintf("%s is largest (%.5g) with %d", what, best, v.Components)
	return v
}

// fitTerms is the log likelihood part shared by both: -(n/2)Σ ln l - (n(p-k)/2) ln v, and
// the noise v, mean of the roots after k.
func fitTerms(l []float64, p, k int, n float64) (fit, noise float64) {
	for _, x := range l[k:p] {
		noise += x / float64(p-k)
	}
	for _, x := range l[:k] {
		fit -= n / 2 * math.Log(x)
	}
	return fit - n*float64(p-k)/2*math.Log(noise), noise
}

// logEvidences are by number of components, from 1. Of the pairs of roots that make ln|A|
// only those with the noise depend on the number, and they are alike, so that all numbers
// together cost p² logarithms.
func logEvidences(l []float64, most int, n float64) []float64 {
	p := len(l)
	out := make([]float64, 0, most)
	u, pairs := 0.0, 0.0
	for k := 1; k <= most; k++ {
		fit, noise := fitTerms(l, p, k, n)
		pk, kk := float64(p), float64(k)
		m := pk*kk - kk*(kk+1)/2
		half := (pk - kk + 1) / 2
		lg, _ := math.Lgamma(half)
		u += lg - half*math.Log(math.Pi) - math.Ln2
		last := l[k-1]
		for _, x := range l[k:] {
			pairs += logGap(last, x)
		}
		logA := float64(p-k) * logInverseGap(last, noise)
		for _, x := range l[:k-1] {
			pairs += logInverseGap(x, last)
			logA += float64(p-k) * logInverseGap(x, noise)
		}
		logA += pairs + m*math.Log(n)
		out = append(out, u+fit+(m+kk)/2*math.Log(2*math.Pi)-logA/2-kk/2*math.Log(n))
	}
	return out
}

// Logarithms of the gap between a root and a smaller one, and between their inverses.
// Equal roots would give ln 0; a gap of ε·l stands in for them.
func logGap(larger, smaller float64) float64 {
	return math.Log(math.Max(larger-smaller, 0x1p-52*larger))
}

func logInverseGap(larger, smaller float64) float64 {
	return math.Log(math.Max(1/smaller-1/larger, 0x1p-52/larger))
}

// criteria are the information criteria by number of components, from 1.
func criteria(l []float64, most int, n float64) []float64 {
	p := len(l)
	out := make([]float64, 0, most)
	for k := 1; k <= most; k++ {
		fit, _ := fitTerms(l, p, k, n)
		m := float64(p*k) - float64(k*(k+1))/2
		out = append(out, fit-(m+float64(k))/2*math.Log(n))
	}
	return out
}
