package reduce

import "math"

// Comparison is a published rule's set of the same size and how it would serve. The rules
// know no protection, groups or costs.
type Comparison struct {
	Rule            string
	Kept            []int // in the order the rule takes them; B2: ascending
	WorstR2, MeanR2 float64
}

// compare applies Jolliffe's rules (1972, Appl. Statistics 21:160) and the plain habit of
// taking the highest loading of each component, on the components of M.
func (q *problem) compare(m int) []Comparison {
	p := q.p
	free := func() []bool {
		out := make([]bool, p)
		for j := range out {
			out[j] = true
		}
		return out
	}
	var last, first, plain []int
	// B2: from the last component upward, delete the channel with the largest loading that
	// is still there.
	there := free()
	for k := p - 1; k >= m; k-- {
		there[q.highest(k, there)] = false
	}
	for j, t := range there {
		if t {
			last = append(last, j)
		}
	}
	// B4: from the first component downward, keep the channel with the largest loading that
	// is not kept yet.
	open, seen := free(), make([]bool, p)
	for k := range m {
		j := q.highest(k, open)
		open[j] = false
		first = append(first, j)
		if j = q.highest(k, free()); !seen[j] {
			seen[j] = true
			plain = append(plain, j)
		}
	}
	var out []Comparison
	for _, c := range []Comparison{{Rule: "Jolliffe B2", Kept: last}, {Rule: "Jolliffe B4", Kept: first},
		{Rule: "highest loading per component", Kept: plain}} {
		s := newSwept(q.m, p, q.floor)
		s.keep(c.Kept)
		c.WorstR2, c.MeanR2 = q.worstAndMean(s)
		out = append(out, c)
	}
	return out
}

// highest is the channel with the largest loading in size on component k among those open;
// ties within 1e-10 go to the lower channel.
func (q *problem) highest(k int, open []bool) int {
	best, top := -1, 0.0
	for j, o := range open {
		if v := math.Abs(q.vectors[j*q.p+k]); o && (best < 0 || v > top+1e-10) {
			best, top = j, v
		}
	}
	return best
}
