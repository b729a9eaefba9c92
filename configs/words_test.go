package configs_test

import (
	"slices"
	"testing"

	"axisfold/configs"
	"axisfold/pca"
	"axisfold/pca/reduce"
	"axisfold/pca/retain"
	"axisfold/pca/table"
	"axisfold/pcr"
)

func child(t *testing.T, keys []configs.Key, path ...string) configs.Key {
	t.Helper()
	for _, k := range keys {
		if k.Name == path[0] {
			if len(path) == 1 {
				return k
			}
			return child(t, k.Keys, path[1:]...)
		}
	}
	t.Fatalf("no key %v", path)
	return configs.Key{}
}

func sameWords[T ~string](t *testing.T, path []string, want []T) {
	t.Helper()
	got := slices.Clone(child(t, configs.Keys(), path...).Allowed)
	text := make([]string, len(want))
	for i, w := range want {
		text[i] = string(w)
	}
	slices.Sort(got)
	slices.Sort(text)
	if !slices.Equal(got, text) {
		t.Errorf("%v: the run file knows %v, the stage %v", path, got, text)
	}
}

// The words of the run file are those that the stages know.
func TestWordsOfTheStages(t *testing.T) {
	sameWords(t, []string{"read", "format"}, table.Formats())
	sameWords(t, []string{"standardize", "scaling"}, pca.Methods)
	sameWords(t, []string{"standardize", "channels", "scaling"}, pca.Methods)
	sameWords(t, []string{"standardize", "channels", "transform"}, pca.Transforms)
	sameWords(t, []string{"decompose", "matrix"}, []pca.Matrix{pca.Correlation, pca.Covariance})
	sameWords(t, []string{"reduce", "criterion"}, reduce.Criteria)
	sameWords(t, []string{"decompose", "route"}, []pca.Route{pca.Auto, pca.Eigen, pca.SVD})
}

// The rules of the run file are those of the stages, with the same defaults.
func TestRulesOfTheStages(t *testing.T) {
	var first, second []string
	for _, r := range child(t, configs.Keys(), "retain").Rules {
		first = append(first, r.Name)
	}
	for _, r := range child(t, configs.Keys(), "regress", "retain").Rules {
		second = append(second, r.Name)
	}
	names := slices.Clone(retain.Names())
	slices.Sort(names)
	slices.Sort(first)
	slices.Sort(second)
	if !slices.Equal(first, names) {
		t.Errorf("the run file knows %v, the stage %v", first, names)
	}
	names = append(names, "subset") // decided by the run file itself
	for _, c := range pcr.Choices {
		names = append(names, string(c))
	}
	slices.Sort(names)
	names = slices.Compact(names) // bic is of the roots in one place, of the fit in the other
	if !slices.Equal(second, names) {
		t.Errorf("the run file knows %v, the stages %v", second, names)
	}
	d := retain.Defaults()
	defaults := map[string]any{"at_least": d.AtLeast, "value": d.Value, "reference": d.Reference, "percentile": d.Percentile, "rows": d.Rows, "replicates": nil, // auto, 0 in both
		"power": d.Power, "alpha": d.Alpha, "noise": d.Noise}
	for _, r := range child(t, configs.Keys(), "retain").Rules {
		for _, p := range r.Parameters {
			if !p.Required && p.Default != defaults[p.Name] {
				t.Errorf("%s %s: the run file says %v, the stage %v", r.Name, p.Name, p.Default, defaults[p.Name])
			}
		}
	}
}
