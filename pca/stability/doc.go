// Package stability tells how sure the components of a table are: [Bootstrap] gives
// intervals for eigenvalues, shares and loadings, the congruence of every component, the
// angle of the retained subspace, and the components that cannot be told apart.
//
// It needs no rows, only summaries of blocks, each a stretch of consecutive rows. A
// replicate draws as many blocks as there are, with replacement, merges their moments,
// fits the scaling anew and decomposes (Efron 1979, Ann. Statist. 7:1, with blocks in
// place of rows; Carlstein 1986, Ann. Statist. 14:1171, for series). Blocks must be
// longer than the memory of the series for the intervals to hold; for independent rows
// any length will do. Below twenty blocks the intervals are coarse, and a warning says so.
//
// # Notation
//
// p channels, m components of the whole table, k of them retained; V (p×k) are the
// retained eigenvectors of the whole, V_b the leading k of a replicate.
//
// # Alignment
//
// Eigenvectors of a replicate come in any order, sign and, where roots are close, turned
// among themselves; unaligned loadings average to nearly nothing. V_b is brought to
// V_b·Q, Q = UW' from the singular value decomposition V_b'V = UΣW' (orthogonal
// Procrustes, Milan & Whittaker 1995, Appl. Statist. 44:31), which settles order and
// sign as well. So the loading intervals answer for the subspace, with the axes of the
// whole table laid into it; how far single axes turn inside it is told by Congruence
// and Tied. With one component retained nothing is turned.
//
// # Percentile intervals
//
// Limits are percentiles of the replicates, uncorrected. The largest root of a replicate
// is biased upwards and the smallest downwards, as those of the sample are already, so
// intervals of close roots lie too far apart.
//
// # Same bits
//
// Replicate r has its own random stream (seed, r): results do not depend on Threads.
package stability
