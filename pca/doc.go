// Package pca turns blocks of rows into principal components.
//
// Start with [Builder.Summarize] for each block of rows, [Summary.Merge] to
// join the blocks, [FitScaling] to choose centre and scale of every channel,
// and [Decompose] for the components. [Decomposition.Scores] brings rows into
// component space. Nothing here reads files or prints.
//
// # Notation
//
// X is n×p, one row per observation, one column per channel. Z is X centred and
// scaled channel by channel, V holds the eigenvectors as columns, scores are
// Z·V. Variances divide by n-1. Eigenvalues descend and belong to the matrix
// named in the options: the correlation matrix, or the covariance matrix of Z.
//
// # Sign convention
//
// In each eigenvector the entry of largest magnitude is positive; among entries
// that tie within 1e-10 of the largest, the one with the lowest index counts.
//
// # One summary, many answers
//
// A [Summary] holds count, means and centred second moments of some rows, either
// as cross-products C (fast) or as a factor F with F'F = C (conditioning not
// squared). Both merge exactly and answer the same questions, so everything
// downstream costs the same whatever the number of rows.
//
// # Missing values and failure
//
// Rows given to this package are complete and finite. Data that cannot carry
// what was asked return an error that names the channel; usable but doubtful
// results carry a [Warning].
package pca

// Warning says that a result is usable but doubtful, and what would mend it.
type Warning struct {
	// Code is a stable word for machines, such as "tied-roots".
	Code string `json:"code"`
	// Text is one plain sentence without a full stop.
	Text string `json:"text"`
}
