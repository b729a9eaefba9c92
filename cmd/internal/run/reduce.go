package run

import (
	"context"
	"fmt"
	"math"

	"axisfold/cmd/internal/report"
	"axisfold/pca"
	"axisfold/pca/reduce"
	"axisfold/pca/table"
)

// reduce chooses which channels to keep.
func (w *work) reduce(context.Context) error {
	c := w.cfg.Reduce
	if c == nil {
		return nil
	}
	d := w.study.Decomposition
	p := len(w.active)
	columns := make([]string, p) // patterns are about names in the table
	for i, a := range w.active {
		columns[i] = w.roles.columns[w.roles.use[a]].Name
	}
	mark := func(setting string, patterns []string) ([]bool, error) {
		out := make([]bool, p)
		for _, pattern := range patterns {
			matched := matching(pattern, columns)
			if len(matched) == 0 {
				return nil, table.UnknownColumn(setting, pattern, columns)
			}
			for _, j := range matched {
				out[j] = true
			}
		}
		return out, nil
	}
	o := reduce.Options{Names: d.Channels, Matrix: string(d.Matrix), Rebuild: c.Rebuild, Size: c.Size, Criterion: c.Criterion,
		Splits: w.splits, Components: max(1, w.study.Retained()), ExactUpTo: c.ExactUpTo, Threads: w.options.Threads,
		Cost: make([]float64, p), Tolerance: make([]float64, p)}
	if c.Size > p {
		return &pca.DataError{Problem: fmt.Sprintf("reduce: size %d asked for, but the table has %d channels", c.Size, p)}
	}
	var err error
	if o.Protect, err = mark("reduce.protect", c.Protect); err != nil {
		return err
	}
	if o.Prefer, err = mark("reduce.prefer", c.Prefer); err != nil {
		return err
	}
	for _, pattern := range c.Together {
		matched := matching(pattern, columns)
		if len(matched) == 0 {
			return table.UnknownColumn("reduce.together", pattern, columns)
		}
		o.Together = append(o.Together, matched)
	}
	for j := range p {
		o.Cost[j], o.Tolerance[j] = 1, math.NaN()
	}
	for _, k := range c.Channels {
		matched := matching(k.Name, columns)
		if len(matched) == 0 {
			return table.UnknownColumn("reduce.channels", k.Name, columns)
		}
		for _, j := range matched {
			if k.Cost > 0 {
				o.Cost[j] = k.Cost
			}
			if k.Tolerance > 0 {
				o.Tolerance[j] = k.Tolerance
			}
		}
	}
	folds := make([]*pca.Summary, len(w.folds))
	for i, f := range w.folds {
		folds[i] = f.Pick(w.active)
	}
	result, err := reduce.Choose(w.whole.Pick(w.active), folds, o)
	if err != nil {
		return fmt.Errorf("reduce: %w", err)
	}
	w.study.Reduction = &report.Reduction{Result: result, Rebuild: c.Rebuild, Size: c.Size, Sweep: w.options.Sweep, Protected: o.Protect, Preferred: o.Prefer}
	for _, warning := range result.Warnings {
		w.warn(warning.Code, "reduce: %s", warning.Text)
	}
	return nil
}
