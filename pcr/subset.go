package pcr

import (
	"fmt"
	"slices"

	"axisfold/pca"
)

// enter returns the components in the order of entry: those of Which first, where given, then
// the others. Where the rows do not carry one of Which, the order ends before it.
func (o *Options) enter(along []float64) []int {
	order := entering(along, o.Order)
	if o.Which == nil {
		return order
	}
	var out []int
	for _, a := range o.Which {
		if a >= len(along) {
			return out
		}
		out = append(out, a)
	}
	for _, a := range order {
		if !slices.Contains(o.Which, a) {
			out = append(out, a)
		}
	}
	return out
}

// checkWhich refuses components that the predictors do not have.
func (o *Options) checkWhich(rank int) error {
	for _, a := range o.Which {
		if a >= rank {
			return &pca.DataError{Problem: fmt.Sprintf("component C%d asked for, but the predictors span %d", a+1, rank),
				Hint: "ask for components among these"}
		}
	}
	return nil
}
