package run

import (
	"fmt"
	"slices"

	"axisfold/pca"
)

// division cuts rows in their order into consecutive cells, and says which are held out
// and learnt from.
type division struct {
	ends   []int // of the cells
	splits []pca.Split
}

// divide holds out stretches of n rows. bounds are the rows at which cells may end, rising,
// from 0 to n; nil is every row. Stretches end at the bound nearest to the exact place, and what is left
// out beside them is the gap or more, never less.
func (p *foldPlan) divide(n int, bounds []int) (*division, error) {
	count := p.folds
	if p.arrangement == forwardFolds {
		count++ // the first stretch is only learnt from
	}
	if n < count {
		return nil, tooFewRows(n, count)
	}
	ends := stretches(n, count)
	for f, e := range ends {
		ends[f] = nearestBound(bounds, e)
	}
	type span struct{ from, to, before, after int }
	spans := make([]span, 0, count)
	cuts := []int{n}
	start := 0
	for f, e := range ends {
		if e == start {
			return nil, &pca.DataError{Problem: fmt.Sprintf("fold %d of %d holds no rows", f+1, count), Hint: "use fewer folds"}
		}
		s := span{start, e, lowerBound(bounds, max(0, start-p.gap)), upperBound(bounds, min(n, e+p.gap))}
		if f > 0 || p.arrangement == blockFolds {
			spans = append(spans, s)
			cuts = append(cuts, s.from, s.to, s.before)
			if p.arrangement == blockFolds {
				cuts = append(cuts, s.after)
			}
		}
		start = e
	}
	slices.Sort(cuts)
	cuts = slices.Compact(cuts)
	if cuts[0] == 0 {
		cuts = cuts[1:]
	}
	d := &division{ends: cuts}
	for f, s := range spans {
		var split pca.Split
		from := 0
		for i, to := range cuts {
			switch {
			case from >= s.from && to <= s.to:
				split.Held = append(split.Held, i)
			case to <= s.before, from >= s.after && p.arrangement == blockFolds:
				split.Train = append(split.Train, i)
			}
			from = to
		}
		if len(split.Train) == 0 {
			return nil, &pca.DataError{Problem: fmt.Sprintf("a gap of %d rows leaves fold %d of %d no row to learn from, of %d", p.gap, f+1, p.folds, n), Hint: "use a smaller gap, or more folds"}
		}
		d.splits = append(d.splits, split)
	}
	return d, nil
}

func nearestBound(bounds []int, at int) int {
	i, exact := slices.BinarySearch(bounds, at)
	switch {
	case bounds == nil || exact:
		return at
	case at-bounds[i-1] < bounds[i]-at:
		return bounds[i-1]
	}
	return bounds[i]
}

func lowerBound(bounds []int, at int) int {
	i, exact := slices.BinarySearch(bounds, at)
	if bounds == nil || exact {
		return at
	}
	return bounds[i-1]
}

func upperBound(bounds []int, at int) int {
	if i, exact := slices.BinarySearch(bounds, at); bounds != nil && !exact {
		return bounds[i]
	}
	return at
}

// cut merges the entries into cells and says how they are held out.
func (l *ledger) cut(p *foldPlan) ([]*pca.Summary, []pca.Split, error) {
	bounds := []int{0}
	for _, e := range l.entries {
		if e.Count() > 0 {
			bounds = append(bounds, bounds[len(bounds)-1]+e.Count())
		}
	}
	d, err := p.divide(bounds[len(bounds)-1], bounds)
	if err != nil {
		return nil, nil, err
	}
	cells := make([]*pca.Summary, len(d.ends))
	at, done := 0, 0
	var within []*pca.Summary
	for _, e := range l.entries {
		within = append(within, e)
		if done += e.Count(); done >= d.ends[at] && at < len(cells)-1 {
			cells[at], within = pca.MergeAll(within...), nil
			at++
		}
	}
	cells[at] = pca.MergeAll(within...)
	return cells, d.splits, nil
}
