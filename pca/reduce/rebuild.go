package reduce

import (
	"math"
	"slices"

	"axisfold/pca"
)

// Channel is one channel's part in the choice. For a kept channel R2FromKept is 1,
// ResidualSD 0 and the equation empty.
type Channel struct {
	Verdict      string  // "keep", "drop" or "protected"
	R2FromKept   float64 // on the fitted rows
	ResidualSD   float64 // original unit, divisor n-m-1; NaN where that is below 1
	Intercept    float64
	Coefficients []float64 // m, on Result.Kept in original units; 0 on kept channels that follow from others
	// Held-out numbers come from the equation refitted without each fold in turn and judged
	// on that fold; NaN below two folds. SD is the root mean squared error over all rows, R²
	// compares their squares with those about the mean of all rows.
	HeldOutR2, HeldOutSD float64
	WorstFoldSD          float64   // largest root mean squared error of one fold
	WithoutOne           []float64 // m: R² when the i-th kept channel fails too
}

// regression holds what the rebuilding of all dropped channels from the kept ones needs.
type regression struct {
	used []int // places in kept of channels with coefficients, in pivot order
	// lower is the Cholesky factor L of the correlations of the used channels, u×u.
	lower []float64
}

// factorize chooses the largest pivot each time and leaves out dependent channels. At
// gives the correlation of kept channels a and b, by place.
func factorize(m int, at func(a, b int) float64, floor float64) regression {
	full := make([]float64, m*m) // row a: the entries of L of kept channel a
	left := make([]float64, m)
	taken := make([]bool, m)
	for a := range left {
		left[a] = at(a, a)
	}
	var f regression
	for len(f.used) < m {
		best := -1
		for a := range m {
			if !taken[a] && (best < 0 || left[a] > left[best]) {
				best = a
			}
		}
		if !(left[best] > floor) {
			break
		}
		k := len(f.used)
		taken[best] = true
		root := math.Sqrt(left[best])
		full[best*m+k] = root
		for a := range m {
			if taken[a] {
				continue
			}
			v := at(a, best)
			for c := range k {
				v -= full[a*m+c] * full[best*m+c]
			}
			v /= root
			full[a*m+k] = v
			left[a] -= v * v
		}
		f.used = append(f.used, best)
	}
	u := len(f.used)
	f.lower = make([]float64, u*u)
	for i, a := range f.used {
		copy(f.lower[i*u:i*u+i+1], full[a*m:a*m+i+1])
	}
	return f
}

// solve overwrites v, right-hand sides in pivot order, with (L·L')⁻¹·v and returns
// ‖L⁻¹·v‖², the variance explained.
func (f regression) solve(v []float64) (explained float64) {
	u := len(f.used)
	for i := range u {
		for c := range i {
			v[i] -= f.lower[i*u+c] * v[c]
		}
		v[i] /= f.lower[i*u+i]
		explained += v[i] * v[i]
	}
	for i := u - 1; i >= 0; i-- {
		for c := i + 1; c < u; c++ {
			v[i] -= f.lower[c*u+i] * v[c]
		}
		v[i] /= f.lower[i*u+i]
	}
	return explained
}

// inverseDiagonal returns the diagonal of (L·L')⁻¹ in pivot order.
func (f regression) inverseDiagonal() []float64 {
	u := len(f.used)
	out := make([]float64, u)
	for i := range u {
		e := make([]float64, u)
		e[i] = 1
		f.solve(e)
		out[i] = e[i]
	}
	return out
}

// rebuild returns the equations of all channels fitted on the rows of s.
func (q *problem) rebuild(s *pca.Summary, kept []int) []Channel {
	p, m := q.p, len(kept)
	r := s.Correlations()
	floor := q.floor[0] / q.m[0]
	at := func(a, b int) float64 { return r[kept[a]*p+kept[b]] }
	f := factorize(m, at, floor)
	diagonal := f.inverseDiagonal()
	// Where kept channels depend on one another a failing one may be stood in for: then
	// each failure is a regression of its own.
	var failed []regression
	if len(f.used) < m {
		failed = make([]regression, m)
		for i := range m {
			others := slices.Delete(slices.Clone(kept), i, i+1)
			failed[i] = factorize(m-1, func(a, b int) float64 { return r[others[a]*p+others[b]] }, floor)
		}
	}
	out := make([]Channel, p)
	each(p, q.Threads, func(j int) {
		c := &out[j]
		c.HeldOutR2, c.HeldOutSD, c.WorstFoldSD = math.NaN(), math.NaN(), math.NaN()
		if slices.Contains(kept, j) {
			c.Verdict, c.R2FromKept = "keep", 1
			if len(q.Protect) > 0 && q.Protect[j] {
				c.Verdict = "protected"
			}
			return
		}
		c.Verdict = "drop"
		v := make([]float64, len(f.used))
		for i, a := range f.used {
			v[i] = r[j*p+kept[a]]
		}
		left := math.Max(0, 1-f.solve(v))
		c.R2FromKept = r2Of(left, floor)
		c.ResidualSD = math.NaN()
		if df := q.n - m - 1; df >= 1 {
			c.ResidualSD = s.Deviation(j) * math.Sqrt(left*float64(q.n-1)/float64(df))
		}
		c.Coefficients, c.WithoutOne = make([]float64, m), make([]float64, m)
		c.Intercept = s.Mean(j)
		for i, a := range f.used {
			c.Coefficients[a] = v[i] * s.Deviation(j) / s.Deviation(kept[a])
			c.Intercept -= c.Coefficients[a] * s.Mean(kept[a])
			c.WithoutOne[a] = math.Max(0, r2Of(left+v[i]*v[i]/diagonal[i], floor))
		}
		for i, g := range failed {
			w := make([]float64, len(g.used))
			for k, a := range g.used {
				if a >= i {
					a++
				}
				w[k] = r[j*p+kept[a]]
			}
			c.WithoutOne[i] = math.Max(0, r2Of(1-g.solve(w), floor))
		}
	})
	return out
}

// r2Of is 1 - left, and 1 where left is rounding.
func r2Of(left, floor float64) float64 {
	if left <= floor {
		return 1
	}
	return 1 - left
}
