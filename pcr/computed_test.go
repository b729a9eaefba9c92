package pcr_test

import (
	"encoding/json"
	"math"
	"os"
	"testing"

	"axisfold/pca"
	"axisfold/pcr"
	"axisfold/testdata/published"
)

// Regression on components of three textbook tables at every number of components, against
// values computed once with NumPy (testdata/reference/computed/small_tables.py).
func TestAgainstComputedRegressions(t *testing.T) {
	text, err := os.ReadFile(published.Path(t, "reference/computed/small_tables.json"))
	if err != nil {
		t.Fatal(err)
	}
	var computed struct {
		Regression map[string]struct {
			File         string
			ByComponents []struct {
				Components     int
				Intercept, SSE float64
				Coefficients   []float64
				StandardErrors []float64 `json:"standard_errors"`
			} `json:"by_components"`
		}
	}
	if err := json.Unmarshal(text, &computed); err != nil {
		t.Fatal(err)
	}
	if len(computed.Regression) < 3 {
		t.Fatalf("%d regressions read", len(computed.Regression))
	}
	for name, r := range computed.Regression {
		table := published.CSV(t, "reference/"+r.File)
		worst := 15.
		for _, want := range r.ByComponents {
			s := defaults(table.Names...)
			s.form = pca.Factor
			s.options.Choice, s.options.Components = pcr.Given, want.Components
			m := s.fit(t, table.Data).Models[0]
			worst = math.Min(worst, published.Digits(m.Intercept.Coefficient, want.Intercept))
			worst = math.Min(worst, published.Digits(m.Path[want.Components].Squares, want.SSE))
			worst = math.Min(worst, published.Digits(m.Intercept.Error, want.StandardErrors[0]))
			for j, b := range want.Coefficients {
				worst = math.Min(worst, published.Digits(m.Terms[j].Coefficient, b))
				worst = math.Min(worst, published.Digits(m.Terms[j].Error, want.StandardErrors[j+1]))
			}
		}
		t.Logf("%s: %d numbers of components, %.1f digits", name, len(r.ByComponents), worst)
		// The computed side keeps 12.8 digits for Longley, whose condition is 12,220.
		if worst < 11.5 || len(r.ByComponents) < 3 {
			t.Errorf("%s: %d numbers of components agree to %.1f digits", name, len(r.ByComponents), worst)
		}
	}
}
