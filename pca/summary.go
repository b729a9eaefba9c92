package pca

import (
	"fmt"
	"math"

	"axisfold/pca/internal/kernel"
)

// Form is the way a Summary keeps its second moments.
type Form int

const (
	// CrossProducts keeps C = Σ(x-m)(x-m)', p×p. The fast form; its condition
	// number is the square of that of the rows.
	CrossProducts Form = iota
	// Factor keeps a matrix F, r×p, with F'F = C: the centred rows themselves
	// while they are few, a triangular factor of their QR decomposition once r
	// would exceed 2p. Twice the work or more, but the condition number is that
	// of the rows; also the form for more channels than rows, since C is never made.
	Factor
)

// Summary is what is kept of a block of rows of p channels: their number, means,
// extremes and centred second moments. Summaries merge: the summary of two blocks
// comes from the summaries of each, so blocks may be folds, groups, stretches of
// time, or the shares of several machines.
type Summary struct {
	form   Form
	p      int
	count  int
	mean   []float64
	tail   []float64 // what rounding took from mean, so that thousands of merges cost no digits
	low    []float64
	high   []float64
	cross  []float64 // CrossProducts: p×p, upper triangle valid
	factor []float64 // Factor: rows×p
	values []*quantiles
}

// Count is the number of rows n.
func (s *Summary) Count() int { return s.count }

// Width is the number of channels p.
func (s *Summary) Width() int { return s.p }

// Form is the way the second moments are kept.
func (s *Summary) Form() Form { return s.form }

// Mean returns the mean of channel j.
func (s *Summary) Mean(j int) float64 { return s.mean[j] }

// Min returns the smallest value of channel j.
func (s *Summary) Min(j int) float64 { return s.low[j] }

// Max returns the largest value of channel j.
func (s *Summary) Max(j int) float64 { return s.high[j] }

// CenteredSquares returns Σ(x_j - m_j)² over the rows.
func (s *Summary) CenteredSquares(j int) float64 {
	if s.form == CrossProducts {
		return s.cross[j*s.p+j]
	}
	// Two rounds with a common scale keep squares of huge or tiny entries in range.
	big := 0.0
	for i := j; i < len(s.factor); i += s.p {
		big = math.Max(big, math.Abs(s.factor[i]))
	}
	if big == 0 || math.IsInf(big, 0) || math.IsNaN(big) {
		return big
	}
	sum := 0.0
	for i := j; i < len(s.factor); i += s.p {
		v := s.factor[i] / big
		sum += v * v
	}
	return sum * big * big
}

// Deviation returns the standard deviation of channel j, divisor n-1; NaN below two rows.
func (s *Summary) Deviation(j int) float64 {
	if s.count < 2 {
		return math.NaN()
	}
	return math.Sqrt(s.CenteredSquares(j) / float64(s.count-1))
}

// constantSlack is the range, in units of ε·max|x|, up to which a channel counts as
// constant: the last bits of a decimal number that was rounded on its way here.
const constantSlack = 8

// Constant tells whether channel j holds one value, up to the rounding of its digits.
func (s *Summary) Constant(j int) bool {
	big := math.Max(math.Abs(s.low[j]), math.Abs(s.high[j]))
	return s.high[j]-s.low[j] <= constantSlack*epsilon*big
}

const epsilon = 0x1p-52

// twoSum returns a+b rounded and what the rounding took away (Knuth).
func twoSum(a, b float64) (sum, rest float64) {
	sum = a + b
	v := sum - a
	return sum, (a - (sum - v)) + (b - v)
}

// Builder makes the summaries of blocks of rows. It holds scratch space: one
// Builder per goroutine.
type Builder struct {
	p       int
	form    Form
	ranks   int
	scratch []float64
	sums    []float64
}

// NewBuilder makes a Builder for rows of p channels. ranks > 0 lets the summaries
// answer for medians as well ([Summary.Median]): exactly up to that many rows,
// from a merging sketch beyond.
func NewBuilder(p int, form Form, ranks int) *Builder {
	return &Builder{p: p, form: form, ranks: ranks, sums: make([]float64, p)}
}

// Empty returns the summary of no rows, a start for merging.
func (b *Builder) Empty() *Summary {
	s := &Summary{form: b.form, p: b.p,
		mean: make([]float64, b.p), tail: make([]float64, b.p), low: make([]float64, b.p), high: make([]float64, b.p)}
	for j := range s.low {
		s.low[j], s.high[j] = math.Inf(1), math.Inf(-1)
	}
	if b.form == CrossProducts {
		s.cross = make([]float64, b.p*b.p)
	}
	if b.ranks > 0 {
		s.values = make([]*quantiles, b.p)
		for j := range s.values {
			s.values[j] = newQuantiles(b.ranks)
		}
	}
	return s
}

// Summarize returns the summary of the n rows in x, n×p row-major. The result
// depends on the rows and their order alone.
//
// The mean is corrected by the mean of what it leaves, and moments are taken about
// the corrected mean (Chan, Golub & LeVeque 1983, Am. Statistician 37:242), so that
// an offset of ten million beside a spread of a tenth costs no digits.
func (b *Builder) Summarize(x []float64, n int) *Summary {
	s := b.Empty()
	if n == 0 {
		return s
	}
	p := b.p
	s.count = n
	if cap(b.scratch) < n*p {
		b.scratch = make([]float64, n*p)
	}
	z := b.scratch[:n*p]
	clear(b.sums)
	kernel.ColumnSums(b.sums, x[:n*p], n, p)
	for j, v := range b.sums {
		s.mean[j] = v / float64(n)
	}
	kernel.CenterColumns(z, x[:n*p], s.mean, n, p)
	clear(b.sums)
	kernel.ColumnSums(b.sums, z, n, p)
	for j, v := range b.sums {
		b.sums[j] = v / float64(n)
		s.mean[j], s.tail[j] = twoSum(s.mean[j], b.sums[j])
	}
	kernel.CenterColumns(z, z, b.sums, n, p)
	for r := range n {
		row := x[r*p : r*p+p]
		low, high := s.low[:len(row)], s.high[:len(row)]
		for j, v := range row {
			if v < low[j] {
				low[j] = v
			}
			if v > high[j] {
				high[j] = v
			}
		}
	}
	if b.ranks > 0 {
		for j := range s.values {
			for r := range n {
				s.values[j].add(x[r*p+j])
			}
		}
	}
	if b.form == CrossProducts {
		kernel.AddCrossProducts(s.cross, z, n, p)
		return s
	}
	s.factor = append(s.factor, z...)
	s.compress(2 * p)
	return s
}

// Merge makes s the summary of its rows followed by those of o, which stays as it is.
// Means and moments follow Chan, Golub & LeVeque (1979): with δ the difference of the
// means, C = C_a + C_b + δδ'·n_a·n_b/n; a factor gains the row √(n_a·n_b/n)·δ' instead.
func (s *Summary) Merge(o *Summary) {
	if s.p != o.p || s.form != o.form {
		panic(fmt.Sprintf("pca: merging %d channels in form %d with %d in form %d", s.p, s.form, o.p, o.form))
	}
	if o.count == 0 {
		return
	}
	for j := range s.low {
		s.low[j] = math.Min(s.low[j], o.low[j])
		s.high[j] = math.Max(s.high[j], o.high[j])
	}
	for j := range s.values {
		s.values[j].merge(o.values[j])
	}
	if s.count == 0 {
		s.count = o.count
		copy(s.mean, o.mean)
		copy(s.tail, o.tail)
		copy(s.cross, o.cross)
		s.factor = append(s.factor[:0], o.factor...)
		return
	}
	na, nb := float64(s.count), float64(o.count)
	n := na + nb
	p := s.p
	delta := make([]float64, p)
	for j := range delta {
		delta[j] = (o.mean[j] - s.mean[j]) + (o.tail[j] - s.tail[j])
		mean, tail := twoSum(s.mean[j], delta[j]*(nb/n))
		s.mean[j], s.tail[j] = twoSum(mean, s.tail[j]+tail)
	}
	weight := na * (nb / n)
	s.count += o.count
	if s.form == CrossProducts {
		for i := range p {
			row, other := s.cross[i*p:i*p+p], o.cross[i*p:i*p+p]
			scaled := weight * delta[i]
			for j := i; j < p; j++ {
				row[j] += other[j] + scaled*delta[j]
			}
		}
		return
	}
	root := math.Sqrt(weight)
	for j := range delta {
		delta[j] *= root
	}
	s.factor = append(s.factor, o.factor...)
	s.factor = append(s.factor, delta...)
	s.compress(2 * p)
}

// MergeAll returns the summary of all parts in their order; nil without parts.
func MergeAll(parts ...*Summary) *Summary {
	if len(parts) == 0 {
		return nil
	}
	first := parts[0]
	b := Builder{p: first.p, form: first.form}
	if first.values != nil {
		b.ranks = first.values[0].capacity
	}
	s := b.Empty()
	for _, part := range parts {
		s.Merge(part)
	}
	return s
}

// compress reduces a factor of more than limit rows to a triangle of p rows.
func (s *Summary) compress(limit int) {
	if s.form != Factor || len(s.factor) <= limit*s.p {
		return
	}
	s.factor = triangle(s.factor, len(s.factor)/s.p, s.p)
}

// Pick returns the summary of the channels at the given positions, in that order.
func (s *Summary) Pick(channels []int) *Summary {
	q := len(channels)
	t := &Summary{form: s.form, p: q, count: s.count,
		mean: make([]float64, q), tail: make([]float64, q), low: make([]float64, q), high: make([]float64, q)}
	for a, j := range channels {
		t.mean[a], t.tail[a] = s.mean[j], s.tail[j]
		t.low[a], t.high[a] = s.low[j], s.high[j]
	}
	if s.values != nil {
		t.values = make([]*quantiles, q)
		for a, j := range channels {
			t.values[a] = s.values[j]
		}
	}
	if s.form == CrossProducts {
		t.cross = make([]float64, q*q)
		for a, i := range channels {
			for b := a; b < q; b++ {
				t.cross[a*q+b] = s.CrossProduct(i, channels[b])
			}
		}
		return t
	}
	rows := len(s.factor) / s.p
	t.factor = make([]float64, rows*q)
	for r := range rows {
		for a, j := range channels {
			t.factor[r*q+a] = s.factor[r*s.p+j]
		}
	}
	return t
}

// CrossProduct returns Σ(x_i - m_i)(x_j - m_j) over the rows.
func (s *Summary) CrossProduct(i, j int) float64 {
	if s.form == CrossProducts {
		return s.cross[min(i, j)*s.p+max(i, j)]
	}
	sum := 0.0
	for r := 0; r < len(s.factor); r += s.p {
		sum += s.factor[r+i] * s.factor[r+j]
	}
	return sum
}

// Spread returns Σ(w'(x - m))² over the rows: the centred squares of a weighted sum of
// the channels. It is what lets a block of rows judge a model without the rows.
func (s *Summary) Spread(w []float64) float64 {
	p := s.p
	sum := 0.0
	if s.form == Factor {
		for r := 0; r < len(s.factor); r += p {
			d := kernel.Dot(s.factor[r:r+p], w)
			sum += d * d
		}
		return sum
	}
	for i := range p {
		if w[i] == 0 {
			continue
		}
		row := s.cross[i*p : i*p+p]
		inner := kernel.Dot(row[i+1:], w[i+1:])
		sum += w[i] * (row[i]*w[i] + 2*inner)
	}
	// Rounding of the cross-products can leave a small negative number where the
	// weighted sum hardly varies.
	return math.Max(sum, 0)
}

// Center returns Σw·m, the mean of a weighted sum of the channels.
func (s *Summary) Center(w []float64) float64 { return kernel.Dot(s.mean, w) }

// AboutOrigin returns the summary of the same rows with moments taken about zero
// instead of about the means, for fits through the origin.
func (s *Summary) AboutOrigin() *Summary {
	t := MergeAll(s)
	n := float64(t.count)
	if t.form == CrossProducts {
		for i := range t.p {
			for j := i; j < t.p; j++ {
				t.cross[i*t.p+j] += n * t.mean[i] * t.mean[j]
			}
		}
	} else {
		root := math.Sqrt(n)
		for _, m := range t.mean {
			t.factor = append(t.factor, root*m)
		}
	}
	clear(t.mean)
	clear(t.tail)
	return t
}

// Finite returns an error naming the first channel whose moments left the range of
// double precision, by its position in names.
func (s *Summary) Finite(names []string) error {
	for j := range s.p {
		v := s.CenteredSquares(j)
		if math.IsNaN(v) || math.IsInf(v, 0) || math.IsNaN(s.mean[j]) || math.IsInf(s.mean[j], 0) {
			return &DataError{Channel: names[j],
				Problem: fmt.Sprintf("values between %g and %g overflow double precision when squared", s.low[j], s.high[j]),
				Hint:    "give the channel in a larger unit"}
		}
	}
	return nil
}
