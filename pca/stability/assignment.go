package stability

import "math"

// assign returns for each row of the n×n matrix gain the column that makes the sum of
// the chosen entries largest, each column once: shortest augmenting paths over potentials
// (Kuhn 1955, Naval Res. Logist. 2:83; in the O(n³) form of Jonker & Volgenant 1987,
// Computing 38:325). Index 0 of the inner arrays is the row still to be placed.
func assign(gain []float64, n int) []int {
	rowPotential := make([]float64, n+1)
	columnPotential := make([]float64, n+1)
	owner := make([]int, n+1) // row of each column, from 1; 0 for none
	before := make([]int, n+1)
	slack := make([]float64, n+1)
	done := make([]bool, n+1)
	for row := 1; row <= n; row++ {
		owner[0] = row
		for j := range slack {
			slack[j] = math.Inf(1)
		}
		clear(done)
		column := 0
		for owner[column] != 0 {
			done[column] = true
			i, step, next := owner[column], math.Inf(1), 0
			for j := 1; j <= n; j++ {
				if done[j] {
					continue
				}
				cost := -gain[(i-1)*n+j-1] - rowPotential[i] - columnPotential[j]
				if cost < slack[j] {
					slack[j], before[j] = cost, column
				}
				if slack[j] < step {
					step, next = slack[j], j
				}
			}
			for j := range done {
				if done[j] {
					rowPotential[owner[j]] += step
					columnPotential[j] -= step
				} else {
					slack[j] -= step
				}
			}
			column = next
		}
		for column != 0 {
			owner[column] = owner[before[column]]
			column = before[column]
		}
	}
	out := make([]int, n)
	for j := 1; j <= n; j++ {
		out[owner[j]-1] = j - 1
	}
	return out
}
