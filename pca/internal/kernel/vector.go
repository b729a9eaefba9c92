package kernel

// dotLanes is how many sums a dot product is made of: part of its specification.
const dotLanes = 32

// Dot returns Σ a[i]·b[i] over the length of a. Product i goes to lane i mod 32, each lane
// being a sum from zero by fused multiply-adds in order; then lane l+16 is added to lane
// l, l+8 to l, l+4, l+2 and l+1.
func Dot(a, b []float64) float64 { return dot(a, b[:len(a)]) }

// Axpy adds alpha·x to y over the length of x, each element by one fused multiply-add.
func Axpy(alpha float64, x, y []float64) { axpy(alpha, x, y[:len(x)]) }

// Rotate turns the vectors x and y, of one length, in their plane: x becomes c·x + s·y and
// y becomes c·y - s·x; the product with s is rounded, that with c is fused.
func Rotate(x, y []float64, c, s float64) { rotate(x, y[:len(x)], c, s) }

// ColumnSums adds to sum, by column, the n rows of x (n×p) in order.
func ColumnSums(sum, x []float64, n, p int) { columnSums(sum[:p], x[:n*p], n, p) }

// CenterColumns sets dst to x - mean, row by row (both n×p); dst may be x.
func CenterColumns(dst, x, mean []float64, n, p int) {
	centerColumns(dst[:n*p], x[:n*p], mean[:p], n, p)
}
