package rotation

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// oblique goes on from varimax loadings B to promax: the target is B·|B|^(κ-1), which
// leaves large loadings large and small ones smaller; U = (B'B)⁻¹B'target, scaled so that
// the rotated components have unit variance. Loadings become BU, the correlations
// Φ = (U'U)⁻¹, the weights those of the scores times U⁻ᵀ. Where U has no inverse the
// varimax stands, with a warning.
func (r *Result) oblique(p, k int, power float64) {
	b := mat.NewDense(p, k, r.Loadings)
	target := mat.NewDense(p, k, nil)
	target.Apply(func(_, _ int, v float64) float64 { return v * math.Pow(math.Abs(v), power-1) }, b)
	var u, inner, inverse mat.Dense
	if err := u.Solve(b, target); err != nil {
		r.warn("promax-undefined", "promax is not defined here; varimax stands")
		return
	}
	inner.Mul(u.T(), &u)
	if err := inverse.Inverse(&inner); err != nil {
		r.warn("promax-undefined", "promax is not defined here; varimax stands")
		return
	}
	for a := range k {
		scale := math.Sqrt(inverse.At(a, a))
		for i := range k {
			u.Set(i, a, u.At(i, a)*scale)
		}
	}
	inner.Mul(u.T(), &u)
	var back mat.Dense
	if err := back.Inverse(&u); err != nil || inverse.Inverse(&inner) != nil {
		r.warn("promax-undefined", "promax is not defined here; varimax stands")
		return
	}
	var loadings, structure, weights mat.Dense
	loadings.Mul(b, &u)
	structure.Mul(&loadings, &inverse)
	weights.Mul(mat.NewDense(k, k, r.Weights), back.T())
	r.Loadings, r.Structure, r.Weights = flat(&loadings), flat(&structure), flat(&weights)
	r.Correlations = flat(&inverse)
}

func flat(m *mat.Dense) []float64 {
	rows, columns := m.Dims()
	out := make([]float64, 0, rows*columns)
	for i := range rows {
		out = append(out, m.RawRowView(i)...)
	}
	return out
}
