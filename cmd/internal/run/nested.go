package run

import "axisfold/pca"

// nestedCost bounds what is judged without being asked for: about as many steps of a
// decomposition, or of merging, as take seconds.
const nestedCost = 3e10

// nested tells whether the error of the whole procedure is judged: by the run file, or by cost.
func (w *work) nested() bool {
	if w.plan == nil {
		return false
	}
	switch w.cfg.Regress.Nested {
	case "always":
		return true
	case "never":
		return false
	}
	if nestedSteps(w.splits, len(w.folds), w.whole.Count(), w.whole.Width()) <= nestedCost {
		return true
	}
	w.warn("no-procedure", "the error of the whole procedure, choice of components included, was not judged: %d folds of %d channels would take long; nested: always in regress does it", len(w.splits), len(w.active))
	return false
}

// nestedSteps counts the pairs of folds of one deal times what one costs: a decomposition of
// the smaller side, and the cells merged for it.
func nestedSteps(splits []pca.Split, cells, rows, width int) float64 {
	deals := 1
	if len(splits) > 0 {
		deals = splits[len(splits)-1].Deal + 1
	}
	folds := float64(len(splits)) / float64(deals)
	side, p := float64(min(rows, width)), float64(width)
	return float64(deals) * folds * folds * (side*side*p + float64(cells)/float64(deals)*side*p)
}
