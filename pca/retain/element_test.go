package retain

import (
	"math"
	"math/rand/v2"
	"testing"

	"axisfold/pca"
	"axisfold/testdata/published"
)

// Hald's four ingredients, standardised once, every cell hidden alone, means taken anew:
// sums of squared errors computed once in NumPy. Without components the error is
// p(n-1)·(n/(n-1))².
func TestElementwiseHald(t *testing.T) {
	hald := published.CSV(t, "reference/classic/hald_cement.csv").Columns("x1", "x2", "x3", "x4")
	x := standardizedColumns(hald.Data, 4)
	c := elementCheck{x: x, n: 13, p: 4, most: 3, segments: 52, tolerance: 1e-10, rounds: 20000}
	got, unsettled := c.run()
	if unsettled > 0 {
		t.Errorf("%d fits did not settle", unsettled)
	}
	for k, want := range []float64{4. * 12 * 13 / 12 * 13 / 12, 58.627780, 19.184534, 1.322951} {
		if math.Abs(got[k]-want) > 2e-5*want {
			t.Errorf("%d components: %.6f, expected %.6f", k, got[k], want)
		}
	}
	// As quick as the rule is, it comes to the same number.
	e := evidenceOf(t, x, 13, 4)
	if v := elementCross.run(e, Defaults()); v.Abstains || v.Components != 3 {
		t.Errorf("%+v", v)
	}
}

func standardizedColumns(data []float64, p int) []float64 {
	n := len(data) / p
	s := pca.NewBuilder(p, pca.CrossProducts, 0).Summarize(data, n)
	x := make([]float64, len(data))
	for i := range x {
		x[i] = (data[i] - s.Mean(i%p)) / s.Deviation(i%p)
	}
	return x
}

func evidenceOf(t *testing.T, x []float64, n, p int) *Evidence {
	t.Helper()
	o := pca.Options{Matrix: pca.Correlation}
	for j := range p {
		o.Names, o.Methods = append(o.Names, string(rune('a'+j))), append(o.Methods, pca.UnitNormal)
	}
	d, err := pca.Decompose(pca.NewBuilder(p, pca.CrossProducts, 0).Summarize(x, n), o)
	if err != nil {
		t.Fatal(err)
	}
	e := EvidenceFor(d, make([]float64, p), 1, 0)
	e.Standardized = standardizedColumns(x, p)
	return &e
}

// Three drivers and noise give three, noise alone gives none, with cells hidden alone or
// in a pattern; the same bits on any number of threads. The error of rows left out and
// scored by themselves would fall on to the end.
func TestElementwiseFindsTheNumber(t *testing.T) {
	rng := rand.New(rand.NewPCG(91, 92))
	for _, c := range []struct{ n, p, k int }{{60, 8, 3}, {40, 8, 0}, {250, 12, 3}, {700, 10, 2}, {30, 6, 0}} {
		x := make([]float64, c.n*c.p)
		weights := make([]float64, c.k*c.p)
		for i := range weights {
			weights[i] = rng.NormFloat64()
		}
		for i := range c.n {
			for a := range c.k {
				f := rng.NormFloat64()
				for j := range c.p {
					x[i*c.p+j] += f * weights[a*c.p+j]
				}
			}
			for j := range c.p {
				x[i*c.p+j] += .4 * rng.NormFloat64()
			}
		}
		e := evidenceOf(t, x, c.n, c.p)
		quick := with(func(s *Settings) { s.Quick = true })
		v := elementCross.run(e, quick)
		if v.Abstains || v.Components != c.k {
			t.Errorf("%d × %d of %d: %d, abstains %v: %s", c.n, c.p, c.k, v.Components, v.Abstains, v.Note)
		}
		if c.n != 60 {
			continue
		}
		e.Threads = 1
		one := elementCross.run(e, quick)
		for threads := 2; threads < 4; threads++ {
			e.Threads = threads
			other := elementCross.run(e, quick)
			for i := range one.Steps {
				if one.Steps[i] != other.Steps[i] {
					t.Fatalf("other bits on %d threads", threads)
				}
			}
		}
	}
}

func TestElementwiseAbstains(t *testing.T) {
	rng := rand.New(rand.NewPCG(93, 94))
	noise := func(n, p int) *Evidence {
		x := make([]float64, n*p)
		for i := range x {
			x[i] = rng.NormFloat64()
		}
		return evidenceOf(t, x, n, p)
	}
	streamed := noise(50, 5)
	streamed.Standardized = nil
	quick := with(func(s *Settings) { s.Quick = true })
	for what, v := range map[string]Verdict{"rows not in memory": elementCross.run(streamed, Defaults()), "two channels": elementCross.run(noise(20, 2), Defaults()),
		"more channels than rows": elementCross.run(noise(9, 12), Defaults()), "long": elementCross.run(noise(300, 60), quick)} {
		if !v.Abstains || v.Note == "" {
			t.Errorf("%s: %+v", what, v)
		}
	}
}
