package pca

import "math"

// Correlations returns the correlation matrix of the channels, p×p row-major; 0 where a
// channel does not vary.
func (s *Summary) Correlations() []float64 {
	p := s.p
	out := make([]float64, p*p)
	root := make([]float64, p)
	for j := range p {
		root[j] = math.Sqrt(s.CenteredSquares(j))
	}
	for i := range p {
		out[i*p+i] = 1
		for j := i + 1; j < p; j++ {
			r := 0.0
			if root[i] > 0 && root[j] > 0 {
				r = math.Max(-1, math.Min(1, s.CrossProduct(i, j)/root[i]/root[j]))
			}
			out[i*p+j], out[j*p+i] = r, r
		}
	}
	return out
}
