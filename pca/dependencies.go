package pca

import (
	"cmp"
	"math"
	"slices"

	"axisfold/pca/internal/kernel"
)

// Dependency is a combination of channels that hardly varies, solved for one of them:
// x[Of] = Intercept + Σ Slopes·x[From] within Spread, in original units.
type Dependency struct {
	Component int     // whose root it is, from 0
	Index     float64 // the root of l₁/l_a; +Inf for a root of zero
	Of        int
	Intercept float64
	From      []int // by falling weight in the component
	Slopes    []float64
	// Spread is the standard deviation, divisor n-1, of what the equation leaves.
	Spread float64
}

// dependencySlack is how much more an equation may leave than the whole component, so that
// it can do without the channels that hardly matter.
const dependencySlack = 1.25

// Dependencies turns components whose condition index is above limit into equations, the
// tightest first. The channel of largest weight is regressed on those of the next largest,
// one more at a time, until what is left is within dependencySlack of what the component
// itself leaves. Channels are seen as rows of V·diag(√l), whose inner products are those of
// the scaled channels, so that small spreads keep their digits.
func (d *Decomposition) Dependencies(limit float64, means []float64) []Dependency {
	var out []Dependency
	for a := d.Components() - 1; a > 0; a-- {
		index := math.Inf(1)
		if d.Values[a] > 0 {
			index = math.Sqrt(d.Values[0] / d.Values[a])
		}
		if index <= limit {
			break
		}
		out = append(out, d.dependency(a, index, means))
	}
	return slices.Clip(out)
}

func (d *Decomposition) dependency(a int, index float64, means []float64) Dependency {
	order := FirstComponents(d.Width())
	weight := func(j int) float64 { return math.Abs(d.Vector(j, a)) }
	slices.SortStableFunc(order, func(i, j int) int { return cmp.Compare(weight(j), weight(i)) })
	of := order[0]
	left := d.coordinates(of)
	enough := max(dependencySlack*math.Sqrt(d.ScoreVariances[a])/weight(of), float64(d.Width())*epsilon*length(left))
	var basis, triangle [][]float64 // triangle[k] are the coordinates of channel k on the basis
	var reach []float64
	e := Dependency{Component: a, Index: index, Of: of, Intercept: means[of]}
	for _, j := range order[1:] {
		if length(left) <= enough || weight(j) == 0 {
			break
		}
		q := d.coordinates(j)
		whole := length(q)
		column := make([]float64, len(basis)+1)
		for range 2 { // once leaves too much of nearly dependent channels
			for k, b := range basis {
				c := kernel.Dot(b, q)
				column[k] += c
				kernel.Axpy(-c, b, q)
			}
		}
		size := length(q)
		if size <= float64(d.Width())*epsilon*whole {
			continue // a combination of those before
		}
		column[len(basis)] = size
		for i := range q {
			q[i] /= size
		}
		c := kernel.Dot(q, left)
		kernel.Axpy(-c, q, left)
		basis, triangle, reach = append(basis, q), append(triangle, column), append(reach, c)
		e.From = append(e.From, j)
	}
	e.Slopes = make([]float64, len(e.From))
	for k := len(e.From) - 1; k >= 0; k-- {
		sum := reach[k]
		for l := k + 1; l < len(e.From); l++ {
			sum -= triangle[l][k] * e.Slopes[l]
		}
		e.Slopes[k] = sum / triangle[k][k]
	}
	for k, j := range e.From {
		e.Slopes[k] *= d.Scaling.Scale[of] / d.Scaling.Scale[j]
		e.Intercept -= e.Slopes[k] * means[j]
	}
	e.Spread = length(left) * d.Scaling.Scale[of]
	return e
}

// coordinates of the scaled channel j along the components, times their deviations.
func (d *Decomposition) coordinates(j int) []float64 {
	out := make([]float64, d.Components())
	for a := range out {
		out[a] = d.Vector(j, a) * math.Sqrt(d.ScoreVariances[a])
	}
	return out
}

func length(v []float64) float64 { return math.Sqrt(kernel.Dot(v, v)) }
