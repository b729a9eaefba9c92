package pcr

import (
	"fmt"
	"math"
	"runtime"
	"sync"

	"axisfold/pca"
)

// validation holds held-out squared errors.
type validation struct {
	rows []int // by fold
	// most is the largest number of components that every fold's training rows carry.
	most int
	// squares[fold][response][k] is Σ error² over the held-out rows.
	squares [][][]float64
}

// crossValidate fits without each fold in turn and judges the fit on the fold, from
// summaries alone: the held-out squared error is a quadratic form in the fold's moments.
// Scaling, decomposition and order of entry are made anew from the other folds.
func crossValidate(folds []*pca.Summary, x, y []int, most int, o Options) (*validation, error) {
	v := &validation{rows: make([]int, len(folds)), most: most, squares: make([][][]float64, len(folds))}
	carried := make([]int, len(folds))
	failed := make([]error, len(folds))
	threads := o.Threads
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	var wg sync.WaitGroup
	for t := range min(threads, len(folds)) {
		wg.Go(func() {
			for f := t; f < len(folds); f += threads {
				v.rows[f] = folds[f].Count()
				others := make([]*pca.Summary, 0, len(folds)-1)
				for g, part := range folds {
					if g != f {
						others = append(others, part)
					}
				}
				v.squares[f], failed[f] = judgeFold(pca.MergeAll(others...), folds[f], x, y, most, o)
				if failed[f] == nil {
					carried[f] = len(v.squares[f][0]) - 1
				}
			}
		})
	}
	wg.Wait()
	for f, err := range failed {
		if err != nil {
			return nil, fmt.Errorf("without fold %d of %d: %w", f+1, len(folds), err)
		}
		v.most = min(v.most, carried[f])
	}
	return v, nil
}

// judgeFold returns Σ error² over held for every response and every number of components
// up to what train carries.
func judgeFold(train, held *pca.Summary, x, y []int, most int, o Options) ([][]float64, error) {
	// A channel that does not move in the training rows cannot be scaled or learnt from:
	// it has no slope in this fold.
	var moving []int
	po := o.Predictors
	po.Names, po.Methods = nil, nil
	for i, j := range x {
		if !train.Constant(j) {
			moving = append(moving, j)
			po.Names = append(po.Names, o.Predictors.Names[i])
			po.Methods = append(po.Methods, o.Predictors.Methods[i])
		}
	}
	out := make([][]float64, len(y))
	if len(moving) == 0 || train.Count() < 2 {
		for i, j := range y {
			off := held.Mean(j) - train.Mean(j)
			out[i] = []float64{held.CenteredSquares(j) + float64(held.Count())*off*off}
		}
		return out, nil
	}
	d, projections, err := pca.DecomposeJoint(train, moving, y, po)
	if err != nil {
		return nil, err
	}
	// Held-out rows seen as scores (of unscaled offset, which the means take care of) and
	// responses: the width falls from the channels to the components.
	m := min(d.Rank, most)
	scores := 0 // order by correlation may reach for components beyond the first m
	order := make([][]int, len(y))
	for i := range y {
		order[i] = entering(projections[i].Along[:d.Rank], o.Order)[:m]
		for _, a := range order[i] {
			scores = max(scores, a+1)
		}
	}
	width := scores + len(y)
	p := held.Width()
	w := make([]float64, p*width)
	for i, j := range moving {
		for a := range scores {
			w[j*width+a] = d.Vector(i, a) / d.Scaling.Scale[i]
		}
	}
	for i, j := range y {
		w[j*width+scores+i] = 1
	}
	seen := held.Combine(w, width)
	// Means as differences from the training means, taken before the weighted sums, so
	// that large offsets do not cancel.
	shift := make([]float64, width)
	for j := range p {
		delta := held.Mean(j) - train.Mean(j)
		for a := range width {
			shift[a] += delta * w[j*width+a]
		}
	}
	weight := make([]float64, width)
	for i := range y {
		clear(weight)
		weight[scores+i] = 1
		off := shift[scores+i]
		n := float64(held.Count())
		out[i] = append(out[i], seen.Spread(weight)+n*off*off)
		for _, a := range order[i] {
			slope := projections[i].Along[a] / d.Length(a)
			weight[a] = -slope
			off -= slope * shift[a]
			out[i] = append(out[i], seen.Spread(weight)+n*off*off)
		}
	}
	return out, nil
}

// addValidation turns squared errors by fold into root mean squares and their standard
// errors. With folds of n_f rows the mean squared error is Σ/n; its standard error is the
// standard deviation of the folds' own mean squared errors over √folds.
func (m *Model) addValidation(v *validation, response int) {
	m.Folds = len(v.rows)
	folds := float64(len(v.rows))
	for k := 0; k <= v.most && k < len(m.Path); k++ {
		total, mean := 0.0, 0.0
		for f, rows := range v.rows {
			total += v.squares[f][response][k]
			mean += v.squares[f][response][k] / float64(rows) / folds
		}
		spread := 0.0
		for f, rows := range v.rows {
			e := v.squares[f][response][k]/float64(rows) - mean
			spread += e * e
		}
		step := &m.Path[k]
		mse := total / float64(m.Rows)
		step.CV = math.Sqrt(mse)
		step.CVR2 = 1 - total/m.Total
		step.CVError = 0
		if mse > 0 {
			step.CVError = math.Sqrt(spread/(folds-1)/folds) / (2 * step.CV)
		}
	}
}
