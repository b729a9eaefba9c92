package kernel

const (
	stripColumns = 8  // columns of a packed strip
	tileColumns  = 24 // three strips: with 8 rows, 24 of the 32 registers of AVX-512
	tileRows     = 8
)

// tile adds to c, at most 8 rows of width ldc, the product of a left and a right factor
// over n steps. Number a of step k of the left factor is left[a·lane+k·step]; the right
// factor is packed: number b of step k of strip s is right[s·strip+k·8+b].
type tile struct {
	c          []float64
	ldc        int
	left       []float64
	lane, step int
	right      []float64
	strip      int
	n          int
	chain      bool // sums go on from c, instead of starting at zero and being added to c
}

// band does rows (at most 8) by any number of columns.
func (t *tile) band(rows, columns int) {
	width := tileColumns
	if rows < tileRows {
		width = stripColumns
	}
	u := *t
	for b := 0; b < columns; b += width {
		u.c, u.right = t.c[b:], t.right[b/stripColumns*t.strip:]
		if w := min(width, columns-b); rows == tileRows {
			u.whole(w)
		} else {
			u.ragged(rows, w)
		}
	}
}

// ragged does fewer than 8 rows or columns, on a copy of c that has 8 of both.
func (t *tile) ragged(rows, columns int) {
	var copied [tileRows * stripColumns]float64
	for a := range rows {
		copy(copied[a*stripColumns:], t.c[a*t.ldc:a*t.ldc+columns])
	}
	u := *t
	u.c, u.ldc = copied[:], stripColumns
	u.square()
	for a := range rows {
		copy(t.c[a*t.ldc:a*t.ldc+columns], copied[a*stripColumns:])
	}
}

// packPlain is the specification of pack.
func packPlain(dst, x []float64, ld, n, p, strip int) {
	whole := p / stripColumns
	for r := range n {
		row := x[r*ld : r*ld+p]
		for s := range whole {
			*(*[stripColumns]float64)(dst[s*strip+r*stripColumns:]) = *(*[stripColumns]float64)(row[s*stripColumns:])
		}
		if rest := row[whole*stripColumns:]; len(rest) > 0 {
			last := (*[stripColumns]float64)(dst[whole*strip+r*stripColumns:])
			*last = [stripColumns]float64{}
			copy(last[:], rest)
		}
	}
}

// strips is how many strips p columns need.
func strips(p int) int { return (p + stripColumns - 1) / stripColumns }
