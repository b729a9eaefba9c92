package pca

import (
	"math"

	"axisfold/pca/internal/kernel"
)

// Correlations returns the correlation matrix of the channels, p×p row-major; 0 where a
// channel does not vary.
func (s *Summary) Correlations() []float64 {
	p := s.p
	cross := s.cross
	if s.form == Factor {
		cross = make([]float64, p*p)
		kernel.AddCrossProducts(cross, s.factor, len(s.factor)/p, p)
	}
	out := make([]float64, p*p)
	root := make([]float64, p)
	for j := range p {
		root[j] = math.Sqrt(cross[j*p+j])
	}
	for i := range p {
		out[i*p+i] = 1
		for j := i + 1; j < p; j++ {
			r := 0.0
			if root[i] > 0 && root[j] > 0 {
				r = math.Max(-1, math.Min(1, cross[i*p+j]/root[i]/root[j]))
			}
			out[i*p+j], out[j*p+i] = r, r
		}
	}
	return out
}
