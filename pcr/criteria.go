package pcr

import (
	"math"

	"axisfold/pca"
)

// addCriteria fills in what the squares left tell about each number of components, and
// the t value of every component.
func (m *Model) addCriteria(pr pca.Projection, o Options) {
	n, intercept := float64(m.Rows), 1.0
	if o.ThroughOrigin {
		intercept = 0
	}
	all := len(m.Entering)
	free := n - float64(all) - intercept
	m.T = nans(len(pr.Along))
	full := math.NaN()
	if free > 0 && pr.Outside > exactFit*m.Total {
		full = math.Sqrt(pr.Outside / free)
		for _, a := range m.Entering {
			m.T[a] = pr.Along[a] / full
		}
	}
	for k := range m.Path {
		s := &m.Path[k]
		s.AICc, s.BIC, s.Cp = math.NaN(), math.NaN(), math.NaN()
		if s.Squares > exactFit*m.Total {
			likelihood, parameters := n*math.Log(s.Squares/n), float64(k)+1+intercept
			s.BIC = likelihood + parameters*math.Log(n)
			if left := n - parameters - 1; left > 0 {
				s.AICc = likelihood + 2*parameters + 2*parameters*(parameters+1)/left
			}
		}
		if !math.IsNaN(full) {
			s.Cp = (s.Squares-pr.Outside)/(full*full) - float64(all) + 2*float64(k) + intercept
		}
	}
}

// exactFit is the share of the total squares below which what a fit leaves is rounding.
const exactFit = 1e-28
