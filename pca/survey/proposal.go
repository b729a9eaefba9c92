package survey

import (
	"math"
	"slices"
)

// Proposal is which channels to leave out so that more rows are complete.
type Proposal struct {
	LeaveOut []int // positions of channels
	// Expected are the complete rows then, in all rows; Now without leaving anything out.
	Expected, Now int64
}

// propose leaves channels out, the one that alone spoils most rows first, while that makes
// the number of cells in complete rows grow. skip are channels out of the question anyway.
func propose(s *sample, skip []bool) []int {
	n := len(s.rows)
	gaps := make([]int, n) // by row
	holes := make([][]int32, s.width)
	var use []int
	for j, out := range skip {
		if out {
			continue
		}
		use = append(use, j)
		for i := range n {
			if math.IsNaN(s.data[i*s.width+j]) {
				gaps[i]++
				holes[j] = append(holes[j], int32(i))
			}
		}
	}
	complete := 0
	for _, g := range gaps {
		if g == 0 {
			complete++
		}
	}
	// A few gaps are what complete rows are for.
	if len(use) < 2 || float64(complete) >= .5*float64(n) {
		return nil
	}
	start := complete
	var order []int
	best, take := complete*len(use), 0
	for len(use) > 1 {
		// The channel that spoils most rows by itself goes; while none does, the one with the
		// most gaps.
		worst, score := 0, [2]int{-1, -1}
		for k, j := range use {
			alone, all := 0, len(holes[j])
			for _, i := range holes[j] {
				if gaps[i] == 1 {
					alone++
				}
			}
			if alone > score[0] && alone >= n/50 || score[0] < 0 && all > score[1] || alone == score[0] && all > score[1] {
				worst, score = k, [2]int{alone, all}
				if alone < n/50 {
					score[0] = -1
				}
			}
		}
		j := use[worst]
		for _, i := range holes[j] {
			gaps[i]--
			if gaps[i] == 0 {
				complete++
			}
		}
		use = slices.Delete(use, worst, worst+1)
		order = append(order, j)
		if cells := complete * len(use); cells > best {
			best, take = cells, len(order)
		}
		if complete == n || len(order) > 400 {
			break
		}
	}
	if take == 0 || best < (start+1)*2 && start > 0 {
		return nil
	}
	out := slices.Clone(order[:take])
	slices.Sort(out)
	return out
}
