package pcr

import (
	"fmt"
	"math"
	"runtime"
	"sync"

	"axisfold/pca"
)

// Procedure is the held-out error of the whole procedure: in every fold the number of
// components is chosen anew, with scaling, directions and order, by the same rule, which sees
// only what the fold learns from; a rule that decides by held-out rows has the other folds for
// it (Stone 1974; Varma & Simon 2006). The error of the chosen step, which that rule
// made small, is not in it, so that it is what new rows may be expected to show for a
// procedure that learns from as many rows as a fold does.
type Procedure struct {
	// CV, CVError and CVR2 are as in [Step], over the folds judged; NaN where Note says why.
	CV, CVError, CVR2 float64
	Chosen            []int // number of components by fold judged
	// Judged is how many folds were: folds that learn from fewer than two others are not,
	// where the rule needs such.
	Judged int
	Note   string
}

// unable is a procedure without an error.
func unable(why string) *Procedure {
	return &Procedure{CV: math.NaN(), CVError: math.NaN(), CVR2: math.NaN(), Note: why}
}

// procedures judges the whole procedure for every response. Errors of components in every fold are those of v.
func procedures(parts []*pca.Summary, v *validation, x, y []int, most int, o Options) []*Procedure {
	out := make([]*Procedure, len(y))
	if o.Choice == SmallestPress {
		for i := range out {
			out[i] = unable("the rule press would need the rows of every fold")
		}
		return out
	}
	chosen := make([][]int, len(o.Splits)) // by fold and response; nil where not judged
	failed := make([]error, len(o.Splits))
	threads := o.Threads
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	var wg sync.WaitGroup
	for t := range min(threads, len(o.Splits)) {
		wg.Go(func() {
			for f := t; f < len(o.Splits); f += threads {
				chosen[f], failed[f] = chooseInside(parts, f, x, y, most, o)
			}
		})
	}
	wg.Wait()
	for f, err := range failed {
		if err != nil {
			for i := range out {
				out[i] = unable(fmt.Sprintf("without fold %d of %d the rule finds no number of components: %s", f+1, len(o.Splits), err))
			}
			return out
		}
	}
	judged := &validation{}
	var folds []int
	var splits []pca.Split
	for f, k := range chosen {
		if k != nil {
			judged.rows, judged.deals = append(judged.rows, v.rows[f]), append(judged.deals, v.deals[f])
			folds, splits = append(folds, f), append(splits, o.Splits[f])
		}
	}
	if len(folds) < 2 {
		for i := range out {
			out[i] = unable("fewer than two folds learn from two others, by which the rule could decide")
		}
		return out
	}
	squares := heldSquares(parts, splits, y)
	for i := range out {
		p := &Procedure{Judged: len(folds)}
		for _, f := range folds {
			p.Chosen = append(p.Chosen, chosen[f][i])
		}
		var total float64
		p.CV, p.CVError, total = judged.rootMean(func(f int) (float64, bool) {
			path := v.errors[folds[f]][i].path
			k := p.Chosen[f]
			return path[min(k, len(path)-1)], k < len(path)
		})
		if p.CVR2 = 1 - total/squares[i]; math.IsNaN(p.CV) {
			p.Note = "a fold learns from too few rows for the number chosen"
		}
		out[i] = p
	}
	return out
}

// chooseInside returns the number of components that the rule chooses for each response on
// what split f learns from; nil where the rule has no folds there to decide by.
func chooseInside(parts []*pca.Summary, f int, x, y []int, most int, o Options) ([]int, error) {
	split := o.Splits[f]
	chosen := make([]int, len(y))
	if o.Choice == Given {
		for i := range chosen {
			chosen[i] = o.Components
		}
		return chosen, nil
	}
	train, _ := split.Summaries(parts)
	moving, po := movingIn(train, x, o.Predictors)
	if len(moving) == 0 || train.Count() < 2 {
		return chosen, nil
	}
	d, projections, err := pca.DecomposeJoint(train, moving, y, po)
	if err != nil {
		return nil, err
	}
	most = min(most, d.Rank)
	var cv *validation
	if o.Choice.ByFolds() {
		inner := split.Inside(o.Splits)
		if len(inner) < 2 {
			return nil, nil
		}
		// One thread here: the folds around are on all of them.
		alone := o
		alone.Threads, alone.pathOnly = 1, true
		if cv, err = crossValidate(parts, inner, x, y, most, alone); err != nil {
			return nil, err
		}
	}
	for i := range y {
		m := newModel(train, d, projections[i], y[i], moving, o.Responses[i], o)
		m.path(projections[i], most)
		m.addCriteria(projections[i], o)
		if cv != nil {
			m.addValidation(cv, i, 1)
		}
		if err := m.choose(o); err != nil {
			return nil, err
		}
		chosen[i] = m.Components
	}
	return chosen, nil
}

// ByFolds tells whether the choice looks at held-out rows.
func (c Choice) ByFolds() bool {
	return c == Minimum || c == OneStandardError || c == RandomisationTest
}

// movingIn leaves out the channels that do not move in these rows: they cannot be scaled or
// learnt from and have no slope.
func movingIn(train *pca.Summary, x []int, all pca.Options) (moving []int, o pca.Options) {
	o = all
	o.Names, o.Methods = nil, nil
	for i, j := range x {
		if !train.Constant(j) {
			moving = append(moving, j)
			o.Names = append(o.Names, all.Names[i])
			o.Methods = append(o.Methods, all.Methods[i])
		}
	}
	return moving, o
}
