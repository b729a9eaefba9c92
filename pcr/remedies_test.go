package pcr

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"

	"axisfold/pca"
	"axisfold/testdata/published"
)

func decomposed(t *testing.T, file string) (*pca.Decomposition, pca.Projection, *pca.Summary) {
	t.Helper()
	table := published.CSV(t, "reference/classic/"+file+".csv")
	p := len(table.Names) - 1
	o := pca.Options{Names: table.Names[:p], Matrix: pca.Correlation}
	var x []int
	for j := range p {
		x = append(x, j)
		o.Methods = append(o.Methods, pca.UnitNormal)
	}
	s := pca.NewBuilder(p+1, pca.Factor, 0).Summarize(table.Data, table.Rows)
	d, pr, err := pca.DecomposeJoint(s, x, []int{p}, o)
	if err != nil {
		t.Fatal(err)
	}
	return d, pr[0], s
}

func rSquared(d *pca.Decomposition, pr pca.Projection, slopes []float64) float64 {
	left := pr.Outside
	for a, b := range slopes {
		e := pr.Along[a] - b*d.Length(a)
		left += e * e
	}
	return 1 - left/pr.Total
}

// Partial least squares on Hald's cement: R² by number of components computed once in
// NumPy; never below that of as many principal components (de Jong 1993, J. Chemom. 7:551),
// and least squares at the rank.
func TestPartialLeastSquares(t *testing.T) {
	d, pr, _ := decomposed(t, "hald_cement")
	fits := plsSlopes(d, pr.Along, 4)
	for k, want := range []float64{.96775410, .98163402, .98213621, .98237562} {
		got := rSquared(d, pr, fits[k])
		if math.Abs(got-want) > 5e-9 {
			t.Errorf("%d components: R2 %.8f, want %.8f", k+1, got, want)
		}
		components := make([]float64, 4)
		for a := range k + 1 {
			components[a] = pr.Along[a] / d.Length(a)
		}
		if other := rSquared(d, pr, components); got < other-1e-12 {
			t.Errorf("%d components: R2 %.8f below that of principal components, %.8f", k+1, got, other)
		}
	}
}

// The parameter of Hoerl, Kennard & Baldwin in unit-length form, computed once in NumPy.
func TestHoerlKennardBaldwin(t *testing.T) {
	for file, want := range map[string]float64{"hald_cement": .01307631, "longley": .00040081} {
		d, pr, s := decomposed(t, file)
		if got := hoerlKennardBaldwin(d, pr, s.Count()-1); math.Abs(got-want) > 5e-9 {
			t.Errorf("%s: %.8f, want %.8f", file, got, want)
		}
	}
}

// Ridge and partial least squares judged on folds from summaries agree with fits made and
// judged over rows: normal equations solved anew without each fold.
func TestRemediesBruteForce(t *testing.T) {
	rng := rand.New(rand.NewPCG(41, 42))
	n, p, folds := 60, 4, 5
	data := make([]float64, 0, n*(p+1))
	for range n {
		u := rng.NormFloat64()
		for j := range p {
			data = append(data, 10*float64(j)+u+.3*rng.NormFloat64())
		}
		data = append(data, 2*u+rng.NormFloat64())
	}
	b := pca.NewBuilder(p+1, pca.CrossProducts, 0)
	x, y := []int{0, 1, 2, 3}, []int{4}
	o := Options{Predictors: pca.Options{Names: []string{"a", "b", "c", "d"}, Matrix: pca.Correlation,
		Methods: []pca.Method{pca.UnitNormal, pca.UnitNormal, pca.UnitNormal, pca.UnitNormal}}, Order: ByVariance}
	w := p + 1
	for f := range folds {
		lo, hi := f*n/folds, (f+1)*n/folds
		rest := append(append([]float64(nil), data[:lo*w]...), data[hi*w:]...)
		train, held := b.Summarize(rest, len(rest)/w), b.Summarize(data[lo*w:hi*w], hi-lo)
		got, err := judgeFold(train, held, x, y, p, o)
		if err != nil {
			t.Fatal(err)
		}
		d, pr, err := pca.DecomposeJoint(train, x, y, o.Predictors)
		if err != nil {
			t.Fatal(err)
		}
		overRows := func(slopes []float64) float64 {
			sum := 0.0
			for i := lo; i < hi; i++ {
				e := data[i*w+p] - train.Mean(p)
				for a, s := range slopes {
					score := 0.0
					for j := range p {
						score += (data[i*w+j] - train.Mean(j)) / train.Deviation(j) * d.Vector(j, a)
					}
					e -= s * score
				}
				sum += e * e
			}
			return sum
		}
		// (l+κ)b = T'y/(n-1), the normal equations in the coordinates of the components.
		ridge := func(kappa float64) []float64 {
			slopes := make([]float64, p)
			for a := range slopes {
				slopes[a] = d.Length(a) * pr[0].Along[a] / float64(train.Count()-1) / (d.Values[a] + kappa)
			}
			return slopes
		}
		for i, kappa := range ridgeGrid(d) {
			if want := overRows(ridge(kappa)); math.Abs(got[0].ridge[i]-want) > 1e-9*want {
				t.Errorf("fold %d ridge %g: %.10g, over rows %.10g", f, kappa, got[0].ridge[i], want)
			}
		}
		// What formulas choose is chosen from the training rows, here by solving for
		// unit-length predictors and by the trace of the hat matrix.
		z, v := mat.NewDense(len(rest)/w, p, nil), mat.NewVecDense(len(rest)/w, nil)
		for i := range len(rest) / w {
			for j := range p {
				z.Set(i, j, (rest[i*w+j]-train.Mean(j))/train.Deviation(j)/math.Sqrt(float64(train.Count()-1)))
			}
			v.SetVec(i, rest[i*w+p]-train.Mean(p))
		}
		fit := func(kappa float64) (slopes mat.VecDense, squares, trace float64) {
			var m, hat mat.Dense
			m.Mul(z.T(), z)
			for j := range p {
				m.Set(j, j, m.At(j, j)+kappa)
			}
			if err := hat.Solve(&m, z.T()); err != nil {
				t.Fatal(err)
			}
			slopes.MulVec(&hat, v)
			var off mat.VecDense
			off.MulVec(z, &slopes)
			off.SubVec(v, &off)
			var whole mat.Dense
			whole.Mul(z, &hat)
			return slopes, mat.Dot(&off, &off), mat.Trace(&whole)
		}
		n := float64(train.Count())
		generalised, least := 0.0, math.Inf(1)
		for _, kappa := range ridgeGrid(d) {
			_, squares, trace := fit(kappa)
			if g := squares / (n - 1 - trace) / (n - 1 - trace); g < least {
				generalised, least = kappa, g
			}
		}
		ordinary, squares, _ := fit(0)
		hkb := float64(p) * squares / (n - 1 - float64(p)) / mat.Dot(&ordinary, &ordinary)
		for i, kappa := range []float64{generalised, hkb} {
			if want := overRows(ridge(kappa)); math.Abs(got[0].formulas[i]-want) > 1e-9*want {
				t.Errorf("fold %d ridge %s: %.10g, over rows %.10g", f, ridgeFormulas[i].name, got[0].formulas[i], want)
			}
		}
		for k, slopes := range plsSlopes(d, pr[0].Along, p) {
			if want := overRows(slopes); math.Abs(got[0].pls[k]-want) > 1e-9*want {
				t.Errorf("fold %d partial least squares %d: %.10g, over rows %.10g", f, k+1, got[0].pls[k], want)
			}
		}
	}
}
