package pca

import (
	"math"
	"slices"
)

// Tree is how channels join into clusters of like ones.
type Tree struct {
	// Order lists the channels so that every cluster stands together, like beside like.
	Order []int
	// Joins are p-1; those that a join puts together come before it, but joins of other
	// branches stand in no particular order.
	Joins []Join
}

// Join puts two clusters together. A and B are channels below p, or p plus the position of
// a join; Distance is the mean of 1-|r| between their channels.
type Join struct {
	A, B     int
	Distance float64
}

// Cluster joins the p channels by average linkage on 1-|r| (Sokal & Michener 1958), from
// their correlations, p×p row-major: by nearest-neighbour chains in O(p²), each merged
// pair of clusters turned so that its more alike ends meet. Ties go to the lower channel;
// runs that meet equally well stay as they stand. A correlation that is NaN is the
// caller's mistake and panics.
func Cluster(correlations []float64, p int) *Tree {
	tree := &Tree{}
	if p == 0 {
		return tree
	}
	distance := make([]float64, p*p)
	for i, r := range correlations {
		if math.IsNaN(r) {
			panic("pca: a correlation given to Cluster is NaN")
		}
		distance[i] = 1 - math.Abs(r)
	}
	members, name := make([][]int, p), make([]int, p)
	for j := range members {
		members[j], name[j] = []int{j}, j
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
		tree.Joins = append(tree.Joins, Join{name[a], name[b], distance[a*p+b]})
		name[a] = p + len(tree.Joins) - 1
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
			tree.Order = m
		}
	}
	return tree
}

// Cut returns the clusters of two channels or more that are joined at distance or below,
// each ascending, in order of their first channel.
func (t *Tree) Cut(distance float64) [][]int {
	p := len(t.Order)
	members := make([][]int, p, p+len(t.Joins))
	for j := range members {
		members[j] = []int{j}
	}
	open := make([]bool, p, p+len(t.Joins)) // whether the cluster stands by itself
	for _, join := range t.Joins {
		whole := join.Distance <= distance && !open[join.A] && !open[join.B]
		open = append(open, !whole)
		if whole {
			members = append(members, slices.Concat(members[join.A], members[join.B]))
			members[join.A], members[join.B] = nil, nil
		} else {
			members = append(members, nil)
		}
	}
	var out [][]int
	for _, m := range members {
		if len(m) > 1 {
			slices.Sort(m)
			out = append(out, m)
		}
	}
	slices.SortFunc(out, func(a, b []int) int { return a[0] - b[0] })
	return out
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
