package stability

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"axisfold/pca"
)

// The fast path against summaries that are really merged and decomposed, for every
// scaling and both matrices and forms. Vectors are compared as V·diag(l)·V', which has no
// sign; that matrix, roots and trace agree to 1e-11 of the largest root (offset 1000 beside
// spreads near 1: ε·1000 in the means, times a few hundred roundings).
func TestAgainstMerging(t *testing.T) {
	const p, n = 5, 97
	x := table(n, falling(p), 3)
	for _, form := range []pca.Form{pca.CrossProducts, pca.Factor} {
		blocks := split(x, p, 7, form, 1000) // the last block is shorter
		for _, matrix := range []pca.Matrix{pca.Correlation, pca.Covariance} {
			for _, method := range pca.Methods {
				o := Options{Decompose: options(p, method, matrix), Retained: 2, Seed: 11, Replicates: 2}
				w := whole(blocks, o.Decompose)
				store, err := extract(blocks, o.Decompose, &Result{})
				if err != nil {
					t.Fatal(err)
				}
				d := newDrawer(store, newCollector(w, o), o)
				for r := range 20 {
					rng := rand.New(rand.NewPCG(o.Seed, uint64(r)))
					var parts []*pca.Summary
					for i := range d.picks {
						d.picks[i] = rng.IntN(len(blocks))
						parts = append(parts, blocks[d.picks[i]])
					}
					want := whole(parts, o.Decompose)
					total, values, vectors, err := d.decompose()
					if err != nil {
						t.Fatal(err)
					}
					tolerance := 1e-11 * want.Values[0]
					if math.Abs(total-want.Total) > tolerance*p {
						t.Errorf("%s %s form %d: trace %.17g, merged %.17g", matrix, method, form, total, want.Total)
					}
					for i := range p {
						if math.Abs(values[i]-want.Values[i]) > tolerance {
							t.Errorf("%s %s form %d: root %d %.17g, merged %.17g", matrix, method, form, i, values[i], want.Values[i])
						}
						for j := range p {
							got, merged := 0.0, 0.0
							for a := range p {
								got += vectors[i*p+a] * values[a] * vectors[j*p+a]
								merged += want.Vector(i, a) * want.Values[a] * want.Vector(j, a)
							}
							if math.Abs(got-merged) > tolerance {
								t.Errorf("%s %s form %d: entry %d,%d %.17g, merged %.17g", matrix, method, form, i, j, got, merged)
							}
						}
					}
				}
			}
		}
	}
}

// One component retained: loadings and percentiles of a whole run against merging,
// sign by dot product.
func TestBootstrapAgainstMerging(t *testing.T) {
	const p = 4
	blocks := split(table(120, falling(p), 5), p, 5, pca.CrossProducts, 0)
	o := Options{Decompose: options(p, pca.UnitNormal, pca.Correlation), Retained: 1, Seed: 8, Replicates: 60, Confidence: 0.9}
	w := whole(blocks, o.Decompose)
	res, err := Bootstrap(blocks, w, o)
	if err != nil {
		t.Fatal(err)
	}
	draws := make([][]float64, 2+p)
	angle := []float64{}
	for r := range o.Replicates {
		rng := rand.New(rand.NewPCG(o.Seed, uint64(r)))
		var parts []*pca.Summary
		for range blocks {
			parts = append(parts, blocks[rng.IntN(len(blocks))])
		}
		d := whole(parts, o.Decompose)
		dot := 0.0
		for j := range p {
			dot += d.Vector(j, 0) * w.Vector(j, 0)
		}
		angle = append(angle, math.Acos(math.Abs(dot))*180/math.Pi)
		draws[0] = append(draws[0], d.Values[0])
		draws[1] = append(draws[1], d.Share(0))
		for j := range p {
			draws[2+j] = append(draws[2+j], math.Copysign(1, dot)*d.Loading(j, 0))
		}
	}
	near := func(what string, got, want Interval) {
		t.Helper()
		for _, d := range []float64{got.Estimate - want.Estimate, got.Lower - want.Lower, got.Upper - want.Upper} {
			if !(math.Abs(d) < 1e-10) {
				t.Errorf("%s: %v, merged %v", what, got, want)
			}
		}
	}
	near("root", res.Eigenvalues[0], percentile(draws[0], w.Values[0], 0.9))
	near("share", res.Shares[0], percentile(draws[1], w.Share(0), 0.9))
	for j := range p {
		near("loading", res.Loadings[j], percentile(draws[2+j], w.Loading(j, 0), 0.9))
	}
	slices.Sort(angle)
	near("angle", res.SubspaceAngle, Interval{quantile(angle, 0.5), 0, quantile(angle, 0.9)})
}
