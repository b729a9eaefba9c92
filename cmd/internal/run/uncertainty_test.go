package run

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"testing"

	"axisfold/cmd/internal/report"
	"axisfold/configs"
	"axisfold/pca"
)

// Stretches are as many as asked for, held or streamed; as many as rows draws single
// rows, which with covariances of independent normal rows gives intervals as wide as
// theory has them (Anderson 1963).
func TestStretches(t *testing.T) {
	dir := t.TempDir()
	manyRows(t, dir, 3000, 4)
	text := `
axisfold: 1
read: {files: x.csv, groups: g}
standardize: {scaling: center}
retain: {rule: fixed, components: 2}
uncertainty: {replicates: 400, stretches: %d}
`
	path := filepath.Join(dir, "run.yaml")
	execute := func(stretches int, held int64) *report.Study {
		if err := os.WriteFile(path, fmt.Appendf(nil, text, stretches), 0o666); err != nil {
			t.Fatal(err)
		}
		cfg, err := configs.Load(path, nil)
		if err != nil {
			t.Fatal(err)
		}
		study, _, err := Execute(context.Background(), cfg, Options{Out: filepath.Join(dir, "out"), held: held, Replace: true})
		if err != nil {
			t.Fatal(err)
		}
		return study
	}
	if got := execute(7, 0).Uncertainty.Result.Blocks; got != 7 {
		t.Errorf("%d stretches, asked for 7", got)
	}
	streamed := execute(100000, 100)
	if !warned(streamed, "fewer-stretches") {
		t.Error("no warning of fewer stretches than asked for")
	}
	single := execute(100000, 0).Uncertainty.Result
	if n := single.Blocks; n < 2900 || n > 3000 {
		t.Errorf("%d stretches for some 2970 complete rows", n)
	}
	e, theory := single.Eigenvalues[0], single.Asymptotic[0]
	// 400 replicates place a 95 % limit to within some 10 % of the width.
	if ratio := (e.Upper - e.Lower) / (theory.Upper - theory.Lower); ratio < .85 || ratio > 1.15 {
		t.Errorf("interval %g to %g, in theory %g to %g", e.Lower, e.Upper, theory.Lower, theory.Upper)
	}
}

// Neighbours merge into as many stretches as asked for, and every row stays in.
func TestJoined(t *testing.T) {
	b := pca.NewBuilder(1, pca.CrossProducts, 0)
	var parts []*pca.Summary
	for i := range 23 {
		parts = append(parts, b.Summarize(make([]float64, i+1), i+1))
	}
	for _, most := range []int{2, 5, 22} {
		rows := 0
		got := joined(parts, most)
		for _, s := range got {
			rows += s.Count()
		}
		if len(got) != most || rows != 23*24/2 {
			t.Errorf("%d stretches of %d rows, expected %d of %d", len(got), rows, most, 23*24/2)
		}
	}
	for _, most := range []int{0, 23, 50} {
		if got := joined(parts, most); len(got) != 23 {
			t.Errorf("%d stretches of 23 with %d asked for", len(got), most)
		}
	}
}

func warned(s *report.Study, code string) bool {
	for _, w := range s.Warnings {
		if w.Code == code {
			return true
		}
	}
	return false
}
