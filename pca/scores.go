package pca

import (
	"axisfold/pca/internal/kernel"
)

// Scorer brings rows into the space of chosen components. It holds scratch space: one
// per goroutine.
type Scorer struct {
	d       *Decomposition
	k       int
	spreads []float64 // k: variances of the scores
	vectors []float64 // p×k
	back    []float64 // k×p
	offset  []float64 // k: scores of the mean row, where a scaling leaves one
	rest    []float64 // p: what the mean row leaves outside the plane
	inverse []float64 // p: 1/scale
	scratch []float64
}

// NewScorer makes a Scorer for the k components at the given positions, from 0.
func (d *Decomposition) NewScorer(components []int) *Scorer {
	p, k := len(d.Channels), len(components)
	s := &Scorer{d: d, k: k, spreads: make([]float64, k),
		vectors: make([]float64, p*k), back: make([]float64, k*p), offset: make([]float64, k)}
	for a, c := range components {
		s.spreads[a] = d.ScoreVariances[c]
		for j := range p {
			v := d.Vector(j, c)
			s.vectors[j*k+a], s.back[a*p+j] = v, v
		}
	}
	kernel.Multiply(s.offset, d.Offset, s.vectors, 1, p, k)
	s.rest, s.inverse = make([]float64, p), make([]float64, p)
	kernel.Multiply(s.rest, s.offset, s.back, 1, k, p)
	for j := range p {
		s.rest[j] = d.Offset[j] - s.rest[j]
		s.inverse[j] = 1 / d.Scaling.Scale[j]
	}
	return s
}

// Scores writes for each of the n rows in x (n×p, original units) the k scores Z·V to
// scores (n×k), and Hotelling's T² = Σ(t-t̄)²/variance and the squared distance from the
// plane of the components, SPE = |z - z̄ - V(t-t̄)|², to t2 and spe (length n). The
// distance is summed from what is left of every channel, not taken from a difference of
// squares, so that a row in the plane gets 0 and not rounding noise of |z|².
func (s *Scorer) Scores(scores, t2, spe, x []float64, n int) {
	p, k := len(s.d.Channels), s.k
	if cap(s.scratch) < 2*n*p {
		s.scratch = make([]float64, 2*n*p)
	}
	z, rebuilt := s.scratch[:n*p], s.scratch[n*p:2*n*p]
	center := s.d.Scaling.Center
	for r := range n {
		from, to := x[r*p:r*p+p], z[r*p:r*p+p]
		for j, v := range from {
			to[j] = (v - center[j]) * s.inverse[j]
		}
	}
	kernel.Multiply(scores[:n*k], z, s.vectors, n, p, k)
	for r := range n {
		row := scores[r*k : r*k+k]
		sum := 0.0
		for a, t := range row {
			t -= s.offset[a]
			if v := s.spreads[a]; v > 0 {
				sum += t * t / v
			}
		}
		t2[r] = sum
	}
	kernel.Multiply(rebuilt, scores[:n*k], s.back, n, k, p)
	for r := range n {
		zr, br := z[r*p:r*p+p], rebuilt[r*p:r*p+p]
		sum := 0.0
		for j, v := range zr {
			e := v - br[j] - s.rest[j]
			sum += e * e
		}
		spe[r] = sum
	}
}

// FirstComponents returns 0..k-1, for NewScorer.
func FirstComponents(k int) []int {
	out := make([]int, k)
	for a := range out {
		out[a] = a
	}
	return out
}
