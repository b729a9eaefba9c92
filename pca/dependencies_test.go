package pca_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"axisfold/pca"
	"axisfold/testdata/published"
)

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

// What an equation is said to leave is what it leaves on the rows, and hardly more than the
// component leaves, also where 100 channels are so alike that it takes dozens of them
// (Tecator's absorbances).
func TestDependenciesOfAbsorbances(t *testing.T) {
	table := published.CSV(t, "reference/tecator/tecator_215x103.csv")
	table = table.Columns(table.Names[:100]...)
	s := inBlocks(table.Data, 100, pca.Factor, 50)
	d := decompose(t, table, pca.Factor, pca.Correlation, pca.UnitNormal)
	means := make([]float64, 100)
	for j := range means {
		means[j] = s.Mean(j)
	}
	for _, e := range d.Dependencies(30, means) {
		squares := 0.0
		for i := range table.Rows {
			row := table.Data[100*i : 100*i+100]
			left := row[e.Of] - e.Intercept
			for k, j := range e.From {
				left -= e.Slopes[k] * row[j]
			}
			squares += left * left
		}
		spread := math.Sqrt(squares / float64(table.Rows-1))
		// Values near 3 with slopes near 1 round at 1e-15; the smallest spread is near 1e-6.
		if math.Abs(spread-e.Spread) > 1e-6*spread {
			t.Errorf("C%d: spread %.8g, said %.8g", e.Component+1, spread, e.Spread)
		}
		whole := math.Sqrt(d.ScoreVariances[e.Component]) / math.Abs(d.Vector(e.Of, e.Component)) * d.Scaling.Scale[e.Of]
		if e.Spread > 1.25*whole*(1+1e-9) {
			t.Errorf("C%d: spread %g, of the component %g", e.Component+1, e.Spread, whole)
		}
	}
}

// A channel that is the sum of others is that sum.
func TestDependencyExact(t *testing.T) {
	rng := rand.New(rand.NewPCG(43, 44))
	var data []float64
	for range 50 {
		a, b, c := rng.NormFloat64(), rng.NormFloat64(), rng.NormFloat64()
		data = append(data, a, b, c, 2*a-3*b+7)
	}
	table := published.Table{Names: []string{"a", "b", "c", "sum"}, Data: data, Rows: 50}
	s := inBlocks(data, 4, pca.Factor, 50)
	d := decompose(t, table, pca.Factor, pca.Correlation, pca.UnitNormal)
	got := d.Dependencies(30, []float64{s.Mean(0), s.Mean(1), s.Mean(2), s.Mean(3)})
	if len(got) != 1 || len(got[0].From) != 2 || got[0].Spread > 1e-13 {
		t.Fatalf("%+v", got)
	}
}
