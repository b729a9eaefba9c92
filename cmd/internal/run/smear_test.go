package run

import (
	"math"
	"path/filepath"
	"testing"

	"axisfold/cmd/internal/report"
	"axisfold/testdata/published"
)

// A transformed response comes back: on stack loss, log of the loss, observed_back is the
// loss, the interval's ends are those of the log turned back, and predicted_back is
// Duan's mean; the same held and streamed. A response that was not transformed stays as
// it is beside it.
func TestTransformedResponse(t *testing.T) {
	dir := t.TempDir()
	text := `
axisfold: 1
read: {files: ` + published.Path(t, "reference/classic/stackloss.csv") + `}
standardize: {channels: {stack_loss: {transform: log}, acid_conc: {transform: square-root}}}
regress: {response: [stack_loss, acid_conc, water_temp], retain: {rule: fixed, components: 1, folds: 3, arrangement: random}}
`
	var first []map[string]string
	for _, held := range []int64{0, 4} {
		s, folder := study(t, dir, text, Options{Out: filepath.Join(dir, "out"), held: held, Replace: true})
		if s.Table.Held != (held == 0) {
			t.Fatal("held", s.Table.Held)
		}
		lines := records(t, folder, "predictions.csv")
		table := published.CSV(t, "reference/classic/stackloss.csv")
		residuals := map[string][]float64{}
		for _, l := range lines {
			residuals[l["response"]] = append(residuals[l["response"]], number(t, l["residual"]))
		}
		invert := map[string]func(float64) float64{"log(stack_loss)": math.Exp, "square-root(acid_conc)": func(v float64) float64 { return v * v }, "water_temp": nil}
		for i, l := range lines {
			f := invert[l["response"]]
			if f == nil {
				if l["predicted_back"] != l["predicted"] || l["observed_back"] != l["observed"] || l["upper_back"] != l["upper"] {
					t.Errorf("line %d: %v", i, l)
				}
				continue
			}
			mean := 0.0
			e := residuals[l["response"]]
			for _, r := range e {
				mean += f(number(t, l["predicted"])+r) / float64(len(e))
			}
			near := func(column string, want float64) {
				t.Helper()
				if got := number(t, l[column]); math.Abs(got-want) > 1e-12*math.Abs(want) {
					t.Errorf("line %d %s %s: %.15g, expected %.15g", i, l["response"], column, got, want)
				}
			}
			near("predicted_back", mean)
			near("lower_back", f(number(t, l["lower"])))
			near("upper_back", f(number(t, l["upper"])))
			if l["response"] == "log(stack_loss)" {
				near("observed_back", table.Data[i/3*len(table.Names)+len(table.Names)-1])
			}
		}
		if held == 0 {
			first = lines
		} else if len(first) != len(lines) {
			t.Errorf("%d lines streamed, %d held", len(lines), len(first))
		}
		checkUnits(t, s)
	}
}

// Logs of a quantity have no unit.
func checkUnits(t *testing.T, s *report.Study) {
	t.Helper()
	for _, r := range s.Regression.Responses {
		if r.Transform != "none" && r.Unit != "" {
			t.Errorf("%s has the unit %q", r.Name, r.Unit)
		}
	}
}
