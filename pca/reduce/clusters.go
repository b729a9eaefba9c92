package reduce

import (
	"math"
	"slices"
)

// clusterAt is the mean |r| between two clusters down to which they are joined.
const clusterAt = 0.9

// clusters groups channels that tell one story: average linkage on 1-|r| (Sokal & Michener
// 1958), cut at 0.1. The lower pair wins ties. Only clusters of two or more are returned,
// in order of their first channel.
func clusters(r []float64, p int) [][]int {
	members := make([][]int, p)
	alike := make([]float64, p*p)
	for i := range members {
		members[i] = []int{i}
	}
	for i, v := range r {
		alike[i] = math.Abs(v)
	}
	// Each cluster remembers its most alike later cluster, so that a join costs p, not p².
	next := make([]int, p)
	find := func(i int) {
		next[i] = -1
		for j := i + 1; j < p; j++ {
			if members[j] != nil && (next[i] < 0 || alike[i*p+j] > alike[i*p+next[i]]) {
				next[i] = j
			}
		}
	}
	for i := range p {
		find(i)
	}
	for {
		a := -1
		for i := range p {
			if members[i] != nil && next[i] >= 0 && (a < 0 || alike[i*p+next[i]] > alike[a*p+next[a]]) {
				a = i
			}
		}
		if a < 0 || alike[a*p+next[a]] < clusterAt {
			break
		}
		b := next[a]
		na, nb := float64(len(members[a])), float64(len(members[b]))
		for j := range p {
			v := (na*alike[a*p+j] + nb*alike[b*p+j]) / (na + nb)
			alike[a*p+j], alike[j*p+a] = v, v
		}
		members[a] = append(members[a], members[b]...)
		members[b] = nil
		for i := range b {
			if members[i] != nil && (i == a || next[i] == a || next[i] == b || i < a) {
				find(i)
			}
		}
	}
	var out [][]int
	for _, m := range members {
		if len(m) > 1 {
			slices.Sort(m)
			out = append(out, m)
		}
	}
	return out
}
