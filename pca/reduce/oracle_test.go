package reduce

import (
	"fmt"
	"math"
	"math/bits"
	"math/rand/v2"
	"slices"
	"testing"

	"axisfold/pca"
)

// value is a criterion of a set by elimination, larger is better.
func value(q *problem, name string, kept []int) float64 {
	d, left := mirror(q.m, q.p, kept)
	n := len(d)
	worst, mean, trace, square := 1.0, 0.0, 0.0, 0.0
	for a, j := range d {
		r2 := 1 - left[a*n+a]/q.m[j*q.p+j]
		worst = math.Min(worst, r2)
		mean += r2 / float64(n)
		trace += left[a*n+a]
		for b := range d {
			square += left[a*n+b] * left[a*n+b]
		}
	}
	switch name {
	case "worst-r2":
		return worst + meanWeight*mean
	case "rm", "mccabe-trace":
		return -trace
	case "mccabe-frobenius":
		return -square
	case "mccabe-det":
		return -determinant(left, n)
	case "rv":
		sum := 0.0
		place := make([]int, q.p)
		for j := range place {
			place[j] = slices.Index(d, j)
		}
		for i := range q.p {
			for j := range q.p {
				v := q.m[i*q.p+j]
				if place[i] >= 0 && place[j] >= 0 {
					v -= left[place[i]*n+place[j]]
				}
				sum += v * v
			}
		}
		return sum
	case "gcd":
		// Σ r_k²: component k regressed on the kept channels.
		sum := 0.0
		k := len(kept)
		for c := range q.Components {
			a := make([]float64, k*(k+1))
			for i, u := range kept {
				for j, v := range kept {
					a[i*(k+1)+j] = q.m[u*q.p+v]
				}
				a[i*(k+1)+k] = q.values[c] * q.vectors[u*q.p+c]
			}
			x := eliminate(a, k)
			for i, u := range kept {
				sum += x[i] * q.vectors[u*q.p+c]
			}
		}
		return sum
	}
	// Canonical correlations: n minus the trace of M_DD⁻¹·M_D.K.
	sum := float64(n)
	for b := range d {
		a := make([]float64, n*(n+1))
		for i, u := range d {
			for j, v := range d {
				a[i*(n+1)+j] = q.m[u*q.p+v]
			}
			a[i*(n+1)+n] = left[i*n+b]
		}
		sum -= eliminate(a, n)[b]
	}
	return sum
}

func determinant(a []float64, n int) float64 {
	if n == 0 {
		return 1
	}
	a = slices.Clone(a)
	det := 1.0
	for c := range n {
		det *= a[c*n+c] // positive definite: no exchange of rows is needed
		for i := c + 1; i < n; i++ {
			f := a[i*n+c] / a[c*n+c]
			for j := c; j < n; j++ {
				a[i*n+j] -= f * a[c*n+j]
			}
		}
	}
	return det
}

func subset(mask uint, p int) []int {
	var out []int
	for j := range p {
		if mask>>j&1 == 1 {
			out = append(out, j)
		}
	}
	return out
}

// Every set of the size by brute force against the search, for every criterion on both matrices.
func TestExactAgainstAllSubsets(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 1))
	for trial := range 12 {
		p := 5 + trial%6
		s := summary(rows(rng, 60, p, 0.4), p)
		for _, matrix := range []string{"correlation", "covariance"} {
			for _, name := range Criteria {
				size := 1 + rng.IntN(p-1)
				o := Options{Matrix: matrix, Criterion: name, Size: size, Components: min(2, p)}
				q := prepared(t, s, o)
				best := math.Inf(-1)
				for mask := range uint(1) << p {
					if bits.OnesCount(mask) == size {
						best = math.Max(best, value(q, name, subset(mask, p)))
					}
				}
				r := mustChoose(t, s, nil, o)
				if got := value(q, name, r.Kept); !r.Optimal || got < best-1e-9*(1+math.Abs(best)) {
					t.Errorf("p=%d %s %s size %d: %v gives %.12g, best %.12g", p, matrix, name, size, r.Kept, got, best)
				}
			}
		}
	}
}

// The search on its own, from a poor start, must find the best set too: else a good greedy
// pass could hide a bound that cuts too much.
func TestExactFromPoorStart(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 2))
	for trial := range 40 {
		p := 10
		s := summary(rows(rng, 50, p, 0.3), p)
		name := Criteria[trial%len(Criteria)]
		size := 2 + rng.IntN(p-4)
		q := prepared(t, s, Options{Criterion: name, Size: size, Components: 2})
		best, poor, least := math.Inf(-1), []int(nil), math.Inf(1)
		for mask := range uint(1) << p {
			if bits.OnesCount(mask) == size {
				v := value(q, name, subset(mask, p))
				best = math.Max(best, v)
				if v < least {
					poor, least = subset(mask, p), v
				}
			}
		}
		start := newSwept(q.m, p, q.floor)
		start.keep(poor)
		found, proved, _ := q.exact(start)
		var kept []int
		for j, k := range found.kept {
			if k {
				kept = append(kept, j)
			}
		}
		if got := value(q, name, kept); !proved || got < best-1e-9*(1+math.Abs(best)) {
			t.Errorf("%s size %d: %v gives %.12g, best %.12g", name, size, kept, got, best)
		}
	}
}

// The smallest cost, then number, then criterion among all sets that meet the target, with
// tolerances, protection, groups and costs drawn at random; from a poor start as well.
func TestTargetAgainstAllSubsets(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 3))
	for trial := range 60 {
		p, n := 5+trial%6, 40
		s := summary(rows(rng, n, p, 0.3), p)
		o := randomOptions(rng, s)
		o.Rebuild = []float64{0.6, 0.8, 0.95}[trial%3]
		o.Criterion = []string{"worst-r2", "rm", "mccabe-det"}[trial/3%3]
		q := prepared(t, s, o)
		type mark struct {
			cost  float64
			count int
			value float64
		}
		best := mark{cost: math.Inf(1)}
		beats := func(a, b mark) bool {
			if math.Abs(a.cost-b.cost) > 1e-9 {
				return a.cost < b.cost
			}
			if a.count != b.count {
				return a.count < b.count
			}
			return a.value > b.value
		}
		judge := func(kept []int) mark {
			cost := 0.0
			for _, j := range kept {
				cost += o.Cost[j]
			}
			v := value(q, o.Criterion, kept)
			return mark{cost, len(kept), v}
		}
		for mask := uint(1); mask < 1<<p; mask++ {
			kept := subset(mask, p)
			if legal(o, kept) && meetsPlain(q, s, o, kept) {
				if m := judge(kept); beats(m, best) {
					best = m
				}
			}
		}
		check := func(how string, kept []int, proved bool) {
			m := judge(kept)
			if !proved || !legal(o, kept) || !meetsPlain(q, s, o, kept) || math.Abs(m.cost-best.cost) > 1e-9 ||
				m.count != best.count || m.value < best.value-1e-9*(1+math.Abs(best.value)) {
				t.Errorf("trial %d %s: %v %+v, best %+v (legal %v, meets %v)", trial, how, kept, m, best, legal(o, kept), meetsPlain(q, s, o, kept))
			}
		}
		r := mustChoose(t, s, nil, o)
		check("choose", r.Kept, r.Optimal)
		all := q.start()
		for u := range q.units {
			if !q.has(all, u) {
				all.keep(q.units[u])
			}
		}
		found, proved, _ := q.exact(all)
		var kept []int
		for j, k := range found.kept {
			if k {
				kept = append(kept, j)
			}
		}
		check("from all", kept, proved)
	}
}

func randomOptions(rng *rand.Rand, s *pca.Summary) Options {
	p := s.Width()
	o := Options{Protect: make([]bool, p), Cost: make([]float64, p), Tolerance: make([]float64, p)}
	for j := range p {
		o.Protect[j] = rng.IntN(6) == 0
		o.Cost[j] = float64(1 + rng.IntN(3))
		o.Tolerance[j] = math.NaN()
		if rng.IntN(4) == 0 {
			o.Tolerance[j] = s.Deviation(j) * rng.Float64()
		}
	}
	if rng.IntN(2) == 0 {
		o.Together = [][]int{{0, p - 1}, {1, 2}}
	}
	return o
}

func legal(o Options, kept []int) bool {
	for j, p := range o.Protect {
		if p && !slices.Contains(kept, j) {
			return false
		}
	}
	for _, g := range o.Together {
		for _, j := range g {
			if slices.Contains(kept, j) != slices.Contains(kept, g[0]) {
				return false
			}
		}
	}
	return true
}

// meetsPlain checks the target in the words of the options.
func meetsPlain(q *problem, s *pca.Summary, o Options, kept []int) bool {
	d, left := mirror(q.m, q.p, kept)
	for a, j := range d {
		share := math.Max(0, left[a*len(d)+a]/q.m[j*q.p+j])
		if t := o.Tolerance[j]; !math.IsNaN(t) {
			sd := s.Deviation(j) * math.Sqrt(share*float64(s.Count()-1)/float64(s.Count()-len(kept)-1))
			if sd > t*(1+1e-9) {
				return false
			}
		} else if 1-share < o.Rebuild-1e-11 {
			return false
		}
	}
	return true
}

// Protected channels stay and groups hold together where greedy alone decides too.
func TestConstraintsHold(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	for trial := range 40 {
		p := 20
		s := summary(rows(rng, 60, p, 0.3), p)
		o := randomOptions(rng, s)
		o.ExactUpTo = 1
		if trial%2 == 0 {
			o.Size = 14
		}
		o.Criterion = Criteria[trial%len(Criteria)]
		o.Components = 3
		r := mustChoose(t, s, nil, o)
		if !legal(o, r.Kept) || o.Size > 0 && len(r.Kept) != o.Size {
			t.Errorf("trial %d: kept %v", trial, r.Kept)
		}
		if o.Size == 0 && !meetsPlain(prepared(t, s, o), s, o, r.Kept) {
			t.Errorf("trial %d: the target is missed with %v", trial, r.Kept)
		}
		if r.Optimal || r.Method != GreedyWithSwaps {
			t.Errorf("trial %d: greedy claims to be %s, optimal %v", trial, r.Method, r.Optimal)
		}
	}
}

// The same bits for any number of threads.
func TestThreads(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 5))
	// From 200 channels on greedy itself runs on several threads.
	for _, p := range []int{18, 200} {
		x := rows(rng, 2*p, p, 0.3)
		folds := []*pca.Summary{summary(x[:p*p], p), summary(x[p*p:], p)}
		var want string
		for _, threads := range []int{1, 2, 5} {
			got := fmt.Sprintf("%v", *mustChoose(t, pca.MergeAll(folds...), folds, Options{Rebuild: 0.5, Threads: threads}))
			if want == "" {
				want = got
			}
			if got != want {
				t.Errorf("p=%d: %d threads give another result", p, threads)
			}
		}
	}
}
