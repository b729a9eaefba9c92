package retain

import (
	"fmt"
	"math"
	"runtime"
	"sync"

	"axisfold/pca"
	"axisfold/pca/internal/kernel"
	"axisfold/pca/internal/symeig"
)

// Element-wise cross-validation by expectation maximisation (Bro, Kjeldahl, Smilde & Kiers
// 2008, Anal. Bioanal. Chem. 390:1241; the fit to what is left after Kiers 1997,
// Psychometrika 62:251): single cells are hidden in a diagonal pattern, k components
// are fitted to the cells that are left, in turns with filling the hidden ones from the
// fit, and what they end at is compared with what was hidden. Means, and under the correlation
// matrix scales, are taken anew without the hidden cells. Nothing of a cell helps to
// predict it, so that the error turns up again once k is too large, which it never does
// where whole rows are left out and then scored.
var elementCross = Rule{
	Name:     "element-cross-validation",
	Summary:  "the number that best predicts hidden cells (Bro et al. 2008)",
	variants: []Settings{with(func(s *Settings) { s.Quick = true })},
	apply: func(e *Evidence, s Settings) Verdict {
		var v Verdict
		n, p := e.Rows, e.Width()
		if len(e.Standardized) != n*p {
			return v.abstain("it needs the rows in memory")
		}
		stride := (n + elementRows - 1) / elementRows
		rows := (n + stride - 1) / stride
		most := min(p-1, rows-2, e.Rank, elementMost)
		work := float64(rows)*float64(p)*float64(p) + 10*float64(p)*float64(p)*float64(p)
		switch {
		case p < 3 || rows < 4:
			return v.abstain("three channels and four rows are the least")
		case rows-1 <= p:
			return v.abstain("there are not enough rows for the channels")
		case s.Quick && work > quickElement:
			return v.abstain("it would take long; as the rule of the run file it does")
		}
		x := make([]float64, 0, rows*p)
		for i := 0; i < n; i += stride {
			x = append(x, e.Standardized[i*p:(i+1)*p]...)
		}
		c := elementCheck{x: x, n: rows, p: p, most: most, segments: elementSegments, rescale: e.Matrix == pca.Correlation,
			tolerance: 1e-4, rounds: 2000, threads: e.Threads}
		if s.Quick {
			c.rounds = 200
		}
		if rows*p <= elementSingles {
			c.segments = rows * p
		}
		sums, unsettled := c.run()
		for k, sum := range sums {
			// Rounding must not choose among errors that are all zero.
			if sum < sums[v.Components]*(1-1e-9)-1e-12*sums[0] {
				v.Components = k
			}
		}
		if v.Components == most && most < p-1 && e.Rank > most {
			return v.abstain("the error falls as far as it can be followed: some channels are near copies of others")
		}
		for a := range e.Values {
			last := len(sums) - 1
			v.Steps = append(v.Steps, Step{Value: sums[min(a+1, last)], Threshold: sums[min(a, last)], Kept: a < v.Components})
		}
		v.Note = fmt.Sprintf("hidden cells are predicted best with %d: error %.3f of that of the means", v.Components, sums[v.Components]/sums[0])
		if stride > 1 {
			v.Note += fmt.Sprintf(" (every %s row)", ordinal(stride))
		}
		if share := float64(unsettled) / float64(c.segments*(len(sums)-1)); share > .1 {
			v.Warnings = append(v.Warnings, pca.Warning{Code: "element-unsettled",
				Text: fmt.Sprintf("element-cross-validation: %.0f %% of the fits had not settled after %d rounds", 100*share, c.rounds)})
		}
		return v
	},
}

const (
	elementRows     = 300 // about how many rows are looked at, every so many of all
	elementMost     = 15  // components followed
	elementSegments = 10
	elementSingles  = 400 // cells up to which each is hidden alone
	quickElement    = 6e5 // operations of one round that an overview takes time for
)

func ordinal(n int) string {
	suffix := "th"
	if n%100 < 11 || n%100 > 13 {
		switch n % 10 {
		case 1:
			suffix = "st"
		case 2:
			suffix = "nd"
		case 3:
			suffix = "rd"
		}
	}
	return fmt.Sprintf("%d%s", n, suffix)
}

// elementCheck hides cells of x, n×p row-major.
type elementCheck struct {
	x         []float64
	n, p      int
	most      int
	segments  int  // n·p hides each cell alone
	rescale   bool // take scales anew without the hidden cells
	tolerance float64
	rounds    int
	threads   int
}

// run returns Σ squared errors of the hidden cells by number of components, from 0, and
// how many fits had not settled. It ends early once beyond more components than the best
// have not helped.
func (c *elementCheck) run() (sums []float64, unsettled int) {
	all := make([]*segment, c.segments)
	c.each(func(s int) { all[s] = c.hide(s) })
	best := 0
	for k := 0; k <= c.most && k <= best+elementBeyond; k++ {
		squares, open := make([]float64, c.segments), make([]bool, c.segments)
		c.each(func(s int) {
			open[s] = k > 0 && !c.settle(all[s], k)
			squares[s] = all[s].squares(c.x)
		})
		sum := 0.0
		for s, v := range squares {
			sum += v
			if open[s] {
				unsettled++
			}
		}
		if sums = append(sums, sum); sum < sums[best] {
			best = k
		}
	}
	return sums, unsettled
}

// elementBeyond is how many more components than the best so far are tried.
const elementBeyond = 4

// each calls do for every segment, on all threads.
func (c *elementCheck) each(do func(s int)) {
	threads := c.threads
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	threads = min(threads, c.segments)
	var wg sync.WaitGroup
	for t := range threads {
		wg.Go(func() {
			for s := t; s < c.segments; s += threads {
				do(s)
			}
		})
	}
	wg.Wait()
}

// segment is the table with some cells hidden, and what they are filled with.
type segment struct {
	filler
	mean, scale []float64
}

// hide hides one segment.
func (c *elementCheck) hide(number int) *segment {
	n, p := c.n, c.p
	var cells []int // row by row
	if c.segments == n*p {
		cells = []int{number}
	} else {
		for i := range n {
			for j := range p {
				if (i+j)%c.segments == number {
					cells = append(cells, i*p+j)
				}
			}
		}
	}
	hidden := make([]bool, n*p)
	for _, at := range cells {
		hidden[at] = true
	}
	s := &segment{filler: filler{y: make([]float64, n*p), n: n, p: p, cells: cells}}
	s.mean, s.scale = c.observed(hidden)
	for at, v := range c.x {
		if !hidden[at] {
			s.y[at] = (v - s.mean[at%p]) / s.scale[at%p]
		}
	}
	return s
}

// settle fills the hidden cells from k components until they stay; it begins with what
// k-1 left.
func (c *elementCheck) settle(s *segment, k int) bool {
	s.center, s.centered, s.gram = make([]float64, c.p), make([]float64, c.n*c.p), make([]float64, c.p*c.p)
	for range c.rounds {
		if s.fill(k) <= c.tolerance {
			return true
		}
	}
	return false
}

// squares is the squared error of the hidden cells.
func (s *segment) squares(x []float64) float64 {
	sum := 0.0
	for _, at := range s.cells {
		off := x[at] - s.mean[at%s.p] - s.scale[at%s.p]*s.y[at]
		sum += off * off
	}
	return sum
}

// observed are mean and scale of each channel over the cells that are not hidden.
func (c *elementCheck) observed(hidden []bool) (mean, scale []float64) {
	mean, scale = make([]float64, c.p), make([]float64, c.p)
	for j := range c.p {
		count, squares := 0.0, 0.0
		for at := j; at < len(c.x); at += c.p {
			if !hidden[at] {
				count++
				mean[j] += c.x[at]
			}
		}
		mean[j] /= math.Max(count, 1)
		for at := j; at < len(c.x); at += c.p {
			if !hidden[at] {
				squares += (c.x[at] - mean[j]) * (c.x[at] - mean[j])
			}
		}
		scale[j] = math.Sqrt(squares / math.Max(count-1, 1))
		if !c.rescale || scale[j] == 0 {
			scale[j] = 1
		}
	}
	return mean, scale
}

// filler fits components to y and fills the hidden cells from the fit.
type filler struct {
	y                      []float64
	n, p                   int
	cells                  []int
	center, centered, gram []float64
}

// fill is one round; it returns the root mean square by which the hidden cells moved.
func (f *filler) fill(k int) float64 {
	n, p := f.n, f.p
	clear(f.center)
	kernel.ColumnSums(f.center, f.y, n, p)
	for j := range f.center {
		f.center[j] /= float64(n)
	}
	kernel.CenterColumns(f.centered, f.y, f.center, n, p)
	clear(f.gram)
	kernel.AddCrossProducts(f.gram, f.centered, n, p)
	_, vectors, err := symeig.DecomposeOn(1, f.gram, p)
	if err != nil {
		return 0 // not finite: the fit ran away, and its error says so
	}
	moved := 0.0
	scores := make([]float64, k)
	last := -1
	for _, at := range f.cells {
		i, j := at/p, at%p
		if i != last {
			clear(scores)
			for l, v := range f.centered[i*p : i*p+p] {
				for a := range scores {
					scores[a] += v * vectors[l*p+a]
				}
			}
			last = i
		}
		fitted := f.center[j]
		for a, t := range scores {
			fitted += t * vectors[j*p+a]
		}
		moved += (fitted - f.y[at]) * (fitted - f.y[at])
		f.y[at] = fitted
	}
	return math.Sqrt(moved / float64(len(f.cells)))
}
