package symeig

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"

	"axisfold/pca/internal/kernel"
)

// check tests what makes a decomposition one: order, orthonormal vectors, A·V = V·Λ.
// Bounds: (p+10)·ε, where the error analysis of orthogonal reductions has a small multiple
// of p·ε (Demmel 1997, Applied Numerical Linear Algebra, theorem 5.5 and section 5.3).
func check(t *testing.T, name string, a []float64, p int, values, vectors []float64) {
	t.Helper()
	slack := float64(p+10) * 0x1p-52
	norm := 0.0
	for c, v := range values {
		norm = math.Max(norm, math.Abs(v))
		if c > 0 && !(v <= values[c-1]) {
			t.Errorf("%s p=%d: value %d is %g, the one before %g", name, p, c, v, values[c-1])
		}
	}
	gram := make([]float64, p*p)
	kernel.AddCrossProducts(gram, vectors, p, p)
	// a and values may be near the ends of the range of numbers
	f := 1.0
	if norm > 0 {
		f = math.Ldexp(1, -math.Ilogb(norm)/2)
	}
	scaled := make([]float64, p*p)
	for i, v := range a {
		scaled[i] = v * f * f
	}
	product := make([]float64, p*p)
	kernel.Multiply(product, scaled, vectors, p, p, p)
	for i := range p {
		for c := range p {
			if e := math.Abs(product[i*p+c] - values[c]*f*f*vectors[i*p+c]); !(e <= slack*norm*f*f) {
				t.Fatalf("%s p=%d: residual %g of vector %d, norm %g", name, p, e/f/f, c, norm)
			}
			if c >= i {
				if e := math.Abs(gram[i*p+c] - is(i == c)); !(e <= slack) {
					t.Fatalf("%s p=%d: vectors %d,%d give %g too much", name, p, i, c, e)
				}
			}
		}
	}
}

func same(got, want []float64, slack float64) bool {
	return slices.EqualFunc(got, want, func(x, y float64) bool { return math.Abs(x-y) <= slack })
}

func TestDecompose(t *testing.T) {
	sizes := []int{25, 26, 33, 51, 64, 90, 150}
	for p := range 19 {
		sizes = append(sizes, p)
	}
	var work Work
	for name, kind := range kinds {
		rng := rand.New(rand.NewPCG(31, 32))
		for _, p := range sizes {
			a := kind(rng, p)
			values, vectors, err := Decompose(slices.Clone(a), p)
			if err != nil {
				t.Fatalf("%s p=%d: %v", name, p, err)
			}
			check(t, name, a, p, values, vectors)
			alone := make([]float64, p)
			Values(slices.Clone(a), p, alone, &work)
			norm := 0.0
			for _, v := range values {
				norm = math.Max(norm, math.Abs(v))
			}
			slack := float64(p+10) * 0x1p-52 * norm
			if !same(alone, values, slack) || !slices.IsSortedFunc(alone, func(x, y float64) int { return -cmpDescending(y, x) }) {
				t.Errorf("%s p=%d: values alone %g, with vectors %g", name, p, alone, values)
			}
			if p == 0 || p > 90 {
				continue
			}
			// The oracle, gonum's EigenSym, ascends. With vectors, because without them it
			// panics on some matrices that fall apart into parts of very different size.
			var oracle mat.EigenSym
			if !oracle.Factorize(mat.NewSymDense(p, slices.Clone(a)), true) {
				t.Fatalf("%s p=%d: the oracle failed", name, p)
			}
			want := oracle.Values(nil)
			slices.Reverse(want)
			if !same(values, want, slack) {
				t.Errorf("%s p=%d: values %g, the oracle %g", name, p, values, want)
			}
		}
	}
}

// Only the upper triangle may be read.
func TestUpperTriangle(t *testing.T) {
	p := 70
	a := kinds["random"](rand.New(rand.NewPCG(33, 34)), p)
	half := slices.Clone(a)
	for i := range p {
		for j := range i {
			half[i*p+j] = math.NaN()
		}
	}
	values, vectors, err := Decompose(slices.Clone(half), p)
	if err != nil {
		t.Fatal(err)
	}
	check(t, "upper triangle", a, p, values, vectors)
	alone := make([]float64, p)
	Values(half, p, alone, new(Work))
	if !same(alone, values, 1e-12) {
		t.Errorf("values alone %g, with vectors %g", alone, values)
	}
}

func TestNotFinite(t *testing.T) {
	for _, bad := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
		for p := 1; p < 5; p++ {
			for i := range p {
				for j := i; j < p; j++ {
					a := entries(p, func(i, j int) float64 { return 1 })
					a[i*p+j] = bad
					if _, _, err := Decompose(slices.Clone(a), p); err == nil {
						t.Errorf("p=%d: %g at %d,%d went through", p, bad, i, j)
					}
					func() {
						defer func() {
							if recover() == nil {
								t.Errorf("p=%d: %g at %d,%d went through Values", p, bad, i, j)
							}
						}()
						Values(a, p, make([]float64, p), new(Work))
					}()
				}
			}
		}
	}
}

func TestThreads(t *testing.T) {
	rng := rand.New(rand.NewPCG(35, 36))
	for _, p := range []int{leastShared, 300, leastSliced + 20} {
		for _, name := range []string{"cross", "ties", "glued"} {
			if p > 300 && name != "cross" {
				continue // nothing new
			}
			a := kinds[name](rng, p)
			values, vectors, err := DecomposeOn(1, slices.Clone(a), p)
			if err != nil {
				t.Fatal(err)
			}
			check(t, name, a, p, values, vectors)
			for threads := 2; threads < 5; threads++ {
				v, w, err := DecomposeOn(threads, slices.Clone(a), p)
				if err != nil || !slices.Equal(v, values) || !slices.Equal(w, vectors) {
					t.Errorf("%s p=%d: %d threads give other bits than one, error %v", name, p, threads, err)
				}
			}
		}
	}
}

func TestValuesAllocateNothing(t *testing.T) {
	p := 60
	a := kinds["cross"](rand.New(rand.NewPCG(37, 38)), p)
	scratch, dst := make([]float64, p*p), make([]float64, p)
	var w Work
	if raced {
		t.Skip("under the race detector a pool drops buffers at random")
	}
	if n := testing.AllocsPerRun(50, func() {
		copy(scratch, a)
		Values(scratch, p, dst, &w)
	}); n > 0 {
		t.Errorf("%v allocations a call", n)
	}
}

// A Work that has seen a large matrix serves a small one.
func TestWorkOfAnotherSize(t *testing.T) {
	rng := rand.New(rand.NewPCG(39, 40))
	var w Work
	for _, p := range []int{3, 160, 11, 90, 2, 1} {
		a := kinds["random"](rng, p)
		got, want := make([]float64, p), make([]float64, p)
		Values(slices.Clone(a), p, got, &w)
		Values(a, p, want, new(Work))
		if !slices.Equal(got, want) {
			t.Errorf("p=%d: %g, with new space %g", p, got, want)
		}
	}
}
