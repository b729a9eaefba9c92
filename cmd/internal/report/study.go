// Package report writes the results of a run as text, tables and JSON. It takes result
// structs and writers; it computes nothing that a reader could want in a number.
package report

import (
	"axisfold/pca"
	"axisfold/pca/reduce"
	"axisfold/pca/retain"
	"axisfold/pca/rotation"
	"axisfold/pca/stability"
	"axisfold/pcr"
)

// Study is everything that one run found out.
type Study struct {
	Title    string
	Seed     uint64
	Table    Table
	Channels []Channel // the channels that were decomposed, in the order of Decomposition.Channels
	// Decomposition of the channels, the verdict that decides, and all verdicts with the
	// deciding one first.
	Decomposition *pca.Decomposition
	Verdict       retain.Verdict
	Overview      []retain.Verdict
	Adequacy      *pca.Adequacy    // nil when channels are too many to measure it
	Rotation      *rotation.Result // nil when the run file asks for none
	Uncertainty   *Uncertainty     // nil when the run file asks for none
	Reduction     *Reduction       // nil when the run file asks for none
	Regression    *Regression      // nil when the run file has no regression
	Warnings      []pca.Warning
}

// Retained is the number of components kept.
func (s *Study) Retained() int { return s.Verdict.Components }

// Table says what was read.
type Table struct {
	Files []File `json:"files"`
	// Rows is the number of data rows, Complete of those used: without gaps in any
	// channel or response.
	Rows     int64  `json:"rows"`
	Complete int64  `json:"complete_rows"`
	Held     bool   `json:"held_in_memory"`
	Time     string `json:"time,omitempty"`
	Group    string `json:"group,omitempty"`
	Notes    []Note `json:"notes"`
}

// File is one input.
type File struct {
	Path   string `json:"path"`   // the name of the format where a server was asked
	SHA256 string `json:"sha256"` // of the file, or of the rows that a server gave
	Bytes  int64  `json:"bytes"`  // 0 for a server
}

// Note says what was done with a column, or with rows when Column is empty.
type Note struct {
	Column string `json:"column,omitempty"`
	Text   string `json:"text"`
}

// Channel holds the facts of one channel over the rows used; Missing counts gaps in all rows.
type Channel struct {
	Name      string
	Source    string // column it comes from; differs from Name after a transform
	Transform pca.Transform
	Unit      string // empty after a transform, whose values have none
	// SourceUnit is that of the column.
	SourceUnit string
	Count      int64
	Missing    int64
	Mean       float64
	Deviation  float64 // divisor n-1
	Minimum    float64
	Maximum    float64
}

// Regression holds the fits and what was asked for.
type Regression struct {
	Result *pcr.Result
	// Collinearity is nil where it could not be had; Dependencies are near-dependencies
	// among the predictors, the tightest first.
	Collinearity *pca.Collinearity
	Dependencies []pca.Dependency
	Responses    []Channel
	// Smearing brings predictions back to the units of the responses; nil where none was
	// transformed.
	Smearing    []pcr.Smearing
	Inference   []Inference // by response, from the pass that writes rows
	Rule        string
	Arrangement string // of the folds
	Gap         int    // rows beside a held-out stretch that nothing is learnt from
	Order       pcr.Order
	Confidence  float64
	Origin      bool
}

// Reduction is the choice of channels to keep and what was asked for.
type Reduction struct {
	Result  *reduce.Result
	Rebuild float64 // target; unused when Size is above 0
	Size    int
	Sweep   [2]int // numbers of channels that the summary compares; zeros: around the chosen one
	// Protected and Preferred mark channels, by position.
	Protected, Preferred []bool
}

// Uncertainty holds intervals from resampled stretches of rows.
type Uncertainty struct {
	Result     *stability.Result
	Confidence float64
}
