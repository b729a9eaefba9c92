package pca

import "math"

// twinSlack is how close to 1 the size of a correlation must be for two channels to count
// as one up to scale and offset: closer than nine digits of data can tell apart.
const twinSlack = 1e-9

// Twins returns pairs of channels that are copies of one another up to scale and offset,
// from their correlations, p×p row-major.
func Twins(correlations []float64, p int) [][2]int {
	var out [][2]int
	for i := range p {
		for j := i + 1; j < p; j++ {
			if math.Abs(correlations[i*p+j]) > 1-twinSlack {
				out = append(out, [2]int{i, j})
			}
		}
	}
	return out
}
