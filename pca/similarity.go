package pca

import "math"

// SimilarOrder returns an order of the p channels in which like stands beside like, from
// their correlations, p×p row-major: average-linkage clustering on 1-|r| (Sokal &
// Michener 1958) by nearest-neighbour chains in O(p²), each merged pair of clusters turned
// so that its more alike ends meet. Ties go to the lower channel; runs that meet equally
// well stay as they stand. A correlation that is NaN is the caller's mistake and panics.
func SimilarOrder(correlations []float64, p int) []int {
	if p == 0 {
		return nil
	}
	distance := make([]float64, p*p)
	for i, r := range correlations {
		if math.IsNaN(r) {
			panic("pca: a correlation given to SimilarOrder is NaN")
		}
		distance[i] = 1 - math.Abs(r)
	}
	members := make([][]int, p)
	for j := range members {
		members[j] = []int{j}
	}
	var chain []int
	for left := p; left > 1; left-- {
		if len(chain) == 0 {
			for j, m := range members {
				if m != nil {
					chain = append(chain, j)
					break
				}
			}
		}
		for {
			top := chain[len(chain)-1]
			// The cluster before wins ties, so that the chain comes to an end.
			nearest, best := -1, math.Inf(1)
			if len(chain) > 1 {
				nearest = chain[len(chain)-2]
				best = distance[top*p+nearest]
			}
			for j, m := range members {
				if m != nil && j != top && distance[top*p+j] < best {
					nearest, best = j, distance[top*p+j]
				}
			}
			if len(chain) > 1 && nearest == chain[len(chain)-2] {
				break
			}
			chain = append(chain, nearest)
		}
		a, b := chain[len(chain)-2], chain[len(chain)-1]
		chain = chain[:len(chain)-2]
		if a > b {
			a, b = b, a
		}
		na, nb := float64(len(members[a])), float64(len(members[b]))
		for j, m := range members {
			if m != nil && j != a && j != b {
				d := (na*distance[a*p+j] + nb*distance[b*p+j]) / (na + nb)
				distance[a*p+j], distance[j*p+a] = d, d
			}
		}
		members[a] = joinAlike(members[a], members[b], correlations, p)
		members[b] = nil
	}
	for _, m := range members {
		if m != nil {
			return m
		}
	}
	return nil
}

// joinAlike puts two runs of channels end to end, either turned round, so that the two
// channels that meet correlate most; as they stand on ties.
func joinAlike(a, b []int, correlations []float64, p int) []int {
	meet := func(i, j int) float64 { return math.Abs(correlations[i*p+j]) }
	firstA, lastA, firstB, lastB := a[0], a[len(a)-1], b[0], b[len(b)-1]
	best, turnA, turnB := meet(lastA, firstB), false, false
	for _, c := range []struct {
		alike        float64
		turnA, turnB bool
	}{{meet(lastA, lastB), false, true}, {meet(firstA, firstB), true, false}, {meet(firstA, lastB), true, true}} {
		if c.alike > best {
			best, turnA, turnB = c.alike, c.turnA, c.turnB
		}
	}
	out := make([]int, 0, len(a)+len(b))
	out = appendRun(out, a, turnA)
	return appendRun(out, b, turnB)
}

func appendRun(out, run []int, turned bool) []int {
	for i := range run {
		if turned {
			i = len(run) - 1 - i
		}
		out = append(out, run[i])
	}
	return out
}
