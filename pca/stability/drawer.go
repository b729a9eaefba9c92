package stability

import (
	"errors"
	"math"
	"math/rand/v2"

	"axisfold/pca"
	"axisfold/pca/internal/kernel"
	"axisfold/pca/internal/symeig"
)

// drawer makes one replicate after another. It holds scratch space: one per goroutine.
type drawer struct {
	b       *blocks
	c       *collector
	o       Options
	methods []pca.Method
	picks   []int // blocks in the order drawn
	weights []float64
	mean    []float64
	within  []float64 // p(p+1)/2: Σ w_b·C_b
	between []float64 // p×p, upper: Σ w_b·n_b(m_b - m)(m_b - m)'
	rows    []float64 // up to n×p: √(w_b·n_b)·(m_b - m)
	low     []float64
	high    []float64
	scale   []float64
	matrix  []float64
	align   *aligner
}

func newDrawer(b *blocks, c *collector, o Options) *drawer {
	p := b.p
	return &drawer{b: b, c: c, o: o, methods: o.Decompose.EffectiveMethods(),
		picks: make([]int, b.n), weights: make([]float64, b.n), mean: make([]float64, p),
		within: make([]float64, p*(p+1)/2), between: make([]float64, p*p), rows: make([]float64, b.n*p),
		low: make([]float64, p), high: make([]float64, p), scale: make([]float64, p), matrix: make([]float64, p*p),
		align: newAligner(c.whole, o.Retained)}
}

func (d *drawer) draw(replicate int) {
	rng := rand.New(rand.NewPCG(d.o.Seed, uint64(replicate)))
	for i := range d.picks {
		d.picks[i] = rng.IntN(d.b.n)
	}
	total, values, vectors, err := d.decompose()
	if err != nil {
		d.c.fail(replicate, err)
		return
	}
	d.c.keep(replicate, total, values, d.align.to(values, vectors))
}

var (
	errConstant = errors.New("constant channel")
	errRows     = errors.New("too few rows")
)

// decompose returns trace, roots and vectors (p×p) of the blocks in picks.
func (d *drawer) decompose() (total float64, values, vectors []float64, err error) {
	n := d.merge()
	if n-1 < float64(d.o.Retained) {
		return 0, nil, nil, errRows
	}
	if err := d.fitScale(n); err != nil {
		return 0, nil, nil, err
	}
	total = d.fill(n)
	// One thread: the replicates already keep every core busy.
	values, vectors, err = symeig.DecomposeOn(1, d.matrix, d.b.p)
	for a := range values {
		values[a] = math.Max(values[a], 0)
	}
	return total, values, vectors, err
}

// merge sums counts and moments in one pass over the distinct blocks, and then the moments
// of their means about the common mean, so that no large numbers are subtracted: an error
// e in the common mean leaves no more than n·e².
func (d *drawer) merge() (n float64) {
	b, p := d.b, d.b.p
	clear(d.weights)
	for _, i := range d.picks {
		d.weights[i]++
	}
	clear(d.mean)
	clear(d.within)
	for j := range p {
		d.low[j], d.high[j] = math.Inf(1), math.Inf(-1)
	}
	for i, w := range d.weights {
		if w == 0 {
			continue
		}
		n += w * b.counts[i]
		kernel.Axpy(w*b.counts[i], b.means[i*p:(i+1)*p], d.mean)
		kernel.Axpy(w, b.cross[i*len(d.within):(i+1)*len(d.within)], d.within)
		for j := range p {
			d.low[j] = min(d.low[j], b.low[i*p+j])
			d.high[j] = max(d.high[j], b.high[i*p+j])
		}
	}
	for j := range d.mean {
		d.mean[j] /= n
	}
	used := 0
	for i, w := range d.weights {
		if w == 0 {
			continue
		}
		root := math.Sqrt(w * b.counts[i])
		row := d.rows[used*p : (used+1)*p]
		for j := range row {
			row[j] = root * (b.means[i*p+j] - d.mean[j])
		}
		used++
	}
	clear(d.between)
	kernel.AddCrossProducts(d.between, d.rows[:used*p], used, p)
	return n
}

// fitScale is pca.FitScaling for merged moments; centres do not matter to moments about
// the mean.
func (d *drawer) fitScale(n float64) error {
	p := d.b.p
	at := 0 // of the diagonal in within
	for j, m := range d.methods {
		squares := d.within[at] + d.between[j*p+j]
		at += p - j
		if constant(d.low[j], d.high[j]) {
			return errConstant
		}
		switch m {
		case pca.CenterOnly, pca.NoScaling:
			d.scale[j] = 1
		case pca.UnitNormal:
			d.scale[j] = math.Sqrt(squares / (n - 1))
		case pca.UnitLength:
			d.scale[j] = math.Sqrt(squares)
		case pca.Pareto:
			d.scale[j] = math.Sqrt(math.Sqrt(squares / (n - 1)))
		case pca.Range:
			d.scale[j] = d.high[j] - d.low[j]
		case pca.MedianMAD:
			scale, err := d.medianScale(j)
			if err != nil {
				return errConstant
			}
			d.scale[j] = scale
		default:
			panic("stability: unknown scaling method " + string(m))
		}
		if !(d.scale[j] > 0) {
			return errConstant
		}
	}
	return nil
}

// constant is pca.Summary.Constant for merged extremes: equal up to the last bits of a
// rounded decimal number.
func constant(low, high float64) bool {
	return high-low <= 0x1p-49*math.Max(math.Abs(low), math.Abs(high))
}

// medianScale merges the ranks of channel j: medians do not come from sums.
func (d *drawer) medianScale(j int) (float64, error) {
	parts := make([]*pca.Summary, len(d.picks))
	for i, pick := range d.picks {
		parts[i] = d.b.ranked[j][pick]
	}
	sc, err := pca.FitScaling(pca.MergeAll(parts...), []pca.Method{pca.MedianMAD}, []string{""})
	if err != nil {
		return 0, err
	}
	return sc.Scale[0], nil
}

// fill makes the matrix to decompose and returns its trace.
func (d *drawer) fill(n float64) (total float64) {
	p := d.b.p
	correlation := d.o.Decompose.Matrix == pca.Correlation
	divisor := n - 1
	if correlation && d.methods[0] == pca.UnitLength {
		divisor = 1
	}
	at := 0
	for i := range p {
		for j := i; j < p; j++ {
			v := (d.within[at] + d.between[i*p+j]) / d.scale[i] / d.scale[j] / divisor
			at++
			if correlation {
				v = math.Max(-1, math.Min(1, v))
				if i == j {
					v = 1
				}
			}
			d.matrix[i*p+j] = v
		}
		total += d.matrix[i*p+i]
	}
	return total
}
