package rotation

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// physical is the matrix of eight physical variables of 305 girls (Harman, Modern Factor
// Analysis, table 2.3; from memory), upper triangle by rows.
var physical = []float64{.846, .805, .859, .473, .398, .301, .382,
	.881, .826, .376, .326, .277, .415,
	.801, .380, .319, .237, .345,
	.436, .329, .327, .365,
	.762, .730, .629,
	.583, .577,
	.539}

// loadingsOf are those of the first k components of a correlation matrix given by its
// upper triangle.
func loadingsOf(t testing.TB, p, k int, upper []float64) []float64 {
	t.Helper()
	s := mat.NewSymDense(p, nil)
	for i := range p {
		s.SetSym(i, i, 1)
		for j := i + 1; j < p; j++ {
			s.SetSym(i, j, upper[0])
			upper = upper[1:]
		}
	}
	var e mat.EigenSym
	if !e.Factorize(s, true) {
		t.Fatal("no eigenvalues")
	}
	var v mat.Dense
	e.VectorsTo(&v)
	out := make([]float64, p*k)
	for j := range p {
		for a := range k {
			out[j*k+a] = v.At(j, p-1-a) * math.Sqrt(e.Values(nil)[p-1-a])
		}
	}
	return out
}

func rotate(t testing.TB, loadings []float64, k int, o Options) *Result {
	t.Helper()
	r, err := Rotate(loadings, k, o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// The eight physical variables on two components: stature and build. Values computed once
// in NumPy from the published correlations.
func TestPhysicalVariables(t *testing.T) {
	a := loadingsOf(t, 8, 2, physical)
	near := func(what string, got, want float64) {
		t.Helper()
		if math.Abs(got-want) > 1.5e-6 {
			t.Errorf("%s: %.6f, expected %.6f", what, got, want)
		}
	}
	kaiser := rotate(t, a, 2, Options{Method: Varimax, Normalize: true, Starts: 5})
	for _, c := range []struct {
		row  int
		x, y float64
	}{{0, .899825, .259876}, {1, .929830, .195469}, {4, .250741, .887129}, {7, .250898, .749585}} {
		near(fmt.Sprint("varimax row ", c.row+1), kaiser.Loading(c.row, 0), c.x)
		near(fmt.Sprint("varimax row ", c.row+1), kaiser.Loading(c.row, 1), c.y)
	}
	near("sum of squares", kaiser.Variances[0], 3.497321)
	near("sum of squares", kaiser.Variances[1], 2.946541)
	if kaiser.Reached != 5 {
		t.Errorf("%d of 5 starts came to the only answer", kaiser.Reached)
	}
	raw := rotate(t, a, 2, Options{Method: Varimax, Starts: 1})
	near("raw varimax", raw.Loading(0, 0), .905038)
	near("raw varimax", raw.Loading(0, 1), .241094)
	quartimax := rotate(t, a, 2, Options{Method: Quartimax, Starts: 1})
	near("quartimax", quartimax.Loading(0, 0), .913358)
	near("quartimax", quartimax.Loading(0, 1), .207357)
	promax := rotate(t, a, 2, Options{Method: Promax, Normalize: true, Power: 4, Starts: 1})
	near("promax", promax.Loading(0, 0), .909692)
	near("promax", promax.Loading(0, 1), .058044)
	near("correlation of promax", promax.Correlations[1], .438547)
	near("correlation of promax, power 3", rotate(t, a, 2, Options{Method: Promax, Normalize: true, Power: 3, Starts: 1}).Correlations[1], .419592)
}

// random loadings that no rotation suits in particular.
func random(p, k int, seed uint64) []float64 {
	rng := rand.New(rand.NewPCG(seed, 81))
	out := make([]float64, p*k)
	for i := range out {
		out[i] = rng.NormFloat64() / 2
	}
	return out
}

// For two components every angle can be tried.
func TestTwoComponentsAgainstEveryAngle(t *testing.T) {
	for seed := range uint64(10) {
		for _, method := range []Method{Varimax, Quartimax} {
			a := random(9, 2, seed)
			gamma := map[Method]float64{Varimax: 1}[method]
			best := math.Inf(-1)
			for step := range 20000 {
				b := slices.Clone(a)
				s, c := math.Sincos(math.Pi / 2 * float64(step) / 20000)
				turnColumns(b, 9, 2, 0, 1, c, s)
				best = math.Max(best, criterion(b, 9, 2, gamma))
			}
			r := rotate(t, a, 2, Options{Method: method, Starts: 1})
			// The grid misses the top by at most a ten-thousandth of an angle, squared.
			if r.Criterion < best-1e-12 || r.Criterion > best*(1+1e-6) {
				t.Errorf("%s: %.9f, best of all angles %.9f", method, r.Criterion, best)
			}
		}
	}
}

// What rotation must not change: communalities, what all components carry together, and,
// for scores, that they have unit variance and the correlations that are said; loadings
// times scores is the table that the components told of.
func TestInvariants(t *testing.T) {
	rng := rand.New(rand.NewPCG(82, 83))
	for _, k := range []int{1, 2, 3, 6} {
		for _, method := range Methods {
			for _, normalize := range []bool{false, true} {
				p := 12
				a := random(p, k, uint64(k))
				copy(a[3*k:4*k], make([]float64, k)) // a channel that no component tells of
				r := rotate(t, a, k, Options{Method: method, Normalize: normalize, Power: 4, Starts: 8})
				what := fmt.Sprintf("%s k=%d normalize=%v", method, k, normalize)
				if r.Criterion < r.Before-1e-12 {
					t.Errorf("%s: criterion fell from %g to %g", what, r.Before, r.Criterion)
				}
				carried, before := 0.0, 0.0
				for a, v := range r.Variances {
					carried += v
					if a > 0 && v > r.Variances[a-1]+1e-12 {
						t.Errorf("%s: variances %v do not fall", what, r.Variances)
					}
				}
				for _, v := range a {
					before += v * v
				}
				if math.Abs(carried-before) > 1e-10*before {
					t.Errorf("%s: carries %.12f, before %.12f", what, carried, before)
				}
				for j := range p {
					h, want := 0.0, 0.0
					for c := range k {
						h += r.Loadings[j*k+c] * r.Structure[j*k+c]
						want += a[j*k+c] * a[j*k+c]
					}
					if math.Abs(h-want) > 1e-10 {
						t.Errorf("%s: communality of channel %d is %.12f, was %.12f", what, j+1, h, want)
					}
				}
				// Weights' Weights = Φ, and scores t·W times loadings' = t·a'.
				score := make([]float64, k)
				for c := range score {
					score[c] = rng.NormFloat64()
				}
				turned := product(score, r.Weights, 1, k)
				for j := range p {
					x, want := 0.0, 0.0
					for c := range k {
						x += turned[c] * r.Loading(j, c)
						want += score[c] * a[j*k+c]
					}
					if math.Abs(x-want) > 1e-10 {
						t.Errorf("%s: channel %d is rebuilt as %.12f, was %.12f", what, j+1, x, want)
					}
				}
				for x := range k {
					for y := range k {
						sum := 0.0
						for i := range k {
							sum += r.Weights[i*k+x] * r.Weights[i*k+y]
						}
						if math.Abs(sum-r.Correlations[x*k+y]) > 1e-10 {
							t.Errorf("%s: scores %d and %d correlate by %.12f, said %.12f", what, x+1, y+1, sum, r.Correlations[x*k+y])
						}
					}
					if top := column(r.Loadings, k, x); math.Abs(r.Correlations[x*k+x]-1) > 1e-10 || slices.Max(top) < -slices.Min(top)-1e-12 {
						t.Errorf("%s: component %d: variance %g, loadings %v", what, x+1, r.Correlations[x*k+x], top)
					}
				}
			}
		}
	}
}

func column(m []float64, k, a int) []float64 {
	var out []float64
	for i := a; i < len(m); i += k {
		out = append(out, m[i])
	}
	return out
}

// Simple structure that was turned away is found again, from whatever start; and the same
// bits come from any number of threads.
func TestSimpleStructure(t *testing.T) {
	p, k := 15, 5
	simple := make([]float64, p*k)
	for j := range p {
		simple[j*k+j%k] = .5 + .03*float64(j%k) + .01*float64(j/k)
	}
	hidden := product(simple, randomRotation(k, 1, 99), p, k)
	for _, method := range Methods {
		r := rotate(t, hidden, k, Options{Method: method, Power: 4, Starts: 10, Seed: 3, Threads: 1})
		for j := range p {
			large := 0
			for a := range k {
				v := math.Abs(r.Loading(j, a))
				if v > .4 {
					large++
				} else if v > 1e-6 {
					t.Errorf("%s: channel %d loads %g on R%d", method, j+1, v, a+1)
				}
			}
			if large != 1 {
				t.Errorf("%s: channel %d loads on %d components", method, j+1, large)
			}
		}
		for threads := 2; threads < 5; threads++ {
			again := rotate(t, hidden, k, Options{Method: method, Power: 4, Starts: 10, Seed: 3, Threads: threads})
			if !slices.Equal(again.Loadings, r.Loadings) || again.Reached != r.Reached {
				t.Errorf("%s: other bits on %d threads", method, threads)
			}
		}
	}
}

func TestRefused(t *testing.T) {
	a := random(4, 2, 1)
	for _, o := range []Options{{Method: "oblimax", Starts: 1}, {Method: Varimax}, {Method: Promax, Power: 1, Starts: 1}} {
		if _, err := Rotate(a, 2, o); err == nil {
			t.Errorf("%+v was taken", o)
		}
	}
	if _, err := Rotate(a[:7], 2, Options{Method: Varimax, Starts: 1}); err == nil {
		t.Error("seven loadings of two components were taken")
	}
}

func BenchmarkRotate(b *testing.B) {
	for _, c := range []struct{ p, k int }{{30, 4}, {600, 20}} {
		b.Run(fmt.Sprintf("p=%d/k=%d", c.p, c.k), func(b *testing.B) {
			a := random(c.p, c.k, 1)
			for b.Loop() {
				rotate(b, a, c.k, Options{Method: Varimax, Normalize: true, Starts: 20})
			}
		})
	}
}
