// Package reduce chooses which channels to keep so that all others can be rebuilt from
// them by linear regression.
//
// Call [Choose] with a [pca.Summary] of the rows, the summaries of the folds when held-out
// numbers are wanted, and [Options]. The result names the kept set, says whether it is
// proved best, and gives for every dropped channel the equation in original units, how well
// it does on rows it was not fitted on, and what is left when one kept channel fails as well.
//
// # Notation
//
// M is the p×p matrix the criteria are computed on: the correlation matrix, or the
// covariance matrix divided by its mean variance. K is the kept set of m channels, D the
// dropped one, and M_D.K = M_DD - M_DK·M_KK⁻¹·M_KD what K leaves of D. R² of a dropped
// channel is 1 - [M_D.K]_jj/M_jj, the same for either matrix.
//
// # Criteria
//
//   - worst-r2: the smallest R² of a dropped channel, to be largest; ties within 1e-9 go to the larger mean.
//   - rm: √(1 - tr M_D.K / tr M), to be largest (Cadima & Jolliffe 2001, JABES 6:62).
//   - rv: ‖M - M_D.K‖/‖M‖ in Frobenius norm, to be largest (same source).
//   - gcd: mean share of the first q components that K spans, Σ r_k²/√(q·m) (same source).
//   - mccabe-det, mccabe-trace, mccabe-frobenius: determinant, trace, squared Frobenius norm
//     of M_D.K, to be smallest (McCabe 1984, Technometrics 26:137). The determinant is
//     compared through its twin, the largest det M_KK, which also ranks dependent channels.
//   - mccabe-canonical: the sum of squared canonical correlations between K and D, to be
//     largest (same source).
//
// # Search
//
// Greedy forward choice by exact Schur-complement updates comes first, then exchanges of
// one kept unit for one dropped unit until none improves. Up to [Options.ExactUpTo] channels a
// branch-and-bound search over all sets follows and proves the result best, up to rounding.
// At 30 channels it is done in seconds for worst-r2, rm, mccabe-det, mccabe-trace and
// mccabe-frobenius unless the data hold little structure; the bounds for rv and gcd are
// weaker, and mccabe-canonical has none. A search that reaches its limit of nodes returns
// the best set seen, with Optimal false and a warning. The result is the same for any
// number of threads.
//
// # Dependent channels
//
// A channel of which less than 64·p·ε of its variance is left after the kept ones counts as
// dependent: it is never divided by, its R² is 1, and an exact copy is dropped.
package reduce
