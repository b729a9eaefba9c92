package survey

import (
	"math"

	"axisfold/pca/internal/kernel"
	"axisfold/pca/internal/symeig"
)

const (
	// mostCompared bounds the channels of which all pairs are compared.
	mostCompared = 1500
	// rowsCompared bounds the sampled rows that pairs are compared on.
	rowsCompared = 2048
	// affineSlack is how close to 1 the size of a correlation of affine copies is.
	affineSlack = 1e-9
	nearCopy    = .999
	leastPairs  = 8 // rows with both values that a comparison needs
)

// Likeness says how two channels are alike.
type Likeness struct {
	A, B        string
	Kind        string // "copy", "affine", "near"
	Correlation float64
	// B = Offset + Slope·A for affine and near copies.
	Offset, Slope float64
	Rows          int64 // compared
	a, b          int
}

// comparison is what the correlations of the sampled rows tell.
type comparison struct {
	pairs     []Likeness
	rows      int
	rank      int // of the correlation matrix, gaps filled with means; -1: not looked at
	dominated int // components that carry 99 % of the variance
	share     float64
	usable    int // channels that vary
}

// compare looks for copies among channels that vary. Exact copies are told by the hashes of
// all rows.
func compare(f *first, traces []trace, names []string, skip []bool) *comparison {
	out := &comparison{rank: -1}
	byHash := map[uint64]int{}
	copied := make([]bool, len(names))
	var use []int
	for j := range names {
		if skip[j] {
			continue
		}
		if a, ok := byHash[traces[j].hash]; ok {
			out.pairs = append(out.pairs, Likeness{A: names[a], B: names[j], Kind: "copy", Correlation: 1, Slope: 1, Rows: f.rows, a: a, b: j})
			copied[j] = true
		} else {
			byHash[traces[j].hash] = j
		}
		use = append(use, j)
	}
	p := len(use)
	out.usable = p
	if p < 2 || p > mostCompared {
		return out
	}
	s := f.sample
	n := min(len(s.rows), rowsCompared)
	out.rows = n
	z := make([]float64, n*p)
	filled := make([]float64, p)
	for k, j := range use {
		sum, sum2, there := 0.0, 0.0, 0.0
		c := &traces[j]
		for i := range n {
			if v := s.data[i*s.width+j]; !math.IsNaN(v) {
				d := v - c.middle
				sum, sum2, there = sum+d, sum2+d*d, there+1
			}
		}
		filled[k] = there
		mean := sum / there
		scale := math.Sqrt(sum2 - sum*mean)
		for i := range n {
			if v := s.data[i*s.width+j]; !math.IsNaN(v) && scale > 0 {
				z[i*p+k] = (v - c.middle - mean) / scale
			}
		}
	}
	r := make([]float64, p*p)
	kernel.AddCrossProducts(r, z, n, p)
	out.spectrum(r, p, n)
	var x, y []float64
	for a := range p {
		for b := a + 1; b < p; b++ {
			// With gaps the product of a pair is shrunk by the rows where one is missing.
			limit := .99
			if both := filled[a] + filled[b] - float64(n); both < float64(n) {
				limit = .9 * math.Max(.3, both/math.Sqrt(filled[a]*filled[b]))
			}
			if copied[use[a]] || copied[use[b]] || !(math.Abs(r[a*p+b]) > limit*math.Sqrt(r[a*p+a]*r[b*p+b])) {
				continue
			}
			x, y = s.both(x[:0], y[:0], n, use[a], use[b])
			l, ok := pair(x, y, use[a], use[b])
			if ok && math.Abs(l.Correlation) > nearCopy {
				l.A, l.B = names[l.a], names[l.b]
				out.pairs = append(out.pairs, l)
			}
		}
	}
	return out
}

// spectrum takes rank and share from the eigenvalues of the correlations.
func (c *comparison) spectrum(r []float64, p, n int) {
	matrix := make([]float64, len(r))
	copy(matrix, r)
	values := make([]float64, p)
	symeig.Values(matrix, p, values, &symeig.Work{})
	total := 0.0
	for _, v := range values {
		total += math.Max(v, 0)
	}
	c.rank, c.dominated = 0, 0
	sum := 0.0
	for _, v := range values {
		// Below this an eigenvalue is rounding of the cross-products.
		if v > float64(p)*0x1p-50*values[0] {
			c.rank++
		}
		if sum < .99*total {
			c.dominated++
			sum += v
		}
	}
	c.share = values[0] / total
}

// both appends the values of two channels in the sampled rows that have both.
func (s *sample) both(x, y []float64, n, a, b int) ([]float64, []float64) {
	for i := range n {
		u, v := s.data[i*s.width+a], s.data[i*s.width+b]
		if !math.IsNaN(u) && !math.IsNaN(v) {
			x, y = append(x, u), append(y, v)
		}
	}
	return x, y
}

// pair compares two channels.
func pair(x, y []float64, a, b int) (Likeness, bool) {
	if len(x) < leastPairs {
		return Likeness{}, false
	}
	mx, my := average(x), average(y)
	sxx, syy, sxy := 0.0, 0.0, 0.0
	for i := range x {
		u, v := x[i]-mx, y[i]-my
		sxx, syy, sxy = sxx+u*u, syy+v*v, sxy+u*v
	}
	if !(sxx > 0) || !(syy > 0) {
		return Likeness{}, false
	}
	r := sxy / math.Sqrt(sxx) / math.Sqrt(syy)
	l := Likeness{Kind: "near", Correlation: r, Slope: sxy / sxx, Rows: int64(len(x)), a: a, b: b}
	l.Offset = my - l.Slope*mx
	if math.Abs(r) > 1-affineSlack {
		l.Kind = "affine"
	}
	return l, true
}

func average(x []float64) float64 {
	sum := 0.0
	for _, v := range x {
		sum += v - x[0]
	}
	return x[0] + sum/float64(len(x))
}
