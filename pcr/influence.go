package pcr

import "math"

// Parameters is the number of fitted parameters: components and, if there is one, the constant.
func (m *Model) Parameters() int { return m.Components + m.constants }

// Basis writes row r of the latest Predict as a row of the orthonormal basis that the fit
// projects on: the constant 1/√n, unless the fit goes through the origin, and each
// component's centred score over the root of its sum of squares. Its length is
// Parameters, its squared length the leverage of the row.
func (p *Predictor) Basis(q []float64, r int) {
	at := 0
	if !p.atOrigin {
		q[0], at = 1/math.Sqrt(float64(p.m.Rows)), 1
	}
	for a := range p.k {
		q[at+a] = (p.scores[r*p.k+a] - p.base[a]) / p.lengths[a]
	}
}

// Leverage of row r of the latest Predict: h = 1/n + Σt_a²/d_a², the first term with a
// constant only (Hoaglin & Welsch 1978).
func (p *Predictor) Leverage(r int) float64 {
	h := p.leverages[r] / float64(p.m.Rows-1)
	if !p.atOrigin {
		h += 1 / float64(p.m.Rows)
	}
	return h
}

// MeanHalfAt is the half width of the interval for the mean of the response at rows of
// leverage h, t·s·√h.
func (p *Predictor) MeanHalfAt(h float64) float64 { return p.t * p.m.Residual * math.Sqrt(h) }

// Influence is what one row of the fit does to it, components taken as given.
type Influence struct {
	Leverage float64
	// Internal is e/(s√(1-h)), External the same with s from the other rows (Student's t on
	// Free-1 for a row picked in advance); Cook is Cook's distance (Cook 1977).
	Internal, External, Cook float64
}

// Limits beyond which a row is named (common practice): twice the mean leverage, an
// external residual of 3, a distance of 1 (Cook & Weisberg 1982).
const (
	LeverageLimit = 2.
	ExternalLimit = 3.
	CookLimit     = 1.
)

// alone is how near to 1 a leverage says that the row alone decides its fit: what is left
// of 1-h is then rounding.
const alone = 1e-10

// Influence of a row with residual e and leverage h. Without freedom, with an exact fit, or
// where the row alone decides its own fit, what is undefined is NaN.
func (m *Model) Influence(e, h float64) Influence {
	f := Influence{Leverage: h, Internal: math.NaN(), External: math.NaN(), Cook: math.NaN()}
	if m.Free <= 0 || 1-h < alone || m.exact() {
		return f
	}
	f.Internal = e / (m.Residual * math.Sqrt(1-h))
	square := f.Internal * f.Internal
	if m.Parameters() > 0 {
		f.Cook = square * h / (1 - h) / float64(m.Parameters())
	}
	if free := float64(m.Free); free > 1 {
		f.External = f.Internal * math.Sqrt((free-1)/math.Max(0, free-square))
	}
	return f
}

// exact tells whether residuals are but rounding.
func (m *Model) exact() bool {
	return m.Path[m.Components].Squares <= float64(m.Rows)*exactFit*m.Total
}

// HighLeverage tells whether h is above twice the mean leverage.
func (m *Model) HighLeverage(h float64) bool {
	return h > LeverageLimit*float64(m.Parameters())/float64(m.Rows)
}
