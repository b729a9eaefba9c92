package kernel

// panelRows is how many rows are summed from zero before they are added to the result:
// part of the specification, because it decides how sums are rounded.
const panelRows = 256

// groupColumns of a packed panel, half a megabyte, stay in the second-level cache while
// all bands of rows above them are done.
const groupColumns = 240

// AddCrossProducts adds to the upper triangle of c, p×p row-major, the cross-products of
// the n rows of x (n×p): c[i,j] += Σ_r x[r,i]·x[r,j] for j >= i. Rows are taken in panels
// of 256; within a panel a sum starts at zero and each row is one fused multiply-add, in
// order; the sum of the panel is then added to c. The lower triangle may be overwritten.
//
// With u = 2^-53 the error of an element is at most (256 + n/256 + 1)·u·Σ_r |x[r,i]·x[r,j]|
// to first order, beside that of c itself (Higham 2002, Accuracy and Stability of
// Numerical Algorithms, 2nd ed., section 3.1).
func AddCrossProducts(c, x []float64, n, p int) {
	if path == plain || p < 4 || n == 0 {
		addCrossProductsPlain(c, x, n, p)
		return
	}
	strip := min(n, panelRows) * stripColumns
	packed := buffer(strips(p) * strip)
	defer buffers.Put(packed)
	for r := 0; r < n; r += panelRows {
		rows := min(panelRows, n-r)
		pack(*packed, x[r*p:], p, rows, p, strip)
		addPanel(c, *packed, rows, p, strip)
	}
}

// addPanel adds the cross-products of one packed panel. Bands begin at strips, so that
// tiles on the diagonal write below it by at most seven rows.
func addPanel(c, packed []float64, rows, p, strip int) {
	for j := 0; j < p; j += groupColumns {
		end := min(p, j+groupColumns)
		for i := 0; i < end; i += tileRows {
			from := max(i, j)
			t := tile{
				c: c[i*p+from:], ldc: p,
				left: packed[i/stripColumns*strip:], lane: 1, step: stripColumns,
				right: packed[from/stripColumns*strip:], strip: strip,
				n: rows,
			}
			t.band(min(tileRows, p-i), end-from)
		}
	}
}
