//go:build !amd64 || purego

package kernel

func best() way { return plain }

func (t *tile) whole(int) { panic("kernel: no assembly on this machine") }
func (t *tile) square()   { panic("kernel: no assembly on this machine") }

func pack(dst, x []float64, ld, n, p, strip int) { packPlain(dst, x, ld, n, p, strip) }

func dot(a, b []float64) float64                     { return dotPlain(a, b) }
func axpy(alpha float64, x, y []float64)             { axpyPlain(alpha, x, y) }
func rotate(x, y []float64, c, s float64)            { rotatePlain(x, y, c, s) }
func columnSums(sum, x []float64, n, p int)          { columnSumsPlain(sum, x, n, p, 0) }
func centerColumns(dst, x, mean []float64, n, p int) { centerColumnsPlain(dst, x, mean, n, p, 0) }

func combine(y, u, v []float64, ldv int) { combinePlain(y, u, v, ldv) }

func symmetricMultiply(y, a []float64, ld int, v []float64, from, to, n int) {
	symmetricMultiplyPlain(y, a, ld, v, from, to, n)
}
