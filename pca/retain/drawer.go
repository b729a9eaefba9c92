package retain

import (
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/stat/distuv"

	"axisfold/pca"
	"axisfold/pca/internal/kernel"
	"axisfold/pca/internal/symeig"
)

// drawer makes the roots of one table of independent normal channels after another.
// It holds scratch space: one per goroutine.
//
// With at least as many degrees of freedom ν = n-1 as channels it draws the triangular
// factor of a Wishart matrix (Bartlett 1933): T lower triangular, t_ii² ~ χ² with ν-i+1
// degrees of freedom (i from 1), the rest N(0,1), W = TT': p²/2 random numbers in place
// of n·p. Otherwise it draws the rows: p columns of ν normal numbers (centring costs one
// row) and takes the roots of the smaller ν×ν matrix, which are the same.
// Under the correlation matrix every column is scaled to unit length, which fixes the
// trace; leaving that out inflates the reference.
type drawer struct {
	e     *Evidence
	free  int // ν
	draws []float64
	gram  []float64
	all   []float64
	work  symeig.Work
}

func newDrawer(e *Evidence, rows int) *drawer {
	p, free := e.Width(), rows-1
	d := &drawer{e: e, free: free}
	side := min(p, free)
	d.draws = make([]float64, p*side)
	d.gram = make([]float64, side*side)
	d.all = make([]float64, side)
	return d
}

func (d *drawer) roots(dst []float64, replicate uint64) {
	src := rand.NewPCG(d.e.Seed, replicate)
	rng := rand.New(src)
	p := d.e.Width()
	clear(d.gram)
	if d.free >= p {
		d.triangle(rng, src)
	} else {
		d.rows(rng)
	}
	side := len(d.all)
	symeig.Values(d.gram, side, d.all, &d.work)
	divisor := 1.0
	if d.e.Matrix == pca.Covariance {
		divisor = float64(d.free)
	}
	for a := range min(len(dst), side) {
		dst[a] = math.Max(d.all[a], 0) / divisor
	}
}

// triangle fills gram with TT'. Row i of T is kept as column i of draws, because the
// kernel adds up products of rows.
func (d *drawer) triangle(rng *rand.Rand, src rand.Source) {
	p := d.e.Width()
	t := d.draws
	row := make([]float64, p)
	for i := range p {
		length := 0.0
		for j := range i {
			row[j] = rng.NormFloat64()
			length += row[j] * row[j]
		}
		square := distuv.ChiSquared{K: float64(d.free - i), Src: src}.Rand()
		row[i] = math.Sqrt(square)
		f := d.columnFactor(i, length+square)
		for j := range i + 1 {
			t[j*p+i] = row[j] * f
		}
	}
	kernel.AddCrossProducts(d.gram, t, p, p)
}

// rows fills gram with Σ u_j u_j' over the p columns, each a vector of ν numbers.
func (d *drawer) rows(rng *rand.Rand) {
	p, free := d.e.Width(), d.free
	for j := range p {
		u := d.draws[j*free : (j+1)*free]
		length := 0.0
		for i := range u {
			u[i] = rng.NormFloat64()
			length += u[i] * u[i]
		}
		f := d.columnFactor(j, length)
		for i := range u {
			u[i] *= f
		}
	}
	kernel.AddCrossProducts(d.gram, d.draws, p, free)
}

// columnFactor is what column j is multiplied by: to unit length under the correlation
// matrix, to its own deviation under the covariance matrix.
func (d *drawer) columnFactor(j int, squaredLength float64) float64 {
	if d.e.Matrix == pca.Correlation {
		return 1 / math.Sqrt(squaredLength)
	}
	return d.e.Deviations[j]
}
