package stability

import (
	"math"

	"gonum.org/v1/gonum/mat"

	"axisfold/pca"
	"axisfold/pca/internal/kernel"
	"axisfold/pca/internal/symeig"
)

// aligner lays the vectors of replicates beside those of the whole. It holds scratch
// space: one per goroutine.
type aligner struct {
	p, k      int
	c         int       // components compared: k and the next, where there is one
	reference []float64 // p×c
	leading   []float64 // p×c of the replicate
	products  []float64 // c×c: V_b'V
	aligned   aligned
	work      symeig.Work
}

// aligned is what one replicate tells; valid until the next.
type aligned struct {
	partner    []int     // c: the replicate's component for each of the whole
	congruence []float64 // c: |v_b'v| with the partner
	angle      float64   // radians
	loadings   []float64 // p×k
}

func newAligner(whole *pca.Decomposition, k int) *aligner {
	p, c := whole.Width(), min(k+1, whole.Components())
	a := &aligner{p: p, k: k, c: c, reference: make([]float64, p*c), leading: make([]float64, p*c), products: make([]float64, c*c)}
	a.aligned = aligned{congruence: make([]float64, c), loadings: make([]float64, p*k)}
	for j := range p {
		for i := range c {
			a.reference[j*c+i] = whole.Vector(j, i)
		}
	}
	return a
}

// to aligns the leading columns of vectors, p×p row-major.
func (a *aligner) to(values, vectors []float64) *aligned {
	p, c, k := a.p, a.c, a.k
	clear(a.products)
	for j := range p {
		row := a.leading[j*c : (j+1)*c]
		copy(row, vectors[j*p:])
		for i, v := range row {
			kernel.Axpy(v, a.reference[j*c:(j+1)*c], a.products[i*c:(i+1)*c])
		}
	}
	gain := make([]float64, c*c) // whole by replicate
	for i := range c {
		for l := range c {
			gain[i*c+l] = math.Abs(a.products[l*c+i])
		}
	}
	a.aligned.partner = assign(gain, c)
	for i, l := range a.aligned.partner {
		a.aligned.congruence[i] = math.Min(gain[i*c+l], 1)
	}
	square := mat.NewDense(k, k, nil)
	for i := range k {
		for l := range k {
			square.Set(i, l, a.products[i*c+l])
		}
	}
	var svd mat.SVD
	if !svd.Factorize(square, mat.SVDFull) {
		panic("stability: singular value decomposition of finite numbers did not converge")
	}
	cosines := svd.Values(nil)
	a.aligned.angle = a.angle(cosines[k-1])
	var u, w, q mat.Dense
	svd.UTo(&u)
	svd.VTo(&w)
	q.Mul(&u, w.T())
	a.turn(values, &q)
	return &a.aligned
}

// angle returns the largest principal angle, radians (Björck & Golub 1973, Math. Comp.
// 27:579): from the largest sine, the norm of V_b - V(V'V_b), while that is the accurate
// one, else from the smallest cosine.
func (a *aligner) angle(cosine float64) float64 {
	c, k := a.c, a.k
	gram := make([]float64, k*k)
	rest := make([]float64, k)
	for j := range a.p {
		reference := a.reference[j*c : j*c+k]
		for i := range rest {
			rest[i] = a.leading[j*c+i] - kernel.Dot(reference, a.products[i*c:i*c+k])
		}
		for i, v := range rest {
			kernel.Axpy(v, rest, gram[i*k:(i+1)*k])
		}
	}
	squares := make([]float64, k)
	symeig.Values(gram, k, squares, &a.work)
	sine := math.Sqrt(math.Max(squares[0], 0))
	if sine < math.Sqrt2/2 {
		return math.Asin(sine)
	}
	return math.Acos(math.Min(cosine, 1))
}

// turn writes V_b·Q with every column times the root of the variance along it, q'Λq.
func (a *aligner) turn(values []float64, q *mat.Dense) {
	k := a.k
	for l := range k {
		variance := 0.0
		for i := range k {
			variance += q.At(i, l) * q.At(i, l) * values[i]
		}
		root := math.Sqrt(variance)
		for j := range a.p {
			sum := 0.0
			for i := range k {
				sum += a.leading[j*a.c+i] * q.At(i, l)
			}
			a.aligned.loadings[j*k+l] = sum * root
		}
	}
}
