package pcr_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"axisfold/pca"
	"axisfold/pcr"
	"axisfold/testdata/published"
)

// The chance of every number of components against errors of models fitted to rows and all signs
// gone through one by one: exact up to twelve folds, beyond within the error of the draws.
func TestRandomisationTest(t *testing.T) {
	for _, folds := range []int{6, 14} {
		s := defaults("a", "b", "c", "d", "e", "y")
		const n = 84
		data := collinear(rand.New(rand.NewPCG(9, 4)), n, 5)
		size := n / folds * 6
		at := func(c int) []float64 { return data[c*size : (c+1)*size] }
		s.folds, s.options.Choice, s.options.Alpha, s.options.Seed = folds, pcr.RandomisationTest, .05, 3
		m := s.fit(t, data).Models[0]
		best := 0
		for k, step := range m.Path {
			if step.CV < m.Path[best].CV {
				best = k
			}
		}
		want := best
		for k := range best {
			sums := []float64{0}
			seen := 0.0
			for _, split := range pca.HoldEachOut(folds) {
				a, _ := brute(t, s, at, split, k)
				b, _ := brute(t, s, at, split, best)
				seen += a - b
				var next []float64
				for _, v := range sums {
					next = append(next, v+a-b, v-a+b)
				}
				sums = next
			}
			count := 0
			for _, v := range sums {
				if v >= seen-1e-9 {
					count++
				}
			}
			exact, slip := float64(count)/float64(len(sums)), 1e-12
			if folds > 12 {
				slip = 4*math.Sqrt(exact*(1-exact)/9999) + 1e-4
			}
			if got := m.Path[k].Chance; math.Abs(got-exact) > slip {
				t.Errorf("%d folds, k = %d: chance %g, by going through all signs %g", folds, k, got, exact)
			}
			if exact > .05 && k < want {
				want = k
			}
		}
		if m.Components != want || best == 0 {
			t.Errorf("%d folds: %d components, want %d of %d", folds, m.Components, want, best)
		}
	}
}

// Four folds have sixteen signs: no difference is rarer than 0.0625.
func TestRandomisationTestNeedsFolds(t *testing.T) {
	s := defaults("a", "b", "c", "d", "e", "y")
	s.folds, s.options.Choice, s.options.Alpha = 4, pcr.RandomisationTest, .05
	whole, folds := s.summaries(collinear(rand.New(rand.NewPCG(9, 4)), 40, 5))
	x, y := s.positions()
	if _, err := pcr.Fit(whole, folds, x, y, s.fitOptions()); err == nil {
		t.Error("no error")
	}
}

// Longley's roots (correlation matrix, computed once in NumPy: 4.6033771 1.1753405 0.2034254
// 0.0149283 0.0025521 0.00037671) have condition indices 1, 1.98, 4.76, 17.6, 42.5, 110.5.
func TestConditionLimitLongley(t *testing.T) {
	data := published.StRDRegression(t, "Longley")
	s := defaults(append(append([]string(nil), data.X.Names...), "y")...)
	s.options.Choice, s.options.Order = pcr.ConditionLimit, pcr.ByCorrelation
	for limit, want := range map[float64]int{1.5: 1, 2: 2, 30: 4, 43: 5, 111: 6} {
		s.options.Limit = limit
		m := s.fit(t, data.Joint()).Models[0]
		if m.Components != want || m.Entering[0] != 0 || m.Entering[want-1] != want-1 {
			t.Errorf("limit %g: %d components, want the first %d", limit, m.Components, want)
		}
	}
}
