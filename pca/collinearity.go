package pca

import (
	"errors"
	"math"

	"gonum.org/v1/gonum/mat"

	"axisfold/pca/internal/symeig"
)

// Collinearity is the diagnosis of Belsley, Kuh & Welsch (1980): columns of [1 X] scaled to
// unit length and not centred, because a predictor that hardly moves is collinear with the
// constant. (Variance inflation factors answer the centred question.)
type Collinearity struct {
	// Indices are the condition indices η_k = μ_1/μ_k of the p+1 singular values,
	// ascending. 5 to 10 is weak, above 30 serious.
	Indices []float64
	// Proportions holds, for each index, the share of the variance of each coefficient
	// that comes from it: (p+1)×(p+1) row-major, the constant first. Each column adds to 1.
	Proportions []float64
}

// Collinear diagnoses the channels of s as predictors beside a constant.
func Collinear(s *Summary) (*Collinearity, error) {
	p := s.p
	values, vectors, err := s.uncentred()
	if err != nil {
		return nil, err
	}
	w := p + 1
	c := &Collinearity{Indices: make([]float64, w), Proportions: make([]float64, w*w)}
	for k, mu := range values {
		c.Indices[k] = math.Inf(1)
		if mu > 0 {
			c.Indices[k] = values[0] / mu
		}
	}
	for j := range w {
		total := 0.0
		for k, mu := range values {
			v := vectors[j*w+k] / math.Max(mu, values[0]*epsilon)
			c.Proportions[k*w+j] = v * v
			total += v * v
		}
		for k := range values {
			c.Proportions[k*w+j] /= total
		}
	}
	return c, nil
}

// uncentred returns the singular values, descending, and right vectors of [1 X] with
// columns of unit length.
func (s *Summary) uncentred() (values, vectors []float64, err error) {
	p := s.p
	w, root := p+1, math.Sqrt(float64(s.count))
	length := make([]float64, w)
	length[0] = root
	for j := range p {
		length[j+1] = math.Sqrt(s.CenteredSquares(j) + float64(s.count)*s.mean[j]*s.mean[j])
		if length[j+1] == 0 {
			return nil, nil, errors.New("a channel holds nothing but zeros")
		}
	}
	if s.form == CrossProducts {
		g := make([]float64, w*w)
		at := func(i, j int, v float64) {
			v /= length[i] * length[j]
			g[i*w+j], g[j*w+i] = v, v
		}
		at(0, 0, float64(s.count))
		for i := range p {
			at(0, i+1, float64(s.count)*s.mean[i])
			for j := i; j < p; j++ {
				at(i+1, j+1, s.CrossProduct(i, j)+float64(s.count)*s.mean[i]*s.mean[j])
			}
		}
		values, vectors, err = symeig.Decompose(g, w)
		for k, l := range values {
			values[k] = math.Sqrt(math.Max(l, 0))
		}
		return values, vectors, err
	}
	// The factor beside the means squares no condition.
	rows := len(s.factor)/p + 1
	a := mat.NewDense(max(rows, w), w, nil)
	for j := range w {
		mean := 1.0
		if j > 0 {
			mean = s.mean[j-1]
		}
		a.Set(0, j, root*mean/length[j])
	}
	for r := range rows - 1 {
		for j := range p {
			a.Set(r+1, j+1, s.factor[r*p+j]/length[j+1])
		}
	}
	var svd mat.SVD
	if !svd.Factorize(a, mat.SVDThin) {
		return nil, nil, errors.New("singular value decomposition did not converge")
	}
	var v mat.Dense
	svd.VTo(&v)
	vectors = make([]float64, w*w)
	for j := range w {
		for k := range w {
			vectors[j*w+k] = v.At(j, k)
		}
	}
	return svd.Values(nil), vectors, nil
}
