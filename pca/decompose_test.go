package pca_test

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"axisfold/pca"
	"axisfold/testdata/published"
)

func options(names []string, matrix pca.Matrix, method pca.Method) pca.Options {
	o := pca.Options{Names: names, Matrix: matrix}
	for range names {
		o.Methods = append(o.Methods, method)
	}
	return o
}

func decompose(t *testing.T, table published.Table, form pca.Form, matrix pca.Matrix, method pca.Method) *pca.Decomposition {
	t.Helper()
	d, err := pca.Decompose(inBlocks(table.Data, len(table.Names), form, 5), options(table.Names, matrix, method))
	if err != nil {
		t.Fatal(err)
	}
	return d
}

var bothForms = []pca.Form{pca.CrossProducts, pca.Factor}

// published roots and vectors, each printed to the digits shown; tolerance is half a unit
// of the last printed digit, or one unit where the source truncates.
func TestPublishedDecompositions(t *testing.T) {
	cases := []struct {
		file      string
		matrix    pca.Matrix
		values    []float64
		tolerance float64
		vectors   [][]float64 // by component, up to sign
		vectorTol float64
	}{
		// NIST/SEMATECH e-Handbook 6.5.5.2, printed; .91 there is .918 cut off.
		{"reference/handbook/pmc552_wafer_10x3.csv", pca.Correlation, []float64{1.769, .927, .304}, 5e-4,
			[][]float64{{.64, .69, -.34}, {.38, .10, .91}, {-.66, .72, .20}}, 1e-2},
		// US arrests (World Almanac 1975; McNeil 1977), printed variances and first two vectors.
		{"reference/classic/us_arrests_1973.csv", pca.Correlation, []float64{2.4802416, .9897652, .3565632, .1734301}, 5e-8,
			[][]float64{{.5358995, .5831836, .2781909, .5434321}, {.4181809, .1879856, -.8728062, -.1673186}}, 1e-7},
		// Fisher 1936 iris, printed roots and first vector.
		{"reference/classic/iris_fisher.csv", pca.Correlation, []float64{2.91849782, .91403047, .14675688, .02071484}, 5e-9,
			[][]float64{{.5210659, -.2693474, .5804131, .5648565}}, 1e-7},
		// Jackson 1991, two-method chemical example, printed from a covariance rounded to
		// four digits, hence the tolerance.
		{"reference/classic/chemical_two_methods_15x2.csv", pca.Covariance, []float64{1.4465, .0864}, 1e-4,
			[][]float64{{.7236, .6902}}, 1e-4},
	}
	for _, c := range cases {
		table := published.CSV(t, c.file)
		method := pca.UnitNormal
		if c.matrix == pca.Covariance {
			method = pca.CenterOnly
		}
		for _, form := range bothForms {
			d := decompose(t, table, form, c.matrix, method)
			for a, want := range c.values {
				if math.Abs(d.Values[a]-want) > c.tolerance {
					t.Errorf("%s form %d: root %d = %.9g, printed %g", c.file, form, a+1, d.Values[a], want)
				}
			}
			for a, vector := range c.vectors {
				dot := 0.0
				for j, v := range vector {
					dot += v * d.Vector(j, a)
				}
				for j, v := range vector {
					if got := d.Vector(j, a) * math.Copysign(1, dot); math.Abs(got-v) > c.vectorTol {
						t.Errorf("%s form %d: vector %d entry %d = %.8f, printed %g", c.file, form, a+1, j+1, got, v)
					}
				}
			}
		}
	}
}

// NIST/SEMATECH e-Handbook 6.5.5.2: correlations, product of the roots, communalities
// with two components and the printed loading .91 of variable 2 on component 1 (cut off;
// .91283 in full).
func TestHandbookCommunalities(t *testing.T) {
	table := published.CSV(t, "reference/handbook/pmc552_wafer_10x3.csv")
	for _, form := range bothForms {
		d := decompose(t, table, form, pca.Correlation, pca.UnitNormal)
		for j, want := range []float64{.8662, .8420, .9876} {
			if got := d.Communality(j, 2); math.Abs(got-want) > 5e-5 {
				t.Errorf("communality %d = %.6f, printed %g", j+1, got, want)
			}
			if got := d.Communality(j, 3); math.Abs(got-1) > 1e-14 {
				t.Errorf("communality %d with all components = %.17g, want 1", j+1, got)
			}
		}
		if got := d.Loading(1, 0); math.Abs(got-.9128) > 5e-5 {
			t.Errorf("loading %.6f", got)
		}
		if product := d.Values[0] * d.Values[1] * d.Values[2]; math.Abs(product-.499) > 5e-4 {
			t.Errorf("product of roots %.6f, printed .499", product)
		}
	}
}

// Invariants over a sweep of shapes, matrices, scalings and both forms: orthonormal
// vectors, the matrix multiplied back, descending roots adding up to the trace, scores
// whose variances are the roots, and the identities ΣT² = k(n-1), ΣSPE = (n-1)Σ dropped.
func TestInvariants(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	for _, shape := range [][2]int{{2, 1}, {2, 2}, {3, 2}, {5, 9}, {30, 4}, {100, 23}, {12, 40}} {
		n, p := shape[0], shape[1]
		for _, scale := range []float64{1e-150, 1, 1e150} {
			x := correlated(rng, n, p, scale)
			names := make([]string, p)
			for j := range names {
				names[j] = fmt.Sprint("c", j)
			}
			for _, matrix := range []pca.Matrix{pca.Correlation, pca.Covariance} {
				for _, method := range pca.Methods {
					if scale != 1 && (matrix == pca.Covariance && (method == pca.CenterOnly || method == pca.NoScaling || method == pca.Pareto)) {
						continue // the squares of such roots leave double precision
					}
					for _, form := range bothForms {
						b := pca.NewBuilder(p, form, n)
						s := b.Summarize(x, n)
						d, err := pca.Decompose(s, options(names, matrix, method))
						if err != nil {
							t.Fatalf("n=%d p=%d %s %s: %v", n, p, matrix, method, err)
						}
						checkInvariants(t, fmt.Sprintf("n=%d p=%d scale=%g %s %s form %d", n, p, scale, matrix, method, form), d, x)
					}
				}
			}
		}
	}
}

func correlated(rng *rand.Rand, n, p int, scale float64) []float64 {
	x := make([]float64, n*p)
	for r := range n {
		common := rng.NormFloat64()
		for j := range p {
			x[r*p+j] = scale * (float64(j) + common + rng.NormFloat64()*(1+float64(j)/10))
		}
	}
	return x
}

func checkInvariants(t *testing.T, name string, d *pca.Decomposition, x []float64) {
	t.Helper()
	n, p, m := d.Rows, d.Width(), d.Components()
	// Backward stability: ε times a modest multiple of the size.
	slack := 64 * 0x1p-52 * float64(n+p)
	sum := 0.0
	for a := range m {
		if a > 0 && d.Values[a] > d.Values[a-1] {
			t.Errorf("%s: roots not descending", name)
		}
		sum += d.Values[a]
		for b := a; b < m; b++ {
			dot := 0.0
			for j := range p {
				dot += d.Vector(j, a) * d.Vector(j, b)
			}
			want := 0.0
			if a == b {
				want = 1
			}
			if math.Abs(dot-want) > slack {
				t.Errorf("%s: vectors %d,%d: product %g", name, a, b, dot)
			}
		}
	}
	if math.Abs(sum-d.Total) > slack*d.Total {
		t.Errorf("%s: roots add up to %g, trace %g", name, sum, d.Total)
	}
	k := min(d.Rank, 2)
	scorer := d.NewScorer(pca.FirstComponents(k))
	scores, t2, spe := make([]float64, n*k), make([]float64, n), make([]float64, n)
	scorer.Scores(scores, t2, spe, x, n)
	variances := pca.NewBuilder(k, pca.CrossProducts, 0).Summarize(scores, n)
	for a := range k {
		got := variances.CenteredSquares(a) / float64(n-1)
		if math.Abs(got-d.ScoreVariances[a]) > 1e3*slack*d.ScoreVariances[a] {
			t.Errorf("%s: variance of scores %d = %g, want %g", name, a, got, d.ScoreVariances[a])
		}
	}
	sumT2, sumSPE, dropped := 0.0, 0.0, 0.0
	for r := range n {
		sumT2 += t2[r]
		sumSPE += spe[r]
	}
	for _, v := range d.ScoreVariances[k:] {
		dropped += v
	}
	if want := float64(k * (n - 1)); math.Abs(sumT2-want) > 1e3*slack*want {
		t.Errorf("%s: ΣT² = %g, want %g", name, sumT2, want)
	}
	if want := dropped * float64(n-1); math.Abs(sumSPE-want) > 1e3*slack*(want+d.ScoreVariances[0]) {
		t.Errorf("%s: ΣSPE = %g, want %g", name, sumSPE, want)
	}
}

// Läuchli's matrix: rows (1,1), (e,0), (0,e). With e = 1e-9 its cross-products round to
// a singular matrix, while a factor keeps the small singular value; here in the form of
// two channels that differ by 1e-9 of their spread, whose smaller covariance root is
// known in closed form.
func TestFactorKeepsSmallRoots(t *testing.T) {
	e := 1e-9
	x := []float64{1, 1 + e, -1, -1 + e, 2, 2 - e, -2, -2 - e}
	names := []string{"a", "b"}
	o := options(names, pca.Covariance, pca.CenterOnly)
	d, err := pca.Decompose(pca.NewBuilder(2, pca.Factor, 0).Summarize(x, 4), o)
	if err != nil {
		t.Fatal(err)
	}
	// a = (1,-1,2,-2), b = a + e·(1,1,-1,-1): orthogonal, so S = [10 10; 10 10+4e²]/3 and
	// the smaller root is det/trace = (40e²/9)/(20/3) = 2e²/3 up to e⁴.
	want := 2 * e * e / 3
	if rel := math.Abs(d.Values[1]-want) / want; rel > 1e-6 {
		t.Errorf("small root %g, want %g", d.Values[1], want)
	}
}

// Two unit scalings have the same vectors and roots; T² of a row does not depend on scale.
func TestUnitScalingsAgree(t *testing.T) {
	table := published.CSV(t, "reference/classic/hald_cement.csv")
	for _, form := range bothForms {
		normal := decompose(t, table, form, pca.Correlation, pca.UnitNormal)
		length := decompose(t, table, form, pca.Correlation, pca.UnitLength)
		for i, v := range normal.Vectors {
			if math.Abs(v-length.Vectors[i]) > 1e-12 {
				t.Errorf("vector entry %d: %g and %g", i, v, length.Vectors[i])
			}
		}
		for a, l := range normal.Values {
			if math.Abs(l-length.Values[a]) > 1e-13*normal.Values[0] {
				t.Errorf("root %d: %g and %g", a, l, length.Values[a])
			}
			if want := l / 12; math.Abs(length.ScoreVariances[a]-want) > 1e-14 {
				t.Errorf("score variance %d: %g, want %g", a, length.ScoreVariances[a], want)
			}
		}
	}
}

func TestUnusableData(t *testing.T) {
	names := []string{"a", "b"}
	cases := []struct {
		name string
		x    []float64
		o    pca.Options
		want string
	}{
		{"one row", []float64{1, 2}, options(names, pca.Correlation, pca.UnitNormal), "1 complete rows; at least 2 are needed"},
		{"constant", []float64{1, 2, 1, 3, 1, 4}, options(names, pca.Correlation, pca.UnitNormal), `channel "a": holds one value, 1, in all 3 rows`},
		{"overflow", []float64{1e200, 2, -1e200, 3, 1, 4}, options(names, pca.Correlation, pca.UnitNormal),
			`channel "a": values between -1e+200 and 1e+200 overflow double precision when squared`},
		{"no deviation", []float64{1, 2, 1, 3, 1, 4, 2, 5}, options(names, pca.Covariance, pca.MedianMAD),
			`channel "a": holds one value in more than half of the rows, so its median absolute deviation is 0`},
	}
	for _, c := range cases {
		b := pca.NewBuilder(2, pca.CrossProducts, 16)
		_, err := pca.Decompose(b.Summarize(c.x, len(c.x)/2), c.o)
		var data *pca.DataError
		if !errors.As(err, &data) || err.Error() != c.want {
			t.Errorf("%s: %v, want %s", c.name, err, c.want)
		}
	}
}

func TestSignConvention(t *testing.T) {
	// Channels b = -a: vectors (.7,-.7) and (.7,.7) tie, so the first entry is positive.
	x := []float64{1, -1.5, 2, -2.1, 3, -2.9, 4, -4.4}
	for _, form := range bothForms {
		d, err := pca.Decompose(pca.NewBuilder(2, form, 0).Summarize(x, 4), options([]string{"a", "b"}, pca.Correlation, pca.UnitNormal))
		if err != nil {
			t.Fatal(err)
		}
		for a := range 2 {
			if d.Vector(0, a) < 0 {
				t.Errorf("form %d: vector %d starts with %g", form, a, d.Vector(0, a))
			}
		}
	}
}
