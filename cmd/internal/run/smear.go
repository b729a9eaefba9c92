package run

import (
	"context"

	"axisfold/pca"
	"axisfold/pca/table"
	"axisfold/pcr"
)

// smear goes through the rows where a response was transformed, for what brings its
// predictions back to its unit: the residuals are known only once the model is.
func (w *work) smear(ctx context.Context) error {
	r := w.study.Regression
	if r == nil {
		return nil
	}
	any := false
	for i := range r.Result.Models {
		transform := w.roles.transforms[w.roles.channels+i]
		r.Smearing = append(r.Smearing, pcr.Smearing{Transform: transform})
		any = any || transform != pca.NoTransform
	}
	if !any {
		r.Smearing = nil
		return nil
	}
	threads := w.options.threads()
	makers := make([]*lineMaker, threads)
	return w.reading.source.each(ctx, threads, func(worker int, b *table.Block) error {
		if makers[worker] == nil {
			makers[worker] = w.newLineMaker(reportLayout(w.cfg), 0)
		}
		m := makers[worker]
		m.x = w.gather(m.x, b)
		sums := make([]pcr.Smearing, len(r.Smearing))
		predicted, half := make([]float64, b.Rows), make([]float64, b.Rows)
		for i, predictor := range m.predictors {
			sums[i].Transform = r.Smearing[i].Transform
			predictor.Predict(predicted, half, m.x, b.Rows)
			for row := range b.Rows {
				sums[i].Add(b.Data[row*b.Width+w.roles.channels+i] - predicted[row])
			}
		}
		b.Result = sums
		return nil
	}, func(b *table.Block) error {
		for i, s := range b.Result.([]pcr.Smearing) {
			r.Smearing[i].Merge(s)
		}
		return nil
	})
}
