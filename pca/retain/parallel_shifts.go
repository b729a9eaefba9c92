package retain

import (
	"fmt"
	"math/rand/v2"
	"runtime"
	"slices"
	"sync"

	"axisfold/pca/internal/kernel"
	"axisfold/pca/internal/symeig"
)

// Parallel analysis against the table itself, every channel turned round in time by an
// amount of its own: what channels have in common is gone, while each keeps its own
// values and its own autocorrelation. Rows that follow one another let chance correlations
// grow far beyond those of independent rows; here the reference grows with them. (The idea
// is Horn's with the permutations of Buja & Eyuboglu 1992, Multivar. Behav. Res. 27:509,
// replaced by circular shifts.)
var parallelShifts = Rule{
	Name:     "parallel-shifts",
	Summary:  "roots above those of the same channels shifted in time against one another; holds for rows that follow one another",
	variants: []Settings{with(func(s *Settings) { s.Replicates = 200 })},
	apply: func(e *Evidence, s Settings) Verdict {
		n, p := e.Rows, e.Width()
		work := float64(n) * float64(p) * float64(p)
		if s.Replicates == 0 {
			s.Replicates = int(max(leastReplicates, min(mostReplicates, mostShiftWork/work)))
		}
		v := Verdict{Setting: fmt.Sprintf("%d shifts", s.Replicates)}
		if s.Percentile != Defaults().Percentile {
			v.Setting += fmt.Sprintf(", percentile %g", s.Percentile)
		}
		switch {
		case p == 1:
			v.Components, v.Note = 1, "one channel is one component"
			v.Steps = []Step{{Value: e.Values[0], Kept: true}}
			return v
		case len(e.Standardized) != n*p:
			return v.abstain("it needs the rows in memory")
		case n-1 < p:
			return v.abstain(fmt.Sprintf("%d rows leave %d channels no room to shift", n, p))
		case work*float64(s.Replicates) > mostShiftWork:
			return v.abstain("the table is too large to shift so often; fewer replicates would do")
		}
		roots := shiftedRoots(e, s.Replicates)
		column := make([]float64, s.Replicates)
		going := true
		percentile := s
		percentile.Reference = "percentile"
		for a, l := range e.Values {
			for r := range column {
				column[r] = roots[r*p+a]
			}
			slices.Sort(column)
			reference, _ := referenceRoot(column, percentile)
			going = going && l > reference && a < e.Rank
			v.Steps = append(v.Steps, Step{Value: l, Threshold: reference, Kept: going})
			v.Reference = append(v.Reference, reference)
		}
		v.Components = leading(v.Steps)
		if v.Components < len(v.Steps) {
			next := v.Steps[v.Components]
			v.Note = fmt.Sprintf("root %d is %.3f; shifted channels reach %.3f", v.Components+1, next.Value, next.Threshold)
		} else {
			v.Note = "every root is above its reference"
		}
		return v
	},
}

// mostShiftWork bounds n·p²·replicates: a few seconds, because the rule is part of every
// overview.
const mostShiftWork = 5e10

// shiftedRoots returns the roots of shifted tables, replicates×p row-major, descending.
func shiftedRoots(e *Evidence, replicates int) []float64 {
	n, p := e.Rows, e.Width()
	out := make([]float64, replicates*p)
	threads := e.Threads
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	threads = min(threads, replicates)
	var wg sync.WaitGroup
	for t := range threads {
		wg.Go(func() {
			const panel = 256
			shifted := make([]float64, panel*p)
			gram := make([]float64, p*p)
			from := make([]int, p)
			var work symeig.Work
			for r := t; r < replicates; r += threads {
				rng := rand.New(rand.NewPCG(e.Seed, shiftStream+uint64(r)))
				for j := range from {
					from[j] = rng.IntN(n)
				}
				clear(gram)
				for start := 0; start < n; start += panel {
					rows := min(panel, n-start)
					for i := range rows {
						for j := range p {
							shifted[i*p+j] = e.Standardized[from[j]*p+j]
							if from[j]++; from[j] == n {
								from[j] = 0
							}
						}
					}
					kernel.AddCrossProducts(gram, shifted, rows, p)
				}
				for i := range gram {
					gram[i] /= float64(n - 1)
				}
				symeig.Values(gram, p, out[r*p:(r+1)*p], &work)
			}
		})
	}
	wg.Wait()
	return out
}

// shiftStream keeps these draws apart from those of parallel.
const shiftStream = 1 << 32
