package reduce

import (
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"axisfold/pca"
)

// fit is ordinary least squares with intercept on rows, by the normal equations about the means.
func fit(x []float64, p int, kept []int, j int) (intercept float64, b []float64) {
	n := len(x) / p
	mean := make([]float64, p)
	for i, v := range x {
		mean[i%p] += v / float64(n)
	}
	k := len(kept)
	a := make([]float64, k*(k+1))
	for r := range n {
		row := x[r*p:]
		for i, u := range kept {
			for c, v := range kept {
				a[i*(k+1)+c] += (row[u] - mean[u]) * (row[v] - mean[v])
			}
			a[i*(k+1)+k] += (row[u] - mean[u]) * (row[j] - mean[j])
		}
	}
	b = eliminate(a, k)
	intercept = mean[j]
	for i, u := range kept {
		intercept -= b[i] * mean[u]
	}
	return intercept, b
}

func squaredError(x []float64, p int, kept []int, j int, intercept float64, b []float64) float64 {
	sum := 0.0
	for r := range len(x) / p {
		e := x[r*p+j] - intercept
		for i, u := range kept {
			e -= b[i] * x[r*p+u]
		}
		sum += e * e
	}
	return sum
}

// Equations, residuals and held-out numbers against row-by-row least squares refitted per fold,
// in both forms of the summary.
func TestRebuildAgainstRows(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 1))
	p, n := 9, 90
	x := rows(rng, n, p, 0.5)
	cuts := []int{0, 20, 55, 90}
	for _, form := range []pca.Form{pca.CrossProducts, pca.Factor} {
		b := pca.NewBuilder(p, form, 0)
		var folds []*pca.Summary
		for i := range 3 {
			folds = append(folds, b.Summarize(x[cuts[i]*p:cuts[i+1]*p], cuts[i+1]-cuts[i]))
		}
		s := pca.MergeAll(folds...)
		r := mustChoose(t, s, folds, Options{Size: 4})
		for _, j := range r.Dropped {
			c := r.Channels[j]
			a, coefficients := fit(x, p, r.Kept, j)
			sse := squaredError(x, p, r.Kept, j, a, coefficients)
			near(t, "intercept", c.Intercept, a, 1e-9*1000)
			for i := range r.Kept {
				near(t, "coefficient", c.Coefficients[i], coefficients[i], 1e-10)
				others := slices.Delete(slices.Clone(r.Kept), i, i+1)
				oa, ob := fit(x, p, others, j)
				near(t, "without one", c.WithoutOne[i], 1-squaredError(x, p, others, j, oa, ob)/s.CenteredSquares(j), 1e-10)
			}
			near(t, "R2", c.R2FromKept, 1-sse/s.CenteredSquares(j), 1e-10)
			near(t, "SD", c.ResidualSD, math.Sqrt(sse/float64(n-4-1)), 1e-9)
			total, worst := 0.0, 0.0
			for i := range 3 {
				train := slices.Concat(x[:cuts[i]*p], x[cuts[i+1]*p:])
				ta, tb := fit(train, p, r.Kept, j)
				e := squaredError(x[cuts[i]*p:cuts[i+1]*p], p, r.Kept, j, ta, tb)
				total += e
				worst = math.Max(worst, math.Sqrt(e/float64(cuts[i+1]-cuts[i])))
			}
			near(t, "held-out R2", c.HeldOutR2, 1-total/s.CenteredSquares(j), 1e-10)
			near(t, "held-out SD", c.HeldOutSD, math.Sqrt(total/float64(n)), 1e-9)
			near(t, "worst fold", c.WorstFoldSD, worst, 1e-9)
		}
	}
}

// A copy and a sum of other channels are dropped with R² 1, even where 1 is asked for.
func TestDependentChannels(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 2))
	n, p := 40, 6
	x := make([]float64, n*p)
	for r := range n {
		row := x[r*p : r*p+p]
		for j := range 4 {
			row[j] = rng.NormFloat64()
		}
		row[4] = 3*row[0] + 7
		row[5] = row[1] + row[2] - 2*row[3]
	}
	s := summary(x, p)
	r := mustChoose(t, s, nil, Options{Rebuild: 1})
	if len(r.Kept) != 4 || !r.Optimal {
		t.Errorf("kept %v", r.Kept)
	}
	for _, j := range r.Dropped {
		near(t, "R2", r.Channels[j].R2FromKept, 1, 0)
	}
	if !slices.ContainsFunc(r.Clusters, func(c []int) bool { return slices.Equal(c, []int{0, 4}) }) {
		t.Errorf("clusters %v lack the copy", r.Clusters)
	}
	// Both twins protected: one stands in for the other, and a warning says so.
	protect := make([]bool, p)
	protect[0], protect[4] = true, true
	r = mustChoose(t, s, nil, Options{Rebuild: 0.99, Protect: protect})
	if len(r.Kept) != 5 || r.Channels[0].Verdict != "protected" || r.Channels[4].Verdict != "protected" {
		t.Errorf("kept %v", r.Kept)
	}
	for _, j := range r.Dropped {
		for i, k := range r.Kept {
			if v := r.Channels[j].WithoutOne[i]; (k == 0 || k == 4) && v != 1 {
				t.Errorf("channel %d without twin %d: R2 %g", j, k, v)
			}
		}
	}
	if !slices.ContainsFunc(r.Warnings, func(w pca.Warning) bool { return w.Code == "dependent-kept" }) {
		t.Errorf("no word about dependent kept channels: %v", r.Warnings)
	}
	// More kept than independent.
	for _, name := range Criteria {
		r = mustChoose(t, s, nil, Options{Size: 5, Criterion: name, Components: 2})
		near(t, name, r.Criteria["worst-r2"], 1, 0)
	}
}

// The preferred one of two twins is kept.
func TestPrefer(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 3))
	n, p := 200, 6
	x := make([]float64, n*p)
	for r := range n {
		for j := range 3 {
			v := rng.NormFloat64()
			x[r*p+j], x[r*p+3+j] = v+0.01*rng.NormFloat64(), v+0.01*rng.NormFloat64()
		}
	}
	for mask := range uint(8) {
		prefer := make([]bool, p)
		want := []int{}
		for j := range 3 {
			prefer[j+3*int(mask>>j&1)] = true
		}
		for j, w := range prefer {
			if w {
				want = append(want, j)
			}
		}
		for _, o := range []Options{{Size: 3, Criterion: "rm"}, {Size: 3}, {}, {ExactUpTo: 1}, {Size: 3, Criterion: "mccabe-det"}} {
			o.Prefer = prefer
			if r := mustChoose(t, summary(x, p), nil, o); !slices.Equal(r.Kept, want) {
				t.Errorf("kept %v, preferred %v", r.Kept, want)
			}
		}
	}
}

// The curve rises to 1 and meets the result; all criteria are finite.
func TestCurve(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 4))
	s := summary(rows(rng, 80, 12, 0.4), 12)
	r := mustChoose(t, s, nil, Options{Size: 5, Criterion: "rm"})
	if len(r.Curve) != 12 || r.Curve[11].WorstR2 != 1 {
		t.Fatalf("curve %v", r.Curve)
	}
	for i, c := range r.Curve {
		if c.Kept != i+1 || c.WorstR2 > c.MeanR2 || !(c.WorstR2 >= 0) {
			t.Errorf("point %+v", c)
		}
	}
	// Sets and costs belong to the numbers, and what is held out to the same equations.
	x := rows(rng, 80, 12, 0.4)
	folds := []*pca.Summary{summary(x[:40*12], 12), summary(x[40*12:], 12)}
	cost := []float64{1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12}
	r = mustChoose(t, pca.MergeAll(folds...), folds, Options{Size: 5, Cost: cost})
	point := r.Curve[4]
	worst, mean, total := 1.0, 0.0, 0.0
	for _, j := range r.Dropped {
		worst = math.Min(worst, r.Channels[j].HeldOutR2)
		mean += r.Channels[j].HeldOutR2 / 7
	}
	for _, j := range r.Kept {
		total += cost[j]
	}
	if !slices.Equal(point.Set, r.Kept) {
		t.Errorf("the curve keeps %v, the result %v", point.Set, r.Kept)
	}
	near(t, "held-out worst", point.HeldOutWorst, worst, 1e-12)
	near(t, "held-out mean", point.HeldOutMean, mean, 1e-12)
	near(t, "cost", point.Cost, total, 0)
	for _, c := range r.Curve[:11] {
		if len(c.Set) != c.Kept || !(c.HeldOutWorst <= c.HeldOutMean) {
			t.Errorf("point %+v", c)
		}
	}
	// Also where the greedy pass that the curve follows would not have found the set.
	for _, o := range []Options{{Size: 5, Criterion: "rm"}, {Rebuild: .6}, {Rebuild: .6, ExactUpTo: 1}, {Size: 4, Criterion: "mccabe-canonical"}} {
		r := mustChoose(t, s, nil, o)
		point := r.Curve[len(r.Kept)-1]
		near(t, "worst R2 of the curve", point.WorstR2, r.Criteria["worst-r2"], 1e-12)
		near(t, "mean R2 of the curve", point.MeanR2, r.Criteria["mean-r2"], 1e-12)
	}
	for name, v := range r.Criteria {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			t.Errorf("%s is %g", name, v)
		}
	}
	sorted := slices.Sorted(slices.Values(r.Order))
	if !slices.Equal(sorted, r.Kept) {
		t.Errorf("order %v is not of %v", r.Order, r.Kept)
	}
}

// A target met by chance, with as few rows as that takes, is told by rows left out.
func TestHeldOutWarning(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 6))
	p, n := 8, 10
	x := make([]float64, n*p)
	for i := range x {
		x[i] = rng.NormFloat64()
	}
	told := func(o Options) bool {
		folds := []*pca.Summary{summary(x[:n*p/2], p), summary(x[n*p/2:], p)}
		r := mustChoose(t, pca.MergeAll(folds...), folds, o)
		return slices.ContainsFunc(r.Warnings, func(w pca.Warning) bool { return w.Code == "held-out-below-target" })
	}
	if !told(Options{Rebuild: 0.7}) {
		t.Error("no word about chance")
	}
	if told(Options{Rebuild: 0.7, Tolerance: slices.Repeat([]float64{1000}, p), Protect: slices.Repeat([]bool{true}, p)}) {
		t.Error("a warning with every channel kept")
	}
	// A wide tolerance is met whatever the R-squared.
	if told(Options{Rebuild: 0.7, Tolerance: slices.Repeat([]float64{1000}, p)}) {
		t.Error("a warning beside a tolerance that is met")
	}
}

// Average linkage by the definition: r01 = .96, and 2 joins at (.93+.89)/2 = .91; 3 stays out.
func TestClusters(t *testing.T) {
	r := []float64{1, .96, -.93, .89, .96, 1, -.89, .5, -.93, -.89, 1, .1, .89, .5, .1, 1}
	if got := clusters(r, 4); len(got) != 1 || !slices.Equal(got[0], []int{0, 1, 2}) {
		t.Errorf("clusters %v", got)
	}
	r[2], r[8] = .90, .90 // now (.90+.89)/2 < .9
	if got := clusters(r, 4); len(got) != 1 || !slices.Equal(got[0], []int{0, 1}) {
		t.Errorf("clusters %v", got)
	}
}

func TestRefusals(t *testing.T) {
	s := summary(hald, 4)
	for _, c := range []struct {
		o    Options
		want string
	}{{Options{Matrix: "x"}, "neither"}, {Options{Criterion: "x"}, "known: worst-r2"}, {Options{Rebuild: 1.2}, "rebuild is 1.2"},
		{Options{Rebuild: math.NaN()}, "rebuild is NaN"}, {Options{Size: 5}, "size 5 with 4"}, {Options{Cost: []float64{1, -1, 1, 1}}, "cost -1"},
		{Options{Cost: []float64{1}}, "1 costs for 4"}, {Options{Criterion: "gcd"}, "components 0"}, {Options{Together: [][]int{{0, 9}}}, "channel 9"},
		{Options{Tolerance: []float64{1, -1, 1, 1}}, "tolerance -1"},
		{Options{Size: 1, Protect: []bool{true, true, false, false}}, "no set of 1"},
		{Options{Size: 3, Together: [][]int{{0, 1}, {2, 3}}}, "no set of 3"}} {
		if _, err := Choose(s, nil, c.o); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%+v: error %v, want %q", c.o, err, c.want)
		}
	}
	flat := []float64{1, 2, 1, 3, 1, 5, 1, 4}
	var data *pca.DataError
	if _, err := Choose(summary(flat, 2), nil, Options{}); !errors.As(err, &data) || data.Channel != "1" {
		t.Errorf("constant channel: %v", err)
	}
}

// Degenerate shapes run: one channel, fewer rows than channels.
func TestShapes(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 5))
	r := mustChoose(t, summary(rows(rng, 5, 1, 1), 1), nil, Options{})
	if !slices.Equal(r.Kept, []int{0}) {
		t.Errorf("one channel: kept %v", r.Kept)
	}
	x := rows(rng, 6, 10, 0.5)
	s := pca.NewBuilder(10, pca.Factor, 0).Summarize(x, 6)
	r = mustChoose(t, s, nil, Options{Rebuild: 1})
	if len(r.Kept) != 5 || !r.Optimal {
		t.Errorf("6 rows: kept %v", r.Kept)
	}
	if !slices.ContainsFunc(r.Warnings, func(w pca.Warning) bool { return w.Code == "few-rows" }) {
		t.Errorf("no word about few rows: %v", r.Warnings)
	}
}
