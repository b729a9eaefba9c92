package reduce

import (
	"math"

	"axisfold/pca"
)

// judge fills the held-out numbers: for each fold the equations are fitted on the other
// folds and their squared error on the fold comes from its summary.
func (q *problem) judge(s *pca.Summary, folds []*pca.Summary, r *Result) {
	var parts []*pca.Summary
	for _, f := range folds {
		if f.Count() > 0 {
			parts = append(parts, f)
		}
	}
	m, d := len(r.Kept), len(r.Dropped)
	if len(parts) < 2 || d == 0 {
		return
	}
	rows := 0
	for _, f := range parts {
		rows += f.Count()
	}
	if rows != s.Count() {
		r.warn("folds-differ", "the folds hold other rows than the summary; held-out numbers are theirs")
	}
	whole := pca.MergeAll(parts...)
	sums, worst := make([]float64, d), make([]float64, d)
	for i, fold := range parts {
		others := make([]*pca.Summary, 0, len(parts)-1)
		others = append(others, parts[:i]...)
		train := pca.MergeAll(append(others, parts[i+1:]...)...)
		root := make([]float64, q.p)
		for j := range root {
			root[j] = math.Sqrt(train.CenteredSquares(j))
		}
		between := func(i, j int) float64 {
			if root[i] == 0 || root[j] == 0 {
				return 0
			}
			return train.CrossProduct(i, j) / root[i] / root[j]
		}
		f := factorize(m, func(a, b int) float64 { return between(r.Kept[a], r.Kept[b]) }, q.floor[0]/q.m[0])
		each(d, q.Threads, func(k int) {
			j := r.Dropped[k]
			v := make([]float64, len(f.used))
			for i, a := range f.used {
				v[i] = between(j, r.Kept[a])
			}
			f.solve(v)
			w := make([]float64, q.p)
			w[j] = 1
			offset := fold.Mean(j) - train.Mean(j)
			for i, a := range f.used {
				c := r.Kept[a]
				w[c] = -v[i] * root[j] / root[c]
				offset += w[c] * (fold.Mean(c) - train.Mean(c))
			}
			n := float64(fold.Count())
			squares := fold.Spread(w) + n*offset*offset
			sums[k] += squares
			worst[k] = math.Max(worst[k], math.Sqrt(squares/n))
		})
	}
	for k, j := range r.Dropped {
		c := &r.Channels[j]
		c.HeldOutR2 = 1 - sums[k]/whole.CenteredSquares(j)
		c.HeldOutSD = math.Sqrt(sums[k] / float64(rows))
		c.WorstFoldSD = worst[k]
	}
}
