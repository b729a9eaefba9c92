package reduce

// CurvePoint is how well the dropped channels are rebuilt from so many kept ones.
type CurvePoint struct {
	Kept    int
	WorstR2 float64
	MeanR2  float64
}

// curveSwapsUpTo is the largest p whose curve is improved by exchanges at each point; p⁴
// work.
const curveSwapsUpTo = 100

// curve follows one greedy pass from the protected channels to all, each point improved by
// exchanges on its own up to 100 channels. It goes through the chosen set and on from
// there, so that it shows what was chosen. Where groups are kept whole it has no point at
// the numbers the pass steps over.
func (q *problem) curve(chosen *swept) []CurvePoint {
	s := q.start()
	var out []CurvePoint
	step, through := false, false
	for {
		if !through && s.count >= chosen.count {
			s, through = chosen.clone(), true
		}
		if s.count > 0 {
			t := s
			if s.count != chosen.count && q.p <= curveSwapsUpTo && q.goal.quick() && s.count < q.p {
				t = q.exchange(s.clone(), q.goal, false)
			}
			worst, mean := q.worstAndMean(t)
			out = append(out, CurvePoint{t.count, worst, mean})
		}
		if s.count == q.p {
			return out
		}
		step = false
		q.forward(s, false, func() bool { step = !step; return !step }, nil)
	}
}
