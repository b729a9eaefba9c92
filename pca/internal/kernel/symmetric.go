package kernel

import "math"

// Group is what the sizes of AddSymmetricMultiply are multiples of.
const Group = 8

// AddSymmetricMultiply adds to y the product of v and that part of a symmetric matrix
// which its rows from..to-1 hold right of the diagonal, on it and, mirrored, below it. The
// matrix has n columns; a is its upper triangle, row-major, rows ld numbers apart; from,
// to and n are multiples of 8. From row 0 to n it is the whole product, in one pass over
// the triangle.
//
// Rows come in groups of 8. For row i of the group that begins at g: first y[j] takes
// a[i,j]·v[i] for j > i by one fused multiply-add each; the sum of a[i,j]·v[j], j >= i,
// is kept in lanes (j-g) mod 8 from zero, each by fused multiply-adds in order; lane l+4
// is added to l, l+2 to l and l+1 to l; the eight sums are added to y after the group.
func AddSymmetricMultiply(y, a []float64, ld int, v []float64, from, to, n int) {
	if from%Group+to%Group+n%Group != 0 || from > to || to > n {
		panic("kernel: rows and columns must be whole groups")
	}
	if from < to {
		symmetricMultiply(y[:n], a[:(to-1)*ld+n], ld, v[:n], from, to, n)
	}
}

// symmetricMultiplyPlain is the specification of AddSymmetricMultiply.
func symmetricMultiplyPlain(y, a []float64, ld int, v []float64, from, to, n int) {
	for g := from; g < to; g += Group {
		var lanes [Group * Group]float64
		addGroup(&lanes, y, a, ld, v, g, n)
		finishGroup(&lanes, y[g:])
	}
}

// addGroup does the columns of a group of rows up to n.
func addGroup(lanes *[Group * Group]float64, y, a []float64, ld int, v []float64, g, n int) {
	for r := range Group {
		i := g + r
		row := a[i*ld : i*ld+n]
		for j := i; j < n; j++ {
			lane := r*Group + (j-g)%Group
			lanes[lane] = math.FMA(row[j], v[j], lanes[lane])
		}
		axpyPlain(v[i], row[i+1:], y[i+1:n])
	}
}

// finishGroup adds up the lanes of eight sums and adds these to y.
func finishGroup(lanes *[Group * Group]float64, y []float64) {
	for r := range Group {
		s := lanes[r*Group : (r+1)*Group]
		y[r] += ((s[0] + s[4]) + (s[2] + s[6])) + ((s[1] + s[5]) + (s[3] + s[7]))
	}
}

// AddUpperProduct adds to the upper triangle of c (p columns, row-major, rows ldc numbers
// apart) the product of the transpose of left and of right, both n×p with rows ld numbers
// apart, in rows from..to-1: c[i,j] += Σ_r left[r,i]·right[r,j] for j >= i. Every element
// goes on from its present value over r in order, each one a fused multiply-add. Up to seven
// elements before the diagonal of every row, but none before column from, may be
// overwritten.
func AddUpperProduct(c []float64, ldc int, left, right []float64, ld, n, from, to, p int) {
	if from >= to || n == 0 {
		return
	}
	if path == plain {
		addUpperProductPlain(c, ldc, left, right, ld, n, from, to, p)
		return
	}
	strip := min(n, depth) * stripColumns
	l, r := buffer(strips(to-from)*strip), buffer(strips(p-from)*strip)
	defer buffers.Put(l)
	defer buffers.Put(r)
	for k := 0; k < n; k += depth {
		steps := min(depth, n-k)
		pack(*l, left[k*ld+from:], ld, steps, to-from, strip)
		pack(*r, right[k*ld+from:], ld, steps, p-from, strip)
		t := tile{ldc: ldc, lane: 1, step: stripColumns, strip: strip, n: steps, chain: true}
		for i := from; i < to; i += tileRows {
			s := (i - from) / stripColumns * strip
			t.c, t.left, t.right = c[i*ldc+i:], (*l)[s:], (*r)[s:]
			t.band(min(tileRows, to-i), p-i)
		}
	}
}

// addUpperProductPlain is the specification of AddUpperProduct.
func addUpperProductPlain(c []float64, ldc int, left, right []float64, ld, n, from, to, p int) {
	for i := from; i < to; i++ {
		for r := range n {
			axpyPlain(left[r*ld+i], right[r*ld+i:r*ld+p], c[i*ldc+i:i*ldc+p])
		}
	}
}
