package symeig

import (
	"math"
	"math/rand/v2"

	"axisfold/pca/internal/kernel"
)

// kinds of symmetric matrices that have shown faults in eigenvalue routines (after the
// list of Demmel, Marques, Parlett and Vömel 2008, Performance and Accuracy of LAPACK's
// Symmetric Tridiagonal Eigensolvers). Both triangles are filled.
var kinds = map[string]func(rng *rand.Rand, p int) []float64{
	"random": func(rng *rand.Rand, p int) []float64 {
		return entries(p, func(i, j int) float64 { return rng.NormFloat64() })
	},
	"identity": func(_ *rand.Rand, p int) []float64 { return entries(p, func(i, j int) float64 { return is(i == j) }) },
	"zeros":    func(_ *rand.Rand, p int) []float64 { return entries(p, func(i, j int) float64 { return 0 }) },
	"ones":     func(_ *rand.Rand, p int) []float64 { return entries(p, func(i, j int) float64 { return 1 }) },
	"rank one": func(_ *rand.Rand, p int) []float64 {
		return entries(p, func(i, j int) float64 { return float64((i + 1) * (j + 1)) })
	},
	"diagonal": func(rng *rand.Rand, p int) []float64 {
		return entries(p, func(i, j int) float64 { return is(i == j) * rng.NormFloat64() })
	},
	"ties": func(rng *rand.Rand, p int) []float64 {
		return turned(rng, p, func(i int) float64 { return float64(i % 3) })
	},
	"clustered": func(rng *rand.Rand, p int) []float64 {
		return turned(rng, p, func(i int) float64 { return 1 + float64(i)*1e-14 })
	},
	"one apart": func(rng *rand.Rand, p int) []float64 {
		return turned(rng, p, func(i int) float64 { return math.Max(is(i == 0), 0x1p-52) })
	},
	"geometric": func(rng *rand.Rand, p int) []float64 {
		return turned(rng, p, func(i int) float64 { return math.Pow(0.5, float64(i)) })
	},
	"graded down": func(_ *rand.Rand, p int) []float64 {
		return entries(p, func(i, j int) float64 { return math.Pow(10, -float64(i+j)) })
	},
	"graded up": func(_ *rand.Rand, p int) []float64 {
		return entries(p, func(i, j int) float64 { return math.Pow(10, float64(i+j-2*p)) })
	},
	"huge": func(rng *rand.Rand, p int) []float64 {
		return entries(p, func(i, j int) float64 { return 1e304 / float64(p) * rng.NormFloat64() })
	},
	"smallest": func(rng *rand.Rand, p int) []float64 {
		return entries(p, func(i, j int) float64 { return 1e-300 * rng.NormFloat64() })
	},
	"wide range": func(rng *rand.Rand, p int) []float64 {
		return entries(p, func(i, j int) float64 { return math.Pow(10, 600*rng.Float64()-300) })
	},
	"cross": crossProducts,
	"difference": func(_ *rand.Rand, p int) []float64 {
		return entries(p, func(i, j int) float64 { return 2*is(i == j) - is(j == i+1) })
	},
	"wilkinson": func(_ *rand.Rand, p int) []float64 {
		return entries(p, func(i, j int) float64 { return wilkinson(i, j, p) })
	},
	"glued": func(_ *rand.Rand, p int) []float64 { return entries(p, glued) },
	"block sparse": func(rng *rand.Rand, p int) []float64 {
		return entries(p, func(i, j int) float64 { return is(i/7 == j/7) * rng.NormFloat64() })
	},
}

func is(truth bool) float64 {
	if truth {
		return 1
	}
	return 0
}

func entries(p int, entry func(i, j int) float64) []float64 {
	a := make([]float64, p*p)
	for i := range p {
		for j := i; j < p; j++ {
			v := entry(i, j)
			a[i*p+j], a[j*p+i] = v, v
		}
	}
	return a
}

// turned has the eigenvalues root(0), root(1), … and vectors turned by p random
// reflections.
func turned(rng *rand.Rand, p int, root func(i int) float64) []float64 {
	a := entries(p, func(i, j int) float64 { return is(i == j) * root(i) })
	u := make([]float64, p)
	for range min(p, 10) {
		length := 0.0
		for i := range u {
			u[i] = rng.NormFloat64()
			length += u[i] * u[i]
		}
		for range 2 { // rows, then, a being symmetric, columns
			for i := range p {
				row := a[i*p : i*p+p]
				kernel.Axpy(-2/length*kernel.Dot(row, u), u, row)
			}
			for i := range p {
				for j := range i {
					a[i*p+j], a[j*p+i] = a[j*p+i], a[i*p+j]
				}
			}
		}
	}
	return entries(p, func(i, j int) float64 { return a[i*p+j] })
}

func crossProducts(rng *rand.Rand, p int) []float64 {
	n := p + 3
	x, a := make([]float64, n*p), make([]float64, p*p)
	for i := range x {
		x[i] = rng.NormFloat64()
	}
	kernel.AddCrossProducts(a, x, n, p)
	return entries(p, func(i, j int) float64 { return a[i*p+j] })
}

// wilkinson is W+ of order p: pairs of eigenvalues that agree to nearly all digits.
func wilkinson(i, j, p int) float64 {
	switch j - i {
	case 0:
		return math.Abs(float64(p-1)/2 - float64(i))
	case 1:
		return 1
	}
	return 0
}

// glued are matrices W21+ side by side, joined by 1e-10.
func glued(i, j int) float64 {
	if i/21 == j/21 {
		return wilkinson(i%21, j%21, 21)
	}
	return 1e-10 * is(j == i+1)
}
