package configs

import (
	"fmt"
	"strings"
	"testing"
)

func list(f *File) string {
	var out strings.Builder
	for _, s := range f.Settings() {
		mark := ""
		if s.Default {
			mark = " (default)"
		}
		fmt.Fprintf(&out, "%s %s%s\n", s.Path, s.Value, mark)
	}
	return out.String()
}

// Every default is told, and marked as one.
func TestSettings(t *testing.T) {
	want := `axisfold 1
title "" (default)
seed 1 (default)
read.files [a.csv]
read.format auto (default)
read.sheet "" (default)
read.query "" (default)
read.connection "" (default)
read.encoding auto (default)
read.orientation rows (default)
read.separator auto (default)
read.decimal point (default)
read.thousands none (default)
read.comment "" (default)
read.missing ["", NA, NaN, nan, "null"] (default)
read.header true (default)
read.units_row false (default)
read.short_rows error (default)
read.time "" (default)
read.groups "" (default)
read.leave_out [] (default)
read.gaps complete-rows (default)
read.spill 8 (default)
standardize.scaling center
standardize.constant error (default)
standardize.channels {a: {transform: log}}
decompose.matrix covariance (default)
decompose.route auto (default)
retain.rule parallel (default)
retain.reference percentile (default)
retain.percentile 90
retain.rows effective (default)
retain.replicates auto (default)
regress.response [head]
regress.predictors [] (default)
regress.intercept true (default)
regress.retain.rule fixed
regress.retain.components 2
regress.retain.folds 10 (default)
regress.retain.arrangement blocks (default)
regress.retain.order variance (default)
regress.retain.gap 0 (default)
regress.retain.repeats 1 (default)
regress.confidence 0.95 (default)
regress.nested auto (default)
draw.formats [svg] (default)
write.folder runs/pump (default)
write.scores true
write.predictions true (default)
write.diagnostics true (default)
`
	f := load(t, start+`standardize: {scaling: center, channels: {a: {transform: log}}}
retain: {percentile: 80}
regress: {response: head, retain: {rule: fixed, components: 2}}
draw:
write: {scores: true}
`, "retain.percentile=90")
	if got := list(f); got != want {
		t.Errorf("got:\n%s\nwant:\n%s", got, want)
	}
	if got := list(load(t, start)); strings.Contains(got, "regress") || strings.Contains(got, "draw") {
		t.Errorf("stages that do not run:\n%s", got)
	}
}

func TestSettingsCarryTheirDoc(t *testing.T) {
	docs := map[string]string{}
	each("", sections, func(path string, k *Key) { docs[path] = k.Doc })
	for _, s := range load(t, start).Settings() {
		want, ok := docs[s.Path]
		if ok && s.Doc != want || s.Doc == "" {
			t.Errorf("%s: %q", s.Path, s.Doc)
		}
	}
}
