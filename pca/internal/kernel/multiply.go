package kernel

// Multiply sets dst (n×k) to x (n×p) times v (p×k), all row-major. Every element is a sum
// over the p columns in order, each one a fused multiply-add, from zero.
func Multiply(dst, x, v []float64, n, p, k int) {
	if path == plain || n < multiplyRows || p == 0 {
		multiplyPlain(dst, x, v, n, p, k)
		return
	}
	width := (k + multiplyColumns - 1) / multiplyColumns * multiplyColumns
	buffer := buffers.Get().(*[]float64)
	defer buffers.Put(buffer)
	if cap(*buffer) < p*width {
		*buffer = make([]float64, p*width)
	}
	packed := (*buffer)[:p*width]
	for j := range p {
		copy(packed[j*width:j*width+k], v[j*k:j*k+k])
		clear(packed[j*width+k : (j+1)*width])
	}
	var tile [multiplyRows * multiplyColumns]float64
	whole := n / multiplyRows * multiplyRows
	for r := 0; r < whole; r += multiplyRows {
		for a := 0; a < k; a += multiplyColumns {
			multiplyTile(&tile, &x[r*p], &packed[a], p, width)
			count := min(multiplyColumns, k-a)
			for b := range multiplyRows {
				copy(dst[(r+b)*k+a:(r+b)*k+a+count], tile[b*multiplyColumns:])
			}
		}
	}
	multiplyPlain(dst[whole*k:n*k], x[whole*p:n*p], v, n-whole, p, k)
}

// multiplyRows×multiplyColumns elements are kept in registers at a time.
const (
	multiplyRows    = 4
	multiplyColumns = 8
)
