package reduce

import (
	"math"
	"slices"
	"sync"
)

const (
	maxPasses = 20    // of exchanges; each must gain, so this only bounds the time
	gainSlack = 1e-12 // a smaller gain is rounding
)

// forward keeps unit after unit until done says so, each time the one that lowers the
// trace most per cost, or raises log det most where that is the criterion. A step that
// fits refuses is not taken.
func (q *problem) forward(s *swept, perCost bool, done func() bool, fits func(u int) bool) {
	c := rm
	if q.goal == mcCabeDet {
		c = mcCabeDet
	}
	values := make([]float64, len(q.units))
	for !done() {
		now := q.score(c, s)
		q.rate(c, s, fits, values)
		best, top := -1, math.Inf(-1)
		for u, v := range values {
			if math.IsInf(v, -1) {
				continue
			}
			gain := (v - now) / float64(len(q.units[u]))
			if perCost {
				gain = (v - now) / math.Max(q.cost[u], 1e-300)
			}
			if q.preferred[u] > 0 {
				gain += preferBonus * math.Abs(gain)
			}
			if best < 0 || gain > top+gainSlack*math.Abs(top) {
				best, top = u, gain
			}
		}
		if best < 0 {
			return
		}
		s.keep(q.units[best])
	}
}

// rate fills values with the score after each unit that is not kept and fits, -Inf for others.
func (q *problem) rate(c criterion, s *swept, fits func(u int) bool, values []float64) {
	threads := q.Threads
	if q.p*q.p < 40000 && c.quick() { // below that, starting goroutines costs more than it saves
		threads = 1
	}
	var wg sync.WaitGroup
	for t := range threads {
		work := func() {
			var scratch *swept
			if !c.quick() || len(q.units) < q.p {
				scratch = newSwept(s.a, q.p, q.floor)
			}
			for u := t; u < len(values); u += threads {
				values[u] = math.Inf(-1)
				if !q.has(s, u) && (fits == nil || fits(u)) {
					values[u] = q.after(c, s, u, scratch)
				}
			}
		}
		if threads == 1 {
			work()
			continue
		}
		wg.Go(work)
	}
	wg.Wait()
}

// exchange swaps one kept unit for one dropped unit of the same number of channels while
// that raises the criterion c, bonus included. With a target, a swap must leave it met and
// a cheaper set wins over a better one.
func (q *problem) exchange(s *swept, c criterion, target bool) *swept {
	without := s.clone()
	values, misses := make([]float64, len(q.units)), make([]float64, len(q.units))
	for range maxPasses {
		current := q.score(c, s) + q.bonusOf(c, s)
		swapped := false
		for u := range q.units {
			if !q.has(s, u) || q.fixed[u] {
				continue
			}
			without.copyFrom(s)
			without.drop(q.units[u])
			fits := func(v int) bool {
				return v != u && len(q.units[v]) == len(q.units[u]) && q.cost[v] <= q.cost[u]+gainSlack
			}
			if !target && c != excess {
				fits = func(v int) bool { return v != u && len(q.units[v]) == len(q.units[u]) }
			}
			q.rate(c, without, fits, values)
			if target {
				q.rate(excess, without, fits, misses)
			}
			base := q.preferredIn(without)
			best, top, cheapest := -1, current, q.cost[u]
			for v, value := range values {
				if math.IsInf(value, -1) || target && misses[v] < 0 {
					continue
				}
				if c != excess {
					value += bonus(base+q.preferred[v], s.count)
				}
				better := value > top+gainSlack*(1+math.Abs(top))
				if target && q.cost[v] != cheapest {
					better = q.cost[v] < cheapest
				}
				if better {
					best, top, cheapest = v, value, q.cost[v]
				}
			}
			if best >= 0 {
				s.copyFrom(without)
				s.keep(q.units[best])
				current, swapped = top, true
			}
		}
		s = q.fresh(s)
		if !swapped || c == excess && current >= 0 {
			break
		}
	}
	return s
}

func (q *problem) bonusOf(c criterion, s *swept) float64 {
	if c == excess {
		return 0
	}
	return bonus(q.preferredIn(s), s.count)
}

// greedySize is the greedy set of exactly size channels with exchanges; nil where the
// groups met on the way admit none, which exchanges of equal units cannot mend.
func (q *problem) greedySize(size int) *swept {
	s := q.start()
	fits := func(u int) bool {
		chosen := make([]bool, len(q.units))
		for v := range chosen {
			chosen[v] = v == u || q.has(s, v)
		}
		return q.reachable(chosen, size)
	}
	if len(q.units) == q.p {
		fits = nil // every size can be reached from every set
	}
	q.forward(s, false, func() bool { return s.count >= size }, fits)
	return q.exchange(s, q.goal, false)
}

// greedyTarget is a cheap set that meets the target: forward, then single removals, then
// removals mended by exchanges, then exchanges for the criterion.
func (q *problem) greedyTarget() *swept {
	s := q.start()
	q.forward(s, true, func() bool { return q.meets(s) }, nil)
	s = q.fresh(s)
	order := make([]int, 0, len(q.units))
	for u := range q.units {
		if q.has(s, u) && !q.fixed[u] {
			order = append(order, u)
		}
	}
	slices.SortStableFunc(order, func(a, b int) int {
		switch {
		case q.cost[a] > q.cost[b]:
			return -1
		case q.cost[a] < q.cost[b]:
			return 1
		}
		return 0
	})
	try := s.clone()
	for _, u := range order {
		try.copyFrom(s)
		try.drop(q.units[u])
		if q.meets(try) {
			s.copyFrom(try)
		}
	}
	for {
		best, least := -1, math.Inf(-1)
		for u := range q.units {
			if !q.has(s, u) || q.fixed[u] || q.cost[u] == 0 {
				continue
			}
			try.copyFrom(s)
			try.drop(q.units[u])
			if miss := q.score(excess, try); miss > least {
				best, least = u, miss
			}
		}
		if best < 0 {
			break
		}
		try.copyFrom(s)
		try.drop(q.units[best])
		mended := q.exchange(try.clone(), excess, false)
		if !q.meets(mended) {
			break
		}
		s = mended
	}
	return q.exchange(s, q.goal, true)
}
