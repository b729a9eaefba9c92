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
	case Minimum, OneStandardError, RandomisationTest:
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
		if o.Choice == RandomisationTest {
			if err := m.chooseByChance(best, o); err != nil {
				return err
			}
		}
		last := len(m.Path) - 1
		for last > 0 && math.IsNaN(m.Path[last].CV) {
			last--
		}
		if m.Components == last && last > 0 && last < len(m.Entering) {
			m.warn("at-ceiling", "the error is smallest with the most components considered (%d): more may be better", last)
		}
	case SmallestAICc:
		return m.smallest("AICc", func(s Step) float64 { return s.AICc })
	case SmallestBIC:
		return m.smallest("BIC", func(s Step) float64 { return s.BIC })
	case SmallestCp:
		return m.smallest("Cp", func(s Step) float64 { return s.Cp })
	case ConditionLimit:
		m.chooseByCondition(o.Limit)
	case SmallestPress:
		return m.smallest("PRESS", func(s Step) float64 { return s.Press })
	case TThreshold:
		for _, a := range m.Entering {
			if math.IsNaN(m.T[a]) {
				return &pca.DataError{Problem: "least squares leaves no residual to judge components by", Hint: "choose another rule, such as one-standard-error"}
			}
			if m.T[a]*m.T[a] > o.Limit && m.Components < len(m.Path)-1 {
				m.Components++
			}
		}
	default:
		panic("pcr: unknown choice " + string(o.Choice))
	}
	m.Path[m.Components].Chosen = true
	return nil
}

// smallest chooses the number of components with the smallest criterion.
func (m *Model) smallest(name string, criterion func(Step) float64) error {
	best := -1
	for k, s := range m.Path {
		if v := criterion(s); !math.IsNaN(v) && (best < 0 || v < criterion(m.Path[best])) {
			best = k
		}
	}
	if best < 0 {
		return &pca.DataError{Problem: fmt.Sprintf("%s is undefined for every number of components: too few rows, or an exact fit", name),
			Hint: "choose another rule, such as one-standard-error"}
	}
	m.Components = best
	m.Path[best].Chosen = true
	return nil
}
