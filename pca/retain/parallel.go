package retain

import (
	"fmt"
	"math"
	"runtime"
	"slices"
	"sync"

	"axisfold/pca"
)

// Horn 1965 (Psychometrika 30:179) with the mean, Glorfeld 1995 (Educ. Psychol. Meas.
// 55:377) with a percentile of the roots of independent normal channels.
var parallel = Rule{
	Name:    "parallel",
	Summary: "roots above those of as many rows of independent channels (Horn 1965), up to the first that is not",
	variants: []Settings{
		with(func(s *Settings) { s.Reference = "percentile" }),
		with(func(s *Settings) { s.Reference = "mean" }),
		with(func(s *Settings) { s.Reference, s.Rows = "percentile", "counted" }),
	},
	apply: applyParallel,
}

func applyParallel(e *Evidence, s Settings) Verdict {
	v := Verdict{Setting: "mean"}
	if s.Reference != "mean" {
		v.Setting = fmt.Sprintf("percentile %g", s.Percentile)
	}
	rows, among := e.Rows, ""
	if e.Effective > 0 && e.Effective < e.Rows {
		if s.Rows == "counted" {
			v.Setting += ", counted"
		} else {
			rows, among = e.Effective, fmt.Sprintf(" in %d rows, which is what these are worth", e.Effective)
		}
	}
	if s.Replicates == 0 {
		s.Replicates = usualReplicates(e.Width(), rows)
	}
	if s.Replicates != mostReplicates {
		v.Setting += fmt.Sprintf(", %d replicates", s.Replicates)
	}
	if e.Width() == 1 {
		v.Components, v.Note = 1, "one channel is one component"
		v.Steps = []Step{{Value: e.Values[0], Kept: true}}
		return v
	}
	roots := NullRoots(e, rows, s.Replicates)
	m := len(e.Values)
	column := make([]float64, s.Replicates)
	going := true
	for a := range m {
		for r := range column {
			column[r] = roots[r*m+a]
		}
		slices.Sort(column)
		reference, slip := referenceRoot(column, s)
		going = going && e.Values[a] > reference && a < min(e.Rank, rows-1)
		v.Steps = append(v.Steps, Step{Value: e.Values[a], Threshold: reference, Kept: going})
		v.Reference = append(v.Reference, reference)
		first := a == 0 || v.Steps[a-1].Kept
		if first && math.Abs(e.Values[a]-reference) < closeCall*slip {
			v.Warnings = append(v.Warnings, pca.Warning{Code: "close-call",
				Text: fmt.Sprintf("root %d (%.4f) lies within %d Monte Carlo standard errors of its reference %.4f: more replicates may change the number", a+1, e.Values[a], closeCall, reference)})
		}
	}
	v.Components = leading(v.Steps)
	if v.Components < m {
		next := v.Steps[v.Components]
		v.Note = fmt.Sprintf("root %d is %.3f; independent channels reach %.3f%s",
			v.Components+1, next.Value, next.Threshold, among)
	} else {
		v.Note = "every root is above its reference"
	}
	return v
}

// The number of replicates where none is asked for: as many as some half a minute of one
// core can make, within limits. Large tables can do with few, because the roots of large
// tables of independent channels hardly vary (Tracy & Widom 1996: like p^-2/3).
const (
	mostReplicates  = 1000
	leastReplicates = 100
	replicateWork   = 1e12 // operations
)

// usualReplicates counts, for one replicate, a hundred operations a random number, the
// cross-products of the longer side and the roots of the shorter.
func usualReplicates(channels, rows int) int {
	p := float64(channels)
	side := min(p, float64(rows-1))
	return int(max(leastReplicates, min(mostReplicates, replicateWork/(p*side*(100+side)+3*side*side*side))))
}

// closeCall is the distance, in standard errors, within which a decision could turn.
const closeCall = 2

// referenceRoot returns mean or percentile of the sorted roots and its Monte Carlo
// standard error. The percentile interpolates linearly between order statistics at
// ·q; its error is half the spread of the order statistics one binomial standard
// deviation either side.
func referenceRoot(sorted []float64, s Settings) (reference, slip float64) {
	n := len(sorted)
	if s.Reference == "mean" {
		sum := 0.0
		for _, x := range sorted {
			sum += x
		}
		mean := sum / float64(n)
		squares := 0.0
		for _, x := range sorted {
			squares += (x - mean) * (x - mean)
		}
		return mean, math.Sqrt(squares / float64(n-1) / float64(n))
	}
	q := s.Percentile / 100
	at := func(h float64) float64 {
		h = math.Max(0, math.Min(h, float64(n-1)))
		i := int(h)
		if i+1 >= n {
			return sorted[n-1]
		}
		return sorted[i] + (h-float64(i))*(sorted[i+1]-sorted[i])
	}
	h := q * float64(n-1)
	d := math.Sqrt(float64(n) * q * (1 - q))
	return at(h), (at(h+d) - at(h-d)) / 2
}

// draws names a set of null roots.
type draws struct{ rows, replicates int }

// NullRoots returns the leading len(e.Values) roots of replicates tables of so many rows
// whose channels are those of e but independent and normal, replicates×m row-major, each
// row descending; roots that so few rows do not have are 0. Every replicate has its own
// random stream, so the numbers do not depend on the threads. They are kept with e and
// must not be changed.
func NullRoots(e *Evidence, rows, replicates int) []float64 {
	if have, ok := e.null[draws{rows, replicates}]; ok {
		return have
	}
	m := len(e.Values)
	out := make([]float64, replicates*m)
	threads := e.Threads
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	threads = min(threads, replicates)
	var wg sync.WaitGroup
	for t := range threads {
		wg.Go(func() {
			draw := newDrawer(e, rows)
			for r := t; r < replicates; r += threads {
				draw.roots(out[r*m:(r+1)*m], uint64(r))
			}
		})
	}
	wg.Wait()
	if e.null == nil {
		e.null = map[draws][]float64{}
	}
	e.null[draws{rows, replicates}] = out
	return out
}
