package retain

import "fmt"

// Frontier 1976; Jackson 1993, Ecology 74:2204. A stick broken at random into p pieces
// has an expected k-th longest piece of b_k = (1/p)·Σ_{j=k..p} 1/j.
var brokenStick = Rule{
	Name:     "broken-stick",
	Summary:  "shares above those of a stick broken at random, up to the first that is not; cautious",
	variants: []Settings{Defaults()},
	apply: func(e *Evidence, _ Settings) Verdict {
		p := e.Width()
		piece := make([]float64, p)
		sum := 0.0
		for k := p; k >= 1; k-- {
			sum += 1 / float64(k)
			piece[k-1] = sum / float64(p)
		}
		var v Verdict
		going := true
		for a, l := range e.Values {
			going = going && l/e.Total > piece[a]
			v.Steps = append(v.Steps, Step{Value: l / e.Total, Threshold: piece[a], Kept: going})
			v.Reference = append(v.Reference, piece[a]*e.Total)
		}
		v.Components = leading(v.Steps)
		if v.Components < len(v.Steps) {
			next := v.Steps[v.Components]
			v.Note = fmt.Sprintf("share %.3f of component %d falls short of %.3f", next.Value, v.Components+1, next.Threshold)
		} else {
			v.Note = "every share is above its piece of the stick"
		}
		return v
	},
}
