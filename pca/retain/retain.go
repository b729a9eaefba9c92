// Package retain decides how many components to keep. Each rule is one file and one line
// in the list; [Apply] runs one rule, [Overview] all of them side by side. A verdict
// carries its evidence component by component, and a rule that cannot speak about a
// table abstains and says why.
package retain

import (
	"fmt"
	"slices"
	"strings"

	"axisfold/pca"
)

// Evidence is what the rules judge: the roots of one table.
type Evidence struct {
	Rows int // n
	// Effective is the number of independent rows whose correlations vary as much by chance
	// as those of these rows, see [EffectiveRows]; 0 where that is not known or all n.
	Effective int
	Matrix    pca.Matrix
	// Values are the eigenvalues, descending, min(p, n-1) of them.
	Values []float64
	// Vectors are the eigenvectors, p×len(Values) row-major; rules that look at single
	// channels need them.
	Vectors []float64
	// Total is the trace of the matrix: the sum of all p eigenvalues.
	Total float64
	// Deviations are the standard deviations of the p columns that were decomposed: all
	// 1 under the correlation matrix.
	Deviations []float64
	Rank       int
	// Standardized are the rows, Rows×p row-major, centred and of unit variance (or scaled
	// as decomposed, under the covariance matrix); nil where they are not in memory.
	Standardized []float64
	Seed         uint64
	Threads      int // the verdict does not depend on it

	// null keeps the roots of independent channels: several verdicts rest on the same draws.
	null map[draws][]float64
}

// EvidenceFor gathers the evidence from a decomposition. deviations are the standard
// deviations of the channels in their own units, divisor n-1.
func EvidenceFor(d *pca.Decomposition, deviations []float64, seed uint64, threads int) Evidence {
	e := Evidence{Rows: d.Rows, Matrix: d.Matrix, Values: d.Values, Vectors: d.Vectors, Total: d.Total, Rank: d.Rank,
		Seed: seed, Threads: threads, Deviations: make([]float64, len(deviations))}
	for j, s := range deviations {
		e.Deviations[j] = 1
		if d.Matrix == pca.Covariance {
			e.Deviations[j] = s / d.Scaling.Scale[j]
		}
	}
	return e
}

// Width is the number of channels p.
func (e *Evidence) Width() int { return len(e.Deviations) }

// Settings are the parameters of a rule; each rule reads its own and ignores the others.
type Settings struct {
	Components int     // fixed
	AtLeast    float64 // share
	Value      float64 // eigenvalue-above, as a multiple of the mean root
	Reference  string  // parallel: "mean" or "percentile"
	Percentile float64 // parallel
	Rows       string  // parallel: "effective" takes Evidence.Effective, "counted" all rows
	Replicates int     // parallel, parallel-shifts; 0 takes 1000, or fewer on a large table
	Power      int     // minimum-average-partial: 2 (1976) to 4 (2000)
	Alpha      float64 // equal-roots, tracy-widom: of each test
	Noise      float64 // hard-threshold: standard deviation of the noise; 0 estimates it
	Quick      bool    // element-cross-validation: abstain where it would take long
}

// Defaults returns the settings a careful analyst would start from.
func Defaults() Settings {
	return Settings{Components: 1, AtLeast: 0.9, Value: 1, Reference: "percentile", Percentile: 95, Rows: "effective", Power: 4, Alpha: 0.05}
}

// Step is the evidence of a rule on one component: kept while value beats threshold.
type Step struct {
	Value     float64 `json:"value"`
	Threshold float64 `json:"threshold"`
	Kept      bool    `json:"kept"`
}

// Verdict is what a rule says.
type Verdict struct {
	Rule    string `json:"rule"`
	Setting string `json:"setting"` // its parameters in words, empty without
	// Components is the number to keep; meaningless when Abstains.
	Components int  `json:"components"`
	Abstains   bool `json:"abstains"`
	// Note is one sentence: what was compared with what, or why the rule abstains.
	Note  string `json:"note"`
	Steps []Step `json:"steps"`
	// Reference is the line that eigenvalues were compared with, in units of
	// eigenvalues, one per component; nil where the rule has none.
	Reference []float64     `json:"reference,omitempty"`
	Warnings  []pca.Warning `json:"warnings,omitempty"`
}

// Rule is one way to decide.
type Rule struct {
	Name string
	// Summary says in one line what it does and where it comes from.
	Summary string
	apply   func(*Evidence, Settings) Verdict
	// variants are the settings shown in an overview; nil leaves the rule out of it.
	variants []Settings
}

// Rules is the list of all rules.
var Rules = []Rule{fixed, share, eigenvalueAbove, brokenStick, parallel, minimumAveragePartial, equalRoots,
	tracyWidom, hardThreshold, laplaceEvidence, bayesianInformation, parallelShifts, biCross, elementCross, knee, agreement}

// Names returns the names of all rules.
func Names() []string {
	names := make([]string, len(Rules))
	for i, r := range Rules {
		names[i] = r.Name
	}
	return names
}

// Apply runs the named rule.
func Apply(name string, e *Evidence, s Settings) (Verdict, error) {
	for _, r := range Rules {
		if r.Name == name {
			return r.run(e, s), nil
		}
	}
	return Verdict{}, fmt.Errorf("unknown rule %q; known: %s", name, strings.Join(Names(), ", "))
}

// Overview runs every rule on its usual settings. The verdict given, already made by the
// run file's rule, stands first and is not made again.
func Overview(e *Evidence, decided Verdict) []Verdict {
	out := []Verdict{decided}
	for _, r := range Rules {
		for _, s := range r.variants {
			v := r.run(e, s)
			if !slices.ContainsFunc(out, func(o Verdict) bool { return o.Rule == v.Rule && o.Setting == v.Setting }) {
				out = append(out, v)
			}
		}
	}
	return out
}

func (r *Rule) run(e *Evidence, s Settings) Verdict {
	v := r.apply(e, s)
	v.Rule = r.Name
	if !v.Abstains && v.Components > e.Rank {
		v.Warnings = append(v.Warnings, pca.Warning{Code: "rule-above-rank",
			Text: fmt.Sprintf("%s asks for %d components but the channels span %d; %d are kept", r.Name, v.Components, e.Rank, e.Rank)})
		v.Components = e.Rank
	}
	return v
}

// with returns the defaults after change.
func with(change func(*Settings)) Settings {
	s := Defaults()
	change(&s)
	return s
}

// leading counts the steps kept before the first that is not.
func leading(steps []Step) int {
	for i, s := range steps {
		if !s.Kept {
			return i
		}
	}
	return len(steps)
}

// unequalNoise tells whether a rule that takes the noise as equal in all channels found no
// number of components that leaves equal roots: fewer than a third of them would be noise.
// That is what it looks like when channels differ in their noise.
func unequalNoise(v *Verdict, e *Evidence) bool {
	return 3*(e.Width()-v.Components) < e.Width()
}
