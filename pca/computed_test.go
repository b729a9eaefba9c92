package pca_test

import (
	"encoding/json"
	"math"
	"os"
	"testing"

	"axisfold/pca"
	"axisfold/testdata/published"
)

// Means, deviations, roots and vectors of textbook tables, against values computed once
// with NumPy (testdata/reference/computed/small_tables.py).
func TestAgainstComputedTables(t *testing.T) {
	text, err := os.ReadFile(published.Path(t, "reference/computed/small_tables.json"))
	if err != nil {
		t.Fatal(err)
	}
	var computed struct {
		Correlation map[string]struct {
			File               string
			Channels           []string
			Means              []float64
			StandardDeviations []float64 `json:"standard_deviations"`
			Eigenvalues        []float64
			Eigenvectors       [][]float64
		}
	}
	if err := json.Unmarshal(text, &computed); err != nil {
		t.Fatal(err)
	}
	compared := 0
	for name, c := range computed.Correlation {
		if c.Means == nil {
			continue // a matrix without rows
		}
		table := published.CSV(t, "reference/"+c.File).Columns(c.Channels...)
		for _, form := range bothForms {
			s := inBlocks(table.Data, len(c.Channels), form, 6)
			d := decompose(t, table, form, pca.Correlation, pca.UnitNormal)
			worst := 15.
			for j := range c.Channels {
				worst = math.Min(worst, published.Digits(s.Mean(j), c.Means[j]))
				worst = math.Min(worst, published.Digits(s.Deviation(j), c.StandardDeviations[j]))
				for a := range c.Eigenvalues {
					if e := math.Abs(d.Vector(j, a) - c.Eigenvectors[a][j]); e > 1e-11 {
						t.Errorf("%s form %d: vector %d entry %d off by %g", name, form, a+1, j+1, e)
					}
				}
			}
			for a, l := range c.Eigenvalues {
				if e := math.Abs(d.Values[a] - l); e > 1e-13*c.Eigenvalues[0] {
					t.Errorf("%s form %d: root %d off by %g", name, form, a+1, e)
				}
			}
			if worst < 14 {
				t.Errorf("%s form %d: moments agree to %.1f digits", name, form, worst)
			}
			compared++
		}
	}
	if compared < 10 {
		t.Errorf("%d tables compared", compared)
	}
}
