// Package symeig solves the symmetric eigenproblem: [Values] for eigenvalues alone, again
// and again without new memory, [Decompose] for eigenvalues and eigenvectors.
package symeig

import (
	"errors"
	"math"
	"slices"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack"
	"gonum.org/v1/gonum/lapack/lapack64"
)

// Work is scratch space for Values, kept between calls; one per goroutine.
type Work struct{ work []float64 }

// Values writes the p eigenvalues, descending, of the symmetric matrix a (p×p row-major,
// upper triangle) to dst. a is overwritten. It panics where a holds NaN or Inf: callers
// make a from finite numbers.
func Values(a []float64, p int, dst []float64, w *Work) {
	if p == 0 {
		return
	}
	s := blas64.Symmetric{N: p, Stride: p, Data: a, Uplo: blas.Upper}
	if need := 35 * p; cap(w.work) < need { // block size 32 and a little more
		w.work = make([]float64, need)
	}
	if !lapack64.Syev(lapack.EVNone, s, dst[:p], w.work, cap(w.work)) {
		panic("symeig: no convergence")
	}
	slices.Reverse(dst[:p])
}

// Decompose returns the eigenvalues of the symmetric matrix a (p×p row-major, upper
// triangle), descending, and the eigenvectors as the columns of a p×p row-major matrix.
// a is overwritten.
func Decompose(a []float64, p int) (values, vectors []float64, err error) {
	if p == 0 {
		return nil, nil, nil
	}
	for i := range p {
		for _, v := range a[i*p+i : (i+1)*p] {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return nil, nil, errors.New("the matrix holds a number that is not finite")
			}
		}
	}
	s := blas64.Symmetric{N: p, Stride: p, Data: a, Uplo: blas.Upper}
	values = make([]float64, p)
	query := make([]float64, 1)
	lapack64.Syev(lapack.EVCompute, s, values, query, -1)
	work := make([]float64, int(query[0]))
	if !lapack64.Syev(lapack.EVCompute, s, values, work, len(work)) {
		return nil, nil, errors.New("the eigenvalues did not converge")
	}
	slices.Reverse(values)
	for i := range p {
		slices.Reverse(a[i*p : (i+1)*p])
	}
	return values, a, nil
}
