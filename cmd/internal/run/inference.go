package run

import (
	"cmp"
	"math"
	"slices"

	"axisfold/cmd/internal/report"
	"axisfold/pca/table"
	"axisfold/pcr"
)

// residualLags is up to which lag residuals are compared with earlier ones.
const residualLags = 10

// inference gathers, in the order of rows, what only rows can tell about a regression:
// errors that do not take residuals as alike or independent, tests of residuals, and the
// rows that weigh most.
type inference struct {
	robust []*pcr.Robust
	series []*pcr.ResidualSeries
	found  []report.Inference
}

func (w *work) newInference() *inference {
	g := &inference{}
	r := w.study.Regression
	if r == nil {
		return g
	}
	g.found = make([]report.Inference, len(r.Result.Models))
	for i, m := range r.Result.Models {
		g.robust = append(g.robust, r.Result.NewRobust(i, pcr.AutomaticLags(m.Rows)))
		g.series = append(g.series, m.NewResidualSeries(residualLags))
	}
	return g
}

// add takes row r of the block; follows tells whether it follows the row before it.
func (g *inference) add(b *table.Block, r int, lines *blockLines, follows bool) {
	for i := range g.robust {
		e := lines.observed[i][r] - lines.predicted[i][r]
		q := len(lines.basis[i]) / b.Rows
		g.robust[i].Add(lines.basis[i][r*q:(r+1)*q], e, follows)
		g.series[i].Add(e, lines.predicted[i][r], follows)
		g.found[i].Take(b.Row+int64(b.Offset[r])+1, lines.influence[i][r])
	}
}

// conclude ends the gathering and warns of what the intervals cannot be trusted with.
func (w *work) conclude(g *inference) {
	r := w.study.Regression
	for i := range g.robust {
		m, f := r.Result.Models[i], &g.found[i]
		f.Errors, f.Tests = g.robust[i].Errors(r.Confidence), g.series[i].Tests(m)
		slices.SortStableFunc(f.Worst, func(a, b report.WeighingRow) int { return cmp.Compare(b.Cook, a.Cook) })
		if f.Errors.Alone > 0 && m.Free > 0 {
			w.warn("rows-alone", "%s: %d rows alone decide their own prediction (leverage 1); HC3 errors, studentised residuals and distances of such rows are not defined",
				m.Response, f.Errors.Alone)
		}
		if math.IsNaN(f.Tests.DurbinWatson) && f.Tests.Pairs == 0 {
			w.warn("no-series", "%s: no row follows another, so that nothing is known of autocorrelation and HAC errors see none", m.Response)
		}
	}
	if r != nil {
		r.Inference = g.found
	}
}

// weigh keeps what the fit knows of the rows of the latest Predict of predictor i.
func (m *lineMaker) weigh(out *blockLines, i, n int) {
	model, predictor := m.w.study.Regression.Result.Models[i], m.predictors[i]
	q := model.Parameters()
	out.basis[i], out.influence[i] = sized(out.basis[i], n*q), slices.Grow(out.influence[i][:0], n)[:n]
	for r := range n {
		predictor.Basis(out.basis[i][r*q:(r+1)*q], r)
		out.influence[i][r] = model.Influence(out.observed[i][r]-out.predicted[i][r], predictor.Leverage(r))
	}
}

// diagnose writes the lines of diagnostics.csv.
func (m *lineMaker) diagnose(out *blockLines, b *table.Block) {
	for r := range b.Rows {
		for i, model := range m.w.study.Regression.Result.Models {
			out.diagnosticText.Diagnostics(m.layout, m.key(b, r), model, out.influence[i][r])
		}
	}
}
