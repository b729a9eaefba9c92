package run

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"axisfold/configs"
)

// Two responses with a time and groups: the same bits by any number of threads, with rows
// held and with rows read again. Leverages sum to the number of parameters.
func TestDiagnosticsAreTheSameByAnyThreads(t *testing.T) {
	var b strings.Builder
	b.WriteString("stamp,batch,a,b,c,y,z\n")
	seed := uint64(9)
	noise := func() float64 {
		seed = seed*6364136223846793005 + 1442695040888963407
		return float64(seed>>11)/(1<<53) - .5
	}
	const rows = 9000
	e := 0.0
	for i := range rows {
		x := noise()
		e = .7*e + noise()
		fmt.Fprintf(&b, "%d,g%d,%g,%g,%g,%g,%g\n", i, i/700, x, x+.1*noise(), noise(), 3*x+e, noise())
	}
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "t.csv"), []byte(b.String()), 0o666); err != nil {
		t.Fatal(err)
	}
	text := "axisfold: 1\nread: {files: [t.csv], time: stamp, groups: batch}\nregress: {response: [y, z], retain: {rule: fixed, components: 2}}\n"
	path := filepath.Join(dir, "run.yaml")
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	first := map[string]string{}
	for i, o := range []Options{{Threads: 1}, {Threads: 3}, {Threads: 1, held: 1}, {Threads: 2, held: 1}} {
		cfg, err := configs.Load(path, nil)
		if err != nil {
			t.Fatal(err)
		}
		o.Out, o.Replace = filepath.Join(dir, fmt.Sprint("out", i)), true
		_, folder, err := Execute(t.Context(), cfg, o)
		if err != nil {
			t.Fatal(err)
		}
		for _, name := range []string{"diagnostics.csv", "coefficients.csv", "predictions.csv"} {
			content, err := os.ReadFile(filepath.Join(folder, "tables", name))
			if err != nil {
				t.Fatal(err)
			}
			if i%2 == 0 {
				first[name] = string(content)
			} else if first[name] != string(content) {
				t.Errorf("%s differs with %+v", name, o)
			}
		}
		if i > 0 {
			continue
		}
		sum := 0.0
		for _, r := range records(t, folder, "diagnostics.csv") {
			if r["response"] == "y" {
				sum += number(t, r["leverage"])
			}
		}
		if math.Abs(sum-3) > 1e-9 {
			t.Errorf("leverages sum to %g, want 3 for two components and the constant", sum)
		}
		for _, r := range records(t, folder, "predictions.csv")[:50] {
			mean, row := number(t, r["mean_upper"])-number(t, r["mean_lower"]), number(t, r["upper"])-number(t, r["lower"])
			if mean <= 0 || mean > row/20 {
				t.Errorf("row %s: interval for the mean %g, for a row %g", r["row"], mean, row)
			}
		}
		summary, err := os.ReadFile(filepath.Join(folder, "summary.txt"))
		if err != nil {
			t.Fatal(err)
		}
		for _, want := range []string{"believe HAC", "the errors above will do", "Rows that weigh most"} {
			if !strings.Contains(string(summary), want) {
				t.Errorf("summary without %q:\n%s", want, summary)
			}
		}
	}
}
