package pcr

import (
	"axisfold/pca"
)

// PathStep holds the coefficients in original units that so many components give.
type PathStep struct {
	Components                int
	Intercept, InterceptError float64
	Coefficients, Errors      []float64 // by predictor; errors are conditional, as for Term
	Standardized              []float64
}

// pathCells bounds how many coefficients a path holds.
const pathCells = 200000

// coefficientPath maps back every number of components, from 0: how coefficients come
// about, and where they begin to run to those of least squares. On tables too wide for all
// of it the first steps and the last stand for it.
func (m *Model) coefficientPath(joint *pca.Summary, d *pca.Decomposition, pr pca.Projection, x []int, y int, o Options) {
	steps, left := pathCells/(d.Width()+1), 0
	for k := range m.Path {
		if k >= steps && k < len(m.Path)-1 && k != m.Components {
			left++
			continue
		}
		entering := m.Entering[:k]
		s := residual(m.Path[k].Squares, m.Rows-k-m.constants)
		step := PathStep{Components: k}
		step.Coefficients, step.Errors = coefficients(d, pr, entering, s)
		if !o.ThroughOrigin {
			step.Intercept, step.InterceptError = interceptOf(joint, d, x, y, entering, step.Coefficients, s)
		}
		for j, b := range step.Coefficients {
			step.Standardized = append(step.Standardized, b*m.deviations[j]/m.deviation)
		}
		m.Coefficients = append(m.Coefficients, step)
	}
	if left > 0 {
		m.warn("thinned-path", "the path of coefficients leaves out %d numbers of components: with %d channels it would be too long; the first, the chosen and the last are there", left, d.Width())
	}
}
