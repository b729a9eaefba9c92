package retain

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat/distuv"

	"axisfold/pca"
)

// Bartlett 1950, Lawley 1956: are the last q roots equal? Asked for q = p, p-1, ... until
// the data do not contradict. For the covariance matrix the statistic
// c·{q·ln(mean) - Σ ln l_j}, c = ν-k-(2q²+q+2)/(6q)+Σ_{i≤k} mean²/(l_i-mean)², has
// (q-1)(q+2)/2 degrees of freedom. For the correlation matrix q = p is Bartlett's test of
// sphericity, q = p-1 Lawley's 1963 test of equal correlations, and the rest a heuristic.
var equalRoots = Rule{
	Name:     "equal-roots",
	Summary:  "up to where the remaining roots may be equal (Bartlett 1950, Lawley 1956, 1963); keeps many when rows are many",
	variants: []Settings{with(func(s *Settings) { s.Alpha = 0.05 })},
	apply: func(e *Evidence, s Settings) Verdict {
		v := Verdict{Setting: fmt.Sprintf("alpha %g", s.Alpha)}
		p := e.Width()
		switch {
		case p < 2:
			return v.abstain("one root has no equal")
		case e.Rows <= p || e.Rank < p || e.Values[p-1] <= 0:
			return v.abstain("some roots are zero")
		}
		last := math.NaN()
		going := true
		for k := range p {
			step := Step{Value: 0, Threshold: s.Alpha}
			if going && k < p-1 {
				step.Value = equalityP(e, k)
				last = step.Value
				going = step.Value < s.Alpha
			}
			// Once all but the last are told apart, so is the last.
			step.Kept = going
			v.Steps = append(v.Steps, step)
		}
		v.Components = leading(v.Steps)
		if v.Components == p {
			v.Note = "every root differs from the rest"
		} else {
			v.Note = fmt.Sprintf("the last %d roots may be equal (P = %.3g)", p-v.Components, last)
		}
		if v.Components > 1 && e.Matrix == pca.Correlation {
			v.Note += "; a heuristic beyond the second"
		}
		return v
	},
}

// equalityP is the probability of a statistic at least as large when the roots after the
// first k are equal.
func equalityP(e *Evidence, k int) float64 {
	p, free := float64(e.Width()), float64(e.Rows-1)
	q := p - float64(k)
	mean, logs := 0.0, 0.0
	for _, l := range e.Values[k:] {
		mean += l / q
		logs += math.Log(l)
	}
	x, df := q*math.Log(mean)-logs, (q-1)*(q+2)/2
	switch {
	case e.Matrix == pca.Covariance:
		c := free - float64(k) - (2*q*q+q+2)/(6*q)
		for _, l := range e.Values[:k] {
			c += mean * mean / ((l - mean) * (l - mean))
		}
		x *= c
	case k == 0:
		x *= free - (2*p+5)/6
		df = p * (p - 1) / 2
	case k == 1 && len(e.Vectors) > 0 && p > 2:
		x, df = lawley(e)
	default:
		x *= free - (2*p+5)/6 - 2*float64(k)/3
	}
	return 1 - distuv.ChiSquared{K: df}.CDF(math.Max(x, 0))
}

// lawley is the test that all correlations are equal, so that the last p-1 roots are
// (Lawley 1963): T = ν/(1-r̄)²·[Σ(r_ik-r̄)² - γΣ(r̄_k-r̄)²], (p+1)(p-2)/2 degrees of freedom.
func lawley(e *Evidence) (statistic, df float64) {
	p := e.Width()
	r := e.correlations()
	n := float64(p)
	column := make([]float64, p)
	mean := 0.0
	for i := range p {
		for j := range p {
			if i != j {
				column[i] += r[i*p+j] / (n - 1)
			}
		}
		mean += column[i] / n
	}
	within, between := 0.0, 0.0
	for i := range p {
		between += (column[i] - mean) * (column[i] - mean)
		for j := i + 1; j < p; j++ {
			within += (r[i*p+j] - mean) * (r[i*p+j] - mean)
		}
	}
	rest := (1 - mean) * (1 - mean)
	gamma := (n - 1) * (n - 1) * (1 - rest) / (n - (n-2)*rest)
	return float64(e.Rows-1) / rest * (within - gamma*between), (n + 1) * (n - 2) / 2
}

// correlations puts the matrix together again from roots and vectors.
func (e *Evidence) correlations() []float64 {
	p, m := e.Width(), len(e.Values)
	r := make([]float64, p*p)
	for i := range p {
		for j := i; j < p; j++ {
			sum := 0.0
			for a := range m {
				sum += e.Values[a] * e.Vectors[i*m+a] * e.Vectors[j*m+a]
			}
			r[i*p+j], r[j*p+i] = sum, sum
		}
	}
	return r
}
