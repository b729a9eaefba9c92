package pca

import (
	"math"

	"axisfold/pca/internal/kernel"
)

// Projection is what a regression on components needs to know of one response y: its
// centred length along each component's unit score vector and what is left outside.
type Projection struct {
	// Along[a] = u_a'(y - ȳ), u_a the score vector of component a scaled to length 1;
	// 0 beyond the rank.
	Along []float64
	// Outside is the squared length of y - ȳ outside all components up to the rank.
	Outside float64
	// Total is Σ(y - ȳ)².
	Total float64
}

// DecomposeJoint decomposes the channels x of a summary that also holds responses y, and
// projects each response. Both come from the same factor or cross-products.
func DecomposeJoint(s *Summary, x, y []int, o Options) (*Decomposition, []Projection, error) {
	d, err := Decompose(s.Pick(x), o)
	if err != nil {
		return nil, nil, err
	}
	projections := make([]Projection, len(y))
	for i, j := range y {
		if s.form == CrossProducts {
			projections[i] = d.projectCross(s, x, j)
		} else {
			projections[i] = d.projectFactor(s, j)
		}
	}
	return d, projections, nil
}

func (d *Decomposition) projectCross(s *Summary, x []int, y int) Projection {
	m := len(d.Values)
	pr := Projection{Along: make([]float64, m), Total: s.CenteredSquares(y)}
	zy := make([]float64, len(x))
	for a, j := range x {
		zy[a] = s.CrossProduct(j, y) / d.Scaling.Scale[a]
	}
	inside := 0.0
	for a := range d.Rank {
		sum := 0.0
		for j, v := range zy {
			sum += d.Vectors[j*m+a] * v
		}
		pr.Along[a] = sum / d.Length(a)
		inside += pr.Along[a] * pr.Along[a]
	}
	// Taking squares from squares: a fit closer than √ε of the response is lost here.
	pr.Outside = math.Max(pr.Total-inside, 0)
	return pr
}

func (d *Decomposition) projectFactor(s *Summary, y int) Projection {
	m := len(d.Values)
	rows := len(s.factor) / s.p
	pr := Projection{Along: make([]float64, m), Total: s.CenteredSquares(y)}
	rest := make([]float64, rows)
	for r := range rest {
		rest[r] = s.factor[r*s.p+y]
	}
	u := make([]float64, rows)
	// Two rounds of projection: what is left is then orthogonal to the components to
	// working precision even when next to nothing is left.
	for range 2 {
		for a := range d.Rank {
			for r := range u {
				u[r] = d.left[r*m+a]
			}
			along := kernel.Dot(u, rest)
			pr.Along[a] += along
			kernel.Axpy(-along, u, rest)
		}
	}
	pr.Outside = kernel.Dot(rest, rest)
	return pr
}

// Length is the length of the score vector of component a about its mean: √((n-1)·variance).
func (d *Decomposition) Length(a int) float64 {
	return math.Sqrt(float64(d.Rows-1) * d.ScoreVariances[a])
}
