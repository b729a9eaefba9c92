package pcr

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"

	"axisfold/pca"
)

// Robust gathers, row by row, what standard errors need that do not take residuals as
// alike (HC3) or as independent (HAC). Both take components and their number as given.
//
// The coefficients are linear in Σqₜeₜ with q the rows of Predictor.Basis, so their
// covariance is the mapped-back matrix Σ of products of qe. HC3 takes e/(1-h) of each row
// alone (MacKinnon & White 1985). HAC takes pairs of rows up to L apart with Bartlett's
// weights 1-l/(L+1) (Newey & West 1987), times n/(n-k-1). That sum is that of ww' over all
// windows of L+1 rows in a row, w the sum of qe in the window, over L+1: one product a
// row whatever L, and never a negative variance. Windows end where rows do not follow one
// another.
type Robust struct {
	m        *Model
	d        *pca.Decomposition
	q, lags  int
	hc3, hac []float64 // q×q, lower triangle
	ring     []float64 // of the last lags+1 rows' qe
	window   []float64
	filled   int // rows of the current stretch
	at       int // place in ring of the next row
	alone    int
}

// AutomaticLags is ⌊4(n/100)^(2/9)⌋, the lag for Bartlett's weights where nothing is known
// of the series (Newey & West 1994).
func AutomaticLags(n int) int {
	return max(0, min(n-1, int(4*math.Pow(float64(n)/100, 2./9))))
}

// NewRobust makes an empty one for the model at position i of the result.
func (r *Result) NewRobust(i, lags int) *Robust {
	m := r.Models[i]
	q := m.Parameters()
	return &Robust{m: m, d: r.Decomposition, q: q, lags: lags, hc3: make([]float64, q*q), hac: make([]float64, q*q),
		ring: make([]float64, (lags+1)*q), window: make([]float64, q)}
}

// Add takes a row: its basis q, residual e, and whether it follows the row before it. Rows
// come in their order.
func (b *Robust) Add(q []float64, e float64, follows bool) {
	h := 0.0
	for _, v := range q {
		h += v * v
	}
	if 1-h < alone {
		b.alone++
	} else {
		own := e / (1 - h)
		addOuter(b.hc3, q, own*own)
	}
	if !follows {
		b.flush()
	}
	place := b.ring[b.at*b.q : (b.at+1)*b.q]
	for a, v := range q {
		place[a] = v * e
	}
	b.step()
	b.filled++
}

// step moves the window on by one place and adds its product. The window is summed anew:
// adding and taking away would gather rounding over many rows.
func (b *Robust) step() {
	clear(b.window)
	for l := range b.lags + 1 {
		for a, v := range b.ring[l*b.q : (l+1)*b.q] {
			b.window[a] += v
		}
	}
	addOuter(b.hac, b.window, 1/float64(b.lags+1))
	b.at = (b.at + 1) % (b.lags + 1)
}

// flush lets the window run out of the stretch that has ended.
func (b *Robust) flush() {
	if b.filled == 0 {
		return
	}
	for range b.lags {
		clear(b.ring[b.at*b.q : (b.at+1)*b.q])
		b.step()
	}
	clear(b.ring)
	b.filled = 0
}

// addOuter adds weight·vv' to the lower triangle of the square matrix.
func addOuter(to, v []float64, weight float64) {
	for i, x := range v {
		x *= weight
		row := to[i*len(v):]
		for j, y := range v[:i+1] {
			row[j] += x * y
		}
	}
}

// RobustTerm are standard errors of one coefficient that allow for residuals of unequal
// size (HC3), and for that and their following one another (HAC).
type RobustTerm struct{ HC3, HAC float64 }

// RobustErrors are those of all coefficients.
type RobustErrors struct {
	Lags      int // of HAC
	Intercept RobustTerm
	Terms     []RobustTerm
	Alone     int     // rows that alone decide their own fit; with one HC3 is undefined
	Quantile  float64 // of Student's t that intervals take, NaN without freedom
}

// Errors ends the gathering. Through the origin the intercept has no error.
func (b *Robust) Errors(confidence float64) *RobustErrors {
	b.flush()
	out := &RobustErrors{Lags: b.lags, Alone: b.alone, Quantile: math.NaN()}
	undefined := RobustTerm{math.NaN(), math.NaN()}
	if b.m.Free > 0 {
		out.Quantile = distuv.StudentsT{Sigma: 1, Nu: float64(b.m.Free)}.Quantile(1 - (1-confidence)/2)
	}
	scale := math.Sqrt(float64(b.m.Rows) / float64(b.m.Free))
	of := func(g []float64) RobustTerm {
		if b.m.Free <= 0 {
			return undefined
		}
		t := RobustTerm{HC3: form(b.hc3, g), HAC: scale * form(b.hac, g)}
		if b.alone > 0 {
			t.HC3 = math.NaN()
		}
		return t
	}
	g, constant := make([]float64, b.q), make([]float64, b.q)
	for j := range b.d.Width() {
		mean := b.d.Scaling.Center[j] + b.d.Offset[j]*b.d.Scaling.Scale[j]
		for i, a := range b.m.Entering[:b.m.Components] {
			at := b.m.constants + i
			g[at] = b.d.Vector(j, a) / b.d.Length(a) / b.d.Scaling.Scale[j]
			constant[at] -= mean * g[at]
		}
		out.Terms = append(out.Terms, of(g))
	}
	if b.m.constants == 1 {
		constant[0] = 1 / math.Sqrt(float64(b.m.Rows))
		out.Intercept = of(constant)
	}
	return out
}

// form is √(g'Mg) for a symmetric M given by its lower triangle.
func form(m, g []float64) float64 {
	sum := 0.0
	for i, x := range g {
		for j, y := range g[:i] {
			sum += 2 * x * y * m[i*len(g)+j]
		}
		sum += x * x * m[i*len(g)+i]
	}
	return math.Sqrt(math.Max(0, sum))
}
