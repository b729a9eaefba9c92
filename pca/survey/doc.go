// Package survey looks at a table before any analysis: what its channels are, what is
// wrong with them, and what a run file should say about it.
//
// [Open] finds out how the table is written, [Look] goes through its rows twice, in memory
// that does not grow with their number, and returns a [Survey]. The first pass counts and
// finds extremes, from which missing codes are told; the second does the rest without the
// codes. What needs many numbers at once (quantiles, correlations, rank) rests on a sample
// of rows chosen by a hash of the row's number, all rows while they are few. Each channel
// is gone through in row order by one goroutine, so the same table gives the same bits on
// any number of threads.
package survey
