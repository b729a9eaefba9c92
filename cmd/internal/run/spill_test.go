package run

import (
	"bytes"
	"compress/gzip"
	"context"
	"os"
	"path/filepath"
	"testing"

	"axisfold/configs"
)

// With a spill, without one, and with one too small, the files of a compressed table are
// the same to the byte, also where rows are gone through three times; nothing is left of
// the spill.
func TestSpillChangesNothing(t *testing.T) {
	dir := t.TempDir()
	manyRows(t, dir, 30000, 6)
	text, err := os.ReadFile(filepath.Join(dir, "x.csv"))
	if err != nil {
		t.Fatal(err)
	}
	var z bytes.Buffer
	w := gzip.NewWriter(&z)
	w.Write(text)
	w.Close()
	if err := os.WriteFile(filepath.Join(dir, "x.csv.gz"), z.Bytes(), 0o666); err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(dir, "run.yaml")
	run := `
axisfold: 1
read: {files: x.csv.gz, groups: g}
retain: {rule: fixed, components: 2}
regress: {response: y, retain: {rule: fixed, components: 3, folds: 4, arrangement: random}}
`
	if err := os.WriteFile(path, []byte(run), 0o666); err != nil {
		t.Fatal(err)
	}
	for _, route := range []string{"auto", "svd"} {
		var first map[string][]byte
		for _, size := range []string{"0", "1", "0.0002"} {
			cfg, err := configs.Load(path, []string{"read.spill=" + size, "decompose.route=" + route})
			if err != nil {
				t.Fatal(err)
			}
			out := filepath.Join(dir, "out")
			study, _, err := Execute(context.Background(), cfg, Options{Out: out, held: 1000, Replace: true})
			if err != nil || study.Table.Held {
				t.Fatal(err, study.Table.Held)
			}
			got := map[string][]byte{}
			for _, name := range []string{"scores.csv", "predictions.csv", "eigenvectors.csv", "validation.csv", "coefficients.csv"} {
				if got[name], err = os.ReadFile(filepath.Join(out, "tables", name)); err != nil {
					t.Fatal(err)
				}
				if first != nil && !bytes.Equal(got[name], first[name]) {
					t.Errorf("route %s, spill %s: %s differs", route, size, name)
				}
			}
			first = got
			if left, _ := filepath.Glob(filepath.Join(out, ".*")); len(left) > 0 {
				t.Errorf("left behind: %v", left)
			}
		}
	}
}
