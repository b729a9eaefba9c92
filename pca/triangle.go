package pca

import (
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack/lapack64"
)

// triangle returns the upper triangular factor T of the QR decomposition of f, rows×p
// row-major with rows >= p, so that T'T = f'f. Householder reflections are column-wise
// backward stable: channels of very different scale do not disturb one another.
// f is overwritten.
func triangle(f []float64, rows, p int) []float64 {
	a := blas64.General{Rows: rows, Cols: p, Stride: p, Data: f}
	tau := make([]float64, p)
	work := make([]float64, 1)
	lapack64.Geqrf(a, tau, work, -1)
	work = make([]float64, int(work[0]))
	lapack64.Geqrf(a, tau, work, len(work))
	t := make([]float64, p*p)
	for i := range p {
		copy(t[i*p+i:(i+1)*p], f[i*p+i:(i+1)*p])
	}
	return t
}
