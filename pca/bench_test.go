package pca_test

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"axisfold/pca"
)

func BenchmarkSummarize(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	for _, p := range []int{50, 200} {
		n := 4096
		x := correlated(rng, n, p, 1)
		for form, name := range []string{"cross-products", "factor"} {
			b.Run(fmt.Sprintf("form=%s/n=%d/p=%d", name, n, p), func(b *testing.B) {
				builder := pca.NewBuilder(p, pca.Form(form), 0)
				b.SetBytes(int64(8 * n * p))
				for b.Loop() {
					builder.Summarize(x, n)
				}
			})
		}
	}
}

func BenchmarkDecompose(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	for _, p := range []int{50, 200} {
		n := 2000
		x := correlated(rng, n, p, 1)
		names := make([]string, p)
		for form, name := range []string{"eigen", "svd"} {
			s := pca.NewBuilder(p, pca.Form(form), 0).Summarize(x, n)
			b.Run(fmt.Sprintf("route=%s/n=%d/p=%d", name, n, p), func(b *testing.B) {
				for b.Loop() {
					if _, err := pca.Decompose(s, options(names, pca.Correlation, pca.UnitNormal)); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}
