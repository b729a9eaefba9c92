package retain

import (
	"fmt"

	"axisfold/pca"
)

// Kaiser 1960 (Educ. Psychol. Meas. 20:141) keeps roots above 1; Jolliffe 1972 (Appl.
// Stat. 21:160) found 0.7 better. Under the covariance matrix both become multiples of
// the mean root.
var eigenvalueAbove = Rule{
	Name:     "eigenvalue-above",
	Summary:  "roots above a multiple of the mean root (Kaiser 1960: 1; Jolliffe 1972: 0.7); keeps too many when channels are many",
	variants: []Settings{with(func(s *Settings) { s.Value = 1 }), with(func(s *Settings) { s.Value = 0.7 })},
	apply: func(e *Evidence, s Settings) Verdict {
		mean := e.Total / float64(e.Width())
		limit := s.Value * mean
		v := Verdict{Setting: fmt.Sprintf("value %g", s.Value)}
		for _, l := range e.Values {
			v.Steps = append(v.Steps, Step{Value: l, Threshold: limit, Kept: l > limit})
			v.Reference = append(v.Reference, limit)
		}
		v.Components = leading(v.Steps)
		if e.Matrix == pca.Correlation {
			v.Note = fmt.Sprintf("%d of %d roots are above %g", v.Components, len(e.Values), limit)
		} else {
			v.Note = fmt.Sprintf("%d of %d roots are above %g times the mean root %.4g", v.Components, len(e.Values), s.Value, mean)
		}
		return v
	},
}
