package kernel

import (
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

// onEachPath runs check on every path of this machine.
func onEachPath(t *testing.T, check func(t *testing.T)) {
	for _, w := range paths() {
		t.Run("path="+w.String(), func(t *testing.T) {
			force(t, w)
			check(t)
		})
	}
}

// Scales at which products underflow to zeros of either sign, to subnormal numbers, stay
// ordinary, or overflow.
var scales = []float64{1e-170, 1e-158, 1, 1e160}

// spoil puts a NaN and an infinity into x, where it is large enough.
func spoil(rng *rand.Rand, x []float64) {
	if len(x) > 8 {
		x[rng.IntN(len(x))] = math.NaN()
		x[rng.IntN(len(x))] = math.Inf(-1)
	}
}

func TestCrossProductsOnPaths(t *testing.T) {
	widths := []int{32, 33, 47, 50, groupColumns, groupColumns + 13}
	for p := range 18 {
		widths = append(widths, p)
	}
	onEachPath(t, func(t *testing.T) {
		rng := rand.New(rand.NewPCG(21, 22))
		for _, p := range widths {
			for _, n := range []int{0, 1, 2, 3, 7, 8, 9, panelRows - 1, panelRows, panelRows + 1, 2*panelRows + 3} {
				if n*p*p > 2e6 && n > 9 {
					continue // long in the plain loop, and nothing new
				}
				for _, scale := range scales {
					x := numbers(rng, n*p, scale)
					if n%3 == 0 {
						spoil(rng, x)
					}
					got := numbers(rng, p*p, scale*scale)
					want := slices.Clone(got)
					addCrossProductsPlain(want, x, n, p)
					AddCrossProducts(got, x, n, p)
					if !sameBits(upper(got, p), upper(want, p)) {
						t.Fatalf("n=%d p=%d scale=%g: other bits than the plain loop", n, p, scale)
					}
				}
			}
		}
	})
}

// A product that is rounded before it is added tells where a panel of 256 rows ends: a·b
// lies just below half a unit in the last place of the sum and rounds to the half.
func TestPanelEnds(t *testing.T) {
	a, b := 0x1p-53*(1+0x1p-26+0x1p-52), 1-0x1p-26
	onEachPath(t, func(t *testing.T) {
		for row, want := range map[int]float64{255: 1 + 0x1p-52, 256: 1 + 0x1p-51} {
			n, p := 257, 5
			x, c := make([]float64, n*p), make([]float64, p*p)
			x[0], x[1] = 1+0x1p-52, 1
			x[row*p], x[row*p+1] = a, b
			if AddCrossProducts(c, x, n, p); c[1] != want {
				t.Errorf("row %d: %v, want %v", row, c[1], want)
			}
		}
	})
}

// The parts lie in larger matrices; what lies around them must stay.
func TestAddMultiplyOnPaths(t *testing.T) {
	onEachPath(t, func(t *testing.T) {
		rng := rand.New(rand.NewPCG(23, 24))
		for _, n := range []int{0, 1, 3, 4, 8, 9, 23} {
			for _, p := range []int{0, 1, 7, depth, depth + 1, 2*depth + 5} {
				for _, k := range []int{0, 1, 3, 8, 10, 16, 20, 24, 25, groupColumns + 11} {
					ldd, ldx, ldv := k+rng.IntN(3), p+rng.IntN(3), k+rng.IntN(3)
					scale := scales[rng.IntN(len(scales))]
					x, v := numbers(rng, n*ldx, scale), numbers(rng, p*ldv, scale)
					if rng.IntN(3) == 0 {
						spoil(rng, x)
					}
					got := numbers(rng, n*ldd, scale*scale)
					want := slices.Clone(got)
					addMultiplyPlain(want, ldd, x, ldx, v, ldv, n, p, k)
					AddMultiply(got, ldd, x, ldx, v, ldv, n, p, k)
					if !sameBits(got, want) {
						t.Fatalf("n=%d p=%d k=%d scale=%g: other bits than the plain loop", n, p, k, scale)
					}
				}
			}
		}
	})
}

// What lies below the diagonal must not be read.
func TestSymmetricOnPaths(t *testing.T) {
	onEachPath(t, func(t *testing.T) {
		rng := rand.New(rand.NewPCG(35, 36))
		for n := Group; n < 80; n += Group {
			for from := 0; from < n; from += Group {
				for _, to := range []int{from + Group, n} {
					ld, scale := n+rng.IntN(2), scales[rng.IntN(len(scales))]
					a := numbers(rng, n*ld, scale)
					for i := range n {
						for j := range i {
							a[i*ld+j] = math.NaN()
						}
					}
					v, got := numbers(rng, n, scale), numbers(rng, n, scale*scale)
					want := slices.Clone(got)
					symmetricMultiplyPlain(want, a, ld, v, from, to, n)
					AddSymmetricMultiply(got, a, ld, v, from, to, n)
					if !sameBits(got, want) {
						t.Fatalf("n=%d rows %d to %d: other bits than the plain loop", n, from, to)
					}
				}
			}
		}
	})
}

func TestUpperProductOnPaths(t *testing.T) {
	onEachPath(t, func(t *testing.T) {
		rng := rand.New(rand.NewPCG(37, 38))
		for _, p := range []int{1, 7, 8, 16, 23, 40, 100} {
			for _, n := range []int{0, 1, 16, 64, depth + 1} {
				from := rng.IntN(p + 1)
				to := from + rng.IntN(p-from+1)
				ld, ldc := p+rng.IntN(2), p+rng.IntN(2)
				left, right, got := numbers(rng, n*ld, 1), numbers(rng, n*ld, 1), numbers(rng, p*ldc, 1)
				want := slices.Clone(got)
				addUpperProductPlain(want, ldc, left, right, ld, n, from, to, p)
				AddUpperProduct(got, ldc, left, right, ld, n, from, to, p)
				for i := range p {
					if !sameBits(got[i*ldc+i:i*ldc+p], want[i*ldc+i:i*ldc+p]) {
						t.Fatalf("n=%d p=%d rows %d to %d: row %d has other bits than the plain loop", n, p, from, to, i)
					}
				}
			}
		}
	})
}

func TestVectorsOnPaths(t *testing.T) {
	onEachPath(t, func(t *testing.T) {
		rng := rand.New(rand.NewPCG(25, 26))
		for n := range 100 {
			for _, scale := range scales {
				x, y := numbers(rng, n, scale), numbers(rng, n, scale)
				if rng.IntN(4) == 0 {
					spoil(rng, x)
				}
				got, want := []float64{Dot(x, y)}, []float64{dotPlain(x, y)}
				if !sameBits(got, want) {
					t.Fatalf("Dot n=%d scale=%g: %v, the plain loop %v", n, scale, got, want)
				}
				alpha := rng.NormFloat64()
				u, v := slices.Clone(x), slices.Clone(y)
				Axpy(alpha, u, v)
				w := slices.Clone(y)
				axpyPlain(alpha, x, w)
				if !sameBits(v, w) || !sameBits(u, x) {
					t.Fatalf("Axpy n=%d scale=%g: other bits than the plain loop", n, scale)
				}
				s, c := math.Sincos(alpha)
				u, v, w = slices.Clone(x), slices.Clone(y), slices.Clone(x)
				z := slices.Clone(y)
				Rotate(u, v, c, s)
				rotatePlain(w, z, c, s)
				if !sameBits(u, w) || !sameBits(v, z) {
					t.Fatalf("Rotate n=%d scale=%g: other bits than the plain loop", n, scale)
				}
			}
		}
	})
}

func TestColumnsOnPaths(t *testing.T) {
	onEachPath(t, func(t *testing.T) {
		rng := rand.New(rand.NewPCG(27, 28))
		for p := range 70 {
			for _, n := range []int{0, 1, 2, 17} {
				x, mean := numbers(rng, n*p, 1), numbers(rng, p, 1)
				if rng.IntN(4) == 0 {
					spoil(rng, x)
				}
				got, want := slices.Clone(mean), slices.Clone(mean)
				ColumnSums(got, x, n, p)
				columnSumsPlain(want, x, n, p, 0)
				if !sameBits(got, want) {
					t.Fatalf("ColumnSums n=%d p=%d: other bits than the plain loop", n, p)
				}
				got, want = slices.Clone(x), make([]float64, n*p)
				CenterColumns(got, got, mean, n, p)
				centerColumnsPlain(want, x, mean, n, p, 0)
				if !sameBits(got, want) {
					t.Fatalf("CenterColumns n=%d p=%d: other bits than the plain loop", n, p)
				}
			}
		}
	})
}

// Called again and again, nothing is allocated. The least of many calls counts, because
// under the race detector a pool drops buffers at random.
func TestNoAllocation(t *testing.T) {
	n, p, k := 300, 50, 10
	rng := rand.New(rand.NewPCG(29, 30))
	x, v := numbers(rng, n*p, 1), numbers(rng, p*k, 1)
	c, dst, mean := make([]float64, p*p), make([]float64, n*k), make([]float64, p)
	onEachPath(t, func(t *testing.T) {
		least := math.Inf(1)
		for range 50 {
			least = min(least, testing.AllocsPerRun(1, func() {
				ColumnSums(mean, x, n, p)
				CenterColumns(x, x, mean, n, p)
				AddCrossProducts(c, x, n, p)
				Multiply(dst, x, v, n, p, k)
				Rotate(c[:p], c[p:2*p], 0.6, 0.8)
				Axpy(Dot(c[:p], mean), mean, c[:p])
			}))
		}
		if least > 0 {
			t.Errorf("%v allocations a call", least)
		}
	})
}
