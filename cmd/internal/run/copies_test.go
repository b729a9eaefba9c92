package run

import (
	"math"
	"testing"

	"axisfold/testdata/published"
)

func TestCopiedRows(t *testing.T) {
	x := []float64{1, 2, 1, 3, 1, 2, 0, 5, math.Copysign(0, -1), 5, 1, 2}
	if got := copiedRows(x, 2); got != 3 {
		t.Errorf("%d copies, expected 3", got)
	}
	if got := copiedRows(x, 3); got != 0 {
		t.Errorf("%d copies, expected none", got)
	}
}

// Fat in meat from 100 absorbances. 22 rows of the published table are copies of others.
// Linear methods are known to be off by two to three per cent of fat on rows not seen
// (from memory), least squares by more than components.
func TestTecator(t *testing.T) {
	s, _ := study(t, t.TempDir(), `
axisfold: 1
read: {files: `+published.Path(t, "reference/tecator/tecator_215x103.csv")+`}
regress: {response: fat, predictors: "* nm"}
`, Options{})
	if !warned(s, "copied-rows") {
		t.Error("no word of copied rows")
	}
	m := s.Regression.Result.Models[0]
	components, ordinary := m.Remedies[0], m.Remedies[1]
	if components.CV < 2 || components.CV > 3 || ordinary.CV <= components.CV {
		t.Errorf("off by %.3f on components, %.3f by least squares", components.CV, ordinary.CV)
	}
}
