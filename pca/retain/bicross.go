package retain

import (
	"fmt"
	"math"
	"math/rand/v2"

	"axisfold/pca/internal/kernel"
	"axisfold/pca/internal/symeig"
)

// Owen & Perry 2009 (Ann. Appl. Stat. 3:564): hide a block A of rows and channels, take
// the components of the opposite block D alone, and predict A from its neighbours,
// Â = B·D_k⁺·C. Nothing of A helps to predict it, so that the error turns up again once k
// is too large. Half the rows by half the channels are hidden at a time.
var biCross = Rule{
	Name:     "bi-cross-validation",
	Summary:  "the number that best predicts hidden blocks of rows and channels (Owen & Perry 2009)",
	variants: []Settings{Defaults()},
	apply: func(e *Evidence, _ Settings) Verdict {
		var v Verdict
		n, p := e.Rows, e.Width()
		switch {
		case len(e.Standardized) != n*p:
			return v.abstain("it needs the rows in memory")
		case n < 12 || p < 12:
			return v.abstain("half of fewer than twelve channels or rows says too little of the other half")
		}
		size := float64(n) * float64(p) * float64(p)
		if size > mostBiCross {
			return v.abstain("the table is too large to take apart so often")
		}
		splits := biCrossSplits
		if size > mostBiCross/20 {
			splits = 2
		}
		most := min(p/2, n/2-1, len(e.Values), 60)
		sums := make([]float64, most+1)
		for split := range splits {
			addBiCross(sums, e, uint64(split))
		}
		for k, s := range sums {
			// Rounding must not choose among errors that are all zero.
			if s < sums[v.Components]*(1-1e-9)-1e-12*sums[0] {
				v.Components = k
			}
		}
		if v.Components == most && e.Rank > most {
			return v.abstain("the error falls as far as it can be followed: some channels are near copies of others")
		}
		for a := range e.Values {
			v.Steps = append(v.Steps, Step{Value: sums[min(a+1, most)], Threshold: sums[min(a, most)], Kept: a < v.Components})
		}
		v.Note = fmt.Sprintf("hidden blocks are predicted best with %d: error %.3f of that of the means", v.Components, sums[v.Components]/sums[0])
		return v
	},
}

// mostBiCross bounds n·p²: a second or two.
const mostBiCross = 4e9

// biCrossSplits is how many times rows and channels are halved; each half is hidden once.
const biCrossSplits = 8

// addBiCross adds the squared errors of the four blocks of one split by number of
// components. Halves of rows are halves of time, so that rows that follow one another do
// not help; channels are halved at random.
func addBiCross(sums []float64, e *Evidence, split uint64) {
	n, p := e.Rows, e.Width()
	rng := rand.New(rand.NewPCG(e.Seed, biCrossStream+split))
	columns := rng.Perm(p)
	start := rng.IntN(n)
	left, right := columns[:p/2], columns[p/2:]
	half := n / 2
	block := func(first, rows int, columns []int) []float64 {
		out := make([]float64, 0, rows*len(columns))
		for i := range rows {
			row := (start + first + i) % n
			for _, j := range columns {
				out = append(out, e.Standardized[row*p+j])
			}
		}
		return out
	}
	for _, hidden := range []struct{ rows, other int }{{0, half}, {half, 0}} {
		for _, c := range [][2][]int{{left, right}, {right, left}} {
			here, there := half, n-half
			if hidden.rows == half {
				here, there = n-half, half
			}
			a := block(hidden.rows, here, c[0])
			b := block(hidden.rows, here, c[1])
			cc := block(hidden.other, there, c[0])
			d := block(hidden.other, there, c[1])
			// Centred by the rows of D alone: A has no part in it.
			center(b, d, here, len(c[1]))
			center(a, cc, here, len(c[0]))
			center(cc, cc, there, len(c[0]))
			center(d, d, there, len(c[1]))
			addBlock(sums, a, b, cc, d, here, there, len(c[0]), len(c[1]))
		}
	}
}

const biCrossStream = 1 << 33

// center takes the column means of from off x; from may be x, and then goes last.
func center(x, from []float64, rows, width int) {
	mean := make([]float64, width)
	count := len(from) / width
	kernel.ColumnSums(mean, from, count, width)
	for j := range mean {
		mean[j] /= float64(count)
	}
	kernel.CenterColumns(x, x, mean, rows, width)
}

// addBlock adds |A - B·D_k⁺·C|² for every k: with D = U·diag(s)·V', D_k⁺·C is
// Σ v_i·(v_i'D'C)/s_i², so that only the small matrices D'D and D'C are needed.
func addBlock(sums, a, b, c, d []float64, here, there, width, other int) {
	gram := make([]float64, other*other)
	kernel.AddCrossProducts(gram, d, there, other)
	values, vectors, err := symeig.Decompose(gram, other)
	if err != nil {
		return // not finite: the evidence is finite, so this cannot be
	}
	turned := make([]float64, other*there)
	for i := range there {
		for j := range other {
			turned[j*there+i] = d[i*other+j]
		}
	}
	dc := make([]float64, other*width)
	kernel.Multiply(dc, turned, c, other, there, width)
	for k := range sums {
		if k > 0 {
			i := k - 1
			if i >= other || values[i] <= 1e-12*math.Max(values[0], 0) {
				// Nothing left to add: the prediction stays as it was.
			} else {
				direction, weight := make([]float64, here), make([]float64, width)
				v := make([]float64, other)
				for j := range v {
					v[j] = vectors[j*other+i]
				}
				kernel.Multiply(direction, b, v, here, other, 1)
				for j := range v {
					kernel.Axpy(v[j]/values[i], dc[j*width:(j+1)*width], weight)
				}
				for r := range here {
					kernel.Axpy(-direction[r], weight, a[r*width:(r+1)*width])
				}
			}
		}
		sums[k] += kernel.Dot(a, a)
	}
}
