package kernel

import "sync"

// panelRows is how many rows are summed from zero before they are added to the result:
// part of the specification, because it decides how sums are rounded.
const panelRows = 256

// lanes is what rows are padded to for the assembly; padding is zero and changes nothing.
const lanes = 16

// AddCrossProducts adds to the upper triangle of c, p×p row-major, the cross-products of
// the n rows of x (n×p): c[i,j] += Σ_r x[r,i]·x[r,j] for j >= i. Rows are taken in panels
// of 256; within a panel a sum starts at zero and each row is one fused multiply-add, in
// order; the sum of the panel is then added to c. The lower triangle may be overwritten.
func AddCrossProducts(c, x []float64, n, p int) {
	if path == plain || p < 4 {
		addCrossProductsPlain(c, x, n, p)
		return
	}
	width := (p + lanes - 1) / lanes * lanes
	buffer := buffers.Get().(*[]float64)
	defer buffers.Put(buffer)
	if cap(*buffer) < panelRows*width {
		*buffer = make([]float64, panelRows*width)
	}
	packed := (*buffer)[:panelRows*width]
	for r := 0; r < n; r += panelRows {
		rows := min(panelRows, n-r)
		for i := range rows {
			copy(packed[i*width:i*width+p], x[(r+i)*p:(r+i)*p+p])
			clear(packed[i*width+p : (i+1)*width])
		}
		addPanel(c, packed, rows, p, width)
	}
}

var buffers = sync.Pool{New: func() any { return new([]float64) }}

// tileRows×tileColumns sums are kept in registers at a time.
const (
	tileRows    = 4
	tileColumns = 16
)

// addPanel adds the cross-products of one padded panel, tile by tile.
func addPanel(c, packed []float64, rows, p, width int) {
	var tile [tileRows * tileColumns]float64
	for i := 0; i < p; i += tileRows {
		for j := i / tileColumns * tileColumns; j < p; j += tileColumns {
			tileSums(&tile, &packed[i], &packed[j], rows, width)
			for a := range min(tileRows, p-i) {
				from := max(j, i+a)
				to := min(j+tileColumns, p)
				if from >= to {
					continue
				}
				target := c[(i+a)*p+from : (i+a)*p+to]
				for b := range target {
					target[b] += tile[a*tileColumns+from-j+b]
				}
			}
		}
	}
}
