package reduce

import (
	"math"
	"sync"

	"axisfold/pca/internal/symeig"
)

const (
	// maxNodes of the search tree are some ten to thirty seconds on two cores at p = 30. A job
	// may use a quarter of what is left, so the last round can go beyond.
	maxNodes = 2_000_000
	// blindNodes is for the one criterion without a bound, where only the whole tree, near
	// 2^p nodes, is a proof.
	blindNodes = 100_000
	splitDepth = 6     // the tree above is walked first and its leaves are the parallel jobs
	roundSize  = 16    // jobs that run beside one another and share the best set of earlier rounds
	proofSlack = 1e-11 // a set must be better by more than this to count
)

// found is a set with what sets are compared by.
type found struct {
	kept  *swept
	cost  float64
	count int
	score float64
}

func (q *problem) found(s *swept) found {
	f := found{kept: s, count: s.count, score: q.rated(s)}
	if q.Size == 0 {
		f.cost = q.totalCost(s)
	}
	return f
}

// beats compares cost, then number, then criterion.
func (f found) beats(g found) bool {
	if d := f.cost - g.cost; math.Abs(d) > proofSlack*(1+math.Abs(g.cost)) {
		return d < 0
	}
	if f.count != g.count {
		return f.count < g.count
	}
	return f.score > g.score+proofSlack*(1+math.Abs(g.score))
}

// node is a partial decision: inner is swept on the units kept so far, outer on those and
// the undecided ones.
type node struct {
	inner, outer *swept
	depth        int
	known        *known
}

// known are the roots of what inner leaves, found when first asked for: p³ work that a
// node shares with those below that only drop units.
type known struct{ byGoal, byLimit []float64 }

// search walks part of the tree.
type search struct {
	*problem
	best    found
	nodes   int64
	limit   int64
	stopped bool
	pool    []*swept
	scratch *swept
	work    symeig.Work
	matrix  []float64 // for the roots of what is left, p×p
	roots   []float64
	chosen  []int
	alones  []float64
	logs    []float64
	prices  []price
	jobs    *[]node // where nodes at splitDepth go; nil: walk on
}

// exact improves on the set given by branch and bound over all sets. It tells whether the
// result is proved best and how many nodes were looked at.
//
// The jobs of a round do not see one another's finds, so that nodes and result are the
// same for any number of threads.
func (q *problem) exact(start *swept) (best *swept, proved bool, nodes int64) {
	all := newSwept(q.m, q.p, q.floor)
	for u := range q.units {
		all.keep(q.units[u])
	}
	var jobs []node
	top := &search{problem: q, best: q.found(start), limit: q.nodeLimit, jobs: &jobs}
	top.visit(node{inner: q.start(), outer: all, known: &known{}})
	proved, nodes = !top.stopped, top.nodes
	incumbent := top.best
	for len(jobs) > 0 {
		round := make([]*search, min(roundSize, len(jobs)))
		tasks := make(chan int)
		var wg sync.WaitGroup
		for range min(q.Threads, len(round)) {
			wg.Go(func() {
				for i := range tasks {
					round[i].visit(jobs[i])
				}
			})
		}
		for i := range round {
			round[i] = &search{problem: q, best: incumbent, limit: max(0, q.nodeLimit-nodes) / 4}
			tasks <- i
		}
		close(tasks)
		wg.Wait()
		for _, r := range round {
			nodes += r.nodes
			proved = proved && !r.stopped
			if r.best.beats(incumbent) {
				incumbent = r.best
			}
		}
		jobs = jobs[len(round):]
	}
	return q.fresh(incumbent.kept), proved, nodes
}

func (b *search) visit(n node) {
	b.nodes++
	if b.stopped = b.stopped || b.nodes > b.limit; b.stopped {
		return
	}
	if b.Size > 0 {
		if n.inner.count > b.Size || n.outer.count < b.Size {
			return
		}
		if n.inner.count == b.Size {
			b.offer(n.inner)
			return
		}
		if n.outer.count == b.Size {
			b.offer(n.outer)
			return
		}
		if b.hopeless(n, b.Size) {
			return
		}
	} else {
		for j, kept := range n.outer.kept {
			if !kept && n.outer.left(j) > b.limitAtBest(j, n) {
				return
			}
		}
		if b.meets(n.inner) {
			b.offer(n.inner)
			return
		}
		if n.inner.count == n.outer.count || b.tooDear(n) {
			return
		}
	}
	if b.jobs != nil && n.depth == splitDepth {
		*b.jobs = append(*b.jobs, node{inner: n.inner.clone(), outer: n.outer.clone(), depth: n.depth, known: &known{}})
		return
	}
	u := b.branch(n)
	s := b.take(n.inner)
	s.keep(b.units[u])
	b.visit(node{s, n.outer, n.depth + 1, &known{}})
	b.pool = append(b.pool, s)
	s = b.take(n.outer)
	s.drop(b.units[u])
	b.visit(node{n.inner, s, n.depth + 1, n.known})
	b.pool = append(b.pool, s)
}

// take is a copy of s in memory used before.
func (b *search) take(s *swept) *swept {
	if len(b.pool) == 0 {
		return s.clone()
	}
	t := b.pool[len(b.pool)-1]
	b.pool = b.pool[:len(b.pool)-1]
	t.copyFrom(s)
	return t
}

func (b *search) offer(s *swept) {
	if f := b.found(s); f.beats(b.best) {
		f.kept = s.clone()
		b.best = f
	}
}

// limitAtBest is the largest limit of channel j below node n: limits that belong to
// residual standard deviations are widest with the fewest kept channels.
func (b *search) limitAtBest(j int, n node) float64 { return b.problem.limit(j, n.inner.count) }

// branch picks the undecided unit to decide next: one that no set may lose where a target
// says so, else the one that explains most beyond those kept.
func (b *search) branch(n node) int {
	best, top := -1, math.Inf(-1)
	if b.scratch == nil {
		b.scratch = n.inner.clone()
	}
	for u, unit := range b.units {
		if b.has(n.inner, u) || !b.has(n.outer, u) {
			continue
		}
		for _, j := range unit {
			if b.Size == 0 && n.outer.alone(j, b.m) > b.limitAtBest(j, n) {
				return u
			}
		}
		if v := b.after(rm, n.inner, u, b.scratch); v > top {
			best, top = u, v
		}
	}
	return best
}
