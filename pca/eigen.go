package pca

import (
	"errors"
	"math"

	"axisfold/pca/internal/symeig"
)

// eigen decomposes the matrix made of the cross-products of s. The error of every root is
// near p·ε·l₁ (Weyl), so small roots keep fewer digits than large ones.
func (d *Decomposition) eigen(s *Summary) error {
	p := s.p
	a := d.scaledCrossProducts(s)
	for j := range p {
		d.Total += a[j*p+j]
	}
	values, vectors, err := symeig.Decompose(a, p)
	if err != nil {
		return errors.Join(errors.New("eigen decomposition failed"), err)
	}
	m := min(p, s.count-1)
	d.Route = Eigen
	d.Values = make([]float64, m)
	d.Vectors = make([]float64, p*m)
	for c := range m {
		d.Values[c] = math.Max(values[c], 0)
		for j := range p {
			d.Vectors[j*m+c] = vectors[j*p+c]
		}
	}
	d.finish(float64(p) * 8 * epsilon)
	return nil
}

// scaledCrossProducts returns the matrix to decompose, p×p, both triangles.
func (d *Decomposition) scaledCrossProducts(s *Summary) []float64 {
	p := s.p
	a := make([]float64, p*p)
	divisor := float64(s.count-1) / d.matrixScale()
	for i := range p {
		for j := i; j < p; j++ {
			v := s.cross[i*p+j] / d.Scaling.Scale[i] / d.Scaling.Scale[j] / divisor
			if d.Matrix == Correlation {
				if i == j {
					v = 1
				}
				v = math.Max(-1, math.Min(1, v))
			}
			a[i*p+j], a[j*p+i] = v, v
		}
	}
	return a
}

// finish derives score variances and rank; roots below tolerance·l₁ are rounding.
func (d *Decomposition) finish(tolerance float64) {
	d.ScoreVariances = make([]float64, len(d.Values))
	scale := d.matrixScale()
	for a, l := range d.Values {
		d.ScoreVariances[a] = l / scale
		if l > tolerance*d.Values[0] {
			d.Rank = a + 1
		}
	}
}
