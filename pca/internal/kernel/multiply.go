package kernel

// Multiply sets dst (n×k) to x (n×p) times v (p×k), all row-major. Every element is a sum
// over the p columns in order, each one a fused multiply-add, from zero.
func Multiply(dst, x, v []float64, n, p, k int) {
	clear(dst[:n*k])
	AddMultiply(dst, k, x, p, v, k, n, p, k)
}

// AddMultiply adds to dst (n×k) the product of x (n×p) and v (p×k), all row-major; rows of
// dst, x and v begin ldd, ldx and ldv numbers apart. Every element goes on from its
// present value over the p columns in order, each one a fused multiply-add. dst must not
// overlap the others.
func AddMultiply(dst []float64, ldd int, x []float64, ldx int, v []float64, ldv int, n, p, k int) {
	switch {
	case n == 0 || p == 0 || k == 0:
	case path == plain:
		addMultiplyPlain(dst, ldd, x, ldx, v, ldv, n, p, k)
	case n < leastRows:
		addMultiplyRows(dst, ldd, x, ldx, v, ldv, n, p, k)
	default:
		addMultiplyTiles(dst, ldd, x, ldx, v, ldv, n, p, k)
	}
}

// leastRows of dst are worth a packed copy of v.
const leastRows = 4

// addMultiplyRows takes dst row by row, with no copy of v.
func addMultiplyRows(dst []float64, ldd int, x []float64, ldx int, v []float64, ldv int, n, p, k int) {
	for r := range n {
		combine(dst[r*ldd:r*ldd+k], x[r*ldx:r*ldx+p], v, ldv)
	}
}

// depth is how many columns of x, and groupColumns how many of v, are taken at a time:
// the sums in dst go on from where they were, so this does not change them.
const depth = 256

func addMultiplyTiles(dst []float64, ldd int, x []float64, ldx int, v []float64, ldv int, n, p, k int) {
	packed := buffer(strips(min(k, groupColumns)) * min(p, depth) * stripColumns)
	defer buffers.Put(packed)
	last := buffer(tileRows * depth)
	defer buffers.Put(last)
	for j := 0; j < p; j += depth {
		steps := min(depth, p-j)
		strip := steps * stripColumns
		for b := 0; b < k; b += groupColumns {
			columns := min(groupColumns, k-b)
			pack(*packed, v[j*ldv+b:], ldv, steps, columns, strip)
			t := tile{right: *packed, strip: strip, n: steps, ldc: ldd, lane: ldx, step: 1, chain: true}
			for r := 0; r < n; r += tileRows {
				rows := min(tileRows, n-r)
				t.c, t.left = dst[r*ldd+b:], x[r*ldx+j:]
				if rows < tileRows { // there may be no memory behind the last rows
					t.left, t.lane = *last, depth
					for a := range rows {
						copy(t.left[a*depth:], x[(r+a)*ldx+j:(r+a)*ldx+j+steps])
					}
				}
				t.band(rows, columns)
			}
		}
	}
}
