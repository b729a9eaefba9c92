package retain_test

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"

	"axisfold/pca"
	"axisfold/pca/retain"
)

func evidence(rows int, values []float64) *retain.Evidence {
	e := &retain.Evidence{Rows: rows, Matrix: pca.Correlation, Values: values, Rank: len(values), Seed: 1}
	for _, v := range values {
		e.Total += v
		e.Deviations = append(e.Deviations, 1)
	}
	return e
}

// bloodChemistry is the correlation matrix of Jolliffe 2002, Table 3.1 (n = 72), from
// memory; its roots agree with the printed ones of Table 6.1 to every printed digit.
var bloodChemistry = []float64{.290, .202, .415, -.055, .285, .419, -.105, -.376, -.521, -.877,
	-.252, -.349, -.441, -.076, .206, -.229, -.164, -.145, .023, .034, .192, .058, -.129, -.076, -.131, .151, .077, .423}

func bloodRoots(t *testing.T) []float64 {
	t.Helper()
	a := mat.NewSymDense(8, nil)
	for i, k := 0, 0; i < 8; i++ {
		a.SetSym(i, i, 1)
		for j := range i {
			a.SetSym(i, j, bloodChemistry[k])
			k++
		}
	}
	var eigen mat.EigenSym
	if !eigen.Factorize(a, false) {
		t.Fatal("no convergence")
	}
	values := eigen.Values(nil)
	slices.Reverse(values)
	// Printed: Jolliffe 2002, Table 6.1, p. 133.
	for a, want := range []float64{2.79, 1.53, 1.25, .78, .62, .49} {
		if math.Abs(values[a]-want) > .005 {
			t.Fatalf("root %d = %.4f, printed %g", a+1, values[a], want)
		}
	}
	return values
}

func apply(t *testing.T, name string, e *retain.Evidence, change func(*retain.Settings)) retain.Verdict {
	t.Helper()
	s := retain.Defaults()
	if change != nil {
		change(&s)
	}
	v, err := retain.Apply(name, e, s)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// The rules on Jolliffe's blood chemistry. Cumulative shares are printed in Table 6.1
// (34.9 54.1 69.7 79.4 87.2 93.3 %), so 80 % needs 5; the other numbers were computed once.
func TestBloodChemistry(t *testing.T) {
	e := evidence(72, bloodRoots(t))
	cases := []struct {
		rule   string
		change func(*retain.Settings)
		want   int
	}{
		{"share", func(s *retain.Settings) { s.AtLeast = .8 }, 5},
		{"share", func(s *retain.Settings) { s.AtLeast = .9 }, 6},
		{"share", func(s *retain.Settings) { s.AtLeast = 1 }, 8},
		{"eigenvalue-above", nil, 3},
		{"eigenvalue-above", func(s *retain.Settings) { s.Value = .7 }, 4},
		{"broken-stick", nil, 1},
		{"parallel", func(s *retain.Settings) { s.Reference = "mean" }, 3},
		{"parallel", nil, 2},
		{"fixed", func(s *retain.Settings) { s.Components = 7 }, 7},
	}
	for _, c := range cases {
		if v := apply(t, c.rule, e, c.change); v.Components != c.want {
			t.Errorf("%s %s: %d components, want %d (%s)", c.rule, v.Setting, v.Components, c.want, v.Note)
		}
	}
}

// Expected pieces of a broken stick in closed form: p = 4 gives 25/48, 13/48, 7/48, 3/48.
func TestBrokenStickPieces(t *testing.T) {
	v := apply(t, "broken-stick", evidence(50, []float64{2, 1, .6, .4}), nil)
	for a, want := range []float64{25. / 48, 13. / 48, 7. / 48, 3. / 48} {
		if math.Abs(v.Steps[a].Threshold-want) > 1e-15 {
			t.Errorf("piece %d = %.17g, want %.17g", a+1, v.Steps[a].Threshold, want)
		}
	}
}

// With two channels the first root of a correlation matrix is 1+|r|, and r of independent
// normal channels has a known law: the mean of the root is 1 + Γ((n-1)/2)/(√π·Γ(n/2)), its
// 95 % point 1 + t/√(n-2+t²) with t = t_{.975,n-2}. Closed forms; tolerance four Monte
// Carlo standard errors.
func TestParallelTwoChannels(t *testing.T) {
	for _, n := range []int{10, 20, 100} {
		replicates := 20000
		e := evidence(n, []float64{1.5, .5})
		set := func(reference string) func(*retain.Settings) {
			return func(s *retain.Settings) { s.Reference, s.Replicates = reference, replicates }
		}
		lgA, _ := math.Lgamma(float64(n-1) / 2)
		lgB, _ := math.Lgamma(float64(n) / 2)
		mean := 1 + math.Exp(lgA-lgB)/math.Sqrt(math.Pi)
		q := distuv.StudentsT{Sigma: 1, Nu: float64(n - 2)}.Quantile(.975)
		percentile := 1 + q/math.Sqrt(float64(n-2)+q*q)
		// |r| spreads by at most its root mean square 1/√(n-1); the density of |r| at the
		// 95 % point is above 0.4·√n·0.29, which bounds the error of the percentile.
		slip := 1 / math.Sqrt(float64(n-1)*float64(replicates))
		if got := apply(t, "parallel", e, set("mean")).Reference[0]; math.Abs(got-mean) > 4*slip {
			t.Errorf("n=%d: mean %.5f, closed form %.5f", n, got, mean)
		}
		if got := apply(t, "parallel", e, set("percentile")).Reference[0]; math.Abs(got-percentile) > 8*slip {
			t.Errorf("n=%d: 95 %% point %.5f, closed form %.5f", n, got, percentile)
		}
	}
}

// Reference roots computed once with 400,000 replicates in NumPy 1.24 (mean of correlation
// roots for n=13, p=4; n=72, p=8; 95 % points beside them); tolerance four standard errors
// of our 20,000 replicates, 0.5/√20000 at most for a mean and three times that for a
// percentile.
func TestParallelReference(t *testing.T) {
	cases := []struct {
		n          int
		mean, high []float64
	}{
		{13, []float64{1.6821, 1.1446, .7650, .4083}, []float64{2.085, 1.380, .977, .651}},
		{72, []float64{1.526, 1.319, 1.166, 1.035}, []float64{1.709, 1.442, 1.264, 1.120}},
		{100, []float64{1.5309, 1.3581, 1.2297, 1.1204, 1.0221}, []float64{1.687, 1.465, 1.316, 1.196, 1.091}},
	}
	width := map[int]int{13: 4, 72: 8, 100: 10}
	for _, c := range cases {
		values := make([]float64, width[c.n])
		for i := range values {
			values[i] = 1
		}
		e := evidence(c.n, values)
		for _, reference := range []string{"mean", "percentile"} {
			v := apply(t, "parallel", e, func(s *retain.Settings) { s.Reference, s.Replicates = reference, 20000 })
			want, slip := c.mean, 4*.3/math.Sqrt(20000)
			if reference == "percentile" {
				want, slip = c.high, 3*4*.3/math.Sqrt(20000)
			}
			for a, w := range want {
				if math.Abs(v.Reference[a]-w) > slip+5e-4 {
					t.Errorf("n=%d %s root %d: %.4f, want %.4f", c.n, reference, a+1, v.Reference[a], w)
				}
			}
		}
	}
}

// The triangular draw and the draw of rows are two routes to the same law; where both
// apply their mean roots agree within four standard errors of their difference.
func TestParallelRoutesAgree(t *testing.T) {
	for _, matrix := range []pca.Matrix{pca.Correlation, pca.Covariance} {
		// p = ν uses the triangle; one row less uses rows. Means change by O(1/n), so the
		// comparison is of the trace of squares, which is smooth in n.
		p := 30
		level := func(rows int) float64 {
			values := make([]float64, min(p, rows-1))
			for i := range values {
				values[i] = 1
			}
			e := evidence(rows, values)
			e.Matrix, e.Deviations = matrix, make([]float64, p)
			for j := range e.Deviations {
				e.Deviations[j] = 1
			}
			roots := retain.NullRoots(e, e.Rows, 2000)
			sum := 0.0
			for _, l := range roots {
				sum += l * l
			}
			return sum / 2000
		}
		// E Σl² of a correlation matrix is p + p(p-1)/ν; of a Wishart/ν p + p(p+1)/ν.
		for _, rows := range []int{p + 1, p, p / 2} {
			free := float64(rows - 1)
			want := float64(p) + float64(p*(p-1))/free
			if matrix == pca.Covariance {
				want = float64(p) + float64(p*(p+1))/free
			}
			if got := level(rows); math.Abs(got-want)/want > .01 {
				t.Errorf("%s n=%d: mean sum of squared roots %.3f, exact %.3f", matrix, rows, got, want)
			}
		}
	}
}

// The verdicts do not depend on the number of threads, not in a single bit.
func TestParallelThreads(t *testing.T) {
	var first []float64
	for _, threads := range []int{1, 2, 3, 7} {
		e := evidence(40, []float64{3, 1, .5, .3, .2})
		e.Threads = threads
		roots := retain.NullRoots(e, e.Rows, 50)
		if first == nil {
			first = roots
		} else if !slices.Equal(first, roots) {
			t.Errorf("%d threads give other roots", threads)
		}
	}
}

// Every rule in the list: between 0 and rank, steps as many as roots, a note, and for
// settings in an overview a stable name.
func TestConformance(t *testing.T) {
	tables := map[string]*retain.Evidence{
		"one channel":  evidence(10, []float64{1}),
		"two":          evidence(10, []float64{1.5, .5}),
		"ties":         evidence(100, []float64{1, 1, 1, 1}),
		"rank one":     evidence(100, []float64{4, 0, 0, 0}),
		"few rows":     {Rows: 4, Matrix: pca.Correlation, Values: []float64{6, 3, 1}, Total: 10, Rank: 3, Seed: 1, Deviations: []float64{1, 1, 1, 1, 1, 1, 1, 1, 1, 1}},
		"two rows":     {Rows: 2, Matrix: pca.Correlation, Values: []float64{3}, Total: 3, Rank: 1, Seed: 1, Deviations: []float64{1, 1, 1}},
		"covariance":   {Rows: 30, Matrix: pca.Covariance, Values: []float64{5e6, 2e3, 1}, Total: 5002001, Rank: 3, Seed: 1, Deviations: []float64{2000, 1000, 39}},
		"rank 2 of 4":  {Rows: 30, Matrix: pca.Correlation, Values: []float64{3, 1, 0, 0}, Total: 4, Rank: 2, Seed: 1, Deviations: []float64{1, 1, 1, 1}},
		"hair's width": evidence(30, []float64{1 + 1e-15, 1, 1 - 1e-15}),
	}
	for name, e := range tables {
		for _, rule := range retain.Names() {
			v := apply(t, rule, e, func(s *retain.Settings) { s.Replicates = 50; s.Components = 2 })
			where := fmt.Sprintf("%s on %s", rule, name)
			if v.Rule != rule || v.Note == "" || strings.Contains(v.Note, "NaN") {
				t.Errorf("%s: %+v", where, v)
			}
			if v.Abstains {
				continue
			}
			if v.Components < 0 || v.Components > e.Rank || len(v.Steps) != len(e.Values) {
				t.Errorf("%s: %d components of rank %d, %d steps", where, v.Components, e.Rank, len(v.Steps))
			}
			for _, s := range v.Steps {
				if math.IsNaN(s.Value) || math.IsNaN(s.Threshold) {
					t.Errorf("%s: NaN in %+v", where, v.Steps)
				}
			}
		}
	}
	if _, err := retain.Apply("kaisr", tables["two"], retain.Defaults()); err == nil || !strings.Contains(err.Error(), "known: fixed, share") {
		t.Errorf("unknown rule: %v", err)
	}
}

func BenchmarkParallel(b *testing.B) {
	for _, p := range []int{10, 50, 200} {
		for _, n := range []int{1000, p / 2} {
			values := make([]float64, min(p, n-1))
			e := &retain.Evidence{Rows: n, Matrix: pca.Correlation, Values: values, Rank: len(values), Seed: 1, Deviations: make([]float64, p)}
			b.Run(fmt.Sprintf("n=%d/p=%d/replicates=100", n, p), func(b *testing.B) {
				for b.Loop() {
					fresh := *e // without the roots kept from the round before
					retain.NullRoots(&fresh, fresh.Rows, 100)
				}
			})
		}
	}
}
