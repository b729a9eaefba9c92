package stability

import (
	"fmt"
	"math"
	"runtime"
	"sync"

	"axisfold/pca"
)

// Options are what Bootstrap needs to know. Zero Replicates, Confidence and Threads stand
// for their defaults.
type Options struct {
	Decompose  pca.Options // as for the whole table
	Retained   int         // k, from 1 to the rank of the whole table
	Replicates int         // default 1000, at least 2
	Confidence float64     // default 0.95, between 0 and 1
	Seed       uint64
	Threads    int // default GOMAXPROCS
}

// Interval is an estimate with its limits.
type Interval struct{ Estimate, Lower, Upper float64 }

// Result is what the replicates say. Estimates are those of the whole table.
type Result struct {
	Blocks     int // resampled, after merging neighbours and without empty ones
	Replicates int // drawn
	Failed     int // left out: no decomposition, mostly for a constant channel
	// Eigenvalues are m bootstrap percentile intervals, matched by rank.
	Eigenvalues []Interval
	// Asymptotic are m intervals l/(1±τz), τ = √(2/(n-1)), for independent normal rows
	// (Anderson 1963, Ann. Math. Stat. 34:122). Limits are NaN where the theory does not
	// hold: a scaling taken from the data, the correlation matrix, roots that mix with a
	// neighbour or are 0. The upper limit is +Inf where τz ≥ 1.
	Asymptotic []Interval
	// Shares of the total variance: m bootstrap percentile intervals, from 0 to 1.
	Shares []Interval
	// Loadings are p×k row-major bootstrap percentile intervals: entries of V_b·Q times
	// the root of the variance along that axis, in units of pca.Decomposition.Loading.
	Loadings []Interval
	// Congruence is, for each retained component, the mean |v_b'v| with its partner among
	// the leading k+1 of the replicate (assignment of largest sum), before Procrustes.
	Congruence []float64
	// SubspaceAngle is the largest principal angle between the retained subspaces of
	// replicate and whole, in degrees: median, 0 and the upper percentile at Confidence.
	SubspaceAngle Interval
	// Tied are groups of neighbouring components, from 0, that cannot be told apart:
	// partners cross from one to the other in more than 10 % of the replicates, or the
	// gap is below l·√(2/n) (North et al. 1982). Index k may appear: then the cut itself
	// goes through a group. Equal roots of the population escape both signs in close to
	// half of all samples, since sample roots repel each other.
	Tied     [][]int
	Warnings []pca.Warning
}

const (
	fewBlocks = 20   // below, percentiles rest on too few distinct draws
	crossing  = 0.10 // share of replicates above which neighbours count as tied
)

// Bootstrap resamples the blocks, each a stretch of consecutive rows, and compares with
// the decomposition of the whole table. Blocks stay as they are. It keeps
// Replicates·(2m + pk) numbers and p(p+1)/2 for each block. Errors: options out of range,
// fewer than two blocks with rows, widths that differ, no replicate that decomposes.
func Bootstrap(blocks []*pca.Summary, whole *pca.Decomposition, o Options) (*Result, error) {
	if o.Replicates == 0 {
		o.Replicates = 1000
	}
	if o.Confidence == 0 {
		o.Confidence = 0.95
	}
	if o.Threads <= 0 {
		o.Threads = runtime.GOMAXPROCS(0)
	}
	if err := check(whole, o); err != nil {
		return nil, err
	}
	res := &Result{Replicates: o.Replicates}
	store, err := extract(blocks, o.Decompose, res)
	if err != nil {
		return nil, err
	}
	if res.Blocks < fewBlocks {
		res.warn("few-blocks", "only %d blocks were resampled: intervals are coarse below %d; more and shorter blocks help where rows do not follow one another", res.Blocks, fewBlocks)
	}
	c := newCollector(whole, o)
	share(o.Threads, o.Replicates, func(next func() (int, bool)) {
		d := newDrawer(store, c, o)
		for r, ok := next(); ok; r, ok = next() {
			d.draw(r)
		}
	})
	return res, c.summarize(res, o)
}

func check(whole *pca.Decomposition, o Options) error {
	switch p := whole.Width(); {
	case len(o.Decompose.Names) != p || len(o.Decompose.Methods) != p:
		return fmt.Errorf("stability: %d names and %d scaling methods for a decomposition of %d channels",
			len(o.Decompose.Names), len(o.Decompose.Methods), p)
	case o.Decompose.Matrix != whole.Matrix:
		return fmt.Errorf("stability: options ask for the %s matrix, the decomposition is of the %s matrix", o.Decompose.Matrix, whole.Matrix)
	case o.Retained < 1 || o.Retained > whole.Rank:
		return fmt.Errorf("stability: %d components retained, expected 1 to %d, the rank", o.Retained, whole.Rank)
	case o.Replicates < 2:
		return fmt.Errorf("stability: %d replicates, expected at least 2", o.Replicates)
	case !(o.Confidence > 0 && o.Confidence < 1):
		return fmt.Errorf("stability: confidence %g, expected a number between 0 and 1", o.Confidence)
	}
	return nil
}

func (r *Result) warn(code, format string, args ...any) {
	r.Warnings = append(r.Warnings, pca.Warning{Code: code, Text: fmt.Sprintf(format, args...)})
}

// share runs work on threads goroutines; between them they get 0..n-1 from next.
func share(threads, n int, work func(next func() (int, bool))) {
	threads = min(threads, n)
	var wg sync.WaitGroup
	for t := range threads {
		wg.Go(func() {
			i := t - threads
			work(func() (int, bool) {
				i += threads
				return i, i < n
			})
		})
	}
	wg.Wait()
}

// tiedGroups joins neighbours a, a+1 for which joined[a].
func tiedGroups(joined []bool) [][]int {
	var groups [][]int
	for a, yes := range joined {
		switch {
		case !yes:
		case a > 0 && joined[a-1]:
			groups[len(groups)-1] = append(groups[len(groups)-1], a+1)
		default:
			groups = append(groups, []int{a, a + 1})
		}
	}
	return groups
}

// mixed tells whether root a of the whole is within a standard error of a neighbour.
func mixed(whole *pca.Decomposition, a int) bool {
	return whole.MixedWithNext(a) || a > 0 && whole.MixedWithNext(a-1)
}

// fixedScale tells whether Z keeps the unit of the data, so that the theory for a
// covariance matrix applies.
func fixedScale(o pca.Options) bool {
	for _, m := range o.Methods {
		if m != pca.CenterOnly && m != pca.NoScaling {
			return false
		}
	}
	return o.Matrix == pca.Covariance
}

func unknown() Interval { return Interval{math.NaN(), math.NaN(), math.NaN()} }
