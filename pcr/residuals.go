package pcr

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// ResidualSeries gathers the residuals of a model in the order of rows.
type ResidualSeries struct {
	centre             float64 // near which fitted values lie, so that their squares keep their digits
	n                  float64
	sums               [4]float64 // Σeᵏ
	fitted, fitted2    float64
	squareFitted       float64 // Σe²(f-centre)
	last               float64
	differences, pairs float64
	products           []float64 // Σeₜeₜ₋ₗ at lag l+1
	counts             []float64
	recent             []float64 // the latest residuals of the stretch, the last first
	filled             int
}

// NewResidualSeries gathers autocorrelations up to the given lag.
func (m *Model) NewResidualSeries(lags int) *ResidualSeries {
	return &ResidualSeries{centre: m.mean, products: make([]float64, lags), counts: make([]float64, lags), recent: make([]float64, lags)}
}

// Add takes a residual with its fitted value, and whether the row follows the one before.
func (s *ResidualSeries) Add(e, fitted float64, follows bool) {
	if !follows {
		s.filled = 0
	} else {
		s.differences += (e - s.last) * (e - s.last)
		s.pairs++
	}
	for l := range s.filled {
		s.products[l] += e * s.recent[l]
		s.counts[l]++
	}
	if len(s.recent) > 0 {
		copy(s.recent[1:], s.recent)
		s.recent[0] = e
		s.filled = min(s.filled+1, len(s.recent))
	}
	s.last = e
	power := 1.0
	for i := range s.sums {
		power *= e
		s.sums[i] += power
	}
	f := fitted - s.centre
	s.n++
	s.fitted += f
	s.fitted2 += f * f
	s.squareFitted += e * e * f
}

// ResidualTests judge residuals. What cannot be told is NaN.
type ResidualTests struct {
	// DurbinWatson is Σ(eₜ-eₜ₋₁)²/Σe² over rows that follow one another, brought to what
	// all rows would give where some do not; near 2 without autocorrelation (Durbin & Watson
	// 1950). Autocorrelations are at lags 1, 2, ..., about a mean of zero; Pairs at lag 1.
	DurbinWatson     float64
	Autocorrelations []float64
	Pairs            int
	Skewness         float64
	Kurtosis         float64 // 3 for a normal distribution
	// Normality is K² of skewness and kurtosis on two degrees of freedom, from 20 rows on
	// (D'Agostino & Pearson 1973; Anscombe & Glynn 1983).
	Normality, NormalityP float64
	// Spread is n·R² of squared residuals on fitted values, on one degree of freedom: whether
	// residuals grow or shrink with the prediction (Breusch & Pagan 1979, in the form of
	// Koenker 1981, which does not need normal residuals).
	Spread, SpreadP float64
}

// normalRows is from how many rows on K² follows its distribution closely enough.
const normalRows = 20

// Tests ends the gathering. An exact fit leaves rounding, which is not judged.
func (s *ResidualSeries) Tests(m *Model) *ResidualTests {
	nan := math.NaN()
	t := &ResidualTests{DurbinWatson: nan, Autocorrelations: nans(len(s.products)), Pairs: int(s.pairs),
		Skewness: nan, Kurtosis: nan, Normality: nan, NormalityP: nan, Spread: nan, SpreadP: nan}
	if m.Free <= 0 || m.exact() || s.sums[1] == 0 {
		return t
	}
	n, mean := s.n, s.sums[0]/s.n
	if s.pairs > 0 {
		t.DurbinWatson = s.differences / s.sums[1]
		if s.pairs < n-1 {
			t.DurbinWatson *= (n - 1) / s.pairs
		}
	}
	for l, v := range s.products {
		if s.counts[l] > 0 {
			// Over n, not over pairs, the usual estimate, whose matrix stays non-negative;
			// brought to n-l pairs where rows do not follow one another.
			t.Autocorrelations[l] = v / s.sums[1] * (n - float64(l) - 1) / s.counts[l]
		}
	}
	second := s.sums[1]/n - mean*mean
	third := s.sums[2]/n - 3*mean*s.sums[1]/n + 2*mean*mean*mean
	fourth := s.sums[3]/n - 4*mean*s.sums[2]/n + 6*mean*mean*s.sums[1]/n - 3*mean*mean*mean*mean
	if second > 0 {
		t.Skewness, t.Kurtosis = third/math.Pow(second, 1.5), fourth/(second*second)
	}
	if n >= normalRows {
		a, b := skewnessZ(t.Skewness, n), kurtosisZ(t.Kurtosis, n)
		t.Normality = a*a + b*b
		t.NormalityP = math.Exp(-t.Normality / 2)
	}
	squareVariance := s.sums[3] - s.sums[1]*s.sums[1]/n
	fittedVariance := s.fitted2 - s.fitted*s.fitted/n
	if squareVariance > 0 && fittedVariance > 0 && m.Components > 0 {
		c := s.squareFitted - s.sums[1]*s.fitted/n
		t.Spread = n * c * c / squareVariance / fittedVariance
		t.SpreadP = distuv.ChiSquared{K: 1}.Survival(t.Spread)
	}
	return t
}

// skewnessZ is the normal deviate of a sample's skewness (D'Agostino 1970).
func skewnessZ(g, n float64) float64 {
	y := g * math.Sqrt((n+1)*(n+3)/(6*(n-2)))
	b := 3 * (n*n + 27*n - 70) * (n + 1) * (n + 3) / ((n - 2) * (n + 5) * (n + 7) * (n + 9))
	w2 := math.Sqrt(2*(b-1)) - 1
	return math.Asinh(y/math.Sqrt(2/(w2-1))) / math.Sqrt(.5*math.Log(w2))
}

// kurtosisZ is that of its kurtosis (Anscombe & Glynn 1983).
func kurtosisZ(b, n float64) float64 {
	variance := 24 * n * (n - 2) * (n - 3) / ((n + 1) * (n + 1) * (n + 3) * (n + 5))
	x := (b - 3*(n-1)/(n+1)) / math.Sqrt(variance)
	skew := 6 * (n*n - 5*n + 2) / ((n + 7) * (n + 9)) * math.Sqrt(6*(n+3)*(n+5)/(n*(n-2)*(n-3)))
	a := 6 + 8/skew*(2/skew+math.Sqrt(1+4/(skew*skew)))
	root := math.Cbrt((1 - 2/a) / (1 + x*math.Sqrt(2/(a-4))))
	return (1 - 2/(9*a) - root) / math.Sqrt(2/(9*a))
}
