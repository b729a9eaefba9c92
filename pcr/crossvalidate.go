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
	rows []int // held out, by fold
	// deals is which deal of rows to folds each fold is of, from 0 up; the number of deals
	// is one more than the last.
	deals []int
	// most is the largest number of components that every fold's training rows carry.
	most int
	// errors[fold][response] holds Σ error² over the held-out rows.
	errors [][]heldErrors
}

// heldErrors are Σ error² over held-out rows of one response by everything that was fitted
// without them.
type heldErrors struct {
	path  []float64 // by number of components, from 0
	ridge []float64 // by ridge parameter, see ridgeGrid
	// formulas is by ridge parameter that a formula chose without these rows, see
	// ridgeFormulas; NaN where it chose none.
	formulas []float64
	pls      []float64 // by number of partial least squares components, from 1
}

// crossValidate fits on what each split learns from and judges the fit on what it holds
// out, from summaries alone: the held-out squared error is a quadratic form in the moments
// of the held-out rows. Scaling, decomposition and order of entry are made anew every time.
func crossValidate(parts []*pca.Summary, splits []pca.Split, x, y []int, most int, o Options) (*validation, error) {
	v := &validation{rows: make([]int, len(splits)), deals: make([]int, len(splits)), most: most, errors: make([][]heldErrors, len(splits))}
	carried := make([]int, len(splits))
	failed := make([]error, len(splits))
	threads := o.Threads
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	var wg sync.WaitGroup
	for t := range min(threads, len(splits)) {
		wg.Go(func() {
			for f := t; f < len(splits); f += threads {
				train, held := splits[f].Summaries(parts)
				v.rows[f], v.deals[f] = held.Count(), splits[f].Deal
				v.errors[f], failed[f] = judgeFold(train, held, x, y, most, o)
				if failed[f] == nil {
					carried[f] = len(v.errors[f][0].path) - 1
				}
			}
		})
	}
	wg.Wait()
	for f, err := range failed {
		if err != nil {
			return nil, fmt.Errorf("without fold %d of %d: %w", f+1, len(splits), err)
		}
		v.most = min(v.most, carried[f])
	}
	return v, nil
}

// judgeFold returns the errors over held for every response: of components up to what
// train carries, of ridge regression and of partial least squares.
func judgeFold(train, held *pca.Summary, x, y []int, most int, o Options) ([]heldErrors, error) {
	moving, po := movingIn(train, x, o.Predictors)
	out := make([]heldErrors, len(y))
	if len(moving) == 0 || train.Count() < 2 {
		for i, j := range y {
			off := held.Mean(j) - train.Mean(j)
			out[i].path = []float64{held.CenteredSquares(j) + float64(held.Count())*off*off}
		}
		return out, nil
	}
	d, projections, err := pca.DecomposeJoint(train, moving, y, po)
	if err != nil {
		return nil, err
	}
	g := newJudge(train, held, d, moving, y)
	for i := range y {
		along := projections[i].Along[:d.Rank]
		slopes := make([]float64, d.Rank)
		out[i].path = append(out[i].path, g.squares(i, slopes))
		order := o.enter(along)
		for _, a := range order[:min(len(order), most)] {
			slopes[a] = along[a] / d.Length(a)
			out[i].path = append(out[i].path, g.squares(i, slopes))
		}
		if o.pathOnly {
			continue
		}
		for _, kappa := range ridgeGrid(d) {
			out[i].ridge = append(out[i].ridge, g.squares(i, ridgeSlopes(d, along, kappa)))
		}
		rows := train.Count()
		if !o.ThroughOrigin {
			rows--
		}
		for _, formula := range ridgeFormulas {
			squares := math.NaN()
			if kappa := formula.choose(d, projections[i], rows); !math.IsNaN(kappa) {
				squares = g.squares(i, ridgeSlopes(d, along, kappa))
			}
			out[i].formulas = append(out[i].formulas, squares)
		}
		for _, slopes := range plsSlopes(d, along, min(d.Rank, most, mostPLS)) {
			out[i].pls = append(out[i].pls, g.squares(i, slopes))
		}
	}
	return out, nil
}

// judge sees held-out rows as scores of the components fitted without them, and
// responses: the width falls from the channels to the components.
type judge struct {
	seen   *pca.Summary
	shift  []float64 // held-out minus training means of scores and responses
	scores int
	rows   float64
	weight []float64
}

func newJudge(train, held *pca.Summary, d *pca.Decomposition, moving, y []int) *judge {
	width, p := d.Rank+len(y), held.Width()
	w := make([]float64, p*width)
	for i, j := range moving {
		for a := range d.Rank {
			w[j*width+a] = d.Vector(i, a) / d.Scaling.Scale[i]
		}
	}
	for i, j := range y {
		w[j*width+d.Rank+i] = 1
	}
	g := &judge{seen: held.Combine(w, width), shift: make([]float64, width), scores: d.Rank,
		rows: float64(held.Count()), weight: make([]float64, width)}
	// Differences of means are taken before the weighted sums, so that large offsets do
	// not cancel.
	for j := range p {
		delta := held.Mean(j) - train.Mean(j)
		for a := range width {
			g.shift[a] += delta * w[j*width+a]
		}
	}
	return g
}

// squares is Σ error² of response i over the held-out rows for slopes on the scores.
func (g *judge) squares(i int, slopes []float64) float64 {
	clear(g.weight)
	g.weight[g.scores+i] = 1
	off := g.shift[g.scores+i]
	for a, b := range slopes {
		g.weight[a] = -b
		off -= b * g.shift[a]
	}
	return g.seen.Spread(g.weight) + g.rows*off*off
}

// rootMean returns the root mean squared error over all held-out rows and its standard
// error. With folds of n_f rows the mean squared error is Σ/n; its standard error is the
// standard deviation of the folds' own mean squared errors over √folds, here carried to
// the root. Deals hold the same rows, so that more of them smooth the error and its
// standard error (root mean square over deals) but do not make it smaller. NaN where a
// fold lacks it.
func (v *validation) rootMean(of func(fold int) (squares float64, ok bool)) (root, slip, total float64) {
	rows, variance, deals := 0.0, 0.0, 0.0
	for start, end := 0, 0; start < len(v.rows); start = end {
		for end = start; end < len(v.rows) && v.deals[end] == v.deals[start]; end++ {
		}
		folds, mean, spread := float64(end-start), 0.0, 0.0
		each := make([]float64, 0, end-start)
		for f := start; f < end; f++ {
			s, ok := of(f)
			if !ok {
				return math.NaN(), math.NaN(), math.NaN()
			}
			n := float64(v.rows[f])
			total += s
			rows += n
			each = append(each, s/n)
			mean += s / n / folds
		}
		for _, e := range each {
			spread += (e - mean) * (e - mean)
		}
		variance += spread / (folds - 1) / folds
		deals++
	}
	root = math.Sqrt(total / rows)
	if root > 0 {
		slip = math.Sqrt(variance/deals) / (2 * root)
	}
	return root, slip, total
}

// addValidation gives every step of the path its error on held-out rows, whose squares about
// their mean are heldSquares.
func (m *Model) addValidation(v *validation, response int, heldSquares float64) {
	m.Deals = v.deals[len(v.deals)-1] + 1
	m.Folds = len(v.rows) / m.Deals
	for k := 0; k <= v.most && k < len(m.Path); k++ {
		step := &m.Path[k]
		var total float64
		step.CV, step.CVError, total = v.rootMean(func(f int) (float64, bool) { return v.errors[f][response].path[k], true })
		step.CVR2 = 1 - total/heldSquares
		byFold := make([]float64, m.Folds)
		for f := range byFold {
			byFold[f] = v.errors[f][response].path[k]
		}
		m.held = append(m.held, byFold)
	}
	if last := len(m.Path) - 1; 2*v.most < last {
		m.warn("folds-carry-fewer", "the rows that the smallest fold leaves to learn from carry %s at most: no held-out error beyond (%d were considered)", components(v.most), last)
	}
}

func components(k int) string {
	if k == 1 {
		return "1 component"
	}
	return fmt.Sprintf("%d components", k)
}

// heldSquares is Σ(y-ȳ)² over all held-out rows for each response.
func heldSquares(parts []*pca.Summary, splits []pca.Split, y []int) []float64 {
	var all *pca.Summary
	for _, s := range splits {
		for _, i := range s.Held {
			if all == nil {
				all = pca.MergeAll(parts[i].Pick(y))
			} else {
				all.Merge(parts[i].Pick(y))
			}
		}
	}
	out := make([]float64, len(y))
	for i := range out {
		out[i] = all.CenteredSquares(i)
	}
	return out
}
