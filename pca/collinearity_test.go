package pca_test

import (
	"math"
	"testing"

	"axisfold/pca"
	"axisfold/testdata/published"
)

// Belsley, Kuh & Welsch 1980 on Longley's data: seven condition indices, the last 43,275,
// and its share of every coefficient's variance, computed once in NumPy and agreeing with
// the book's 43,275 (from memory). Hald's largest index computed likewise.
func TestCollinearLongley(t *testing.T) {
	table := published.CSV(t, "reference/classic/longley.csv")
	x := table.Columns(table.Names[:6]...)
	for form, tolerance := range map[pca.Form]float64{pca.Factor: 1e-6, pca.CrossProducts: 1e-5} {
		c, err := pca.Collinear(inBlocks(x.Data, 6, form, 4))
		if err != nil {
			t.Fatal(err)
		}
		for k, want := range []float64{1, 9.141721, 12.255735, 25.336607, 230.423946, 1048.080298, 43275.043587} {
			if math.Abs(c.Indices[k]-want) > tolerance*want {
				t.Errorf("form %d: index %d = %.6f, want %.6f", form, k+1, c.Indices[k], want)
			}
		}
		for j, want := range []float64{.99985, .03833, .65463, .68926, .30205, .15973, .99984} {
			if got := c.Proportions[6*7+j]; math.Abs(got-want) > 2e-5 {
				t.Errorf("form %d: proportion of %d = %.5f, want %.5f", form, j, got, want)
			}
		}
	}
	hald := published.CSV(t, "reference/classic/hald_cement.csv").Columns("x1", "x2", "x3", "x4")
	c, err := pca.Collinear(inBlocks(hald.Data, 4, pca.Factor, 13))
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(c.Indices[4]-249.578252) > 5e-6 {
		t.Errorf("Hald: %.6f", c.Indices[4])
	}
}

// Hald's four ingredients add up to nearly 100 %: the last component must say so, within
// the spread that the sums themselves show.
func TestDependencyOfHald(t *testing.T) {
	hald := published.CSV(t, "reference/classic/hald_cement.csv").Columns("x1", "x2", "x3", "x4")
	s := inBlocks(hald.Data, 4, pca.Factor, 13)
	d := decompose(t, hald, pca.Factor, pca.Correlation, pca.UnitNormal)
	means := []float64{s.Mean(0), s.Mean(1), s.Mean(2), s.Mean(3)}
	dependencies := d.Dependencies(30, means)
	if len(dependencies) != 1 {
		t.Fatalf("%d dependencies", len(dependencies))
	}
	e := dependencies[0]
	squares := 0.0
	for i := range hald.Rows {
		row := hald.Data[4*i : 4*i+4]
		got := e.Intercept
		for k, j := range e.From {
			got += e.Slopes[k] * row[j]
			if math.Abs(e.Slopes[k]+1) > .1 {
				t.Errorf("slope on x%d is %.3f; the ingredients add up", j+1, e.Slopes[k])
			}
		}
		squares += (row[e.Of] - got) * (row[e.Of] - got)
	}
	if spread := math.Sqrt(squares / 12); math.Abs(spread-e.Spread) > 1e-9*spread || math.Abs(e.Intercept-100) > 5 {
		t.Errorf("spread %.6f, said %.6f; intercept %.3f", spread, e.Spread, e.Intercept)
	}
}
