package reduce

import (
	"fmt"
	"slices"

	"axisfold/pca"
)

// Result is a choice of channels and how well it serves.
type Result struct {
	Kept     []int // ascending
	Dropped  []int // ascending
	Order    []int // Kept in the order a greedy pass takes them, by drop in trace
	Method   string
	Optimal  bool  // proved best, up to rounding
	Nodes    int64 // of the search tree; 0 without one
	Channels []Channel
	Curve    []CurvePoint
	// Criteria of the chosen set by name, see [Criteria], and "mean-r2", the mean over the
	// dropped channels. With covariance they are in units of the mean variance.
	Criteria    map[string]float64
	Comparisons []Comparison
	Clusters    [][]int // channels that tell one story, two or more each
	Warnings    []pca.Warning
}

// Methods a Result can name.
const (
	ExactSearch     = "exact search"
	GreedyWithSwaps = "greedy with swaps"
)

// slowUpTo is the largest p at which the criteria that need the whole matrix for each
// candidate are searched by.
const slowUpTo = 60

// Choose picks the channels to keep, from the summary of all rows. Folds are summaries of
// parts of the same rows, in any number; with two or more each channel is also judged on
// rows it was not fitted on, for the chosen set as it stands.
//
// Data that cannot be used, such as a constant channel, are a [pca.DataError]; options
// that contradict one another or the data are another error.
func Choose(s *pca.Summary, folds []*pca.Summary, o Options) (*Result, error) {
	o, err := o.withDefaults(s)
	if err != nil {
		return nil, err
	}
	for i, f := range folds {
		if f.Width() != s.Width() {
			return nil, fmt.Errorf("fold %d has %d channels; expected %d", i+1, f.Width(), s.Width())
		}
	}
	q, err := newProblem(s, o)
	if err != nil {
		return nil, err
	}
	r := &Result{}
	if !q.goal.quick() && q.p > slowUpTo {
		r.warn("criterion-by-rm", fmt.Sprintf("%d channels are too many to search by %s; the set was chosen by rm, which asks for much the same", q.p, o.Criterion))
		q.goal = rm
	}
	chosen := q.search(r)
	for j, kept := range chosen.kept {
		if kept {
			r.Kept = append(r.Kept, j)
		} else {
			r.Dropped = append(r.Dropped, j)
		}
	}
	r.Order = q.order(r.Kept)
	r.Criteria = q.all(chosen)
	r.Channels = q.rebuild(s, r.Kept)
	splits := q.splits(s, folds, r)
	q.judge(splits, r)
	r.Curve = q.curve(chosen, splits)
	r.Comparisons = q.compare(len(r.Kept))
	r.Clusters = clusters(s.Correlations(), q.p)
	q.doubts(r)
	return r, nil
}

// search runs greedy and, for few channels, the exact search, and notes how it went.
func (q *problem) search(r *Result) *swept {
	var s *swept
	if q.Size > 0 {
		s = q.greedySize(q.Size)
	} else {
		s = q.greedyTarget()
	}
	r.Method = GreedyWithSwaps
	if q.p > q.ExactUpTo {
		r.warn("not-proved", fmt.Sprintf("%d channels are more than the exact search takes (%d); a better set may exist", q.p, q.ExactUpTo))
		return s
	}
	r.Method = ExactSearch
	s, r.Optimal, r.Nodes = q.exact(s)
	if !r.Optimal {
		r.warn("not-proved", fmt.Sprintf("the search for the best set stopped after %d steps; a better set may exist", r.Nodes))
	}
	return s
}

// order sorts the kept channels as a greedy pass limited to them takes them.
func (q *problem) order(kept []int) []int {
	s := newSwept(q.m, q.p, q.floor)
	single := *q
	single.units, single.cost, single.preferred = nil, nil, make([]int, q.p)
	for j := range q.p {
		single.units = append(single.units, []int{j})
		single.cost = append(single.cost, 1)
	}
	single.goal = rm
	values := make([]float64, q.p)
	var out []int
	for range kept {
		single.rate(rm, s, func(u int) bool { return slices.Contains(kept, u) }, values)
		best := -1
		for _, j := range kept {
			if !s.kept[j] && (best < 0 || values[j] > values[best]+gainSlack) {
				best = j
			}
		}
		out = append(out, best)
		s.keep([]int{best})
	}
	return out
}

func (r *Result) warn(code, text string) {
	r.Warnings = append(r.Warnings, pca.Warning{Code: code, Text: text})
}

// doubts warns of what would make the numbers look better than they are.
func (q *problem) doubts(r *Result) {
	m := len(r.Kept)
	if q.n < 2*m+2 {
		r.warn("few-rows", fmt.Sprintf("%d rows for %d kept channels: R-squared on the fitted rows says little; gather more rows or keep fewer channels", q.n, m))
	}
	var waiting []string
	s := newSwept(q.m, q.p, q.floor)
	for _, j := range r.Order {
		s.keep([]int{j})
		if !s.done[j] {
			waiting = append(waiting, q.Names[j])
		}
	}
	if len(waiting) > 0 {
		r.warn("dependent-kept", fmt.Sprintf("kept channels %q follow from other kept ones; their coefficients are 0", waiting))
	}
	poor := 0
	for _, j := range r.Dropped {
		c := r.Channels[j]
		miss := c.HeldOutR2 < q.Rebuild-0.05
		if q.byError[j] {
			miss = c.HeldOutSD > 1.1*q.Tolerance[j]
		}
		if miss && q.Size == 0 {
			poor++
		}
	}
	if poor > 0 {
		r.warn("held-out-below-target", fmt.Sprintf("%d dropped channels miss the target on rows they were not fitted on, by more than 0.05 in R-squared or a tenth of the tolerance; ask for more or protect them", poor))
	}
}
