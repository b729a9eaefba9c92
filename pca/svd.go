package pca

import (
	"errors"
	"math"

	"gonum.org/v1/gonum/mat"
)

// svd decomposes the scaled factor of s: F·D⁻¹ = U·diag(σ)·V', eigenvalues σ²/(n-1). The
// error of every σ is near ε·σ₁, so roots keep twice the digits that cross-products leave.
func (d *Decomposition) svd(s *Summary) error {
	p := s.p
	rows := len(s.factor) / p
	z := make([]float64, len(s.factor))
	divisor := math.Sqrt(float64(s.count-1) / d.matrixScale())
	for r := range rows {
		for j := range p {
			z[r*p+j] = s.factor[r*p+j] / d.Scaling.Scale[j] / divisor
		}
	}
	for _, v := range z {
		d.Total += v * v
	}
	if d.Matrix == Correlation {
		d.Total = float64(p)
	}
	var svd mat.SVD
	if !svd.Factorize(mat.NewDense(rows, p, z), mat.SVDThin) {
		return errors.New("singular value decomposition did not converge")
	}
	sigma := svd.Values(nil)
	var u, v mat.Dense
	svd.UTo(&u)
	svd.VTo(&v)
	m := min(len(sigma), p, s.count-1)
	d.Route = SVD
	d.Values = make([]float64, m)
	d.Vectors = make([]float64, p*m)
	d.left = make([]float64, rows*m)
	for a := range m {
		d.Values[a] = sigma[a] * sigma[a]
		for j := range p {
			d.Vectors[j*m+a] = v.At(j, a)
		}
		for r := range rows {
			d.left[r*m+a] = u.At(r, a)
		}
	}
	tolerance := float64(max(rows, p)) * epsilon
	d.finish(tolerance * tolerance)
	return nil
}
