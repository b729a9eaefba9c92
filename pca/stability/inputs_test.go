package stability

import (
	"fmt"
	"math"
	"math/rand/v2"

	"axisfold/pca"
)

// table makes n rows of independent normal channels with the given deviations, turned in
// the plane of channels 0 and 1 by 0.6 rad, plus an offset of 1000.
func table(n int, deviations []float64, seed uint64) []float64 {
	rng := rand.New(rand.NewPCG(seed, 77))
	p := len(deviations)
	x := make([]float64, n*p)
	sin, cos := math.Sincos(0.6)
	for r := range n {
		row := x[r*p : (r+1)*p]
		for j := range row {
			row[j] = rng.NormFloat64() * deviations[j]
		}
		if p > 1 {
			row[0], row[1] = cos*row[0]-sin*row[1], sin*row[0]+cos*row[1]
		}
		for j := range row {
			row[j] += 1000
		}
	}
	return x
}

func split(x []float64, p, rows int, form pca.Form, ranks int) []*pca.Summary {
	b := pca.NewBuilder(p, form, ranks)
	var out []*pca.Summary
	for at := 0; at < len(x); at += rows * p {
		part := x[at:min(at+rows*p, len(x))]
		out = append(out, b.Summarize(part, len(part)/p))
	}
	return out
}

func options(p int, method pca.Method, matrix pca.Matrix) pca.Options {
	o := pca.Options{Matrix: matrix}
	for j := range p {
		o.Names = append(o.Names, fmt.Sprintf("c%d", j))
		o.Methods = append(o.Methods, method)
	}
	return o
}

func whole(blocks []*pca.Summary, o pca.Options) *pca.Decomposition {
	d, err := pca.Decompose(pca.MergeAll(blocks...), o)
	if err != nil {
		panic(err)
	}
	return d
}

// falling gives p deviations 1.3^(p-1) … 1.
func falling(p int) []float64 {
	out := make([]float64, p)
	for j := range out {
		out[j] = math.Pow(1.3, float64(p-1-j))
	}
	return out
}
