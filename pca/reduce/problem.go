package reduce

import (
	"fmt"
	"math"
	"slices"

	"axisfold/pca"
	"axisfold/pca/internal/symeig"
)

// problem is what the searches work on: the matrix, the units that are kept or dropped as
// one, and the limits a dropped channel must meet.
type problem struct {
	Options
	p, n      int
	m         []float64 // p×p
	floor     []float64 // pivots at or below are rounding
	trace     float64   // tr M
	square    float64   // ‖M‖²
	values    []float64 // roots of M, descending
	vectors   []float64 // p×p, by columns
	units     [][]int
	cost      []float64 // per unit
	preferred []int     // preferred channels per unit
	fixed     []bool    // per unit: protected
	allowed   []float64 // largest variance left of a dropped channel, in units of M
	byError   []bool    // allowed belongs to divisor n-1 and shrinks with n-m-1
	goal      criterion
	nodeLimit int64
}

func newProblem(s *pca.Summary, o Options) (*problem, error) {
	p := s.Width()
	q := &problem{Options: o, p: p, n: s.Count(), m: s.Correlations(), goal: criterion(slices.Index(Criteria, o.Criterion)), nodeLimit: maxNodes}
	if q.goal == mcCabeCanonical {
		q.nodeLimit = blindNodes
	}
	if o.Matrix == "covariance" {
		weight := make([]float64, p)
		sum := 0.0
		for j := range weight {
			weight[j] = s.Deviation(j)
			sum += weight[j] * weight[j]
		}
		mean := math.Sqrt(sum / float64(p))
		for i := range p {
			for j := range p {
				q.m[i*p+j] *= weight[i] / mean * (weight[j] / mean)
			}
		}
	}
	if err := q.prepare(); err != nil {
		return nil, err
	}
	for j := range p {
		q.allowed[j] = (1 - o.Rebuild) * q.m[j*p+j]
		if j < len(o.Tolerance) && !math.IsNaN(o.Tolerance[j]) {
			t := o.Tolerance[j] / s.Deviation(j)
			q.allowed[j], q.byError[j] = t*t*q.m[j*p+j], true
		}
	}
	return q, nil
}

// prepare derives everything that follows from the matrix and the options.
func (q *problem) prepare() error {
	p := q.p
	q.floor = make([]float64, p)
	q.allowed, q.byError = make([]float64, p), make([]bool, p)
	for j := range p {
		// A pivot is a difference of p products near M_jj; 64 leaves room for growth on the way.
		q.floor[j] = 64 * float64(p) * 0x1p-52 * q.m[j*p+j]
		q.trace += q.m[j*p+j]
	}
	for _, v := range q.m {
		q.square += v * v
	}
	var err error
	if q.values, q.vectors, err = symeig.Decompose(slices.Clone(q.m), p); err != nil {
		return fmt.Errorf("eigen decomposition failed: %w", err)
	}
	q.makeUnits()
	if q.Size > 0 && !q.reachable(q.fixed, q.Size) {
		return fmt.Errorf("no set of %d channels keeps every protected channel and every group whole", q.Size)
	}
	return nil
}

// makeUnits joins the groups, in order of their first channel.
func (q *problem) makeUnits() {
	head := make([]int, q.p)
	for j := range head {
		head[j] = j
	}
	for _, group := range q.Together {
		for _, j := range group {
			a, b := head[group[0]], head[j]
			for i, h := range head {
				if h == a || h == b {
					head[i] = min(a, b)
				}
			}
		}
	}
	place := map[int]int{}
	for j, h := range head {
		u, ok := place[h]
		if !ok {
			u = len(q.units)
			place[h] = u
			q.units = append(q.units, nil)
			q.cost = append(q.cost, 0)
			q.preferred = append(q.preferred, 0)
			q.fixed = append(q.fixed, false)
		}
		q.units[u] = append(q.units[u], j)
		if len(q.Cost) > 0 {
			q.cost[u] += q.Cost[j]
		} else {
			q.cost[u]++
		}
		if len(q.Prefer) > 0 && q.Prefer[j] {
			q.preferred[u]++
		}
		if len(q.Protect) > 0 && q.Protect[j] {
			q.fixed[u] = true
		}
	}
}

// start is the matrix swept on the protected channels.
func (q *problem) start() *swept {
	s := newSwept(q.m, q.p, q.floor)
	for u, fixed := range q.fixed {
		if fixed {
			s.keep(q.units[u])
		}
	}
	return s
}

func (q *problem) has(s *swept, u int) bool { return s.kept[q.units[u][0]] }

// reachable tells whether units not yet chosen can bring the channels of the chosen ones
// to exactly size.
func (q *problem) reachable(chosen []bool, size int) bool {
	sums := make([]bool, size+1)
	have := 0
	for u, c := range chosen {
		if c {
			have += len(q.units[u])
		}
	}
	if have > size {
		return false
	}
	sums[have] = true
	for u, c := range chosen {
		if c {
			continue
		}
		for k := size; k >= len(q.units[u]); k-- {
			sums[k] = sums[k] || sums[k-len(q.units[u])]
		}
	}
	return sums[size]
}

// limit is the variance that may be left of dropped channel j beside m kept channels.
func (q *problem) limit(j, m int) float64 {
	v := q.allowed[j]
	if q.byError[j] {
		v *= max(float64(q.n-m-1), 0) / float64(q.n-1)
	}
	// Rounding must not turn R² = 1 into a miss, nor an R² that equals the target.
	return max(v*(1+1e-12), 4*q.floor[j])
}

// meets tells whether every dropped channel is within its limit.
func (q *problem) meets(s *swept) bool {
	for j, kept := range s.kept {
		if !kept && s.left(j) > q.limit(j, s.count) {
			return false
		}
	}
	return true
}

// totalCost is the cost of the kept units.
func (q *problem) totalCost(s *swept) float64 {
	sum := 0.0
	for u, c := range q.cost {
		if q.has(s, u) {
			sum += c
		}
	}
	return sum
}

// fresh returns M swept on the same kept set without the rounding of the way there: the
// largest pivot first.
func (q *problem) fresh(s *swept) *swept {
	t := newSwept(q.m, q.p, q.floor)
	for t.count < s.count {
		best := -1
		for j, kept := range s.kept {
			if kept && !t.kept[j] && (best < 0 || t.a[j*q.p+j]/q.m[j*q.p+j] > t.a[best*q.p+best]/q.m[best*q.p+best]) {
				best = j
			}
		}
		t.keep([]int{best})
	}
	return t
}
