package reduce

import (
	"math"

	"axisfold/pca"
)

// split is a fold and the rows without it.
type split struct {
	train, fold *pca.Summary
	root        []float64 // of the squares of each channel in train
}

// splits makes one split per fold; none without at least two. Where the options do not say
// what is held out and what is learnt from, each fold that holds rows is held out in turn.
func (q *problem) splits(s *pca.Summary, folds []*pca.Summary, r *Result) []split {
	parts, splits := folds, q.Splits
	if splits == nil {
		parts = nil
		rows := 0
		for _, f := range folds {
			if f.Count() > 0 {
				parts = append(parts, f)
				rows += f.Count()
			}
		}
		if rows != s.Count() && len(parts) > 1 {
			r.warn("folds-differ", "the folds hold other rows than the summary; held-out numbers are theirs")
		}
		splits = pca.HoldEachOut(len(parts))
	}
	if len(splits) < 2 {
		return nil
	}
	out := make([]split, len(splits))
	for i, fold := range splits {
		train, held := fold.Summaries(parts)
		root := make([]float64, q.p)
		for j := range root {
			root[j] = math.Sqrt(train.CenteredSquares(j))
		}
		out[i] = split{train, held, root}
	}
	return out
}

// judged is how well a channel is rebuilt on rows that its equation has not seen.
type judged struct {
	r2, sd, worst float64 // R² over all folds; residual sd over all, and in the worst fold
}

// heldOut judges the dropped channels: for each fold the equations are fitted on the other
// folds and their squared error on the fold comes from its summary.
func (q *problem) heldOut(splits []split, kept, dropped []int) []judged {
	if len(dropped) == 0 {
		return nil
	}
	m, d := len(kept), len(dropped)
	rows := 0
	sums, out := make([]float64, d), make([]judged, d)
	parts := make([]*pca.Summary, len(splits))
	for i, s := range splits {
		parts[i] = s.fold
		rows += s.fold.Count()
		between := func(i, j int) float64 {
			if s.root[i] == 0 || s.root[j] == 0 {
				return 0
			}
			return s.train.CrossProduct(i, j) / s.root[i] / s.root[j]
		}
		f := factorize(m, func(a, b int) float64 { return between(kept[a], kept[b]) }, q.floor[0]/q.m[0])
		each(d, q.Threads, func(k int) {
			j := dropped[k]
			v := make([]float64, len(f.used))
			for i, a := range f.used {
				v[i] = between(j, kept[a])
			}
			f.solve(v)
			w := make([]float64, q.p)
			w[j] = 1
			offset := s.fold.Mean(j) - s.train.Mean(j)
			for i, a := range f.used {
				c := kept[a]
				w[c] = -v[i] * s.root[j] / s.root[c]
				offset += w[c] * (s.fold.Mean(c) - s.train.Mean(c))
			}
			n := float64(s.fold.Count())
			squares := s.fold.Spread(w) + n*offset*offset
			sums[k] += squares
			out[k].worst = math.Max(out[k].worst, math.Sqrt(squares/n))
		})
	}
	all := pca.MergeAll(parts...)
	for k, j := range dropped {
		out[k].r2, out[k].sd = 1-sums[k]/all.CenteredSquares(j), math.Sqrt(sums[k]/float64(rows))
	}
	return out
}

// judge fills the held-out numbers of the result.
func (q *problem) judge(splits []split, r *Result) {
	if len(splits) == 0 {
		return
	}
	for k, v := range q.heldOut(splits, r.Kept, r.Dropped) {
		c := &r.Channels[r.Dropped[k]]
		c.HeldOutR2, c.HeldOutSD, c.WorstFoldSD = v.r2, v.sd, v.worst
	}
}
