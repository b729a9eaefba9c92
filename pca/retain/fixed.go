package retain

import "fmt"

var fixed = Rule{
	Name:    "fixed",
	Summary: "the number given",
	apply: func(e *Evidence, s Settings) Verdict {
		v := Verdict{Components: s.Components, Setting: fmt.Sprintf("components %d", s.Components),
			Note: "the run file names the number"}
		for a, l := range e.Values {
			v.Steps = append(v.Steps, Step{Value: l, Threshold: 0, Kept: a < s.Components})
		}
		return v
	},
}
