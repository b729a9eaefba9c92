package run

import (
	"fmt"
	"math"
	"path/filepath"
	"strings"
	"testing"

	"axisfold/testdata/published"
)

// What the tables say of rotation agrees with the rows: rotated scores have unit variance
// and the correlations of rotation.csv, and channels correlate with them as the structure
// says; under both matrices, held and streamed, for every method.
func TestRotationOfRows(t *testing.T) {
	dir := t.TempDir()
	text := `
axisfold: 1
read: {files: "` + published.Path(t, "reference/classic/us_arrests_1973.csv") + `"}
retain: {rule: fixed, components: 3}
rotate: {}
`
	table := published.CSV(t, "reference/classic/us_arrests_1973.csv").Columns("Murder", "Assault", "UrbanPop", "Rape")
	for _, sets := range []string{"rotate.method=varimax", "rotate.method=quartimax", "rotate.method=promax",
		"rotate.method=promax decompose.matrix=covariance standardize.scaling=center rotate.normalize=false"} {
		for _, held := range []int64{0, 20} {
			_, folder := study(t, dir, text, Options{Out: filepath.Join(dir, "out"), held: held, Replace: true}, strings.Fields(sets)...)
			what := fmt.Sprint(sets, " held ", held)
			var scores [3][]float64
			for _, l := range records(t, folder, "scores.csv") {
				for a := range scores {
					scores[a] = append(scores[a], number(t, l[fmt.Sprintf("R%d", a+1)]))
				}
			}
			near := func(name string, got, want float64) {
				t.Helper()
				if math.Abs(got-want) > 1e-10*math.Max(1, math.Abs(want)) {
					t.Errorf("%s: %s %.12f, expected %.12f", what, name, got, want)
				}
			}
			rotation, loadings := records(t, folder, "rotation.csv"), records(t, folder, "rotated_loadings.csv")
			for a := range scores {
				for b := range scores {
					near(fmt.Sprintf("R%d with R%d", a+1, b+1), number(t, rotation[a][fmt.Sprintf("correlation_R%d", b+1)]), covariance(scores[a], scores[b]))
				}
				for j, l := range loadings {
					var x []float64
					for i := range table.Rows {
						x = append(x, table.Data[i*4+j])
					}
					structure := l[fmt.Sprintf("R%d_structure", a+1)]
					if structure == "" {
						structure = l[fmt.Sprintf("R%d", a+1)]
					}
					want := covariance(x, scores[a])
					if !strings.Contains(sets, "covariance") {
						want /= math.Sqrt(covariance(x, x))
					}
					near(fmt.Sprintf("%s on R%d", l["channel"], a+1), number(t, structure), want)
				}
			}
		}
	}
}

// covariance of two series, divisor n-1.
func covariance(x, y []float64) float64 {
	n := float64(len(x))
	mx, my, sum := 0.0, 0.0, 0.0
	for i := range x {
		mx, my = mx+x[i]/n, my+y[i]/n
	}
	for i := range x {
		sum += (x[i] - mx) * (y[i] - my)
	}
	return sum / (n - 1)
}

// One component is nothing to rotate: the run goes on and says so.
func TestNothingToRotate(t *testing.T) {
	s, _ := study(t, t.TempDir(), `
axisfold: 1
read: {files: "`+published.Path(t, "reference/classic/us_arrests_1973.csv")+`"}
retain: {rule: fixed, components: 1}
rotate: {}
`, Options{})
	if !warned(s, "nothing-to-rotate") || s.Rotation != nil {
		t.Errorf("no warning in %v", s.Warnings)
	}
}
