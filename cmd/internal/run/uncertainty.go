package run

import (
	"context"
	"fmt"

	"axisfold/cmd/internal/report"
	"axisfold/pca"
	"axisfold/pca/stability"
)

// uncertainty resamples stretches of rows.
func (w *work) uncertainty(context.Context) error {
	u := w.cfg.Uncertainty
	if u == nil {
		return nil
	}
	if w.study.Retained() == 0 {
		w.warn("no-intervals", "no component is kept, so there is nothing to be sure of")
		return nil
	}
	var blocks []*pca.Summary
	if c := w.reading.stream; c != nil {
		blocks = joined(c.blocks(), u.Stretches)
	} else {
		// Cross-products serve: replicates are compared with one another to a few digits.
		form := pca.CrossProducts
		if w.reading.complete-1 < int64(w.roles.width()) {
			form = pca.Factor
		}
		blocks = heldBlocks(w.reading.source.held, u.Stretches, form, pca.NeedsRanks(w.roles.methods), w.options.Threads)
	}
	if blocks == nil {
		w.warn("no-intervals", "intervals need stretches of rows; on a table too large to hold, use arrangement: blocks")
		return nil
	}
	if u.Stretches > len(blocks) {
		w.warn("fewer-stretches", "uncertainty: %d stretches asked for, %d could be made of the rows", u.Stretches, len(blocks))
	}
	active := make([]*pca.Summary, len(blocks))
	for i, b := range blocks {
		active[i] = b.Pick(w.active)
	}
	r, err := stability.Bootstrap(active, w.study.Decomposition, stability.Options{Decompose: w.decomposeOptions(),
		Retained: w.study.Retained(), Replicates: u.Replicates, Confidence: u.Confidence, Seed: w.cfg.Seed, Threads: w.options.Threads})
	if err != nil {
		return fmt.Errorf("uncertainty: %w", err)
	}
	w.study.Uncertainty = &report.Uncertainty{Result: r, Confidence: u.Confidence}
	for _, warning := range r.Warnings {
		w.warn(warning.Code, "uncertainty: %s", warning.Text)
	}
	return nil
}

// joined merges neighbouring stretches into most of them; 0 leaves them as they are.
func joined(blocks []*pca.Summary, most int) []*pca.Summary {
	if most == 0 || len(blocks) <= most {
		return blocks
	}
	out := make([]*pca.Summary, 0, most)
	start := 0
	for _, end := range stretches(len(blocks), most) {
		out = append(out, pca.MergeAll(blocks[start:end]...))
		start = end
	}
	return out
}
