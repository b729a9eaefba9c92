package pcr

import (
	"fmt"
	"math"

	"axisfold/pca"
)

// Remedy is one way to deal with collinear predictors, judged on the same folds.
type Remedy struct {
	Name    string
	Setting string
	// Parameter is the number of components or the ridge parameter, in units of the roots of
	// the matrix; 0 for least squares.
	Parameter float64
	R2        float64 // on the rows of the fit
	// CV and CVError are as in Step. They judge the setting shown; where the setting was
	// chosen by them, they are a little too good.
	CV, CVError float64
	// Length is the length of the standardized coefficients; Parameters the effective
	// number of slopes; SignChanges how many coefficients differ in sign from least
	// squares (0 where that has no answer).
	Length      float64
	Parameters  float64
	SignChanges int
}

// mostPLS bounds the number of partial least squares components that are tried.
const mostPLS = 30

// plsSlopes returns slopes on scores for 1..most components of partial least squares: the
// least-squares solutions in the Krylov spaces of T'T and T'y (Manne 1987), which in the
// coordinates of the components is diagonal. The basis is orthonormalised twice (Lanczos
// with full orthogonalisation), and fewer are returned once the space is exhausted.
func plsSlopes(d *pca.Decomposition, along []float64, most int) [][]float64 {
	r := len(along)
	square := make([]float64, r) // of the lengths of the scores
	next := make([]float64, r)
	for a := range along {
		square[a] = d.Length(a) * d.Length(a)
		next[a] = d.Length(a) * along[a] // T'y
	}
	var basis, images [][]float64
	fitted := make([]float64, r) // slopes so far
	var out [][]float64
	first := 0.0
	for range most {
		for range 2 {
			for _, b := range basis {
				c := dot(b, next)
				for a := range next {
					next[a] -= c * b[a]
				}
			}
		}
		length := math.Sqrt(dot(next, next))
		if len(basis) == 0 {
			first = length
		}
		if length <= 1e-12*first || first == 0 {
			break
		}
		b := make([]float64, r)
		for a := range b {
			b[a] = next[a] / length
		}
		basis = append(basis, b)
		// A direction conjugate to those before: its image in row space is orthogonal.
		direction := append([]float64(nil), b...)
		for range 2 {
			for _, q := range images {
				c := 0.0
				for a := range q {
					c += q[a] * square[a] * direction[a]
				}
				for a := range direction {
					direction[a] -= c * q[a]
				}
			}
		}
		size, reach := 0.0, 0.0
		for a, v := range direction {
			size += v * v * square[a]
			reach += v * d.Length(a) * along[a]
		}
		if !(size > 0) {
			break
		}
		root := math.Sqrt(size)
		for a := range direction {
			direction[a] /= root
			fitted[a] += direction[a] * reach / root
		}
		images = append(images, direction)
		out = append(out, append([]float64(nil), fitted...))
		for a := range next {
			next[a] = square[a] * b[a]
		}
		scale := math.Sqrt(dot(next, next))
		for a := range next {
			next[a] *= first / scale
		}
	}
	return out
}

func dot(a, b []float64) float64 {
	sum := 0.0
	for i, v := range a {
		sum += v * b[i]
	}
	return sum
}

// remedies compares components as chosen with least squares, ridge regression and partial
// least squares.
func (m *Model) remedies(d *pca.Decomposition, pr pca.Projection, v *validation, response, most int) {
	along := pr.Along[:d.Rank]
	ordinary := ridgeSlopes(d, along, 0)
	full := d.Rank == d.Width() && m.Rows > d.Width()
	add := func(name, setting string, parameter float64, slopes []float64, parameters float64, of func(f int) (float64, bool)) {
		r := Remedy{Name: name, Setting: setting, Parameter: parameter, Parameters: parameters, CV: math.NaN(), CVError: math.NaN()}
		left := pr.Outside
		for a, b := range slopes {
			e := along[a] - b*d.Length(a)
			left += e * e
		}
		r.R2 = 1 - left/pr.Total
		if v != nil {
			r.CV, r.CVError, _ = v.rootMean(of)
		}
		squares := 0.0
		for j := range d.Channels {
			b, o := 0.0, 0.0
			for a := range slopes {
				b += d.Vector(j, a) * slopes[a]
				o += d.Vector(j, a) * ordinary[a]
			}
			standardized := b / d.Scaling.Scale[j] * m.deviations[j] / m.deviation
			squares += standardized * standardized
			if full && b*o < 0 {
				r.SignChanges++
			}
		}
		r.Length = math.Sqrt(squares)
		m.Remedies = append(m.Remedies, r)
	}
	slopes := make([]float64, d.Rank)
	for _, a := range m.Entering[:m.Components] {
		slopes[a] = ordinary[a]
	}
	at := func(k int, list func(heldErrors) []float64) func(int) (float64, bool) {
		return func(f int) (float64, bool) {
			l := list(v.errors[f][response])
			if k < 0 || k >= len(l) {
				return 0, false
			}
			return l[k], true
		}
	}
	path := func(e heldErrors) []float64 { return e.path }
	add("components", fmt.Sprintf("%d", m.Components), float64(m.Components), slopes, float64(m.Components), at(m.Components, path))
	if full {
		k := -1 // the error of all components, where they were among those considered
		if most >= d.Rank {
			k = d.Rank
		}
		add("least squares", "", 0, ordinary, float64(d.Rank), at(k, path))
	}
	m.addRidge(d, pr, v, add, at)
	if v != nil {
		pls := func(e heldErrors) []float64 { return e.pls }
		fits := plsSlopes(d, along, min(most, mostPLS))
		if best := v.best(len(fits), func(k int) func(int) (float64, bool) { return at(k, pls) }); best >= 0 {
			add("partial least squares", fmt.Sprintf("%d components, by the folds", best+1), float64(best+1), fits[best], float64(best+1), at(best, pls))
		}
	}
}

// best is the index of the smallest error, -1 without any.
func (v *validation) best(n int, of func(k int) func(int) (float64, bool)) int {
	best, least := -1, math.Inf(1)
	for k := range n {
		if root, _, _ := v.rootMean(of(k)); root < least {
			best, least = k, root
		}
	}
	return best
}
