package pcr

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"

	"axisfold/pca"
)

// mapBack turns slopes on components into coefficients of the channels, with conditional
// standard errors: Cov(b) = D⁻¹·σ²·V_k·diag(1/d²)·V_k'·D⁻¹ and, because scores are
// centred, Var(b₀) = σ²/n + m'Cov(b)m.
func (m *Model) mapBack(joint *pca.Summary, d *pca.Decomposition, pr pca.Projection, x []int, y int, o Options) {
	kept := m.Entering[:m.Components]
	intercept := 1
	if o.ThroughOrigin {
		intercept = 0
	}
	m.Free = m.Rows - m.Components - intercept
	m.R2 = m.Path[m.Components].R2
	m.Residual = residual(m.Path[m.Components].Squares, m.Free)
	b, e := coefficients(d, pr, kept, m.Residual)
	b0, e0 := interceptOf(joint, d, x, y, kept, b, m.Residual)

	// Least squares is the same with every component kept.
	p := d.Width()
	freeAll := m.Rows - p - intercept
	full := d.Rank == p
	ob, oe := nans(p), nans(p)
	ob0, oe0 := math.NaN(), math.NaN()
	if full && freeAll >= 0 {
		all := pca.FirstComponents(p)
		s := residual(pr.Outside, freeAll)
		ob, oe = coefficients(d, pr, all, s)
		ob0, oe0 = interceptOf(joint, d, x, y, all, ob, s)
	} else {
		m.warn("no-ordinary", "least squares has no unique answer here: %d rows, %d predictors spanning %d dimensions", m.Rows, p, d.Rank)
	}

	t := math.NaN()
	if m.Free > 0 {
		t = distuv.StudentsT{Sigma: 1, Nu: float64(m.Free)}.Quantile(1 - (1-o.Confidence)/2)
	} else {
		m.warn("no-freedom", "%d rows leave no degrees of freedom beside %d components: no standard errors", m.Rows, m.Components)
	}
	deviation := joint.Deviation(y)
	if intercept == 0 {
		b0, e0, ob0, oe0 = 0, 0, 0, 0
	}
	m.Intercept = Term{Name: "intercept", Coefficient: b0, Error: e0, Lower: b0 - t*e0, Upper: b0 + t*e0,
		Standardized: math.NaN(), OrdinaryStandardized: math.NaN(), Ordinary: ob0, OrdinaryError: oe0, VIF: math.NaN()}
	for j := range p {
		scale := joint.Deviation(x[j]) / deviation
		m.Terms = append(m.Terms, Term{Name: d.Channels[j], Coefficient: b[j], Error: e[j],
			Lower: b[j] - t*e[j], Upper: b[j] + t*e[j],
			Standardized: b[j] * scale, OrdinaryStandardized: ob[j] * scale,
			Ordinary: ob[j], OrdinaryError: oe[j], VIF: inflation(d, j)})
	}
	if m.Path[m.Components].Squares <= float64(m.Rows)*exactFit*m.Total {
		m.warn("perfect-fit", "the fit is exact to the last digits: standard errors say nothing, and the response may be among the predictors in disguise")
	}
	if m.Components == 0 {
		m.warn("no-components", "no component predicts the response better than its mean")
	}
}

func residual(squares float64, free int) float64 {
	if free <= 0 {
		return math.NaN()
	}
	return math.Sqrt(squares / float64(free))
}

// coefficients returns slope and standard error of each channel from the given components
// and residual standard deviation s.
func coefficients(d *pca.Decomposition, pr pca.Projection, components []int, s float64) (b, e []float64) {
	b, e = make([]float64, d.Width()), make([]float64, d.Width())
	for j := range b {
		sum, squares := 0.0, 0.0
		// From the small end: slopes on the last components are the large ones, and
		// their sum should not be rounded against the small.
		for i := range components {
			a := components[i]
			length := d.Length(a)
			v := d.Vector(j, a) / length
			sum += v * pr.Along[a]
			squares += v * v
		}
		b[j] = sum / d.Scaling.Scale[j]
		e[j] = s * math.Sqrt(squares) / d.Scaling.Scale[j]
	}
	return b, e
}

func interceptOf(joint *pca.Summary, d *pca.Decomposition, x []int, y int, components []int, b []float64, s float64) (b0, e0 float64) {
	b0 = joint.Mean(y)
	for j, v := range b {
		b0 = math.FMA(-v, joint.Mean(x[j]), b0)
	}
	squares := 1 / float64(joint.Count())
	for _, a := range components {
		h := 0.0
		for j := range b {
			h += d.Vector(j, a) * joint.Mean(x[j]) / d.Scaling.Scale[j]
		}
		h /= d.Length(a)
		squares += h * h
	}
	return b0, s * math.Sqrt(squares)
}

// inflation is VIF_j = [S⁻¹]_jj·S_jj, from the components of S, whatever the scaling.
func inflation(d *pca.Decomposition, j int) float64 {
	if d.Rank < d.Width() {
		// The channel is a combination of others when it has weight on a direction
		// without variance; where n is too small that holds for all of them.
		inside := 0.0
		for a := range d.Rank {
			inside += d.Vector(j, a) * d.Vector(j, a)
		}
		if inside < 1-1e-8 {
			return math.Inf(1)
		}
	}
	inverse, variance := 0.0, 0.0
	for a := range d.Rank {
		v := d.Vector(j, a) * d.Vector(j, a)
		inverse += v / d.Values[a]
		variance += v * d.Values[a]
	}
	return math.Max(1, inverse*variance)
}

func nans(n int) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = math.NaN()
	}
	return out
}
