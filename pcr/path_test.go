package pcr

import (
	"math"
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
