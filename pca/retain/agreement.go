package retain

import (
	"fmt"
	"slices"
	"strings"
)

// voters are the rules that have a model of noise, or nearly so; one voice each, in their
// usual settings.
var voters = []Rule{parallel, minimumAveragePartial, tracyWidom, laplaceEvidence, bayesianInformation, brokenStick}

var agreement = Rule{
	Name: "agreement",
	Summary: "the middle of what parallel, minimum-average-partial, tracy-widom, evidence, bic and broken-stick say; " +
		"the lower of two middles",
	variants: []Settings{Defaults()},
	apply: func(e *Evidence, _ Settings) Verdict {
		var v Verdict
		var numbers []int
		by := map[int][]string{}
		for _, r := range voters {
			if one := r.run(e, Defaults()); !one.Abstains {
				numbers = append(numbers, one.Components)
				by[one.Components] = append(by[one.Components], r.Name)
			}
		}
		if len(numbers) == 0 {
			return v.abstain("no rule speaks")
		}
		slices.Sort(numbers)
		v.Components = numbers[(len(numbers)-1)/2]
		for a, l := range e.Values {
			v.Steps = append(v.Steps, Step{Value: l, Kept: a < v.Components})
		}
		var said []string
		for _, k := range slices.Compact(numbers) {
			said = append(said, fmt.Sprintf("%d by %s", k, strings.Join(by[k], ", ")))
		}
		v.Note = "the middle of " + strings.Join(said, "; ")
		return v
	},
}
