package pcr

import (
	"fmt"
	"math"
	"sort"

	"axisfold/pca"
)

// Order is the order in which components enter.
type Order string

// The orders. ByCorrelation looks at the response, so it is made anew in every fold.
const (
	ByVariance    Order = "variance"
	ByCorrelation Order = "correlation"
)

// Choice is how the number of components is chosen.
type Choice string

// The choices. OneStandardError takes the fewest components whose cross-validated mean
// squared error is within one standard error of the smallest (Breiman et al. 1984).
const (
	Given            Choice = "given"
	Minimum          Choice = "cross-validation"
	OneStandardError Choice = "one-standard-error"
	SmallestAICc     Choice = "aicc"        // Hurvich & Tsai 1989
	SmallestBIC      Choice = "bic"         // Schwarz 1978
	SmallestCp       Choice = "cp"          // Mallows 1973
	TThreshold       Choice = "t-threshold" // components with t² above Limit; 2 gives the smallest Cp
	// ConditionLimit takes components while their condition index is below Limit, 30 for
	// instance (Belsley, Kuh & Welsch 1980); RandomisationTest the fewest that predict held-out
	// rows as well as the best, as far as chance goes (van der Voet 1994).
	ConditionLimit    Choice = "condition-limit"
	RandomisationTest Choice = "randomisation-test"
	SmallestPress     Choice = "press" // Allen 1974, directions fixed; needs Options.Press
)

// Choices lists the choices that look at the response.
var Choices = []Choice{Minimum, OneStandardError, SmallestAICc, SmallestBIC, SmallestCp, TThreshold, SmallestPress, ConditionLimit, RandomisationTest}

// Options say how to fit.
type Options struct {
	Predictors pca.Options // names and scaling of the predictors, the matrix to decompose
	Responses  []string
	// ThroughOrigin drops the intercept; the summaries are then taken about zero.
	ThroughOrigin bool
	Order         Order
	Choice        Choice
	Components    int // for Given
	// Which are components, from 0, that enter before all others, whatever Order says; in every
	// fold they are those of the fold's own decomposition.
	Which []int
	Limit float64   // of t², for TThreshold; of the condition index, for ConditionLimit
	Alpha float64   // probability of error of RandomisationTest
	Seed  uint64    // of its signs
	Press PressSums // from a pass over the rows; nil without
	// Splits say which of the folds are held out together and what is learnt from; nil holds
	// out each in turn and learns from all others.
	Splits []pca.Split
	// Nested asks for the error of the whole procedure, which costs the square of the folds.
	Nested bool
	// Most bounds the components considered; 0 means as many as the data carry.
	Most       int
	Confidence float64 // of the intervals, in (0,1)
	Threads    int

	pathOnly bool // inner folds judge components alone
}

// Result is a fit of one or several responses on the same components.
type Result struct {
	Decomposition *pca.Decomposition
	Models        []*Model
}

// Model is the regression of one response.
type Model struct {
	Response string
	Rows     int
	// Entering lists components (from 0) in the order of entry; the model uses the
	// first Components of it.
	Entering   []int
	Components int
	// Free is the degrees of freedom of the residual: n - k - 1, or n - k through the origin.
	Free int
	// Residual is the residual standard deviation, divisor Free; NaN without freedom.
	Residual  float64
	R2        float64
	Total     float64 // Σ(y-ȳ)², or Σy² through the origin
	Intercept Term
	Terms     []Term
	// Correlations are r(y, t_a) by component, from 0, in no particular order of entry.
	Correlations []float64
	// T are the t values of the components' slopes with the residual standard deviation of
	// least squares; NaN where that is undefined.
	T []float64
	// Coefficients by number of components, ascending from 0.
	Coefficients []PathStep
	// Path holds one step per number of components, from 0.
	Path  []Step
	Folds int // of each deal of the rows
	Deals int
	// Procedure is nil where it was not asked for.
	Procedure *Procedure
	Remedies  []Remedy // components as chosen beside other published remedies
	Warnings  []pca.Warning

	constants  int // 1 with an intercept, else 0
	roots      []float64
	held       [][]float64 // Σ held-out error² by number of components and fold of the first deal
	mean       float64     // of the response
	deviation  float64     // of the response
	deviations []float64   // of the predictors
}

// Term is one coefficient in original units: units of y per unit of the channel.
type Term struct {
	Name        string
	Coefficient float64
	// Error is the conditional standard error (see the package comment).
	Error        float64
	Lower, Upper float64
	// Standardized is the coefficient times the channel's over the response's standard deviation.
	Standardized float64
	// Ordinary is the least-squares coefficient and OrdinaryError its standard error; NaN
	// when the predictors are linearly dependent or too many.
	Ordinary, OrdinaryError float64
	// OrdinaryStandardized is Ordinary on the scale of Standardized.
	OrdinaryStandardized float64
	// VIF is the variance inflation factor [R⁻¹]_jj; +Inf when the channel is an exact
	// combination of others. NaN for the intercept.
	VIF float64
}

// Step is the fit and its cross-validated error with the first k components.
type Step struct {
	Components int
	Squares    float64 // Σ residual²
	RootMean   float64 // √(Σ residual²/n)
	R2         float64
	// CV is the root mean squared error over held-out rows, divisor n; CVError its standard
	// error: that of the mean squared error over folds, carried to the root. NaN where the
	// folds cannot carry k components.
	CV, CVError float64
	CVR2        float64 // 1 - Σ held-out error²/Total
	// AICc = n·ln(SSE/n) + 2K + 2K(K+1)/(n-K-1) and BIC = n·ln(SSE/n) + K·ln n with K = k+2
	// (slopes, intercept, variance); NaN where rows are too few or the fit is exact.
	AICc, BIC float64
	// Cp = Σ t² of the components left out - p + 2k + 1, t with the residual standard
	// deviation of least squares; NaN where that is undefined.
	Cp     float64
	Chosen bool
	// Press is Σ(leave-one-out error)² with directions fixed, see [Press]; NaN without a pass
	// over the rows.
	Press float64
	// Chance is how often signs drawn for the folds let this number of components fall behind
	// the best as far as it does; NaN without the randomisation test, and from the best on.
	Chance float64
}

// Fit regresses the responses y on components of the predictors x: positions in the joint
// summary. folds, if any, are summaries of disjoint parts of the same rows (of each deal,
// where Options.Splits has several). Scaling, decomposition and order are made anew without each fold.
func Fit(joint *pca.Summary, folds []*pca.Summary, x, y []int, o Options) (*Result, error) {
	if o.ThroughOrigin {
		joint = joint.AboutOrigin()
		about := make([]*pca.Summary, len(folds))
		for i, f := range folds {
			about[i] = f.AboutOrigin()
		}
		folds = about
	}
	for i, j := range y {
		if joint.Constant(j) && !o.ThroughOrigin {
			return nil, &pca.DataError{Channel: o.Responses[i],
				Problem: fmt.Sprintf("is the response and holds one value, %.6g, in all rows", joint.Min(j))}
		}
	}
	if o.Choice == TThreshold {
		o.Order = ByCorrelation // falling |t| is falling correlation with the response
	}
	if o.Choice == ConditionLimit {
		o.Order = ByVariance
	}
	d, projections, err := pca.DecomposeJoint(joint, x, y, o.Predictors)
	if err != nil {
		return nil, err
	}
	if err := o.checkWhich(d.Rank); err != nil {
		return nil, err
	}
	most := d.Rank
	if o.Most > 0 {
		most = min(most, o.Most)
	}
	if o.Choice == Given && o.Components > d.Rank {
		return nil, &pca.DataError{Problem: fmt.Sprintf("%d components asked for, but the predictors span %d", o.Components, d.Rank),
			Hint: "ask for fewer components"}
	}
	var cv *validation
	var squares []float64
	whole := make([]*Procedure, len(y))
	if len(folds) > 0 {
		if o.Splits == nil {
			o.Splits = pca.HoldEachOut(len(folds))
		}
		if cv, err = crossValidate(folds, o.Splits, x, y, most, o); err != nil {
			return nil, err
		}
		squares = heldSquares(folds, o.Splits, y)
		if o.Nested {
			whole = procedures(folds, cv, x, y, most, o)
		}
	}
	r := &Result{Decomposition: d}
	for i := range y {
		m := newModel(joint, d, projections[i], y[i], x, o.Responses[i], o)
		m.path(projections[i], most)
		m.addCriteria(projections[i], o)
		m.addPress(o.press(i))
		if cv != nil {
			m.addValidation(cv, i, squares[i])
		}
		if err := m.choose(o); err != nil {
			return nil, err
		}
		if m.Procedure = whole[i]; m.Procedure != nil && m.Procedure.Note != "" {
			m.warn("no-procedure", "the error of the whole procedure is not known: %s", m.Procedure.Note)
		}
		m.mapBack(joint, d, projections[i], x, y[i], o)
		m.coefficientPath(joint, d, projections[i], x, y[i], o)
		m.remedies(d, projections[i], cv, i, most)
		r.Models = append(r.Models, m)
	}
	return r, nil
}

func newModel(joint *pca.Summary, d *pca.Decomposition, pr pca.Projection, y int, x []int, name string, o Options) *Model {
	m := &Model{Response: name, Rows: joint.Count(), Total: pr.Total, Entering: o.enter(pr.Along[:d.Rank]), roots: d.Values[:d.Rank]}
	if !o.ThroughOrigin {
		m.constants = 1
	}
	m.mean, m.deviation = joint.Mean(y), joint.Deviation(y)
	for _, j := range x {
		m.deviations = append(m.deviations, joint.Deviation(j))
	}
	m.Correlations = make([]float64, len(pr.Along))
	for a, v := range pr.Along {
		m.Correlations[a] = v / math.Sqrt(pr.Total)
	}
	return m
}

// entering returns the components in the order of entry: as they stand, or by falling
// |u_a'y|, which is falling correlation with the response; the lower component first on ties.
func entering(along []float64, order Order) []int {
	out := pca.FirstComponents(len(along))
	if order == ByCorrelation {
		sort.SliceStable(out, func(i, j int) bool { return math.Abs(along[out[i]]) > math.Abs(along[out[j]]) })
	}
	return out
}

// path fills the steps: squares left after k components are what lies outside all of them
// plus what the components not yet entered would take, summed from the small end.
func (m *Model) path(pr pca.Projection, most int) {
	left := make([]float64, len(m.Entering)+1)
	left[len(m.Entering)] = pr.Outside
	for k := len(m.Entering) - 1; k >= 0; k-- {
		v := pr.Along[m.Entering[k]]
		left[k] = left[k+1] + v*v
	}
	taken := 0.0
	for k := range most + 1 {
		if k > 0 {
			v := pr.Along[m.Entering[k-1]]
			taken += v * v
		}
		m.Path = append(m.Path, Step{Components: k, Squares: left[k],
			RootMean: math.Sqrt(left[k] / float64(m.Rows)), R2: taken / (taken + left[k]),
			CV: math.NaN(), CVError: math.NaN(), CVR2: math.NaN(), Chance: math.NaN()})
	}
}

func (m *Model) warn(code, format string, args ...any) {
	m.Warnings = append(m.Warnings, pca.Warning{Code: code, Text: fmt.Sprintf(format, args...)})
}
