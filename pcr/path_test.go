package pcr

import (
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
	"testing"

	"axisfold/pca"
	"axisfold/testdata/published"
)

// The path meets the model at the number chosen and least squares at its end, and at every
// number of components its fitted values leave the squares that the path of errors says
// (Hald's cement).
func TestCoefficientPath(t *testing.T) {
	table := published.CSV(t, "reference/classic/hald_cement.csv")
	s := pca.NewBuilder(5, pca.Factor, 0).Summarize(table.Data, table.Rows)
	o := Options{Predictors: pca.Options{Names: table.Names[:4], Matrix: pca.Correlation}, Responses: []string{"y"}, Order: ByCorrelation,
		Choice: Given, Components: 2, Confidence: .95}
	for range 4 {
		o.Predictors.Methods = append(o.Predictors.Methods, pca.UnitNormal)
	}
	r, err := Fit(s, nil, []int{0, 1, 2, 3}, []int{4}, o)
	if err != nil {
		t.Fatal(err)
	}
	m := r.Models[0]
	if len(m.Coefficients) != 5 {
		t.Fatalf("%d steps", len(m.Coefficients))
	}
	near := func(what string, got, want float64) {
		t.Helper()
		if math.Abs(got-want) > 1e-9*math.Max(1, math.Abs(want)) {
			t.Errorf("%s: %.12g, expected %.12g", what, got, want)
		}
	}
	near("intercept", m.Coefficients[2].Intercept, m.Intercept.Coefficient)
	near("its error", m.Coefficients[2].InterceptError, m.Intercept.Error)
	for j, term := range m.Terms {
		near(term.Name, m.Coefficients[2].Coefficients[j], term.Coefficient)
		near(term.Name+" error", m.Coefficients[2].Errors[j], term.Error)
		near(term.Name+" standardized", m.Coefficients[2].Standardized[j], term.Standardized)
		near(term.Name+" least squares", m.Coefficients[4].Coefficients[j], term.Ordinary)
		near(term.Name+" least squares error", m.Coefficients[4].Errors[j], term.OrdinaryError)
	}
	for k, step := range m.Coefficients {
		squares := 0.0
		for i := range table.Rows {
			left := table.Data[5*i+4] - step.Intercept
			for j, b := range step.Coefficients {
				left -= b * table.Data[5*i+j]
			}
			squares += left * left
		}
		near("squares", squares, m.Path[k].Squares)
	}
}

// A path too long to hold keeps its first numbers, the chosen one and the last, and says
// so.
func TestThinnedPath(t *testing.T) {
	n, p := 500, 460
	rng := rand.New(rand.NewPCG(101, 102))
	data := make([]float64, n*(p+1))
	for i := range data {
		data[i] = rng.NormFloat64()
	}
	var x []int
	o := Options{Predictors: pca.Options{Matrix: pca.Correlation}, Responses: []string{"y"}, Order: ByVariance, Choice: Given, Components: 450, Confidence: .95}
	for j := range p {
		x = append(x, j)
		o.Predictors.Names = append(o.Predictors.Names, strconv.Itoa(j))
		o.Predictors.Methods = append(o.Predictors.Methods, pca.UnitNormal)
	}
	r, err := Fit(pca.NewBuilder(p+1, pca.CrossProducts, 0).Summarize(data, n), nil, x, []int{p}, o)
	if err != nil {
		t.Fatal(err)
	}
	m := r.Models[0]
	held := pathCells / (p + 1)
	var got []int
	for _, s := range m.Coefficients[held-1:] {
		got = append(got, s.Components)
	}
	if !slices.Equal(got, []int{held - 1, 450, 460}) {
		t.Errorf("the path ends with %v", got)
	}
	if !slices.ContainsFunc(m.Warnings, func(w pca.Warning) bool { return w.Code == "thinned-path" }) {
		t.Errorf("no warning in %v", m.Warnings)
	}
}
