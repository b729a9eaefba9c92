package reduce

import "math"

// CurvePoint is how well the dropped channels are rebuilt from so many kept ones.
type CurvePoint struct {
	Kept    int
	WorstR2 float64
	MeanR2  float64
	Set     []int   // the channels kept, ascending
	Cost    float64 // of keeping them
	// HeldOutWorst and HeldOutMean are R² of the dropped channels on rows that the
	// equations have not seen; NaN without folds, beyond 100 channels, and with all kept.
	HeldOutWorst, HeldOutMean float64
}

// closeCurveUpTo is the largest p whose curve is improved by exchanges and judged on rows
// not seen at each point; p⁴ work.
const closeCurveUpTo = 100

// curve follows one greedy pass from the protected channels to all, each point improved by
// exchanges on its own up to 100 channels. It goes through the chosen set and on from
// there, so that it shows what was chosen. Where groups are kept whole it has no point at
// the numbers the pass steps over.
func (q *problem) curve(chosen *swept, splits []split) []CurvePoint {
	s := q.start()
	var out []CurvePoint
	step, through := false, false
	for {
		if !through && s.count >= chosen.count {
			s, through = chosen.clone(), true
		}
		if s.count > 0 {
			t := s
			if s.count != chosen.count && q.p <= closeCurveUpTo && q.goal.quick() && s.count < q.p {
				t = q.exchange(s.clone(), q.goal, false)
			}
			out = append(out, q.point(t, splits))
		}
		if s.count == q.p {
			return out
		}
		step = false
		q.forward(s, false, func() bool { step = !step; return !step }, nil)
	}
}

// point looks at one set.
func (q *problem) point(s *swept, splits []split) CurvePoint {
	c := CurvePoint{Kept: s.count, HeldOutWorst: math.NaN(), HeldOutMean: math.NaN()}
	c.WorstR2, c.MeanR2 = q.worstAndMean(s)
	var dropped []int
	for j, kept := range s.kept {
		if kept {
			c.Set = append(c.Set, j)
		} else {
			dropped = append(dropped, j)
		}
	}
	c.Cost = q.totalCost(s)
	if len(splits) == 0 || len(dropped) == 0 || q.p > closeCurveUpTo {
		return c
	}
	c.HeldOutWorst, c.HeldOutMean = 1, 0
	for _, v := range q.heldOut(splits, c.Set, dropped) {
		c.HeldOutWorst = math.Min(c.HeldOutWorst, v.r2)
		c.HeldOutMean += v.r2 / float64(len(dropped))
	}
	return c
}
