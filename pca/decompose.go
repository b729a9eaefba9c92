package pca

import (
	"fmt"
	"math"
)

// Matrix names the matrix whose eigenvalues are reported.
type Matrix string

// The matrices. Correlation divides every channel by its standard deviation whatever
// scaling was asked for; only unit-length keeps its own (proportional) scale.
const (
	Correlation Matrix = "correlation"
	Covariance  Matrix = "covariance" // of Z, about its mean, divisor n-1
)

// Route names the numerical method.
type Route string

// The routes. Eigen works on cross-products, SVD on a factor of the rows.
const (
	Auto  Route = "auto"
	Eigen Route = "eigen"
	SVD   Route = "svd"
)

// NearlySingular is the ratio of largest to smallest root above which the eigen route
// leaves fewer than about seven digits in the smallest roots (their error is near
// p·ε·l₁), so that the automatic route turns to a factor of the rows.
const NearlySingular = 1e8

// Decomposition is the result: eigenvalues, eigenvectors and what goes with them.
type Decomposition struct {
	Channels []string // p names
	Rows     int      // n
	Matrix   Matrix
	Route    Route  // Eigen or SVD, as taken
	Reason   string // why that route
	Scaling  *Scaling
	// Offset is the mean of Z by channel: 0 but for scalings that do not centre at the mean.
	Offset []float64
	// Values are the eigenvalues of the matrix, descending; m = min(p, n-1) of them.
	Values []float64
	// Vectors is p×m row-major, unit-length columns.
	Vectors []float64
	// ScoreVariances are the variances of the scores, divisor n-1: the eigenvalues, but
	// for unit-length scaling, where they are smaller by n-1.
	ScoreVariances []float64
	// Total is the trace of the matrix, which the eigenvalues of all p components add up to.
	Total float64
	// Rank is the number of roots above rounding.
	Rank     int
	Warnings []Warning

	left []float64 // SVD: r×m, the left vectors of the scaled factor, for Project
}

// Options are what Decompose needs to know.
type Options struct {
	Names   []string
	Methods []Method // one per channel
	Matrix  Matrix
}

// EffectiveMethods returns the scaling that is applied: under the correlation matrix every
// channel is brought to unit variance (or unit length), centred at its mean.
func (o *Options) EffectiveMethods() []Method {
	if o.Matrix != Correlation {
		return o.Methods
	}
	out := make([]Method, len(o.Methods))
	for j := range out {
		out[j] = UnitNormal
	}
	allLength := len(o.Methods) > 0
	for _, m := range o.Methods {
		allLength = allLength && m == UnitLength
	}
	if allLength {
		copy(out, o.Methods)
	}
	return out
}

// Decompose finds the principal components of the rows behind s. Its route follows the
// form of s: eigen decomposition of cross-products, singular value decomposition of a
// factor. At least two rows are needed.
func Decompose(s *Summary, o Options) (*Decomposition, error) {
	if s.count < 2 {
		return nil, &DataError{Problem: fmt.Sprintf("%d complete rows; at least 2 are needed", s.count)}
	}
	if err := s.Finite(o.Names); err != nil {
		return nil, err
	}
	sc, err := FitScaling(s, o.EffectiveMethods(), o.Names)
	if err != nil {
		return nil, err
	}
	d := &Decomposition{Channels: o.Names, Rows: s.count, Matrix: o.Matrix, Scaling: sc, Offset: make([]float64, s.p)}
	for j := range d.Offset {
		d.Offset[j] = (s.mean[j] - sc.Center[j]) / sc.Scale[j]
	}
	if e := s.RankError(); e > 0 {
		d.warn("approximate-medians", "medians come from a sketch of the rows: their rank is right to within %.2g %% of the rows", 100*e)
	}
	if s.form == CrossProducts {
		err = d.eigen(s)
	} else {
		err = d.svd(s)
	}
	if err != nil {
		return nil, err
	}
	d.fixSigns()
	d.diagnose()
	return d, nil
}

// Components is the number m of components computed.
func (d *Decomposition) Components() int { return len(d.Values) }

// Width is the number of channels p.
func (d *Decomposition) Width() int { return len(d.Channels) }

// Vector returns entry j of eigenvector a.
func (d *Decomposition) Vector(j, a int) float64 { return d.Vectors[j*len(d.Values)+a] }

// Share returns the share of the total variance on component a.
func (d *Decomposition) Share(a int) float64 { return d.Values[a] / d.Total }

// CumulativeShare returns the share of the total variance on components 0..a.
func (d *Decomposition) CumulativeShare(a int) float64 {
	sum := 0.0
	for _, l := range d.Values[:a+1] {
		sum += l
	}
	return min(sum/d.Total, 1)
}

// Condition is the ratio of the largest eigenvalue to the smallest of all p; +Inf when one is 0.
func (d *Decomposition) Condition() float64 {
	if len(d.Values) < len(d.Channels) {
		return math.Inf(1)
	}
	last := d.Values[len(d.Values)-1]
	if last <= 0 {
		return math.Inf(1)
	}
	return d.Values[0] / last
}

// Loading returns eigenvector entry times root eigenvalue: under the correlation matrix
// the correlation between channel j and component a.
func (d *Decomposition) Loading(j, a int) float64 {
	return d.Vector(j, a) * math.Sqrt(d.Values[a])
}

// Communality is the variance of channel j carried by the first k components: Σ loading²,
// under the correlation matrix a share of 1.
func (d *Decomposition) Communality(j, k int) float64 {
	sum := 0.0
	for a := range k {
		l := d.Loading(j, a)
		sum += l * l
	}
	return sum
}

func (d *Decomposition) warn(code, format string, args ...any) {
	d.Warnings = append(d.Warnings, Warning{Code: code, Text: fmt.Sprintf(format, args...)})
}

// matrixScale is the factor from the covariance of Z to the matrix named: 1, or n-1 when
// unit-length rows are to give the correlation matrix.
func (d *Decomposition) matrixScale() float64 {
	if d.Matrix == Correlation && d.Scaling.Methods[0] == UnitLength {
		return float64(d.Rows - 1)
	}
	return 1
}

// signTie is how close to the largest magnitude an entry counts as tied with it; wide
// enough that rounding cannot decide a sign.
const signTie = 1e-10

func (d *Decomposition) fixSigns() {
	m := len(d.Values)
	for a := range m {
		big := 0.0
		for j := range d.Channels {
			big = math.Max(big, math.Abs(d.Vector(j, a)))
		}
		for j := range d.Channels {
			v := d.Vector(j, a)
			if math.Abs(v) < big*(1-signTie) {
				continue
			}
			if v < 0 {
				d.flip(a)
			}
			break
		}
	}
}

func (d *Decomposition) flip(a int) {
	m := len(d.Values)
	for i := a; i < len(d.Vectors); i += m {
		d.Vectors[i] = -d.Vectors[i]
	}
	for i := a; i < len(d.left); i += m {
		d.left[i] = -d.left[i]
	}
}
