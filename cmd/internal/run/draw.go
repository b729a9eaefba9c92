package run

import (
	"context"
	"io"

	"axisfold/pca"
	"axisfold/plots"
)

// mostCorrelated is up to how many channels all pairs are looked at.
const mostCorrelated = 2000

// draw draws the pictures.
func (w *work) draw(context.Context) error {
	if w.cfg.Draw == nil {
		return nil
	}
	s := w.study
	m := plots.Material{Title: w.cfg.Title, Decomposition: s.Decomposition, Verdict: s.Verdict, Overview: s.Overview, TotalRows: s.Table.Complete,
		Groups: w.sample.groups, GroupNames: w.sample.names, Observed: w.sample.observed, Predicted: w.sample.predicted}
	if w.correlations != nil {
		m.Correlations = w.correlations
		m.Tree = pca.Cluster(m.Correlations, len(w.active))
		m.SimilarOrder = m.Tree.Order
	}
	if w.sample.width == 2 {
		m.Scores, m.ScoreRows = w.sample.scores, len(w.sample.scores)/2
	}
	if s.Uncertainty != nil {
		m.LoadingIntervals = s.Uncertainty.Result.Loadings
	}
	m.Rotation = s.Rotation
	if r := s.Reduction; r != nil {
		m.Reduction = r.Result
		m.ChannelSample, m.ChannelRows = w.sample.channels, len(w.sample.channels)/len(w.active)
		if r.Size == 0 {
			m.Rebuild = r.Rebuild
		}
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
