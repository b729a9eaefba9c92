//go:build !purego

package kernel

func dot(a, b []float64) float64 {
	switch {
	case path == avx512 && len(a) > 0:
		return dotAVX512(&a[0], &b[0], len(a))
	case path == avx2 && len(a) >= dotLanes:
		var lanes [dotLanes]float64
		groups := len(a) / dotLanes
		dotAVX2(&lanes, &a[0], &b[0], groups)
		return finishDot(&lanes, a[groups*dotLanes:], b[groups*dotLanes:])
	}
	return dotPlain(a, b)
}

func axpy(alpha float64, x, y []float64) {
	switch {
	case path == avx512 && len(x) > 0:
		axpyAVX512(alpha, &x[0], &y[0], len(x))
		return
	case path == avx2 && len(x) >= 4:
		axpyAVX2(alpha, &x[0], &y[0], len(x)/4)
		x, y = x[len(x)/4*4:], y[len(x)/4*4:]
	}
	axpyPlain(alpha, x, y)
}

func rotate(x, y []float64, c, s float64) {
	switch {
	case path == avx512 && len(x) > 0:
		rotateAVX512(&x[0], &y[0], len(x), c, s)
		return
	case path == avx2 && len(x) >= 4:
		rotateAVX2(&x[0], &y[0], len(x)/4, c, s)
		x, y = x[len(x)/4*4:], y[len(x)/4*4:]
	}
	rotatePlain(x, y, c, s)
}

func columnSums(sum, x []float64, n, p int) {
	j := 0
	if n > 0 {
		switch path {
		case avx512:
			for ; j < p; j += 32 {
				columnSumsAVX512(&sum[j], &x[j], n, p*8, min(32, p-j))
			}
			return
		case avx2:
			for ; j+16 <= p; j += 16 {
				columnSumsAVX2(&sum[j], &x[j], n, p*8)
			}
		}
	}
	columnSumsPlain(sum, x, n, p, j)
}

func centerColumns(dst, x, mean []float64, n, p int) {
	j := 0
	if n > 0 {
		switch path {
		case avx512:
			for ; j < p; j += 32 {
				centerColumnsAVX512(&dst[j], &x[j], &mean[j], n, p*8, min(32, p-j))
			}
			return
		case avx2:
			for ; j+16 <= p; j += 16 {
				centerColumnsAVX2(&dst[j], &x[j], &mean[j], n, p*8)
			}
		}
	}
	centerColumnsPlain(dst, x, mean, n, p, j)
}

// Distances are in bytes; n, groups and columns are above 0, columns at most 32.

//go:noescape
func dotAVX512(a, b *float64, n int) float64

//go:noescape
func dotAVX2(lanes *[dotLanes]float64, a, b *float64, groups int)

//go:noescape
func axpyAVX512(alpha float64, x, y *float64, n int)

//go:noescape
func axpyAVX2(alpha float64, x, y *float64, groups int)

//go:noescape
func rotateAVX512(x, y *float64, n int, c, s float64)

//go:noescape
func rotateAVX2(x, y *float64, groups int, c, s float64)

//go:noescape
func columnSumsAVX512(sum, x *float64, n, stride, columns int)

//go:noescape
func columnSumsAVX2(sum, x *float64, n, stride int)

//go:noescape
func centerColumnsAVX512(dst, x, mean *float64, n, stride, columns int)

//go:noescape
func centerColumnsAVX2(dst, x, mean *float64, n, stride int)
