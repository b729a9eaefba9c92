package pcr

import (
	"fmt"
	"math"

	"axisfold/pca"
)

// choose sets the number of components.
func (m *Model) choose(o Options) error {
	switch o.Choice {
	case Given:
		m.Components = o.Components
		if o.Components >= len(m.Path) {
			return &pca.DataError{Problem: fmt.Sprintf("%d components asked for, at most %d considered", o.Components, len(m.Path)-1)}
		}
	case Minimum, OneStandardError:
		best := -1
		for k, s := range m.Path {
			if !math.IsNaN(s.CV) && (best < 0 || s.CV < m.Path[best].CV) {
				best = k
			}
		}
		if best < 0 {
			return &pca.DataError{Problem: "no fold could judge any number of components", Hint: "use fewer folds"}
		}
		m.Components = best
		if o.Choice == OneStandardError {
			// The rule is about mean squared errors; CVError is carried to the root.
			least := m.Path[best]
			limit := least.CV*least.CV + 2*least.CV*least.CVError
			for k := range best {
				if m.Path[k].CV*m.Path[k].CV <= limit {
					m.Components = k
					break
				}
			}
		}
		last := len(m.Path) - 1
		for last > 0 && math.IsNaN(m.Path[last].CV) {
			last--
		}
		if m.Components == last && last > 0 && last < len(m.Entering) {
			m.warn("at-ceiling", "the error is smallest with the most components considered (%d): more may be better", last)
		}
	default:
		panic("pcr: unknown choice " + string(o.Choice))
	}
	m.Path[m.Components].Chosen = true
	return nil
}
