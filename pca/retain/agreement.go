package retain

import (
	"fmt"
	"sort"
	"strings"
)

// voters are the rules that have a model of noise, or nearly so; one voice each, in their
// usual settings.
var voters = []Rule{parallel, minimumAveragePartial, tracyWidom, laplaceEvidence, bayesianInformation, brokenStick}

var agreement = Rule{
	Name: "agreement",
	Summary: "the number that most of parallel, minimum-average-partial, tracy-widom, evidence, bic and broken-stick name; " +
		"the smaller one when two are level",
	variants: []Settings{Defaults()},
	apply: func(e *Evidence, _ Settings) Verdict {
		var v Verdict
		votes := map[int][]string{}
		for _, r := range voters {
			if one := r.run(e, Defaults()); !one.Abstains {
				votes[one.Components] = append(votes[one.Components], r.Name)
			}
		}
		if len(votes) == 0 {
			return v.abstain("no rule speaks")
		}
		var numbers []int
		for k := range votes {
			numbers = append(numbers, k)
		}
		sort.Ints(numbers)
		var said []string
		for _, k := range numbers {
			if len(votes[k]) > len(votes[v.Components]) {
				v.Components = k
			}
			said = append(said, fmt.Sprintf("%d by %s", k, strings.Join(votes[k], ", ")))
		}
		for a, l := range e.Values {
			v.Steps = append(v.Steps, Step{Value: l, Kept: a < v.Components})
		}
		v.Note = strings.Join(said, "; ")
		return v
	},
}
