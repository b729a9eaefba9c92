package plots

import (
	"errors"
	"fmt"
	"math"
)

// largestDrawn bounds numbers: sums and differences of them must not overflow on the way
// to places on a page.
const largestDrawn = 1e150

// finite refuses a number without a place on a page.
func finite(what string, v float64) error {
	if math.IsNaN(v) || math.Abs(v) > largestDrawn {
		return fmt.Errorf("%s is %g, want a number that can be drawn", what, v)
	}
	return nil
}

// finiteOrNone lets NaN pass, which stands for a number that does not exist.
func finiteOrNone(what string, v float64) error {
	if math.IsNaN(v) {
		return nil
	}
	return finite(what, v)
}

// allFinite refuses a list with such a number and says which, counted from 1.
func allFinite(what string, values []float64) error {
	for i, v := range values {
		if err := finite(what, v); err != nil {
			return finite(fmt.Sprintf("%s %d", what, i+1), v)
		}
	}
	return nil
}

func counts(what string, got, want int) error {
	if got != want {
		return fmt.Errorf("%d %s, want %d", got, what, want)
	}
	return nil
}

// checkDecomposition refuses a decomposition that no picture could stand on.
func checkDecomposition(m *Material) error {
	d := m.Decomposition
	if d == nil || len(d.Values) == 0 || len(d.Channels) == 0 {
		return errors.New("nothing was decomposed")
	}
	if k := m.Verdict.Components; !m.Verdict.Abstains && (k < 0 || k > len(d.Values)) {
		return fmt.Errorf("%d components kept of %d", k, len(d.Values))
	}
	if err := allFinite("eigenvalue", d.Values); err != nil {
		return err
	}
	if !(d.Total > 0) || d.Total > largestDrawn {
		return fmt.Errorf("all variances add up to %g, want a number above 0 that can be drawn", d.Total)
	}
	if err := counts("entries of eigenvectors", len(d.Vectors), len(d.Channels)*len(d.Values)); err != nil {
		return err
	}
	return checkOrder(m.SimilarOrder, len(d.Channels))
}

// checkOrder refuses an order that is neither empty nor one of all p channels.
func checkOrder(order []int, p int) error {
	if len(order) == 0 {
		return nil
	}
	seen := make([]bool, p)
	for _, j := range order {
		if j < 0 || j >= p || seen[j] || len(order) != p {
			return fmt.Errorf("the order of the channels does not hold each of the %d once", p)
		}
		seen[j] = true
	}
	return nil
}

// checkLoadings refuses loadings of the first k components.
func checkLoadings(m *Material, k int) error {
	d := m.Decomposition
	for a := range k {
		for j, name := range d.Channels {
			if err := finite("loading", d.Loading(j, a)); err != nil {
				return fmt.Errorf("channel %q on %s: %w", name, componentName(a), err)
			}
		}
	}
	return nil
}
