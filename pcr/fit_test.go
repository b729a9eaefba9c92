package pcr_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"axisfold/pca"
	"axisfold/pcr"
	"axisfold/testdata/published"
)

// setup describes one fit over rows that hold p predictors followed by responses.
type setup struct {
	names     []string
	responses []string
	form      pca.Form
	method    pca.Method
	matrix    pca.Matrix
	options   pcr.Options
	folds     int
}

func defaults(names ...string) setup {
	s := setup{names: names[:len(names)-1], responses: names[len(names)-1:], form: pca.Factor, method: pca.UnitNormal, matrix: pca.Correlation}
	s.options = pcr.Options{Order: pcr.ByVariance, Choice: pcr.Given, Components: len(s.names), Confidence: .95}
	return s
}

func (s setup) positions() (x, y []int) {
	for j := range s.names {
		x = append(x, j)
	}
	for j := range s.responses {
		y = append(y, len(s.names)+j)
	}
	return x, y
}

func (s setup) fitOptions() pcr.Options {
	o := s.options
	o.Predictors = pca.Options{Names: s.names, Matrix: s.matrix}
	for range s.names {
		o.Predictors.Methods = append(o.Predictors.Methods, s.method)
	}
	o.Responses = s.responses
	return o
}

func (s setup) summaries(data []float64) (whole *pca.Summary, folds []*pca.Summary) {
	p := len(s.names) + len(s.responses)
	n := len(data) / p
	b := pca.NewBuilder(p, s.form, 0)
	for f := range s.folds {
		lo, hi := f*n/s.folds, (f+1)*n/s.folds
		folds = append(folds, b.Summarize(data[lo*p:hi*p], hi-lo))
	}
	return b.Summarize(data, n), folds
}

func (s setup) fit(t testing.TB, data []float64) *pcr.Result {
	t.Helper()
	whole, folds := s.summaries(data)
	x, y := s.positions()
	r, err := pcr.Fit(whole, folds, x, y, s.fitOptions())
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// The certified linear regressions of the NIST Statistical Reference Datasets, all
// components kept, through a factor of the rows and through cross-products. The digits
// asked of the factor are what the condition of the scaled predictors and the decimal
// input leave in double precision; cross-products square that condition.
func TestRegressionStRD(t *testing.T) {
	cases := []struct {
		name            string
		factor, squared float64 // digits of the worst coefficient
	}{
		{"Norris", 12, 12}, {"Pontius", 11.5, 10}, {"NoInt1", 14, 14}, {"NoInt2", 14, 14},
		{"Longley", 12, 10}, {"Wampler1", 9, 6}, {"Wampler2", 11, 9}, {"Wampler3", 9, 6},
		{"Wampler4", 7.5, 6}, {"Wampler5", 5.5, 5}, {"Filip", 7, 0},
	}
	for _, c := range cases {
		data := published.StRDRegression(t, c.name)
		s := defaults(append(append([]string(nil), data.X.Names...), "y")...)
		s.options.ThroughOrigin = data.Origin
		if data.Origin {
			s.method, s.matrix = pca.NoScaling, pca.Covariance
		}
		for _, form := range []pca.Form{pca.Factor, pca.CrossProducts} {
			s.form = form
			whole, _ := s.summaries(data.Joint())
			x, y := s.positions()
			r, err := pcr.Fit(whole, nil, x, y, s.fitOptions())
			if err != nil {
				if c.name == "Filip" && form == pca.CrossProducts {
					t.Logf("%-9s cross-products: %v", c.name, err)
					continue
				}
				t.Fatalf("%s: %v", c.name, err)
			}
			m := r.Models[0]
			terms := m.Terms
			if !data.Origin {
				terms = append([]pcr.Term{m.Intercept}, terms...)
			}
			coefficient, standard := 15., 15.
			for j, want := range data.Estimate {
				coefficient = math.Min(coefficient, published.Digits(terms[j].Coefficient, want))
				if data.Residual > 0 {
					standard = math.Min(standard, published.Digits(terms[j].Error, data.Error[j]))
				}
			}
			residual := published.Digits(m.Residual, data.Residual)
			r2 := published.Digits(m.R2, data.R2)
			label, want := "factor", c.factor
			if form == pca.CrossProducts {
				label, want = "cross-products", c.squared
			}
			t.Logf("%-9s %-14s digits: coefficients %4.1f, standard errors %4.1f, residual %4.1f, R2 %4.1f", c.name, label, coefficient, standard, residual, r2)
			if coefficient < want {
				t.Errorf("%s %s: coefficients agree to %.1f digits, want %g", c.name, label, coefficient, want)
			}
			if form == pca.Factor && (data.Residual > 0 && (standard < want-1 || residual < want) || r2 < want) {
				t.Errorf("%s %s: standard errors %.1f, residual %.1f, R2 %.1f digits", c.name, label, standard, residual, r2)
			}
		}
	}
}

// Hald's cement by components of the correlation matrix, mapped back, at every number of
// components; k=4 is least squares, solved in exact rational arithmetic. The others were
// computed once in NumPy 1.24.
func TestHaldEveryK(t *testing.T) {
	table := published.CSV(t, "reference/classic/hald_cement.csv")
	want := [][]float64{ // b0, b1..b4, SSE
		{89.073185, .79965907, .35812772, -.60804374, -.32352716, 95.279353},
		{88.95592, .78884396, .36145263, -.59623808, -.32689677, 94.983875},
		{85.743263, 1.3118899, .26941931, -.14276535, -.3800747, 48.527618},
		{62.405369299918, 1.5511026475084, .51016757968491, .10190940357966, -.14406102907102, 47.8636393504991},
	}
	digits := []float64{7, 7, 7, 12}
	for _, form := range []pca.Form{pca.Factor, pca.CrossProducts} {
		for _, method := range []pca.Method{pca.UnitNormal, pca.UnitLength} {
			for k := 1; k <= 4; k++ {
				s := defaults(table.Names...)
				s.form, s.method = form, method
				s.options.Components = k
				m := s.fit(t, table.Data).Models[0]
				got := append([]float64{m.Intercept.Coefficient}, coefficients(m)...)
				got = append(got, m.Path[k].Squares)
				for i, w := range want[k-1] {
					if d := published.Digits(got[i], w); d < digits[k-1]-.5 {
						t.Errorf("form %d %s k=%d: value %d = %.12g, want %.12g (%.1f digits)", form, method, k, i, got[i], w, d)
					}
				}
				if math.Abs(m.Terms[0].Ordinary-want[3][1]) > 1e-10 {
					t.Errorf("least squares beside k=%d: %g", k, m.Terms[0].Ordinary)
				}
			}
		}
	}
	s := defaults(table.Names...)
	m := s.fit(t, table.Data).Models[0]
	// Standard errors and variance inflation factors in exact rational arithmetic.
	for j, w := range []float64{70.0709592085, .7447698671, .7237880018, .7547090450, .7090520634} {
		got := m.Intercept.Error
		if j > 0 {
			got = m.Terms[j-1].Error
		}
		if published.Digits(got, w) < 9 {
			t.Errorf("standard error %d = %.12g, want %.12g", j, got, w)
		}
	}
	for j, w := range []float64{38.4962114906, 254.4231658509, 46.8683863336, 282.5128647886} {
		if got := m.Terms[j].VIF; published.Digits(got, w) < 10 {
			t.Errorf("VIF %d = %.12g, want %.12g", j+1, got, w)
		}
	}
	s.options.Components = 3
	m = s.fit(t, table.Data).Models[0]
	for j, w := range []float64{.18762458, .0380621, .1648376, .02740048} {
		if got := m.Terms[j].Error; published.Digits(got, w) < 5.5 {
			t.Errorf("k=3 standard error %d = %.9g, want %.9g", j+1, got, w)
		}
	}
}

func coefficients(m *pcr.Model) []float64 {
	var b []float64
	for _, term := range m.Terms {
		b = append(b, term.Coefficient)
	}
	return b
}

// Order by correlation on Hald takes components 1 and 3 first: computed once in NumPy.
func TestHaldByCorrelation(t *testing.T) {
	table := published.CSV(t, "reference/classic/hald_cement.csv")
	s := defaults(table.Names...)
	s.options.Order, s.options.Components = pcr.ByCorrelation, 2
	m := s.fit(t, table.Data).Models[0]
	if m.Entering[0] != 0 || m.Entering[1] != 2 {
		t.Fatalf("components enter in the order %v", m.Entering)
	}
	for j, want := range []float64{1.3227, .2661, -.1546, -.3767} {
		if math.Abs(m.Terms[j].Coefficient-want) > 5e-5 {
			t.Errorf("coefficient %d = %.5f, want %.4f", j+1, m.Terms[j].Coefficient, want)
		}
	}
	if got := m.Path[2].Squares; math.Abs(got-48.823096) > 5e-7 {
		t.Errorf("SSE %.6f", got)
	}
	for a, want := range []float64{.964916, .000109, .017106, .000244} {
		if got := m.Correlations[a] * m.Correlations[a]; math.Abs(got-want) > 5e-7 {
			t.Errorf("squared correlation with component %d: %.6f, want %.6f", a+1, got, want)
		}
	}
}

// Prediction of a new mixture from Hald's cement, computed once in NumPy 1.24.
func TestHaldPrediction(t *testing.T) {
	table := published.CSV(t, "reference/classic/hald_cement.csv")
	row := []float64{10, 50, 10, 30}
	for k, want := range map[int][2]float64{1: {99.189909, 6.739095}, 3: {99.503233, 5.486881}, 4: {100.122038, 7.284314}} {
		s := defaults(table.Names...)
		s.options.Components = k
		r := s.fit(t, table.Data)
		var y, half [1]float64
		r.NewPredictor(0, .95, false).Predict(y[:], half[:], row, 1)
		if math.Abs(y[0]-want[0]) > 1e-6 || math.Abs(half[0]-want[1]) > 1e-6 {
			t.Errorf("k=%d: %.6f ± %.6f, want %.6f ± %.6f", k, y[0], half[0], want[0], want[1])
		}
	}
}

// Closed forms for two standardized predictors as functions of the three correlations
// (any regression text): b1 = (r1y - r12·r2y)/(1-r12²), R² = b1·r1y + b2·r2y, standard
// error √((1-R²)/((n-3)(1-r12²))), VIF = 1/(1-r12²).
func TestTwoPredictors(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 8))
	for _, mix := range []float64{0, .5, .99, -.9} {
		n := 40
		data := make([]float64, 0, 3*n)
		for range n {
			a := rng.NormFloat64()
			b := mix*a + math.Sqrt(1-mix*mix)*rng.NormFloat64()
			data = append(data, 100+5*a, 3*b-7, 2*a-b+rng.NormFloat64())
		}
		s := defaults("x1", "x2", "y")
		m := s.fit(t, data).Models[0]
		whole, _ := s.summaries(data)
		r := func(i, j int) float64 {
			return whole.CrossProduct(i, j) / math.Sqrt(whole.CenteredSquares(i)*whole.CenteredSquares(j))
		}
		r12, r1y, r2y := r(0, 1), r(0, 2), r(1, 2)
		b1, b2 := (r1y-r12*r2y)/(1-r12*r12), (r2y-r12*r1y)/(1-r12*r12)
		r2 := b1*r1y + b2*r2y
		se := math.Sqrt((1 - r2) / float64(n-3) / (1 - r12*r12))
		check := func(what string, got, want float64) {
			if published.Digits(got, want) < 10 {
				t.Errorf("mix %g: %s = %.15g, closed form %.15g", mix, what, got, want)
			}
		}
		check("b1", m.Terms[0].Standardized, b1)
		check("b2", m.Terms[1].Standardized, b2)
		check("R2", m.R2, r2)
		check("VIF", m.Terms[0].VIF, 1/(1-r12*r12))
		check("standard error", m.Terms[0].Error*whole.Deviation(0)/whole.Deviation(2), se)
	}
}

// Orthogonal predictors: the standardized coefficient is the correlation with the response.
func TestOrthogonalPredictors(t *testing.T) {
	data := []float64{ // a 2^3 factorial
		-1, -1, -1, 60, 1, -1, -1, 72, -1, 1, -1, 54, 1, 1, -1, 68,
		-1, -1, 1, 52, 1, -1, 1, 83, -1, 1, 1, 45, 1, 1, 1, 80,
	}
	s := defaults("a", "b", "c", "y")
	m := s.fit(t, data).Models[0]
	whole, _ := s.summaries(data)
	for j := range 3 {
		want := whole.CrossProduct(j, 3) / math.Sqrt(whole.CenteredSquares(j)*whole.CenteredSquares(3))
		if math.Abs(m.Terms[j].Standardized-want) > 1e-14 {
			t.Errorf("coefficient %d = %.17g, correlation %.17g", j, m.Terms[j].Standardized, want)
		}
	}
}

// Cross-validation of Hald's cement leaving one row out, everything refitted: computed
// once by brute force in NumPy 1.24; k=0 is SST·(n/(n-1))² and k=4 the PRESS of least
// squares, both in exact arithmetic.
func TestHaldLeaveOneOut(t *testing.T) {
	table := published.CSV(t, "reference/classic/hald_cement.csv")
	want := []float64{3187.2497, 140.8621, 155.81066, 90.019959, 110.346556904236}
	for _, form := range []pca.Form{pca.Factor, pca.CrossProducts} {
		s := defaults(table.Names...)
		s.form, s.folds = form, 13
		m := s.fit(t, table.Data).Models[0]
		for k, w := range want {
			got := m.Path[k].CV * m.Path[k].CV * 13
			if published.Digits(got, w) < 6.5 {
				t.Errorf("form %d k=%d: %.9g, want %.9g", form, k, got, w)
			}
		}
	}
}

// Cross-validation from summaries equals cross-validation over rows: the rows are fitted
// and predicted one fold at a time with the public functions for rows.
func TestCrossValidationBruteForce(t *testing.T) {
	rng := rand.New(rand.NewPCG(9, 10))
	for _, shape := range [][3]int{{60, 6, 5}, {25, 3, 25}, {20, 30, 4}, {200, 12, 10}} {
		n, p, folds := shape[0], shape[1], shape[2]
		data := make([]float64, 0, n*(p+2))
		for range n {
			common := rng.NormFloat64()
			var row []float64
			for j := range p {
				row = append(row, 50*float64(j)+common+rng.NormFloat64()*float64(1+j%3))
			}
			data = append(data, row...)
			data = append(data, 3*common+row[0]+rng.NormFloat64(), row[p-1]-row[0]+rng.NormFloat64())
		}
		for _, form := range []pca.Form{pca.Factor, pca.CrossProducts} {
			for _, order := range []pcr.Order{pcr.ByVariance, pcr.ByCorrelation} {
				for _, method := range []pca.Method{pca.UnitNormal, pca.Pareto} {
					t.Run(fmt.Sprintf("n=%d/p=%d/form=%d/%s/%s", n, p, form, order, method), func(t *testing.T) {
						s := setup{form: form, method: method, matrix: pca.Correlation, folds: folds, responses: []string{"y", "z"}}
						if method == pca.Pareto {
							s.matrix = pca.Covariance
						}
						for j := range p {
							s.names = append(s.names, fmt.Sprint("x", j))
						}
						s.options = pcr.Options{Order: order, Choice: pcr.Minimum, Confidence: .95, Threads: 2}
						r := s.fit(t, data)
						for i, m := range r.Models {
							brute := bruteForce(t, s, data, n, p, folds, i, len(m.Path)-1)
							best := 0
							for k, b := range brute {
								got := m.Path[k].CV * m.Path[k].CV * float64(n)
								if math.IsNaN(b) != math.IsNaN(got) || math.Abs(got-b) > 1e-9*b {
									t.Errorf("response %d k=%d: %.12g from summaries, %.12g over rows", i, k, got, b)
								}
								if b < brute[best] {
									best = k
								}
							}
							if m.Components != best {
								t.Errorf("response %d: %d components chosen, smallest error at %d", i, m.Components, best)
							}
						}
					})
				}
			}
		}
	}
}

// bruteForce returns Σ error² over held-out rows at every number of components.
func bruteForce(t *testing.T, s setup, data []float64, n, p, folds, response, most int) []float64 {
	t.Helper()
	width := p + 2
	out := make([]float64, most+1)
	for f := range folds {
		lo, hi := f*n/folds, (f+1)*n/folds
		train := append(append([]float64(nil), data[:lo*width]...), data[hi*width:]...)
		for k := range out {
			one := s
			one.folds = 0
			one.options.Choice, one.options.Components = pcr.Given, k
			whole, _ := one.summaries(train)
			x, y := one.positions()
			r, err := pcr.Fit(whole, nil, x, y, one.fitOptions())
			if err != nil {
				out[k] = math.NaN()
				continue
			}
			predictor := r.NewPredictor(response, .95, false)
			for i := lo; i < hi; i++ {
				var got, half [1]float64
				predictor.Predict(got[:], half[:], data[i*width:i*width+p], 1)
				e := data[i*width+p+response] - got[0]
				out[k] += e * e
			}
		}
	}
	return out
}

// The one-standard-error rule by hand: errors by fold known, so is the limit.
func TestOneStandardError(t *testing.T) {
	table := published.CSV(t, "reference/classic/hald_cement.csv")
	s := defaults(table.Names...)
	s.folds, s.options.Choice = 13, pcr.OneStandardError
	m := s.fit(t, table.Data).Models[0]
	best := 0
	for k, step := range m.Path {
		if step.CV < m.Path[best].CV {
			best = k
		}
	}
	least := m.Path[best]
	limit := least.CV*least.CV + 2*least.CV*least.CVError
	want := 0
	for m.Path[want].CV*m.Path[want].CV > limit {
		want++
	}
	if m.Components != want || want > best || best != 3 {
		t.Errorf("%d components, by hand %d (smallest error at %d)", m.Components, want, best)
	}
}

// Criteria on Hald's cement: AICc at k = 1..4, the t values of the components, and Cp of
// components 1 and 3, all computed once in NumPy; t² above 2 must give the smallest Cp
// over all subsets, which is its closed form.
func TestHaldCriteria(t *testing.T) {
	table := published.CSV(t, "reference/classic/hald_cement.csv")
	s := defaults(table.Names...)
	m := s.fit(t, table.Data).Models[0]
	for k, want := range []float64{34.561, 38.854, 35.695, 42.944} {
		if got := m.Path[k+1].AICc; math.Abs(got-want) > 5e-4 {
			t.Errorf("AICc with %d = %.4f, want %.3f", k+1, got, want)
		}
	}
	for a, want := range []float64{20.928, .222, 2.787, .333} {
		if got := math.Abs(m.T[a]); math.Abs(got-want) > 5e-4 {
			t.Errorf("t of component %d = %.4f, want %.3f", a+1, got, want)
		}
	}
	if got := m.Path[4].Cp; math.Abs(got-5) > 1e-9 {
		t.Errorf("Cp of least squares = %.12f, want p+1", got)
	}
	s.options.Choice, s.options.Limit = pcr.TThreshold, 2
	m = s.fit(t, table.Data).Models[0]
	if m.Components != 2 || m.Entering[0] != 0 || m.Entering[1] != 2 || math.Abs(m.Path[2].Cp-1.16037) > 5e-6 {
		t.Errorf("t-threshold takes %v, Cp %.5f", m.Entering[:m.Components], m.Path[m.Components].Cp)
	}
	for choice, want := range map[pcr.Choice]int{pcr.SmallestAICc: 1, pcr.SmallestCp: 3} {
		s := defaults(table.Names...)
		s.options.Choice = choice
		if m := s.fit(t, table.Data).Models[0]; m.Components != want {
			t.Errorf("%s takes %d components, want %d", choice, m.Components, want)
		}
	}
}

func TestUnusable(t *testing.T) {
	flat := []float64{1, 2, 5, 2, 1, 5, 3, 5, 5, 4, 4, 5}
	s := defaults("a", "b", "y")
	whole, _ := s.summaries(flat)
	x, y := s.positions()
	if _, err := pcr.Fit(whole, nil, x, y, s.fitOptions()); err == nil || err.Error() != `channel "y": is the response and holds one value, 5, in all rows` {
		t.Errorf("constant response: %v", err)
	}
	exact := []float64{1, 2, 5, 2, 1, 4, 3, 5, 9, 4, 4, 8.5}
	s.options.Components = 3
	whole, _ = s.summaries(exact)
	if _, err := pcr.Fit(whole, nil, x, y, s.fitOptions()); err == nil || err.Error() != "3 components asked for, but the predictors span 2" {
		t.Errorf("too many components: %v", err)
	}
	// Two rows, no freedom: defined numbers where they exist, NaN and a warning elsewhere.
	s.options.Components = 1
	m := s.fit(t, []float64{1, 2, 5, 2, 4, 7}).Models[0]
	if !math.IsNaN(m.Terms[0].Error) || len(m.Warnings) == 0 {
		t.Errorf("no freedom: error %g, warnings %v", m.Terms[0].Error, m.Warnings)
	}
}

func BenchmarkCrossValidation(b *testing.B) {
	rng := rand.New(rand.NewPCG(3, 3))
	n, p, folds := 10000, 100, 10
	data := make([]float64, 0, n*(p+1))
	for range n {
		common := rng.NormFloat64()
		for range p {
			data = append(data, common+rng.NormFloat64())
		}
		data = append(data, common+rng.NormFloat64())
	}
	for _, form := range []pca.Form{pca.CrossProducts, pca.Factor} {
		s := setup{form: form, method: pca.UnitNormal, matrix: pca.Correlation, folds: folds, responses: []string{"y"}}
		for j := range p {
			s.names = append(s.names, fmt.Sprint("x", j))
		}
		s.options = pcr.Options{Order: pcr.ByVariance, Choice: pcr.Minimum, Confidence: .95}
		b.Run(fmt.Sprintf("form=%d/n=%d/p=%d/folds=%d", form, n, p, folds), func(b *testing.B) {
			for b.Loop() {
				s.fit(b, data)
			}
		})
	}
}
