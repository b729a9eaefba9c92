package kernel

import "math"

// Dot returns Σ a[i]·b[i]: four sums of every fourth product, each by fused multiply-adds
// in order, added as (s0+s1)+(s2+s3); what is left over follows in order.
func Dot(a, b []float64) float64 {
	b = b[:len(a)]
	var s0, s1, s2, s3 float64
	i := 0
	for ; i+4 <= len(a); i += 4 {
		s0 = math.FMA(a[i], b[i], s0)
		s1 = math.FMA(a[i+1], b[i+1], s1)
		s2 = math.FMA(a[i+2], b[i+2], s2)
		s3 = math.FMA(a[i+3], b[i+3], s3)
	}
	sum := (s0 + s1) + (s2 + s3)
	for ; i < len(a); i++ {
		sum = math.FMA(a[i], b[i], sum)
	}
	return sum
}

// Axpy adds alpha·x to y, each element by one fused multiply-add.
func Axpy(alpha float64, x, y []float64) {
	y = y[:len(x)]
	for i, v := range x {
		y[i] = math.FMA(alpha, v, y[i])
	}
}

// ColumnSums adds to sum, by column, the n rows of x (n×p) in order.
func ColumnSums(sum, x []float64, n, p int) {
	sum = sum[:p]
	for r := range n {
		row := x[r*p : r*p+p]
		for j, v := range row {
			sum[j] += v
		}
	}
}

// CenterColumns sets dst to x - mean, row by row; dst may be x.
func CenterColumns(dst, x, mean []float64, n, p int) {
	mean = mean[:p]
	for r := range n {
		from, to := x[r*p:r*p+p], dst[r*p:r*p+p]
		for j, v := range from {
			to[j] = v - mean[j]
		}
	}
}
