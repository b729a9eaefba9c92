//go:build !purego

package kernel

// whole does 8 rows by at most 24 columns.
func (t *tile) whole(columns int) {
	if path == avx512 {
		last := (columns - 1) / stripColumns
		mask := lastMask(columns - last*stripColumns)
		c, left, right := &t.c[0], &t.left[0], &t.right[0]
		switch last {
		case 2:
			tile24AVX512(c, t.ldc*8, left, t.lane*8, t.step*8, right, t.strip*8, t.n, mask, t.chain)
		case 1:
			tile16AVX512(c, t.ldc*8, left, t.lane*8, t.step*8, right, t.strip*8, t.n, mask, t.chain)
		default:
			tile8AVX512(c, t.ldc*8, left, t.lane*8, t.step*8, right, t.strip*8, t.n, mask, t.chain)
		}
		return
	}
	u := *t
	for b := 0; b < columns; b += stripColumns {
		u.c, u.right = t.c[b:], t.right[b/stripColumns*t.strip:]
		if w := columns - b; w < stripColumns {
			u.ragged(tileRows, w)
		} else {
			u.square()
		}
	}
}

// square does 8 rows by 8 columns.
func (t *tile) square() {
	if path == avx512 {
		tile8AVX512(&t.c[0], t.ldc*8, &t.left[0], t.lane*8, t.step*8, &t.right[0], t.strip*8, t.n, lastMask(stripColumns), t.chain)
		return
	}
	for a := 0; a < tileRows; a += 4 {
		tile8AVX2(&t.c[a*t.ldc], t.ldc*8, &t.left[a*t.lane], t.lane*8, t.step*8, &t.right[0], t.n, t.chain)
	}
}

// pack copies x, n rows by p columns at distance ld, to strips; columns that fill up the
// last strip are zero and never reach a result.
func pack(dst, x []float64, ld, n, p, strip int) {
	if path != avx512 {
		packPlain(dst, x, ld, n, p, strip)
		return
	}
	for s := range strips(p) {
		j := s * stripColumns
		packAVX512(&dst[s*strip], &x[j], ld*8, n, lastMask(p-j))
	}
}

// lastMask has a bit for each column of a strip that begins columns before the end.
func lastMask(columns int) int { return 1<<min(columns, stripColumns) - 1 }

// Distances are in bytes.

//go:noescape
func packAVX512(dst, x *float64, ld, n, mask int)

//go:noescape
func tile24AVX512(c *float64, ldc int, left *float64, lane, step int, right *float64, strip, n, mask int, chain bool)

//go:noescape
func tile16AVX512(c *float64, ldc int, left *float64, lane, step int, right *float64, strip, n, mask int, chain bool)

//go:noescape
func tile8AVX512(c *float64, ldc int, left *float64, lane, step int, right *float64, strip, n, mask int, chain bool)

//go:noescape
func tile8AVX2(c *float64, ldc int, left *float64, lane, step int, right *float64, n int, chain bool)
