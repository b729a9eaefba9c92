package run

import (
	"context"
	"io"

	"axisfold/pca"
	"axisfold/plots"
)

// mostCorrelated is up to how many channels all pairs are correlated for pictures.
const mostCorrelated = 2000

// draw draws the pictures.
func (w *work) draw(context.Context) error {
	if w.cfg.Draw == nil {
		return nil
	}
	s := w.study
	m := plots.Material{Decomposition: s.Decomposition, Verdict: s.Verdict, TotalRows: s.Table.Complete,
		Groups: w.sample.groups, GroupNames: w.sample.names, Observed: w.sample.observed, Predicted: w.sample.predicted}
	if p := len(w.active); p <= mostCorrelated {
		m.Correlations = w.whole.Pick(w.active).Correlations()
		m.SimilarOrder = pca.SimilarOrder(m.Correlations, p)
	}
	if w.sample.width == 2 {
		m.Scores, m.ScoreRows = w.sample.scores, len(w.sample.scores)/2
	}
	if r := s.Regression; r != nil {
		m.Regression, m.Confidence = r.Result, r.Confidence
		for _, c := range r.Responses {
			m.Units = append(m.Units, c.Unit)
		}
	}
	return plots.Draw(&m, w.cfg.Draw.Formats, func(name string) (io.WriteCloser, error) {
		return w.folder.create("plots/" + name)
	})
}
