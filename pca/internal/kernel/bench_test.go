package kernel

import (
	"fmt"
	"math/rand/v2"
	"testing"
)

func BenchmarkAddCrossProducts(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	for _, p := range []int{10, 50, 200, 500, 2000} {
		n := 4096
		x, c := numbers(rng, n*p, 1), make([]float64, p*p)
		for _, w := range paths() {
			if w == plain && p > 500 {
				continue // seconds a call
			}
			b.Run(fmt.Sprintf("path=%s/n=%d/p=%d", w, n, p), func(b *testing.B) {
				force(b, w)
				for b.Loop() {
					AddCrossProducts(c, x, n, p)
				}
				reportFlops(b, n*p*(p+1))
			})
		}
	}
}

func BenchmarkMultiply(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	n, p := 4096, 50
	for _, k := range []int{1, 10, 50} {
		x, v, dst := numbers(rng, n*p, 1), numbers(rng, p*k, 1), make([]float64, n*k)
		for _, w := range paths() {
			b.Run(fmt.Sprintf("path=%s/n=%d/p=%d/k=%d", w, n, p, k), func(b *testing.B) {
				force(b, w)
				for b.Loop() {
					Multiply(dst, x, v, n, p, k)
				}
				reportFlops(b, 2*n*p*k)
			})
		}
	}
}

func BenchmarkVectors(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	for _, n := range []int{50, 1000} {
		x, y := numbers(rng, n, 1), numbers(rng, n, 1)
		for _, w := range paths() {
			for _, loop := range []struct {
				name  string
				flops int
				do    func()
			}{
				{"dot", 2 * n, func() { x[0] = Dot(x, y) }},
				{"axpy", 2 * n, func() { Axpy(1e-9, x, y) }},
				{"rotate", 6 * n, func() { Rotate(x, y, 0.6, 0.8) }},
			} {
				b.Run(fmt.Sprintf("loop=%s/path=%s/n=%d", loop.name, w, n), func(b *testing.B) {
					force(b, w)
					for b.Loop() {
						loop.do()
					}
					reportFlops(b, loop.flops)
				})
			}
		}
	}
}

func BenchmarkSymmetricMultiply(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	for _, n := range []int{48, 200, 1000, 2000} {
		ld := n | 8
		a, v, y := numbers(rng, n*ld, 1), numbers(rng, n, 1), make([]float64, n)
		for _, w := range paths() {
			b.Run(fmt.Sprintf("path=%s/n=%d", w, n), func(b *testing.B) {
				force(b, w)
				b.SetBytes(int64(4 * n * n))
				for b.Loop() {
					AddSymmetricMultiply(y, a, ld, v, 0, n, n)
				}
				reportFlops(b, 2*n*n)
			})
		}
	}
}

func BenchmarkUpperProduct(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	for _, shape := range [][2]int{{48, 16}, {200, 16}, {1000, 64}} {
		p, n := shape[0], shape[1]
		left, right, c := numbers(rng, n*p, 1), numbers(rng, n*p, 1), make([]float64, p*p)
		for _, w := range paths() {
			b.Run(fmt.Sprintf("path=%s/n=%d/p=%d", w, n, p), func(b *testing.B) {
				force(b, w)
				for b.Loop() {
					AddUpperProduct(c, p, left, right, p, n, 0, p, p)
				}
				reportFlops(b, n*p*(p+1))
			})
		}
	}
}

func BenchmarkColumns(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	n, p := 1024, 50
	x, mean := numbers(rng, n*p, 1), make([]float64, p)
	for _, w := range paths() {
		b.Run(fmt.Sprintf("loop=sums/path=%s/n=%d/p=%d", w, n, p), func(b *testing.B) {
			force(b, w)
			b.SetBytes(int64(8 * n * p))
			for b.Loop() {
				ColumnSums(mean, x, n, p)
			}
		})
		b.Run(fmt.Sprintf("loop=center/path=%s/n=%d/p=%d", w, n, p), func(b *testing.B) {
			force(b, w)
			b.SetBytes(int64(8 * n * p))
			clear(mean)
			for b.Loop() {
				CenterColumns(x, x, mean, n, p)
			}
		})
	}
}

func reportFlops(b *testing.B, flops int) {
	b.ReportMetric(float64(flops)*float64(b.N)/b.Elapsed().Seconds()/1e9, "GFLOP/s")
}
