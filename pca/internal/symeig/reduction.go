package symeig

import (
	"math"

	"axisfold/pca/internal/kernel"
)

// reduction takes a symmetric matrix to tridiagonal form, A = Q·T·Q'. Q = H_0·H_1·… with
// H_i = I - τ_i·v_i·v_i'; v_i is zero up to column i and then begins with 1.
type reduction struct {
	p, n, ld int       // n is p rounded up to whole groups of rows, ld the distance of rows
	exponent int       // A is 2^exponent times what is reduced
	a        []float64 // upper triangle; row i becomes v_i
	d, e     []float64 // diagonal and off-diagonal of T
	tau      []float64
	w        []float64 // see panel
	left     []float64
	right    []float64
	v        []float64
	factor   []float64
	sums     []float64 // see multiply
}

// load takes a copy of the upper triangle of a, with zeros up to whole groups, scaled by a
// power of two to numbers below 1 so that no square overflows, and says whether all numbers
// are finite.
func (r *reduction) load(a []float64, p int) bool {
	largest := 0.0
	for i := range p {
		for _, v := range a[i*p+i : i*p+p] {
			largest = max(largest, math.Abs(v)) // NaN stays
		}
	}
	if math.IsNaN(largest) || math.IsInf(largest, 0) {
		return false
	}
	_, r.exponent = math.Frexp(largest)
	first, second := math.Ldexp(1, -r.exponent/2), math.Ldexp(1, r.exponent/2-r.exponent)
	r.resize(p)
	for i := range p {
		row := r.a[i*r.ld : i*r.ld+r.n]
		clear(row[i/kernel.Group*kernel.Group : i])
		for j := i; j < p; j++ {
			row[j] = a[i*p+j] * first * second
		}
		clear(row[p:])
	}
	clear(r.a[p*r.ld:])
	return true
}

func (r *reduction) resize(p int) {
	r.p = p
	r.n = (p + kernel.Group - 1) / kernel.Group * kernel.Group
	r.ld = r.n | kernel.Group // an odd number of groups: rows do not compete for cache sets
	width := r.panelWidth()
	sliced := 0
	if r.n >= leastSliced {
		sliced = (productSlices - 1) * r.n
	}
	for _, part := range []struct {
		slice *[]float64
		size  int
	}{
		{&r.a, r.n * r.ld}, {&r.d, p}, {&r.e, p}, {&r.tau, p}, {&r.v, r.n}, {&r.factor, width}, {&r.sums, sliced},
		{&r.w, width * r.ld}, {&r.left, 2 * width * r.ld}, {&r.right, 2 * width * r.ld},
	} {
		if cap(*part.slice) < part.size {
			*part.slice = make([]float64, part.size)
		}
		*part.slice = (*part.slice)[:part.size]
	}
}

// panelWidth is how many rows are reduced before what lies below them is changed: more take
// more work inside the panel, and less memory traffic outside.
func (r *reduction) panelWidth() int {
	switch {
	case r.p < 150:
		return 8
	case r.p < 500:
		return 16
	}
	return 32
}

// reduce leaves T in d and e, the reflections in the rows of a and in tau.
func (r *reduction) reduce(threads int) {
	p, ld := r.p, r.ld
	width := r.panelWidth()
	for start := 0; start < p-2; start += width {
		end := min(start+width, p-2)
		for i := start; i < end; i++ {
			r.step(start, i, threads)
		}
		r.change(start, end, threads)
	}
	for i := max(0, p-2); i < p; i++ {
		r.d[i], r.tau[i] = r.a[i*ld+i], 0
		if i < p-1 {
			r.e[i] = r.a[i*ld+i+1]
		}
	}
}

// step reduces row i of the panel that begins at row start. The rows of w are such that
// the matrix after the reflections so far is A - Σ (v_k·w_k' + w_k·v_k').
func (r *reduction) step(start, i, threads int) {
	p, n, ld, k := r.p, r.n, r.ld, i-start
	row := r.a[i*ld : i*ld+n]
	panel, w := r.a[start*ld:], r.w
	r.addRows(row[i:n], func(q int) float64 { return -w[q*ld+i] }, panel[i:], k)
	r.addRows(row[i:n], func(q int) float64 { return -panel[q*ld+i] }, w[i:], k)
	r.d[i] = row[i]
	v := row[i+1 : p]
	r.e[i], r.tau[i] = reflect(v)
	tau := r.tau[i]
	group := (i + 1) / kernel.Group * kernel.Group
	y := w[k*ld : k*ld+n]
	clear(y[group:])
	if tau == 0 {
		return
	}
	clear(r.v[group : i+1])
	copy(r.v[i+1:n], row[i+1:n])
	r.multiply(y, group, threads)
	r.addRows(y[i+1:n], func(q int) float64 { return -kernel.Dot(v, w[q*ld+i+1:q*ld+p]) }, panel[i+1:], k)
	r.addRows(y[i+1:n], func(q int) float64 { return -kernel.Dot(v, panel[q*ld+i+1:q*ld+p]) }, w[i+1:], k)
	y = y[i+1 : p]
	for j := range y {
		y[j] *= tau
	}
	kernel.Axpy(-tau/2*kernel.Dot(y, v), v, y)
}

// addRows adds to y the first k rows, each times its factor.
func (r *reduction) addRows(y []float64, factor func(q int) float64, rows []float64, k int) {
	for q := range k {
		r.factor[q] = factor(q)
	}
	if k > 0 {
		kernel.AddMultiply(y, len(y), r.factor, k, rows, r.ld, 1, k, len(y))
	}
}

// multiply adds to y the product of the matrix below row from and v. Large matrices are
// cut into slices of rows, as many on one thread as on several, so that the sums are too.
func (r *reduction) multiply(y []float64, from, threads int) {
	n := r.n
	if n-from < leastSliced {
		kernel.AddSymmetricMultiply(y, r.a, r.ld, r.v, from, n, n)
		return
	}
	share(threads, productSlices, func(i int) {
		sum := y
		if i > 0 {
			sum = r.sums[(i-1)*n : i*n]
			clear(sum[from:])
		}
		kernel.AddSymmetricMultiply(sum, r.a, r.ld, r.v, cut(from, n, i), cut(from, n, i+1), n)
	})
	for i := range productSlices - 1 {
		kernel.Axpy(1, r.sums[i*n+from:(i+1)*n], y[from:])
	}
}

const (
	productSlices = 4
	leastSliced   = 768 // rows of a product worth starting a goroutine
)

// cut returns the first row of slice i of the triangle from row from to n; all slices have
// nearly the same number of elements.
func cut(from, n, i int) int {
	above := float64(n-from) * (1 - math.Sqrt(1-float64(i)/productSlices))
	return from + int(above)/kernel.Group*kernel.Group
}

// change applies the reflections of the panel to the rows below it.
func (r *reduction) change(start, end, threads int) {
	n, ld, k := r.n, r.ld, end-start
	for q := range k {
		v, w := r.a[(start+q)*ld:(start+q)*ld+n], r.w[q*ld:q*ld+n]
		copy(r.right[q*ld+end:q*ld+n], w[end:])
		copy(r.right[(k+q)*ld+end:(k+q)*ld+n], v[end:])
		for j := end; j < n; j++ {
			r.left[q*ld+j], r.left[(k+q)*ld+j] = -v[j], -w[j]
		}
	}
	if threads == 1 { // a function that share could hand to a goroutine takes memory
		kernel.AddUpperProduct(r.a, ld, r.left, r.right, ld, 2*k, end, n, n)
		return
	}
	const band = 128
	share(threads, (n-end+band-1)/band, func(b int) {
		from := end + b*band
		kernel.AddUpperProduct(r.a, ld, r.left, r.right, ld, 2*k, from, min(n, from+band), n)
	})
}

// reflect finds H = I - τ·v·v' with v[0] = 1 that takes x to (β, 0, 0, …), and overwrites x
// with v. β has the sign opposite to x[0], so that nothing cancels.
func reflect(x []float64) (beta, tau float64) {
	rest := kernel.Dot(x[1:], x[1:])
	square := x[0]*x[0] + rest
	if square < tiny {
		return reflectTiny(x)
	}
	alpha := x[0]
	if rest == 0 {
		x[0] = 1
		return alpha, 0
	}
	beta = -math.Copysign(math.Sqrt(square), alpha)
	f := 1 / (alpha - beta)
	for i := range x {
		x[i] *= f
	}
	x[0] = 1
	return beta, (beta - alpha) / beta
}

// tiny is so far above the smallest normal number that squares which fall below that do
// not count beside it.
const tiny = 0x1p-900

// reflectTiny does reflect on x scaled up.
func reflectTiny(x []float64) (beta, tau float64) {
	largest := 0.0
	for _, v := range x {
		largest = max(largest, math.Abs(v))
	}
	if largest == 0 {
		x[0] = 1
		return 0, 0
	}
	_, exponent := math.Frexp(largest)
	for i, v := range x {
		x[i] = math.Ldexp(v, -exponent)
	}
	beta, tau = reflect(x)
	return math.Ldexp(beta, exponent), tau
}
