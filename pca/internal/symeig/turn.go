package symeig

import "axisfold/pca/internal/kernel"

// blockWidth reflections are applied at a time, as I - V·T·V' (Schreiber and Van Loan 1989,
// SIAM J. Sci. Stat. Comput. 10, 53-57).
const blockWidth = 48

// block is the reflections of rows start..start+width-1 of a reduction. All rows of V' are
// taken from column start+1 on.
type block struct {
	start, width int
	across       []float64 // V, one row per column of the matrix
	factor       []float64 // -T', width×width
}

// turn takes eigenvectors of T, the rows of a p×p matrix, to those of the reduced matrix.
// scratch holds p² numbers.
func (r *reduction) turn(rows, scratch []float64, threads int) {
	p := r.p
	count := (max(p-2, 0) + blockWidth - 1) / blockWidth
	if count == 0 {
		return
	}
	blocks := make([]block, count)
	for i := range blocks {
		b := &blocks[i]
		b.start = i * blockWidth
		b.width = min(blockWidth, p-2-b.start)
		size := (p - b.start - 1) * b.width
		b.across, scratch = scratch[:size], scratch[size:]
	}
	share(threads, count, func(i int) { r.prepare(&blocks[i]) })
	const band = 64
	share(threads, (p+band-1)/band, func(i int) {
		from := i * band
		n := min(band, p-from)
		along, turned := make([]float64, n*blocks[0].width), make([]float64, n*blocks[0].width)
		for i := count - 1; i >= 0; i-- {
			b := &blocks[i]
			k, left := b.width, b.start+1
			part := rows[from*p+left:]
			clear(along[:n*k])
			kernel.AddMultiply(along, k, part, p, b.across, k, n, p-left, k)
			kernel.Multiply(turned, along, b.factor, n, k, k)
			kernel.AddMultiply(part, p, turned, k, r.a[b.start*r.ld+left:], r.ld, n, k, p-left)
		}
	})
}

// prepare clears what lies before the reflections in their rows, and finds T: column i is
// -τ_i·T·V'·v_i above τ_i.
func (r *reduction) prepare(b *block) {
	p, ld, k, left := r.p, r.ld, b.width, b.start+1
	row := func(i int) []float64 { return r.a[(b.start+i)*ld+left : (b.start+i)*ld+p] }
	t := make([]float64, k*k)
	for i := range k {
		v := row(i)
		clear(v[:i])
		for j, x := range v {
			b.across[j*k+i] = x
		}
		tau := r.tau[b.start+i]
		dots := make([]float64, i)
		for q := range dots {
			dots[q] = -tau * kernel.Dot(row(q), v)
		}
		for q := range dots {
			t[q*k+i] = kernel.Dot(t[q*k+q:q*k+i], dots[q:])
		}
		t[i*k+i] = tau
	}
	b.factor = make([]float64, k*k)
	for i := range k {
		for j := range k {
			b.factor[i*k+j] = -t[j*k+i]
		}
	}
}
