package run

import (
	"context"
	"encoding/csv"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"axisfold/cmd/internal/report"
	"axisfold/configs"
	"axisfold/testdata/published"
)

// execute runs a run file of the given text in a folder of its own and returns the run
// folder.
func execute(t testing.TB, dir, text string, sets ...string) string {
	t.Helper()
	_, folder := study(t, dir, text, Options{Version: "test"}, sets...)
	return folder
}

// study does the same with options, and returns the study too.
func study(t testing.TB, dir, text string, o Options, sets ...string) (*report.Study, string) {
	t.Helper()
	path := filepath.Join(dir, "run.yaml")
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	cfg, err := configs.Load(path, sets)
	if err != nil {
		t.Fatal(err)
	}
	s, folder, err := Execute(context.Background(), cfg, o)
	if err != nil {
		t.Fatal(err)
	}
	return s, folder
}

// records reads a table of a run folder as maps by column name.
func records(t testing.TB, folder, name string) []map[string]string {
	t.Helper()
	f, err := os.Open(filepath.Join(folder, "tables", name))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var out []map[string]string
	for _, r := range rows[1:] {
		m := map[string]string{}
		for j, v := range r {
			m[rows[0][j]] = v
		}
		out = append(out, m)
	}
	return out
}

func number(t testing.TB, text string) float64 {
	t.Helper()
	if text == "" {
		return math.NaN()
	}
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// The certified linear regressions of the NIST Statistical Reference Datasets from run
// file to run folder, all components kept: coefficients, standard errors, residual
// standard deviation and R² as certified. Digits asked for are those of the factor route
// in package pcr; 15 means all that double precision can show.
func TestRegressionStRD(t *testing.T) {
	want := map[string]float64{"Norris": 12, "Pontius": 11.5, "NoInt1": 14, "NoInt2": 14, "Longley": 12, "Wampler1": 9,
		"Wampler2": 11, "Wampler3": 9, "Wampler4": 7.5, "Wampler5": 5.5, "Filip": 7}
	for name, digits := range want {
		t.Run(name, func(t *testing.T) {
			r := published.StRDRegression(t, name)
			dir := t.TempDir()
			var table strings.Builder
			table.WriteString("y," + strings.Join(r.X.Names, ",") + "\n")
			p := len(r.X.Names)
			for i, y := range r.Y {
				table.WriteString(strconv.FormatFloat(y, 'g', -1, 64))
				for _, x := range r.X.Data[i*p : i*p+p] {
					table.WriteString("," + strconv.FormatFloat(x, 'g', -1, 64))
				}
				table.WriteByte('\n')
			}
			if err := os.WriteFile(filepath.Join(dir, "x.csv"), []byte(table.String()), 0o666); err != nil {
				t.Fatal(err)
			}
			extra := ""
			if r.Origin {
				extra = "standardize: {scaling: none}\n"
			}
			folder := execute(t, dir, fmt.Sprintf(`
axisfold: 1
read: {files: x.csv}
%sregress: {response: y, intercept: %v, retain: {rule: fixed, components: %d}}
`, extra, !r.Origin, p))
			rows := records(t, folder, "coefficients.csv")
			if r.Origin {
				rows = rows[1:]
			}
			worst, worstError := 15., 15.
			for j, estimate := range r.Estimate {
				worst = math.Min(worst, published.Digits(number(t, rows[j]["coefficient"]), estimate))
				worst = math.Min(worst, published.Digits(number(t, rows[j]["ols_coefficient"]), estimate))
				if r.Residual > 0 {
					worstError = math.Min(worstError, published.Digits(number(t, rows[j]["standard_error"]), r.Error[j]))
				}
			}
			last := records(t, folder, "validation.csv")[p]
			r2 := published.Digits(number(t, last["r2_fit"]), r.R2)
			free := float64(len(r.Y) - len(r.Estimate))
			residual := number(t, last["rmse_fit"]) * math.Sqrt(float64(len(r.Y))/free)
			residualDigits := published.Digits(residual, r.Residual)
			t.Logf("digits: coefficients %.1f, standard errors %.1f, residual standard deviation %.1f, R2 %.1f", worst, worstError, residualDigits, r2)
			if worst < digits || worstError < digits-1 || r2 < digits || r.Residual > 0 && residualDigits < digits {
				t.Errorf("coefficients agree to %.1f digits (want %g), standard errors to %.1f, residual to %.1f, R2 to %.1f",
					worst, digits, worstError, residualDigits, r2)
			}
		})
	}
}
