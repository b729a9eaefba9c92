package symeig

import (
	"errors"
	"math"
	"runtime"
	"slices"
)

var errNotFinite = errors.New("the matrix holds a number that is not finite")
var errNoConvergence = errors.New("the eigenvalues did not converge")

// Work is scratch space for Values, kept between calls; one per goroutine.
type Work struct{ r reduction }

// Values writes the p eigenvalues, descending, of the symmetric matrix a (p×p row-major,
// upper triangle) to dst. It panics where a holds NaN or Inf: callers make a from finite
// numbers.
func Values(a []float64, p int, dst []float64, w *Work) {
	if p == 0 {
		return
	}
	r := &w.r
	if !r.load(a, p) {
		panic("symeig: " + errNotFinite.Error())
	}
	r.reduce(1)
	if !rootFree(r.d, r.e) {
		panic("symeig: " + errNoConvergence.Error())
	}
	slices.Sort(r.d)
	for i, v := range r.d {
		dst[p-1-i] = r.unscale(v)
	}
}

// Decompose returns the eigenvalues of the symmetric matrix a (p×p row-major, upper
// triangle), descending, and the eigenvectors as the columns of a p×p row-major matrix.
// It uses all cores. a is overwritten. An error says that a holds NaN or Inf, or that the
// iteration on a small tridiagonal matrix failed.
func Decompose(a []float64, p int) (values, vectors []float64, err error) {
	return DecomposeOn(runtime.GOMAXPROCS(0), a, p)
}

// DecomposeOn is Decompose on a number of threads, which the result does not depend on.
func DecomposeOn(threads int, a []float64, p int) (values, vectors []float64, err error) {
	if p == 0 {
		return nil, nil, nil
	}
	var r reduction
	if !r.load(a, p) {
		return nil, nil, errNotFinite
	}
	if p < leastShared {
		threads = 1
	}
	r.reduce(threads)
	c := conquest{p: p, d: r.d, e: r.e, rows: make([]float64, p*p), mix: make([]float64, p*p), held: a[:p*p]}
	if !c.solve(0, p, threads) {
		return nil, nil, errNoConvergence
	}
	r.turn(c.rows, a[:p*p], threads)
	order := make([]int, p)
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(i, j int) int { return cmpDescending(r.d[i], r.d[j]) })
	values = make([]float64, p)
	for i, o := range order {
		values[i] = r.unscale(r.d[o])
	}
	vectors = c.mix
	toColumns(vectors, c.rows, order, threads)
	return values, vectors, nil
}

// leastShared is the size from which several threads save time.
const leastShared = 128

func cmpDescending(a, b float64) int {
	switch {
	case a > b:
		return -1
	case a < b:
		return 1
	}
	return 0
}

// toColumns writes the rows in their order as columns of dst, in squares that fit the cache.
func toColumns(dst, rows []float64, order []int, threads int) {
	p := len(order)
	const side = 16
	share(threads, (p+side-1)/side, func(block int) {
		i0, i1 := block*side, min(p, block*side+side)
		for c0 := 0; c0 < p; c0 += side {
			c1 := min(p, c0+side)
			for c := c0; c < c1; c++ {
				row := rows[order[c]*p : order[c]*p+p]
				for i := i0; i < i1; i++ {
					dst[i*p+c] = row[i]
				}
			}
		}
	})
}

// unscale undoes the scaling of load.
func (r *reduction) unscale(v float64) float64 { return math.Ldexp(v, r.exponent) }
