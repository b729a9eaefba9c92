package reduce

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"axisfold/pca"
)

// Options say what is wanted. The zero value asks for the smallest set from which every
// other channel is rebuilt with R² 0.95, judged on the correlation matrix.
type Options struct {
	Names      []string  // p names for messages; numbered from 1 when nil
	Matrix     string    // "correlation" (default) or "covariance"
	Rebuild    float64   // smallest R² of a dropped channel, in (0, 1]; default 0.95; used when Size is 0
	Tolerance  []float64 // p largest residual standard deviations in the channel's unit; NaN leaves Rebuild in force
	Size       int       // above 0: the best set of exactly so many channels by Criterion
	Criterion  string    // one of [Criteria]; default "worst-r2"
	Components int       // q of the criterion gcd; default the number of kept channels in the report
	Protect    []bool    // p; true: never dropped
	Cost       []float64 // p costs of keeping, default 1; the smallest sum wins when Size is 0
	// Prefer, p: true adds 0.01/m to the criterion for each such channel among the m kept, so
	// a preferred channel beats its near twin and the criterion gives up 0.01 at most.
	Prefer   []bool
	Together [][]int // groups kept or dropped as one; groups that share a channel join
	// Splits say which folds are held out together and what is learnt from; nil holds out each
	// in turn and learns from all others.
	Splits    []pca.Split
	ExactUpTo int // largest p of the exact search; default 30
	Threads   int // default 1; the result does not depend on it
}

// Criteria lists the names that Options.Criterion may have.
var Criteria = []string{"worst-r2", "rm", "rv", "gcd", "mccabe-det", "mccabe-trace", "mccabe-frobenius", "mccabe-canonical"}

const (
	defaultRebuild = 0.95
	defaultExact   = 30
	preferBonus    = 0.01
)

// withDefaults fills what was left out and refuses what cannot be meant.
func (o Options) withDefaults(s *pca.Summary) (Options, error) {
	p := s.Width()
	if o.Matrix == "" {
		o.Matrix = "correlation"
	}
	if o.Matrix != "correlation" && o.Matrix != "covariance" {
		return o, fmt.Errorf("matrix %q is neither correlation nor covariance", o.Matrix)
	}
	if o.Criterion == "" {
		o.Criterion = Criteria[0]
	}
	if !slices.Contains(Criteria, o.Criterion) {
		return o, fmt.Errorf("unknown criterion %q; known: %s", o.Criterion, strings.Join(Criteria, ", "))
	}
	if o.Rebuild == 0 {
		o.Rebuild = defaultRebuild
	}
	if !(o.Rebuild > 0 && o.Rebuild <= 1) {
		return o, fmt.Errorf("rebuild is %g; expected an R-squared above 0 and up to 1", o.Rebuild)
	}
	if o.ExactUpTo == 0 {
		o.ExactUpTo = defaultExact
	}
	o.Threads = max(o.Threads, 1)
	for _, f := range []struct {
		name   string
		length int
	}{{"names", len(o.Names)}, {"tolerances", len(o.Tolerance)}, {"protect marks", len(o.Protect)},
		{"costs", len(o.Cost)}, {"prefer marks", len(o.Prefer)}} {
		if f.length != 0 && f.length != p {
			return o, fmt.Errorf("%d %s for %d channels", f.length, f.name, p)
		}
	}
	if o.Names == nil {
		o.Names = make([]string, p)
		for j := range o.Names {
			o.Names[j] = fmt.Sprint(j + 1)
		}
	}
	for j, c := range o.Cost {
		if !(c >= 0) || math.IsInf(c, 1) {
			return o, fmt.Errorf("channel %q: cost %g; expected a finite number of 0 or more", o.Names[j], c)
		}
	}
	for j, t := range o.Tolerance {
		if t < 0 || math.IsInf(t, 0) {
			return o, fmt.Errorf("channel %q: tolerance %g; expected a finite number of 0 or more", o.Names[j], t)
		}
	}
	if o.Size < 0 || o.Size > p {
		return o, fmt.Errorf("size %d with %d channels; expected 1 to %d", o.Size, p, p)
	}
	if o.Components < 0 || o.Components > p || o.Components == 0 && o.Criterion == "gcd" {
		return o, fmt.Errorf("components %d with criterion %s; expected 1 to %d", o.Components, o.Criterion, p)
	}
	for _, group := range o.Together {
		for _, j := range group {
			if j < 0 || j >= p {
				return o, fmt.Errorf("a group names channel %d; expected 0 to %d", j, p-1)
			}
		}
	}
	return o, usable(s, o.Names)
}

// usable refuses summaries no regression can be made of.
func usable(s *pca.Summary, names []string) error {
	if s.Count() < 3 {
		return &pca.DataError{Problem: fmt.Sprintf("%d rows; at least 3 are needed to rebuild one channel from another", s.Count())}
	}
	if err := s.Finite(names); err != nil {
		return err
	}
	for j := range s.Width() {
		if s.Constant(j) || s.CenteredSquares(j) == 0 {
			return &pca.DataError{Channel: names[j], Problem: "constant: it has nothing to rebuild", Hint: "leave it out"}
		}
	}
	return nil
}
