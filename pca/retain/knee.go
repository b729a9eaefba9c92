package retain

import "fmt"

// The bend of the scree (Cattell 1966) made automatic: the root farthest below the chord
// from the first to the last. A heuristic: it has no model of noise and always finds
// something.
var knee = Rule{
	Name:     "knee",
	Summary:  "the roots before the sharpest bend (after Cattell 1966); a heuristic that always finds one",
	variants: []Settings{Defaults()},
	apply: func(e *Evidence, _ Settings) Verdict {
		var v Verdict
		m := len(e.Values)
		if m < 3 {
			return v.abstain("three roots make the smallest bend")
		}
		first, last := e.Values[0], e.Values[m-1]
		if first-last <= 1e-12*first {
			return v.abstain("the roots are equal: there is no bend")
		}
		deepest := 0.0
		for a, l := range e.Values {
			chord := first + (last-first)*float64(a)/float64(m-1)
			v.Steps = append(v.Steps, Step{Value: l, Threshold: chord})
			if chord-l > deepest*(1+1e-12) {
				deepest, v.Components = chord-l, a
			}
		}
		for a := range v.Components {
			v.Steps[a].Kept = true
		}
		v.Note = fmt.Sprintf("the bend is at root %d (a heuristic)", v.Components+1)
		return v
	},
}
