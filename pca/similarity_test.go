package pca_test

import (
	"math/rand/v2"
	"slices"
	"testing"

	"axisfold/pca"
)

// Three pairs of channels, alike within and hardly alike between, shuffled: partners must
// stand side by side, and the pairs in the order of their own likeness.
func TestSimilarOrderOfPairs(t *testing.T) {
	pair := map[int]int{0: 3, 3: 0, 1: 5, 5: 1, 2: 4, 4: 2}
	r := make([]float64, 36)
	for i := range 6 {
		for j := range 6 {
			switch {
			case i == j:
				r[i*6+j] = 1
			case pair[i] == j:
				r[i*6+j] = -.9 // a negative partner is as alike as a positive one
			default:
				r[i*6+j] = .1
			}
		}
	}
	// The pairs (0,3) and (1,5) share a little more.
	for _, c := range [][2]int{{0, 1}, {0, 5}, {3, 1}, {3, 5}} {
		r[c[0]*6+c[1]], r[c[1]*6+c[0]] = .3, .3
	}
	order := pca.SimilarOrder(r, 6)
	for i := 0; i < 6; i += 2 {
		if pair[order[i]] != order[i+1] {
			t.Fatalf("partners apart: %v", order)
		}
	}
	if at := slices.Index(order, 2) / 2; at == 1 {
		t.Errorf("the pair that shares least stands between the others: %v", order)
	}
}

// Every channel stands once, whatever the matrix, and the same matrix gives the same order.
func TestSimilarOrderIsAnOrder(t *testing.T) {
	rng := rand.New(rand.NewPCG(51, 52))
	for _, p := range []int{0, 1, 2, 3, 17, 200} {
		r := make([]float64, p*p)
		for i := range p {
			for j := range i {
				v := 2*rng.Float64() - 1
				if rng.IntN(3) == 0 {
					v = .5 // ties
				}
				r[i*p+j], r[j*p+i] = v, v
			}
		}
		order := pca.SimilarOrder(r, p)
		sorted := slices.Sorted(slices.Values(order))
		if len(order) != p {
			t.Fatalf("p=%d: %d channels", p, len(order))
		}
		for j, v := range sorted {
			if v != j {
				t.Fatalf("p=%d: %v", p, sorted)
			}
		}
		if !slices.Equal(order, pca.SimilarOrder(r, p)) {
			t.Errorf("p=%d: another order the second time", p)
		}
	}
}

// Copies up to scale are found, near copies are not.
func TestTwins(t *testing.T) {
	x := []float64{1, -2, 1.1, 5, 2, -4, 2, 3, 3, -6, 2.9, 4, 4, -8, 4.2, 1}
	s := pca.NewBuilder(4, pca.CrossProducts, 0).Summarize(x, 4)
	if got := pca.Twins(s.Correlations(), 4); len(got) != 1 || got[0] != [2]int{0, 1} {
		t.Errorf("%v", got)
	}
}

func BenchmarkSimilarOrder(b *testing.B) {
	p := 1000
	rng := rand.New(rand.NewPCG(1, 1))
	r := make([]float64, p*p)
	for i := range p {
		for j := range i {
			v := 2*rng.Float64() - 1
			r[i*p+j], r[j*p+i] = v, v
		}
	}
	b.Run("p=1000", func(b *testing.B) {
		for b.Loop() {
			pca.SimilarOrder(r, p)
		}
	})
}
