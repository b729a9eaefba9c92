package kernel

import "math"

// addCrossProductsPlain is the specification of AddCrossProducts.
func addCrossProductsPlain(c, x []float64, n, p int) {
	buffer := buffer(p)
	defer buffers.Put(buffer)
	for start := 0; start < n; start += panelRows {
		end := min(start+panelRows, n)
		for i := range p {
			row := (*buffer)[:p-i]
			clear(row)
			for r := start; r < end; r++ {
				axpyPlain(x[r*p+i], x[r*p+i:r*p+p], row)
			}
			target := c[i*p+i : i*p+p]
			for b, v := range row {
				target[b] += v
			}
		}
	}
}

// addMultiplyPlain is the specification of AddMultiply.
func addMultiplyPlain(dst []float64, ldd int, x []float64, ldx int, v []float64, ldv int, n, p, k int) {
	for r := range n {
		combinePlain(dst[r*ldd:r*ldd+k], x[r*ldx:r*ldx+p], v, ldv)
	}
}

// combinePlain is the specification of combine.
func combinePlain(y, u, v []float64, ldv int) {
	for j, w := range u {
		axpyPlain(w, v[j*ldv:j*ldv+len(y)], y)
	}
}

// dotPlain is the specification of Dot.
func dotPlain(a, b []float64) float64 {
	var lanes [dotLanes]float64
	return finishDot(&lanes, a, b)
}

// finishDot adds the products of a and b, in turn from lane 0, and then the lanes.
func finishDot(lanes *[dotLanes]float64, a, b []float64) float64 {
	for ; len(a) >= dotLanes; a, b = a[dotLanes:], b[dotLanes:] {
		u, v := (*[dotLanes]float64)(a), (*[dotLanes]float64)(b)
		for l := range lanes {
			lanes[l] = math.FMA(u[l], v[l], lanes[l])
		}
	}
	b = b[:len(a)]
	for l, v := range a {
		lanes[l] = math.FMA(v, b[l], lanes[l])
	}
	for half := dotLanes / 2; half > 0; half /= 2 {
		for l := range half {
			lanes[l] += lanes[l+half]
		}
	}
	return lanes[0]
}

// axpyPlain is the specification of Axpy.
func axpyPlain(alpha float64, x, y []float64) {
	y = y[:len(x)]
	for i, v := range x {
		y[i] = math.FMA(alpha, v, y[i])
	}
}

// rotatePlain is the specification of Rotate. The conversions keep the compiler from
// fusing what is rounded twice here.
func rotatePlain(x, y []float64, c, s float64) {
	y = y[:len(x)]
	for i, u := range x {
		v := y[i]
		x[i] = math.FMA(c, u, float64(s*v))
		y[i] = math.FMA(c, v, -float64(s*u))
	}
}

// columnSumsPlain is the specification of ColumnSums, from column j on.
func columnSumsPlain(sum, x []float64, n, p, j int) {
	sum = sum[j:p]
	for r := range n {
		for a, v := range x[r*p+j : r*p+p] {
			sum[a] += v
		}
	}
}

// centerColumnsPlain is the specification of CenterColumns, from column j on.
func centerColumnsPlain(dst, x, mean []float64, n, p, j int) {
	mean = mean[j:p]
	for r := range n {
		to := dst[r*p+j : r*p+p]
		for a, v := range x[r*p+j : r*p+p] {
			to[a] = v - mean[a]
		}
	}
}
