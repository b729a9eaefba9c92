//go:build !purego

package kernel

func symmetricMultiply(y, a []float64, ld int, v []float64, from, to, n int) {
	switch path {
	case avx512:
		symmetricMultiplyAVX512(&y[from], &a[from*ld+from], ld*8, &v[from], (to-from)/Group, (n-from)/Group)
	case avx2:
		for g := from; g < to; g += Group {
			var lanes [Group * Group]float64
			right := g + Group
			addGroup(&lanes, y, a, ld, v, g, right)
			for r := 0; r < Group && right < n; r += 4 {
				four := (*[4 * Group]float64)(lanes[r*Group:])
				fourRowsAVX2(four, &y[right], &a[(g+r)*ld+right], ld*8, &v[g+r], &v[right], (n-right)/Group)
			}
			finishGroup(&lanes, y[g:])
		}
	default:
		symmetricMultiplyPlain(y, a, ld, v, from, to, n)
	}
}

// combine adds to y, one row of k numbers, the rows of v times the numbers of u.
func combine(y, u, v []float64, ldv int) {
	if path != avx512 {
		combinePlain(y, u, v, ldv)
		return
	}
	for j := 0; j < len(y); j += 32 {
		combineAVX512(&y[j], &u[0], &v[j], ldv*8, len(u), min(32, len(y)-j))
	}
}

// Distances are in bytes; rows, columns and chunks, counted in groups of 8 except for the
// up to 32 columns of combineAVX512, are above 0.

//go:noescape
func symmetricMultiplyAVX512(y, a *float64, ld int, v *float64, rows, columns int)

//go:noescape
func fourRowsAVX2(lanes *[4 * Group]float64, y, a *float64, ld int, u, v *float64, chunks int)

//go:noescape
func combineAVX512(y, u, a *float64, ld, rows, columns int)
