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
