package reduce

import (
	"math"
	"math/rand/v2"
	"testing"

	"axisfold/pca"
)

// hald are the four ingredients of Hald 1952, Statistical Theory with Engineering
// Applications, p. 647 (from memory; they reproduce the known least-squares fit).
var hald = []float64{7, 26, 6, 60, 1, 29, 15, 52, 11, 56, 8, 20, 11, 31, 8, 47, 7, 52, 6, 33, 11, 55, 9, 22, 3, 71, 17, 6,
	1, 31, 22, 44, 2, 54, 18, 22, 21, 47, 4, 26, 1, 40, 23, 34, 11, 66, 9, 12, 10, 68, 8, 12}

// blood is the lower triangle of Jolliffe 2002, Principal Component Analysis, Table 3.1
// (from memory; its eigenvalues match the printed Table 6.1).
var blood = []float64{.290, .202, .415, -.055, .285, .419, -.105, -.376, -.521, -.877, -.252, -.349, -.441, -.076, .206,
	-.229, -.164, -.145, .023, .034, .192, .058, -.129, -.076, -.131, .151, .077, .423}

func summary(x []float64, p int) *pca.Summary {
	return pca.NewBuilder(p, pca.CrossProducts, 0).Summarize(x, len(x)/p)
}

// fromTriangle is the summary of rows that have the correlations given: with R = L·L' the
// rows of L' and of -L' have mean 0 and cross-products 2R.
func fromTriangle(lower []float64, p int) *pca.Summary {
	l := make([]float64, p*p)
	at := 0
	for i := range p {
		for j := 0; j <= i; j++ {
			v := 1.0
			if j < i {
				v = lower[at]
				at++
			}
			for c := range j {
				v -= l[i*p+c] * l[j*p+c]
			}
			if i == j {
				l[i*p+i] = math.Sqrt(v)
			} else {
				l[i*p+j] = v / l[j*p+j]
			}
		}
	}
	var x []float64
	for _, sign := range []float64{1, -1} {
		for c := range p {
			for i := range p {
				x = append(x, sign*l[i*p+c])
			}
		}
	}
	return summary(x, p)
}

// rows are n rows of p channels in own units that share about a third as many stories.
func rows(rng *rand.Rand, n, p int, noise float64) []float64 {
	k := max(2, p/3)
	weights := make([]float64, k*p)
	for i := range weights {
		weights[i] = rng.NormFloat64() * math.Exp2(-float64(i/p)/4)
	}
	x := make([]float64, n*p)
	story := make([]float64, k)
	for r := range n {
		for c := range story {
			story[c] = rng.NormFloat64()
		}
		for j := range p {
			v := noise * rng.NormFloat64()
			for c := range story {
				v += story[c] * weights[c*p+j]
			}
			x[r*p+j] = v*float64(1+j%5) + 100*float64(j)
		}
	}
	return x
}

// mirror is an independent route to what K leaves: ordinary Gaussian elimination on M_KK
// for every pair of dropped channels.
func mirror(m []float64, p int, kept []int) (dropped []int, left []float64) {
	in := make([]bool, p)
	for _, j := range kept {
		in[j] = true
	}
	for j := range p {
		if !in[j] {
			dropped = append(dropped, j)
		}
	}
	d, k := len(dropped), len(kept)
	left = make([]float64, d*d)
	for b, j := range dropped {
		a := make([]float64, k*(k+1))
		for i, u := range kept {
			for c, v := range kept {
				a[i*(k+1)+c] = m[u*p+v]
			}
			a[i*(k+1)+k] = m[u*p+j]
		}
		x := eliminate(a, k)
		for r, i := range dropped {
			left[r*d+b] = m[i*p+j]
			for c, v := range kept {
				left[r*d+b] -= m[i*p+v] * x[c]
			}
		}
	}
	return dropped, left
}

// eliminate solves the k×(k+1) system with partial pivoting.
func eliminate(a []float64, k int) []float64 {
	w := k + 1
	for c := range k {
		top := c
		for i := c; i < k; i++ {
			if math.Abs(a[i*w+c]) > math.Abs(a[top*w+c]) {
				top = i
			}
		}
		for j := range w {
			a[c*w+j], a[top*w+j] = a[top*w+j], a[c*w+j]
		}
		for i := range k {
			if i == c {
				continue
			}
			f := a[i*w+c] / a[c*w+c]
			for j := c; j < w; j++ {
				a[i*w+j] -= f * a[c*w+j]
			}
		}
	}
	x := make([]float64, k)
	for i := range x {
		x[i] = a[i*w+k] / a[i*w+i]
	}
	return x
}

func mustChoose(t testing.TB, s *pca.Summary, folds []*pca.Summary, o Options) *Result {
	t.Helper()
	r, err := Choose(s, folds, o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func near(t testing.TB, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %.12g, want %.12g within %g", what, got, want, tolerance)
	}
}
