package symeig

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// The way=gonum rows are the twin, EigenSym. It takes minutes from p = 2000 on.

func BenchmarkValues(b *testing.B) {
	for _, p := range []int{10, 50, 200, 1000} {
		a := kinds["cross"](rand.New(rand.NewPCG(1, 2)), p)
		scratch, dst := make([]float64, p*p), make([]float64, p)
		var w Work
		b.Run(fmt.Sprintf("way=own/p=%d", p), func(b *testing.B) {
			for b.Loop() {
				copy(scratch, a)
				Values(scratch, p, dst, &w)
			}
		})
		b.Run(fmt.Sprintf("way=gonum/p=%d", p), func(b *testing.B) { benchmarkGonum(b, a, p, false) })
	}
}

func BenchmarkDecompose(b *testing.B) {
	for _, p := range []int{10, 50, 200, 500, 1000, 2000} {
		a := kinds["cross"](rand.New(rand.NewPCG(1, 2)), p)
		scratch := make([]float64, p*p)
		for _, threads := range []int{1, 2} {
			b.Run(fmt.Sprintf("way=own/threads=%d/p=%d", threads, p), func(b *testing.B) {
				for b.Loop() {
					copy(scratch, a)
					if _, _, err := DecomposeOn(threads, scratch, p); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
		if p <= 500 {
			b.Run(fmt.Sprintf("way=gonum/threads=1/p=%d", p), func(b *testing.B) { benchmarkGonum(b, a, p, true) })
		}
	}
}

func benchmarkGonum(b *testing.B, a []float64, p int, vectors bool) {
	var e mat.EigenSym
	s := mat.NewSymDense(p, a)
	for b.Loop() {
		if !e.Factorize(s, vectors) {
			b.Fatal("no convergence")
		}
	}
}
