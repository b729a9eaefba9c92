package stability

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"axisfold/pca"
)

// collector keeps what replicates tell, each in a place of its own, so that the order in
// which goroutines finish does not show.
type collector struct {
	whole      *pca.Decomposition
	m, c, size int // size = p·k
	failure    []error
	values     []float64 // R×m
	shares     []float64 // R×m
	loadings   []float64 // R×pk
	congruence []float64 // R×c
	angles     []float64 // R
	crossed    []bool    // R×(c-1): partners cross from 0..a to beyond
}

func newCollector(whole *pca.Decomposition, o Options) *collector {
	r, m, c := o.Replicates, whole.Components(), min(o.Retained+1, whole.Components())
	size := whole.Width() * o.Retained
	return &collector{whole: whole, m: m, c: c, size: size, failure: make([]error, r),
		values: make([]float64, r*m), shares: make([]float64, r*m), loadings: make([]float64, r*size),
		congruence: make([]float64, r*c), angles: make([]float64, r), crossed: make([]bool, r*(c-1))}
}

func (c *collector) fail(r int, err error) { c.failure[r] = err }

func (c *collector) keep(r int, total float64, values []float64, a *aligned) {
	for i, l := range values[:c.m] {
		c.values[r*c.m+i] = l
		c.shares[r*c.m+i] = l / total
	}
	copy(c.loadings[r*c.size:], a.loadings)
	copy(c.congruence[r*c.c:], a.congruence)
	c.angles[r] = a.angle
	furthest := 0
	for i := range c.c - 1 {
		furthest = max(furthest, a.partner[i])
		c.crossed[r*(c.c-1)+i] = furthest > i
	}
}

func (c *collector) summarize(res *Result, o Options) error {
	var kept []int
	constants := 0
	for r, err := range c.failure {
		switch {
		case err == nil:
			kept = append(kept, r)
		case errors.Is(err, errConstant):
			constants++
		}
	}
	res.Failed = o.Replicates - len(kept)
	if len(kept) < 2 {
		return &pca.DataError{Problem: fmt.Sprintf("%d of %d resamples of the blocks could not be decomposed, %d for a channel without spread", res.Failed, o.Replicates, constants),
			Hint: "leave out channels that hold one value in most blocks, or cut the rows into more blocks"}
	}
	if res.Failed > 0 {
		res.warn("failed-replicates", "%d of %d replicates were left out, %d of them for a channel without spread: intervals are those of the rest and may be too narrow", res.Failed, o.Replicates, constants)
	}
	w, k := c.whole, o.Retained
	res.Eigenvalues = c.intervals(c.values, c.m, kept, o, func(a int) float64 { return w.Values[a] })
	res.Shares = c.intervals(c.shares, c.m, kept, o, w.Share)
	res.Loadings = c.intervals(c.loadings, c.size, kept, o, func(i int) float64 { return w.Loading(i/k, i%k) })
	res.Asymptotic = make([]Interval, c.m)
	for a := range res.Asymptotic {
		res.Asymptotic[a] = unknown()
		res.Asymptotic[a].Estimate = w.Values[a]
		if fixedScale(o.Decompose) && a < w.Rank && !mixed(w, a) {
			res.Asymptotic[a] = asymptotic(w.Values[a], w.Rows, o.Confidence)
		}
	}
	res.Congruence = make([]float64, k)
	for _, r := range kept {
		for a := range k {
			res.Congruence[a] += c.congruence[r*c.c+a] / float64(len(kept))
		}
	}
	angles := make([]float64, len(kept))
	for i, r := range kept {
		angles[i] = c.angles[r] * 180 / math.Pi
	}
	slices.Sort(angles)
	res.SubspaceAngle = Interval{quantile(angles, 0.5), 0, quantile(angles, o.Confidence)}
	c.tie(res, kept, k)
	return nil
}

func (c *collector) tie(res *Result, kept []int, k int) {
	joined := make([]bool, c.c-1)
	for a := range joined {
		count := 0
		for _, r := range kept {
			if c.crossed[r*(c.c-1)+a] {
				count++
			}
		}
		joined[a] = float64(count) > crossing*float64(len(kept)) || c.whole.MixedWithNext(a)
	}
	res.Tied = tiedGroups(joined)
	if c.c > k && joined[k-1] {
		res.warn("tied-at-cut", "components %d and %d cannot be told apart: retain both or neither", k, k+1)
	}
}

// intervals summarizes the columns of draws, R×columns.
func (c *collector) intervals(draws []float64, columns int, kept []int, o Options, estimate func(int) float64) []Interval {
	out := make([]Interval, columns)
	share(o.Threads, columns, func(next func() (int, bool)) {
		column := make([]float64, len(kept))
		for j, ok := next(); ok; j, ok = next() {
			for i, r := range kept {
				column[i] = draws[r*columns+j]
			}
			out[j] = percentile(column, estimate(j), o.Confidence)
		}
	})
	return out
}
