package symeig

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// Invariants over shapes and kinds of matrices: descending values, orthonormal vectors,
// the matrix multiplied back, and Values agreeing with Decompose. Bounds: p·ε·|A|.
func TestDecompose(t *testing.T) {
	rng := rand.New(rand.NewPCG(31, 32))
	kinds := map[string]func(i, j, p int) float64{
		"random":   func(i, j, p int) float64 { return rng.NormFloat64() },
		"identity": func(i, j, p int) float64 { return map[bool]float64{true: 1}[i == j] },
		"zeros":    func(i, j, p int) float64 { return 0 },
		"rank one": func(i, j, p int) float64 { return float64((i + 1) * (j + 1)) },
		"graded":   func(i, j, p int) float64 { return math.Pow(10, -float64(i+j)/4) },
		"huge":     func(i, j, p int) float64 { return 1e200 * rng.NormFloat64() },
	}
	var work Work
	for kind, entry := range kinds {
		for _, p := range []int{0, 1, 2, 3, 5, 17, 40, 90} {
			a := make([]float64, p*p)
			norm := 0.0
			for i := range p {
				for j := i; j < p; j++ {
					v := entry(i, j, p)
					a[i*p+j], a[j*p+i] = v, v
					norm = math.Max(norm, math.Abs(v))
				}
			}
			norm *= float64(p)
			copyOf := append([]float64(nil), a...)
			values, vectors, err := Decompose(append([]float64(nil), a...), p)
			if err != nil {
				t.Fatal(err)
			}
			alone := make([]float64, p)
			Values(copyOf, p, alone, &work)
			slack := 16 * float64(p) * 0x1p-52
			for c := range p {
				if c > 0 && values[c] > values[c-1] || math.Abs(alone[c]-values[c]) > slack*norm {
					t.Errorf("%s p=%d: values %d: %g, alone %g", kind, p, c, values[c], alone[c])
				}
				for d := range p {
					dot := 0.0
					for i := range p {
						dot += vectors[i*p+c] * vectors[i*p+d]
					}
					if want := map[bool]float64{true: 1}[c == d]; math.Abs(dot-want) > slack {
						t.Errorf("%s p=%d: vectors %d,%d give %g", kind, p, c, d, dot)
					}
				}
				for i := range p {
					product := 0.0
					for j := range p {
						product += a[i*p+j] * vectors[j*p+c]
					}
					if math.Abs(product-values[c]*vectors[i*p+c]) > slack*norm {
						t.Errorf("%s p=%d: residual of vector %d", kind, p, c)
					}
				}
			}
		}
	}
	if _, _, err := Decompose([]float64{1, math.NaN(), 0, 1}, 2); err == nil {
		t.Error("NaN went through")
	}
}

func BenchmarkValues(b *testing.B) {
	for _, p := range []int{10, 50, 200} {
		a, dst := correlated(p), make([]float64, p)
		scratch := make([]float64, p*p)
		var w Work
		b.Run(fmt.Sprintf("p=%d", p), func(b *testing.B) {
			for b.Loop() {
				copy(scratch, a)
				Values(scratch, p, dst, &w)
			}
		})
	}
}

func BenchmarkDecompose(b *testing.B) {
	for _, p := range []int{50, 200} {
		a, scratch := correlated(p), make([]float64, p*p)
		b.Run(fmt.Sprintf("p=%d", p), func(b *testing.B) {
			for b.Loop() {
				copy(scratch, a)
				if _, _, err := Decompose(scratch, p); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func correlated(p int) []float64 {
	rng := rand.New(rand.NewPCG(1, 2))
	a := make([]float64, p*p)
	for i := range p {
		a[i*p+i] = float64(p)
		for j := i + 1; j < p; j++ {
			v := rng.NormFloat64()
			a[i*p+j], a[j*p+i] = v, v
		}
	}
	return a
}
