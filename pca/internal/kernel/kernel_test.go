package kernel

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// paths are those that this machine can take.
func paths() []way {
	all := []way{plain, avx2, avx512}
	return all[:best()+1]
}

func force(t testing.TB, w way) {
	before := path
	path = w
	t.Cleanup(func() { path = before })
}

func numbers(rng *rand.Rand, n int, scale float64) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = rng.NormFloat64() * scale
	}
	return x
}

// sameBits compares bit for bit, all NaN being one.
func sameBits(a, b []float64) bool {
	return slices.EqualFunc(a, b, func(x, y float64) bool {
		return math.Float64bits(x) == math.Float64bits(y) || math.IsNaN(x) && math.IsNaN(y)
	})
}

func upper(c []float64, p int) []float64 {
	var out []float64
	for i := range p {
		out = append(out, c[i*p+i:i*p+p]...)
	}
	return out
}

// All paths give the bits of the specification over a sweep of shapes and scales.
func TestPathsAgree(t *testing.T) {
	rng := rand.New(rand.NewPCG(21, 22))
	for _, p := range []int{1, 2, 3, 4, 5, 7, 8, 9, 15, 16, 17, 23, 24, 31, 33, 50, 100, 129} {
		for _, n := range []int{0, 1, 2, 3, 5, 255, 256, 257, 600} {
			for _, scale := range []float64{1e-160, 1, 1e150} {
				x := numbers(rng, n*p, scale)
				if n > 3 && scale == 1 {
					x[p] = math.Inf(1)
				}
				start := numbers(rng, p*p, scale*scale)
				want := slices.Clone(start)
				addCrossProductsPlain(want, x, n, p)
				for _, k := range []int{1, 3, 8, 10, 17} {
					v := numbers(rng, p*k, 1)
					product := make([]float64, n*k)
					multiplyPlain(product, x, v, n, p, k)
					for _, w := range paths() {
						force(t, w)
						got := numbers(rng, n*k, 1)
						Multiply(got, x, v, n, p, k)
						if !sameBits(got, product) {
							t.Fatalf("path %d: product n=%d p=%d k=%d differs", w, n, p, k)
						}
					}
				}
				for _, w := range paths() {
					force(t, w)
					got := slices.Clone(start)
					AddCrossProducts(got, x, n, p)
					if !sameBits(upper(got, p), upper(want, p)) {
						t.Fatalf("path %d: cross-products n=%d p=%d scale=%g differ", w, n, p, scale)
					}
				}
			}
		}
	}
}

// The specification against sums in twice the precision: the error of a panel of m fused
// multiply-adds is below m·ε times the sum of magnitudes.
func TestAccuracy(t *testing.T) {
	rng := rand.New(rand.NewPCG(23, 24))
	n, p := 1000, 6
	x := numbers(rng, n*p, 1)
	c := make([]float64, p*p)
	AddCrossProducts(c, x, n, p)
	for i := range p {
		for j := i; j < p; j++ {
			high, low, size := 0.0, 0.0, 0.0
			for r := range n {
				a, b := x[r*p+i], x[r*p+j]
				product := a * b
				rest := math.FMA(a, b, -product)
				sum := high + product
				v := sum - high
				low += (high - (sum - v)) + (product - v) + rest
				high = sum
				size += math.Abs(product)
			}
			if e := math.Abs(c[i*p+j] - (high + low)); e > (panelRows+4)*0x1p-53*size {
				t.Errorf("%d,%d: error %g of %g", i, j, e, size)
			}
		}
	}
	a, b := numbers(rng, 37, 1), numbers(rng, 37, 1)
	want := 0.0
	for i := range a {
		want += a[i] * b[i]
	}
	if got := Dot(a, b); math.Abs(got-want) > 1e-13 {
		t.Errorf("dot %g, want %g", got, want)
	}
}

func BenchmarkAddCrossProducts(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	for _, p := range []int{50, 500} {
		n := 4096
		x, c := numbers(rng, n*p, 1), make([]float64, p*p)
		for _, w := range paths() {
			b.Run(fmt.Sprintf("path=%d/n=%d/p=%d", w, n, p), func(b *testing.B) {
				force(b, w)
				for b.Loop() {
					AddCrossProducts(c, x, n, p)
				}
				b.ReportMetric(float64(n)*float64(p)*float64(p+1)*float64(b.N)/b.Elapsed().Seconds()/1e9, "GFLOP/s")
			})
		}
	}
}

func BenchmarkMultiply(b *testing.B) {
	rng := rand.New(rand.NewPCG(1, 1))
	n, p := 4096, 50
	for _, k := range []int{10, 50} {
		x, v, dst := numbers(rng, n*p, 1), numbers(rng, p*k, 1), make([]float64, n*k)
		for _, w := range paths() {
			b.Run(fmt.Sprintf("path=%d/n=%d/p=%d/k=%d", w, n, p, k), func(b *testing.B) {
				force(b, w)
				for b.Loop() {
					Multiply(dst, x, v, n, p, k)
				}
				b.ReportMetric(2*float64(n)*float64(p)*float64(k)*float64(b.N)/b.Elapsed().Seconds()/1e9, "GFLOP/s")
			})
		}
	}
}
