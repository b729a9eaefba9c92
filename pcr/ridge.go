package pcr

import (
	"fmt"
	"math"

	"axisfold/pca"
)

// ridgeGrid are the ridge parameters tried: from 1e-13 to 100 mean roots, four a decade.
// They do not depend on the rows but for the unit of the roots.
func ridgeGrid(d *pca.Decomposition) []float64 {
	mean := d.Total / float64(d.Width())
	var out []float64
	for e := -52; e <= 8; e++ {
		out = append(out, mean*math.Pow(10, float64(e)/4))
	}
	return out
}

// ridgeSlopes are slopes on scores shrunk by l/(l+κ), l the root (Hoerl & Kennard 1970).
func ridgeSlopes(d *pca.Decomposition, along []float64, kappa float64) []float64 {
	out := make([]float64, len(along))
	for a, v := range along {
		out[a] = v / d.Length(a) * d.Values[a] / (d.Values[a] + kappa)
	}
	return out
}

// ridgeParameters is the effective number of slopes, Σ l/(l+κ).
func ridgeParameters(d *pca.Decomposition, kappa float64) float64 {
	sum := 0.0
	for _, l := range d.Values[:d.Rank] {
		sum += l / (l + kappa)
	}
	return sum
}

// generalised is the parameter of the grid that generalised cross-validation chooses
// (Golub, Heath & Wahba 1979); NaN where no parameter leaves freedom. rows is without what
// the intercept takes.
func generalised(d *pca.Decomposition, pr pca.Projection, rows int) float64 {
	chosen, least := math.NaN(), math.Inf(1)
	for _, kappa := range ridgeGrid(d) {
		squares := pr.Outside
		for a, u := range pr.Along[:d.Rank] {
			rest := kappa / (d.Values[a] + kappa) * u
			squares += rest * rest
		}
		if left := float64(rows) - ridgeParameters(d, kappa); left > 0 && squares/(left*left) < least {
			chosen, least = kappa, squares/(left*left)
		}
	}
	return chosen
}

// hoerlKennardBaldwin is κ = p·s²/b'b (Hoerl, Kennard & Baldwin 1975) with s and b of least
// squares and b on predictors of unit length, in units of the roots of the matrix; NaN
// where least squares has no answer. rows is without what the intercept takes.
func hoerlKennardBaldwin(d *pca.Decomposition, pr pca.Projection, rows int) float64 {
	free := rows - d.Width()
	if d.Rank < d.Width() || free <= 0 {
		return math.NaN()
	}
	squares := 0.0
	for a, u := range pr.Along[:d.Rank] {
		squares += u * u / d.Values[a]
	}
	kappa := float64(d.Width()) * pr.Outside / float64(free) / squares
	if !(kappa > 0) || math.IsInf(kappa, 0) {
		return math.NaN() // an exact fit, or a response that does not follow
	}
	return kappa
}

// ridgeFormulas choose the parameter from the rows of the fit alone.
var ridgeFormulas = []struct {
	name   string
	choose func(d *pca.Decomposition, pr pca.Projection, rows int) float64
}{
	{"by generalised cross-validation", generalised},
	{"by Hoerl, Kennard and Baldwin", hoerlKennardBaldwin},
}

// addRidge adds ridge regression with its parameter by the folds and by each formula. What
// a formula chooses is chosen anew in every fold.
func (m *Model) addRidge(d *pca.Decomposition, pr pca.Projection, v *validation,
	add func(string, string, float64, []float64, float64, func(int) (float64, bool)), at func(int, func(heldErrors) []float64) func(int) (float64, bool)) {
	along := pr.Along[:d.Rank]
	one := func(kappa float64, how string, of func(int) (float64, bool)) {
		add("ridge", fmt.Sprintf("parameter %.3g, %s", kappa, how), kappa, ridgeSlopes(d, along, kappa), ridgeParameters(d, kappa), of)
	}
	if v != nil {
		grid, errors := ridgeGrid(d), func(e heldErrors) []float64 { return e.ridge }
		if best := v.best(len(grid), func(k int) func(int) (float64, bool) { return at(k, errors) }); best >= 0 {
			one(grid[best], "by the folds", at(best, errors))
		}
	}
	for f, formula := range ridgeFormulas {
		if kappa := formula.choose(d, pr, m.Rows-m.constants); !math.IsNaN(kappa) {
			one(kappa, formula.name, at(f, func(e heldErrors) []float64 { return e.formulas }))
		}
	}
}
