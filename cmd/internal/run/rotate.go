package run

import (
	"context"
	"fmt"
	"math"

	"axisfold/pca/rotation"
)

// rotate turns the kept components.
func (w *work) rotate(context.Context) error {
	c := w.cfg.Rotate
	if c == nil {
		return nil
	}
	k := w.study.Retained()
	if k < 2 {
		w.warn("nothing-to-rotate", "rotate: %d components are kept; it takes two to turn one against another", k)
		return nil
	}
	d := w.study.Decomposition
	loadings := make([]float64, d.Width()*k)
	for j := range d.Width() {
		for a := range k {
			loadings[j*k+a] = d.Loading(j, a)
		}
	}
	r, err := rotation.Rotate(loadings, k, rotation.Options{Method: rotation.Method(c.Method), Normalize: c.Normalize, Power: c.Power,
		Starts: c.Starts, Seed: w.cfg.Seed, Threads: w.options.Threads})
	if err != nil {
		return fmt.Errorf("rotate: %w", err)
	}
	w.study.Rotation = r
	for _, warning := range r.Warnings {
		w.warn(warning.Code, "rotate: %s", warning.Text)
	}
	return nil
}

// rotated is how many rotated components there are.
func (w *work) rotated() int {
	if w.study.Rotation == nil {
		return 0
	}
	return w.study.Rotation.Components()
}

// turn fills turned with the rotated scores of a row, of unit variance over all rows.
func (m *lineMaker) turn(scores []float64) {
	k := len(m.turned)
	if k == 0 {
		return
	}
	weights, variances := m.w.study.Rotation.Weights, m.w.study.Decomposition.ScoreVariances
	clear(m.turned)
	for b, v := range scores {
		v /= math.Sqrt(variances[b])
		for a := range m.turned {
			m.turned[a] += v * weights[b*k+a]
		}
	}
}
