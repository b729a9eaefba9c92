package kernel

import "math"

// addCrossProductsPlain is the specification of AddCrossProducts.
func addCrossProductsPlain(c, x []float64, n, p int) {
	sums := make([]float64, p)
	for start := 0; start < n; start += panelRows {
		end := min(start+panelRows, n)
		for i := range p {
			row := sums[:p-i]
			clear(row)
			for r := start; r < end; r++ {
				v := x[r*p+i]
				for b, w := range x[r*p+i : r*p+p] {
					row[b] = math.FMA(v, w, row[b])
				}
			}
			target := c[i*p+i : i*p+p]
			for b, v := range row {
				target[b] += v
			}
		}
	}
}

// multiplyPlain is the specification of Multiply.
func multiplyPlain(dst, x, v []float64, n, p, k int) {
	for r := range n {
		out := dst[r*k : r*k+k]
		clear(out)
		for j, w := range x[r*p : r*p+p] {
			for a, u := range v[j*k : j*k+k] {
				out[a] = math.FMA(w, u, out[a])
			}
		}
	}
}
