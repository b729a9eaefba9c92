// Package rotation turns the retained components within the space they span so that each
// is carried by few channels. Call [Rotate] with the loadings; the result holds rotated
// loadings, their variances, and the weights that give rotated scores.
//
// Rotated components have no order of their own and no claim to most variance: they are
// listed by what they carry, and the sum of what all of them carry is that of the
// components they came from. The same input gives the same bits for any number of threads.
package rotation

import (
	"fmt"
	"math"
	"runtime"
	"slices"
	"sync"

	"axisfold/pca"
)

// Method is what the rotation seeks.
type Method string

// The methods. Promax lets components correlate.
const (
	Varimax   Method = "varimax"   // Kaiser 1958, Psychometrika 23:187
	Quartimax Method = "quartimax" // Neuhaus & Wrigley 1954, Br. J. Stat. Psychol. 7:81
	Promax    Method = "promax"    // Hendrickson & White 1964, Br. J. Stat. Psychol. 17:65
)

// Methods lists all methods, the default first.
var Methods = []Method{Varimax, Quartimax, Promax}

// Options say how to rotate.
type Options struct {
	Method Method
	// Normalize weighs all channels alike while rotating, whatever share of their variance
	// the components hold (Kaiser).
	Normalize bool
	Power     float64 // of the promax target, above 1
	Starts    int     // the first from the components as they are, the others at random
	Seed      uint64
	Threads   int // 0 takes all cores
}

// Result is a rotation of k components of p channels. All matrices are row-major.
type Result struct {
	Method   Method
	Channels int
	// Loadings are p×k: what a unit of each rotated component adds to a channel, in
	// deviations of the channel under the correlation matrix. For promax they are called
	// pattern.
	Loadings []float64
	// Structure is p×k: the covariances of channels with rotated components, correlations
	// under the correlation matrix; Loadings again but for promax.
	Structure []float64
	// Weights are k×k: a row of component scores, each divided by its standard deviation,
	// times Weights gives rotated scores of unit variance.
	Weights []float64
	// Correlations are k×k, between rotated components; unit but for promax.
	Correlations []float64
	// Variances say what each rotated component carries, Σ loading·structure; their sum is
	// that of the components rotated.
	Variances []float64
	// Criterion is what was maximised, of promax that of its varimax; Before is its value
	// unrotated. Reached is how many of the starts came to it.
	Criterion, Before float64
	Starts, Reached   int
	Warnings          []pca.Warning
}

// Components is k.
func (r *Result) Components() int { return len(r.Variances) }

// Loading is the entry of channel j, component a, both from 0.
func (r *Result) Loading(j, a int) float64 { return r.Loadings[j*len(r.Variances)+a] }

// Rotate rotates loadings, p×k row-major: eigenvectors times the roots of their
// eigenvalues. Options out of range, and loadings that are not p×k with k from 1, are
// errors.
func Rotate(loadings []float64, k int, o Options) (*Result, error) {
	switch {
	case !slices.Contains(Methods, o.Method):
		return nil, fmt.Errorf("rotation: unknown method %q", o.Method)
	case k < 1 || len(loadings) == 0 || len(loadings)%k != 0:
		return nil, fmt.Errorf("rotation: %d loadings are not those of %d components", len(loadings), k)
	case o.Starts < 1:
		return nil, fmt.Errorf("rotation: %d starts, expected at least 1", o.Starts)
	case o.Method == Promax && !(o.Power > 1):
		return nil, fmt.Errorf("rotation: power %g of promax, expected above 1", o.Power)
	}
	p := len(loadings) / k
	r := &Result{Method: o.Method, Channels: p, Starts: o.Starts}
	turned := r.search(loadings, p, k, o)
	r.Loadings = product(loadings, turned, p, k)
	r.Weights, r.Correlations = turned, unit(k)
	r.Structure = r.Loadings
	if o.Method == Promax && k > 1 {
		r.oblique(p, k, o.Power)
	}
	r.Variances = make([]float64, k)
	for j := range p {
		for a := range k {
			r.Variances[a] += r.Loadings[j*k+a] * r.Structure[j*k+a]
		}
	}
	r.arrange(p, k)
	return r, nil
}

// search rotates from every start and returns the best orthogonal matrix, k×k.
func (r *Result) search(loadings []float64, p, k int, o Options) []float64 {
	weighed := slices.Clone(loadings)
	if o.Normalize {
		normalize(weighed, p, k)
	}
	gamma := 1.0
	if o.Method == Quartimax {
		gamma = 0
	}
	r.Before = criterion(weighed, p, k, gamma)
	type found struct {
		turned    []float64
		criterion float64
		converged bool
	}
	all := make([]found, o.Starts)
	threads := o.Threads
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	var wg sync.WaitGroup
	for t := range min(threads, o.Starts) {
		wg.Go(func() {
			for s := t; s < o.Starts; s += threads {
				turned := unit(k)
				if s > 0 {
					turned = randomRotation(k, o.Seed, uint64(s))
				}
				b := product(weighed, turned, p, k)
				converged := orthomax(b, turned, p, k, gamma)
				all[s] = found{turned, criterion(b, p, k, gamma), converged}
			}
		})
	}
	wg.Wait()
	best := 0
	for s, f := range all {
		// A later start must be better by more than rounding.
		if f.criterion > all[best].criterion+sameCriterion*math.Abs(all[best].criterion) {
			best = s
		}
	}
	r.Criterion = all[best].criterion
	for _, f := range all {
		if math.Abs(f.criterion-r.Criterion) <= 1e-6*math.Abs(r.Criterion) {
			r.Reached++
		}
	}
	if !all[best].converged {
		r.warn("rotation-unsettled", "%s had not settled after %d rounds", o.Method, mostRounds)
	}
	if r.Starts > 1 && 2*r.Reached < r.Starts {
		r.warn("rotation-local", "%d of %d starts ended elsewhere with less: the rotation has several answers, and this is the best found", r.Starts-r.Reached, r.Starts)
	}
	return all[best].turned
}

// sameCriterion is the relative difference up to which criteria count as equal.
const sameCriterion = 1e-9

// normalize brings every channel to length one; one that no component tells of stays 0.
func normalize(b []float64, p, k int) {
	for j := range p {
		row := b[j*k : j*k+k]
		length := 0.0
		for _, v := range row {
			length = math.Hypot(length, v)
		}
		if length > 0 {
			for a := range row {
				row[a] /= length
			}
		}
	}
}

// arrange orders components by what they carry and turns each so that its largest loading
// is positive, the lowest channel on ties.
func (r *Result) arrange(p, k int) {
	order := pca.FirstComponents(k)
	slices.SortStableFunc(order, func(a, b int) int {
		switch {
		case r.Variances[a] > r.Variances[b]:
			return -1
		case r.Variances[a] < r.Variances[b]:
			return 1
		}
		return 0
	})
	sign := make([]float64, k)
	for a := range k {
		top := 0.0
		for j := range p {
			if v := r.Loadings[j*k+a]; math.Abs(v) > math.Abs(top) {
				top = v
			}
		}
		sign[a] = 1
		if top < 0 {
			sign[a] = -1
		}
	}
	columns := func(m []float64, rows int) []float64 {
		out := make([]float64, rows*k)
		for i := range rows {
			for to, from := range order {
				out[i*k+to] = sign[from] * m[i*k+from]
			}
		}
		return out
	}
	same := &r.Loadings[0] == &r.Structure[0]
	r.Loadings = columns(r.Loadings, p)
	if same {
		r.Structure = r.Loadings
	} else {
		r.Structure = columns(r.Structure, p)
	}
	r.Weights = columns(r.Weights, k)
	half := columns(r.Correlations, k)
	for to, from := range order {
		for a := range k {
			r.Correlations[to*k+a] = sign[from] * half[from*k+a]
		}
	}
	variances := make([]float64, k)
	for to, from := range order {
		variances[to] = r.Variances[from]
	}
	r.Variances = variances
}

func (r *Result) warn(code, format string, args ...any) {
	r.Warnings = append(r.Warnings, pca.Warning{Code: code, Text: fmt.Sprintf(format, args...)})
}

// unit is the k×k unit matrix.
func unit(k int) []float64 {
	out := make([]float64, k*k)
	for a := range k {
		out[a*k+a] = 1
	}
	return out
}

// product is the p×k matrix m times the k×k matrix t.
func product(m, t []float64, p, k int) []float64 {
	out := make([]float64, p*k)
	for j := range p {
		for a := range k {
			for b, v := range m[j*k : j*k+k] {
				out[j*k+a] += v * t[b*k+a]
			}
		}
	}
	return out
}
