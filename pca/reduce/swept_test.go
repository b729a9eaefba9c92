package reduce

import (
	"math"
	"math/bits"
	"math/rand/v2"
	"slices"
	"testing"

	"axisfold/pca"
)

// dependentRows are rows in which some channels are copies or sums of others.
func dependentRows(rng *rand.Rand, n, p int) []float64 {
	x := rows(rng, n, p, 0.6)
	a, b := rng.Perm(p), rng.NormFloat64()
	for r := range n {
		row := x[r*p : r*p+p]
		row[a[0]] = b * row[a[1]]
		row[a[2]] = row[a[3]] + b*row[a[4]]
	}
	return x
}

// Keeping and dropping in any order must lead where keeping alone leads, also through
// dependent channels that have to step in for one another.
func TestSweptPathDoesNotMatter(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 1))
	for range 20 {
		p := 8
		q := prepared(t, summary(dependentRows(rng, 40, p), p), Options{})
		s := newSwept(q.m, p, q.floor)
		for range 40 {
			if j := rng.IntN(p); s.kept[j] {
				s.drop([]int{j})
			} else {
				s.keep([]int{j})
			}
			f := q.fresh(s)
			for j, kept := range s.kept {
				if !kept {
					// 40 steps with pivots down to 1e-3 and below: 1e-8 is rounding, a channel that failed to step in is not.
					near(t, "left", s.left(j), f.left(j), 1e-8)
				}
			}
		}
	}
}

// What one unit more brings, by the short way and by keeping it.
func TestAfter(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 2))
	p := 9
	s := summary(rows(rng, 50, p, 0.5), p)
	q := prepared(t, s, Options{Rebuild: 0.9, Matrix: "covariance"})
	base := at(q, 2, 5)
	for _, c := range []criterion{worstR2, rm, mcCabeDet, mcCabeTrace, excess} {
		for u := range q.units {
			if q.has(base, u) {
				continue
			}
			long := base.clone()
			long.keep(q.units[u])
			near(t, "after", q.after(c, base, u, nil), q.score(c, long), 1e-11)
		}
	}
}

// A channel's own part beside the others, a bound that may be 0 but never too large.
func TestAloneIsABound(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 3))
	for range 50 {
		p := 8
		q := prepared(t, summary(dependentRows(rng, 40, p), p), Options{})
		all := q.start()
		for j := range p {
			all.keep([]int{j})
		}
		positive := 0
		for j := range p {
			others := all.clone()
			others.drop([]int{j})
			v := all.alone(j, q.m)
			if v > others.left(j)*(1+1e-6) {
				t.Errorf("channel %d: bound %g above %g", j, v, others.left(j))
			}
			if v > 0 {
				positive++
			}
		}
		if positive != 3 { // of eight, two belong to the copy and three to the sum
			t.Errorf("%d channels have a part of their own, want 3", positive)
		}
	}
}

// Sets of independent channels by brute force, where the data hold dependent ones and the
// search starts from everything.
func TestExactWithDependentChannels(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 4))
	for trial := range 40 {
		p := 9
		s := summary(dependentRows(rng, 40, p), p)
		o := Options{Rebuild: []float64{0.7, 0.9, 1}[trial%3], Criterion: []string{"worst-r2", "rm"}[trial%2],
			Tolerance: slices.Repeat([]float64{math.NaN()}, p)}
		q := prepared(t, s, o)
		least, best := p, math.Inf(-1)
		for mask := uint(1); mask < 1<<p; mask++ {
			kept := subset(mask, p)
			sw := newSwept(q.m, p, q.floor)
			sw.keep(kept)
			if slices.Equal(sw.kept, sw.done) && meetsPlain(q, s, o, kept) {
				v := value(q, o.Criterion, kept)
				if k := bits.OnesCount(mask); k < least || k == least && v > best {
					least, best = k, v
				}
			}
		}
		all := q.start()
		for j := range p {
			all.keep([]int{j})
		}
		found, proved, _ := q.exact(all)
		var kept []int
		for j, k := range found.kept {
			if k {
				kept = append(kept, j)
			}
		}
		if got := value(q, o.Criterion, kept); !proved || len(kept) != least || got < best-1e-9*(1+math.Abs(best)) {
			t.Errorf("trial %d: %d channels %.12g, best %d %.12g", trial, len(kept), got, least, best)
		}
	}
}

// The bonus of preferred channels takes part in the bounds.
func TestExactWithPreferred(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 5))
	for trial := range 40 {
		p, size := 10, 4
		// Twins differ by less than the bonus is worth.
		x := rows(rng, 60, p, 0.4)
		for r := range 60 {
			for j := range p / 2 {
				x[r*p+p/2+j] = x[r*p+j] + 0.05*rng.NormFloat64()
			}
		}
		o := Options{Size: size, Criterion: []string{"rm", "worst-r2", "mccabe-det", "rv"}[trial%4], Prefer: make([]bool, p)}
		for j := range p {
			o.Prefer[j] = rng.IntN(2) == 0
		}
		q := prepared(t, summary(x, p), o)
		best, poor, least := math.Inf(-1), (*swept)(nil), math.Inf(1)
		for mask := range uint(1) << p {
			if bits.OnesCount(mask) == size {
				s := newSwept(q.m, p, q.floor)
				s.keep(subset(mask, p))
				v := q.rated(s)
				best = math.Max(best, v)
				if v < least {
					poor, least = s, v
				}
			}
		}
		if found, proved, _ := q.exact(poor); !proved || q.rated(found) < best-1e-9 {
			t.Errorf("%s: found %.12g, best %.12g", o.Criterion, q.rated(found), best)
		}
	}
}

// A search that had to stop does not claim a proof.
func TestNodeLimit(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 6))
	s := summary(rows(rng, 60, 16, 0.5), 16)
	q := prepared(t, s, Options{Size: 6, Criterion: "rm"})
	start := q.greedySize(6)
	if _, proved, nodes := q.exact(start); !proved || nodes < 300 {
		t.Fatalf("the whole search: proved %v after %d nodes", proved, nodes)
	}
	for _, limit := range []int64{5, 200} {
		q.nodeLimit = limit
		r := &Result{}
		best := q.search(r)
		if r.Optimal || best.count != 6 || !slices.ContainsFunc(r.Warnings, func(w pca.Warning) bool { return w.Code == "not-proved" }) {
			t.Errorf("limit %d: optimal %v, %v", limit, r.Optimal, r.Warnings)
		}
	}
}
