package pcr

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"

	"axisfold/pca"
)

// Predictor brings one model to rows. It holds scratch space: one per goroutine.
type Predictor struct {
	m         *Model
	scorer    *pca.Scorer
	t         float64 // quantile of Student's t
	atOrigin  bool
	k         int
	scores    []float64
	leverages []float64
	spe       []float64
	base      []float64 // scores of the mean row
	lengths   []float64 // roots of the scores' sums of squares
}

// NewPredictor makes a Predictor for the model at position i of the result, with the
// confidence of its prediction intervals.
func (r *Result) NewPredictor(i int, confidence float64, throughOrigin bool) *Predictor {
	m := r.Models[i]
	p := &Predictor{m: m, k: m.Components, atOrigin: throughOrigin, t: math.NaN(),
		scorer: r.Decomposition.NewScorer(m.Entering[:m.Components])}
	for _, a := range m.Entering[:m.Components] {
		base := 0.0
		for j, v := range r.Decomposition.Offset {
			base += v * r.Decomposition.Vector(j, a)
		}
		p.base = append(p.base, base)
		p.lengths = append(p.lengths, r.Decomposition.Length(a))
	}
	if m.Free > 0 {
		p.t = distuv.StudentsT{Sigma: 1, Nu: float64(m.Free)}.Quantile(1 - (1-confidence)/2)
	}
	return p
}

// Predict writes for each of the n rows of predictors in x (n×p, original units) the
// prediction and the half width of its interval for a single new row,
// t·s·√(1 + 1/n + Σt_a²/d_a²). The interval does not cover what standard errors do not
// cover either (see the package comment), nor rows unlike those the model was built on.
func (p *Predictor) Predict(predicted, half, x []float64, n int) {
	width := len(p.m.Terms)
	if len(p.leverages) < n {
		p.scores, p.leverages, p.spe = make([]float64, n*p.k), make([]float64, n), make([]float64, n)
	}
	p.scorer.Scores(p.scores, p.leverages, p.spe, x, n)
	free := float64(p.m.Rows - 1)
	mean := 1 / float64(p.m.Rows)
	if p.atOrigin {
		mean = 0
	}
	for r := range n {
		sum := p.m.Intercept.Coefficient
		for j, v := range x[r*width : r*width+width] {
			sum = math.FMA(p.m.Terms[j].Coefficient, v, sum)
		}
		predicted[r] = sum
		half[r] = p.t * p.m.Residual * math.Sqrt(1+mean+p.leverages[r]/free)
	}
}
