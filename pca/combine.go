package pca

import (
	"axisfold/pca/internal/kernel"
)

// Combine returns the summary that the same rows would have in k weighted sums of the
// channels, X·W with W p×k row-major. Extremes and medians are not carried over: they
// cannot be had from a summary.
func (s *Summary) Combine(w []float64, k int) *Summary {
	p := s.p
	t := &Summary{form: s.form, p: k, count: s.count, mean: make([]float64, k), tail: make([]float64, k), low: make([]float64, k), high: make([]float64, k)}
	kernel.Multiply(t.mean, s.mean, w, 1, p, k)
	if s.form == Factor {
		rows := len(s.factor) / p
		t.factor = make([]float64, rows*k)
		kernel.Multiply(t.factor, s.factor, w, rows, p, k)
		return t
	}
	full := make([]float64, p*p)
	for i := range p {
		for j := i; j < p; j++ {
			full[i*p+j], full[j*p+i] = s.cross[i*p+j], s.cross[i*p+j]
		}
	}
	half := make([]float64, p*k)
	kernel.Multiply(half, full, w, p, p, k)
	turned := make([]float64, k*p)
	for j := range p {
		for a := range k {
			turned[a*p+j] = w[j*k+a]
		}
	}
	t.cross = make([]float64, k*k)
	kernel.Multiply(t.cross, turned, half, k, p, k)
	return t
}
