// Package gaps deals with missing values, which blocks of rows carry as NaN.
package gaps

import "math"

// Complete returns the positions of the rows of x (n×width, row-major) that have a value
// in every column of use, appended to kept[:0], and adds to missing[i] the gaps found in
// column use[i].
func Complete(x []float64, n, width int, use []int, missing []int64, kept []int32) []int32 {
	kept = kept[:0]
	for r := range n {
		row := x[r*width : r*width+width]
		whole := true
		for i, j := range use {
			if math.IsNaN(row[j]) {
				missing[i]++
				whole = false
			}
		}
		if whole {
			kept = append(kept, int32(r))
		}
	}
	return kept
}
