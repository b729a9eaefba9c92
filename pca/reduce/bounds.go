package reduce

import (
	"cmp"
	"math"
	"slices"

	"axisfold/pca/internal/symeig"
)

// eigenFrom is the number of undecided channels from which bounds from eigenvalues, p³
// work, repay their time.
const eigenFrom = 6

// hopeless tells whether no set of exactly size channels below n can beat the best one,
// whose cost is not above that of any such set.
//
// Three facts carry the bounds. What K leaves is never less than what a larger set leaves,
// so channel j already dropped keeps at least its variance beside all undecided ones, and
// an undecided one, if dropped, at least its variance beside all others ([swept.alone]):
// of these the smallest so many as must still go. The trace that r more channels leave is
// not below the sum of all but the r largest roots of what is left now (Eckart & Young
// 1936). And a determinant is not above the product of its diagonal (Hadamard) nor that of
// as many largest roots (Cauchy interlacing).
func (b *search) hopeless(n node, size int) bool {
	p := b.p
	left := size - n.inner.count
	drops := n.outer.count - size
	if left < 0 || drops < 0 {
		return true
	}
	preferred := 0
	for u, k := range b.preferred {
		if b.has(n.outer, u) {
			preferred += k
		}
	}
	base := b.preferredIn(n.inner)
	extra := bonus(base+min(left, preferred-base), size)
	bar := b.best.score + proofSlack*(1+math.Abs(b.best.score)) - extra

	switch b.goal {
	case mcCabeDet:
		if b.detBound(n, left, drops) <= bar {
			return true
		}
	case rm, mcCabeTrace, worstR2:
		sum, worst := 0.0, 1.0
		for j, kept := range n.outer.kept {
			if !kept {
				sum += b.share(n.outer.left(j), j)
				worst = math.Min(worst, 1-n.outer.left(j)/b.m[j*p+j])
			}
		}
		b.listAlone(n)
		if drops > 0 {
			for _, v := range b.alones[:drops] {
				sum += v
			}
		}
		if b.goal == worstR2 {
			if drops > 0 {
				worst = math.Min(worst, 1-b.alones[drops-1])
			}
			if worst+meanWeight*(1-sum/float64(p-size)) <= bar {
				return true
			}
		} else if 1-sum/b.trace <= bar {
			return true
		}
		if len(b.alones) >= eigenFrom {
			tail := b.tail(n, left)
			if b.goal == worstR2 {
				// The worst is not above the mean.
				mean := 1 - tail/float64(p-size)
				return mean*(1+meanWeight) <= bar
			}
			return 1-tail/b.trace <= bar
		}
	case mcCabeCanonical:
		return false // not monotone in K: no bound but the whole tree
	default:
		if b.score(b.goal, n.outer) <= bar {
			return true
		}
		if b.goal == mcCabeFrobenius && n.outer.count-n.inner.count >= eigenFrom {
			return -b.tail(n, left)/b.square <= bar
		}
	}
	return false
}

// share is a variance left of channel j as it enters the sum: in units of M for the trace,
// of the channel for R².
func (b *search) share(v float64, j int) float64 {
	if b.goal == worstR2 {
		return v / b.m[j*b.p+j]
	}
	return v
}

// listAlone fills alones, ascending, with the shares of the undecided channels.
func (b *search) listAlone(n node) {
	b.alones = b.alones[:0]
	for j, kept := range n.outer.kept {
		if kept && !n.inner.kept[j] {
			b.alones = append(b.alones, b.share(n.outer.alone(j, b.m), j))
		}
	}
	slices.Sort(b.alones)
}

// tail is the sum of all but the r largest roots of what the kept channels leave, with
// each channel in units of its deviation for the worst R²; of their squares for the
// Frobenius norm.
func (b *search) tail(n node, r int) float64 {
	if n.known.byGoal == nil {
		n.known.byGoal = slices.Clone(b.rootsLeft(n.inner, func(j int) float64 {
			if b.goal == worstR2 {
				return 1 / math.Sqrt(b.m[j*b.p+j])
			}
			return 1
		}, func(j int) bool { return !n.inner.kept[j] }))
	}
	sum := 0.0
	for _, v := range n.known.byGoal[min(r, len(n.known.byGoal)):] {
		v = max(v, 0)
		if b.goal == mcCabeFrobenius {
			v *= v
		}
		sum += v
	}
	return sum
}

// rootsLeft returns the roots, descending, of what s leaves of the channels chosen, each
// channel multiplied by its scale.
func (b *search) rootsLeft(s *swept, scale func(j int) float64, chosen func(j int) bool) []float64 {
	p := b.p
	if b.matrix == nil {
		b.matrix, b.roots = make([]float64, p*p), make([]float64, p)
	}
	b.chosen = b.chosen[:0]
	for j := range p {
		if chosen(j) {
			b.chosen = append(b.chosen, j)
		}
	}
	rows := len(b.chosen)
	for a, i := range b.chosen {
		for c := a; c < rows; c++ {
			j := b.chosen[c]
			b.matrix[a*rows+c] = s.a[i*p+j] * scale(i) * scale(j)
		}
	}
	symeig.Values(b.matrix[:rows*rows], rows, b.roots, &b.work)
	return b.roots[:rows]
}

// detBound is an upper bound on log det M_KK for sets of left more channels.
func (b *search) detBound(n node, left, drops int) float64 {
	p := b.p
	b.logs, b.alones = b.logs[:0], b.alones[:0]
	whole := true
	for j, kept := range n.outer.kept {
		if kept && !n.outer.done[j] {
			whole = false
		}
		if kept && !n.inner.kept[j] {
			b.logs = append(b.logs, math.Log(math.Max(n.inner.a[j*p+j], b.floor[j])))
			if v := n.outer.alone(j, b.m); v > 0 {
				b.alones = append(b.alones, -math.Log(v))
			} else {
				whole = false
			}
		}
	}
	slices.SortFunc(b.logs, descending)
	bound := n.inner.logDet
	for _, v := range b.logs[:left] {
		bound += v
	}
	if whole {
		// det M_KK = det M_FF · det [M_FF⁻¹]_DD, and again Hadamard.
		slices.SortFunc(b.alones, descending)
		twin := n.outer.logDet
		for _, v := range b.alones[:drops] {
			twin += v
		}
		bound = math.Min(bound, twin)
	}
	if len(b.logs) >= eigenFrom {
		least := slices.Min(b.floor)
		roots := b.rootsLeft(n.inner, func(int) float64 { return 1 },
			func(j int) bool { return n.outer.kept[j] && !n.inner.kept[j] })
		sum := n.inner.logDet
		for _, v := range roots[:left] {
			sum += math.Log(math.Max(v, least))
		}
		bound = math.Min(bound, sum)
	}
	return bound
}

func descending(a, b float64) int { return cmp.Compare(b, a) }

// price is what a channel of an undecided unit costs.
type price struct {
	each     float64
	channels int
}

// tooDear tells whether no set below n that meets the target can beat the best one.
//
// With every channel in units of its limit, a set that meets the target leaves at most 1 of
// each of the p-m dropped channels: so r more channels can do only if all but the r largest
// roots of what is left sum to p-m or less. From r follow the least cost and number.
func (b *search) tooDear(n node) bool {
	p := b.p
	count := n.inner.count
	room := n.outer.count - count
	need := 1
	if room >= eigenFrom {
		if n.known.byLimit == nil {
			n.known.byLimit = slices.Clone(b.rootsLeft(n.inner, func(j int) float64 { return 1 / math.Sqrt(b.limitAtBest(j, n)) },
				func(j int) bool { return !n.inner.kept[j] }))
		}
		roots, tail := n.known.byLimit, 0.0
		for _, v := range roots {
			tail += max(v, 0)
		}
		for r := 0; r < len(roots) && tail > float64(p-count-r)*(1+1e-9); r++ {
			tail -= math.Max(roots[r], 0)
			need = max(need, r+1)
		}
	}
	forced := 0
	for j, kept := range n.outer.kept {
		if kept && !n.inner.kept[j] && n.outer.alone(j, b.m) > b.limitAtBest(j, n)*(1+1e-9) {
			forced++
		}
	}
	need = max(need, forced)
	if need > room {
		return true
	}
	b.prices = b.prices[:0]
	cost := 0.0
	for u, unit := range b.units {
		if b.has(n.inner, u) {
			cost += b.cost[u]
		} else if b.has(n.outer, u) {
			b.prices = append(b.prices, price{b.cost[u] / float64(len(unit)), len(unit)})
		}
	}
	slices.SortFunc(b.prices, func(x, y price) int { return cmp.Compare(x.each, y.each) })
	for left, i := need, 0; left > 0; i++ {
		take := min(left, b.prices[i].channels)
		cost += float64(take) * b.prices[i].each
		left -= take
	}
	slack := proofSlack * (1 + math.Abs(b.best.cost))
	switch d := cost - b.best.cost; {
	case d > slack:
		return true
	case d < -slack:
		return false
	}
	switch {
	case count+need > b.best.count:
		return true
	case count+need < b.best.count:
		return false
	}
	return b.hopeless(n, b.best.count)
}
