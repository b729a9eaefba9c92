package retain

import "fmt"

var share = Rule{
	Name:     "share",
	Summary:  "the fewest components that carry the given share of the total variance; blind to noise",
	variants: []Settings{with(func(s *Settings) { s.AtLeast = 0.8 }), with(func(s *Settings) { s.AtLeast = 0.9 })},
	apply: func(e *Evidence, s Settings) Verdict {
		v := Verdict{Setting: fmt.Sprintf("at_least %g", s.AtLeast)}
		sum, reached := 0.0, false
		for _, l := range e.Values {
			v.Steps = append(v.Steps, Step{Value: min((sum+l)/e.Total, 1), Threshold: s.AtLeast, Kept: !reached})
			sum += l
			// The slack lets all components reach a share of 1 in spite of rounding.
			if !reached {
				v.Components++
				reached = sum >= e.Total*s.AtLeast*(1-1e-12)
			}
		}
		carry := fmt.Sprintf("the first %d carry", v.Components)
		if v.Components == 1 {
			carry = "the first carries"
		}
		v.Note = fmt.Sprintf("%s %.4f of the variance", carry, v.Steps[v.Components-1].Value)
		return v
	},
}
