package retain

import (
	"fmt"
	"math"

	"axisfold/pca"
)

// Velicer 1976 (Psychometrika 41:321) with squares; Velicer, Eaton & Fava 2000 with fourth
// powers. After m components are taken out, f_m is the mean power of the partial
// correlations left between channels; the m with the smallest f_m is kept.
var minimumAveragePartial = Rule{
	Name:    "minimum-average-partial",
	Summary: "the number after which channels are least correlated with one another (Velicer 1976)",
	variants: []Settings{
		with(func(s *Settings) { s.Power = 4 }),
		with(func(s *Settings) { s.Power = 2 }),
	},
	apply: func(e *Evidence, s Settings) Verdict {
		v := Verdict{Setting: fmt.Sprintf("power %d", s.Power)}
		if why := e.needsCorrelations(); why != "" {
			return v.abstain(why)
		}
		f := averagePartials(e, s.Power)
		if len(f) < 2 {
			return v.abstain("two channels or fewer leave no partial correlations")
		}
		for m, x := range f {
			if x < f[v.Components] {
				v.Components = m
			}
		}
		// Component m counts as kept when taking it out still lowers the average on the
		// way to the smallest.
		for a := range e.Values {
			step := Step{Value: math.Inf(1), Threshold: f[0], Kept: a < v.Components}
			if a+1 < len(f) {
				step.Value = f[a+1]
			}
			if a < len(f) {
				step.Threshold = f[a]
			}
			if math.IsInf(step.Value, 1) {
				step.Value = step.Threshold
			}
			v.Steps = append(v.Steps, step)
		}
		v.Note = fmt.Sprintf("what is left between channels is least (%.3g) after %d; it was %.3g", f[v.Components], v.Components, f[0])
		return v
	},
}

// averagePartials returns f_0, f_1, ... up to the first m for which a channel is told
// completely, where partial correlations have no meaning.
func averagePartials(e *Evidence, power int) []float64 {
	p, m := e.Width(), len(e.Values)
	c := make([]float64, p*p)
	for a := range m {
		for i := range p {
			w := e.Values[a] * e.Vectors[i*m+a]
			for j := i; j < p; j++ {
				c[i*p+j] += w * e.Vectors[j*m+a]
			}
		}
	}
	var out []float64
	for taken := 0; taken < p-1 && taken < m; taken++ {
		if taken > 0 {
			a := taken - 1
			for i := range p {
				w := e.Values[a] * e.Vectors[i*m+a]
				for j := i; j < p; j++ {
					c[i*p+j] -= w * e.Vectors[j*m+a]
				}
			}
		}
		sum := 0.0
		for i := range p {
			if c[i*p+i] < 1e-10 {
				return out
			}
			for j := i + 1; j < p; j++ {
				square := c[i*p+j] * c[i*p+j] / (c[i*p+i] * c[j*p+j])
				switch power {
				case 2:
					sum += square
				case 4:
					sum += square * square
				default:
					sum += math.Pow(square, float64(power)/2)
				}
			}
		}
		out = append(out, 2*sum/float64(p*(p-1)))
	}
	return out
}

// needsCorrelations says why a rule made for correlation matrices cannot speak, empty when
// it can.
func (e *Evidence) needsCorrelations() string {
	switch {
	case e.Matrix != pca.Correlation:
		return "it is made for the correlation matrix"
	case len(e.Values) < e.Width():
		return fmt.Sprintf("%d rows for %d channels leave correlations that depend on one another", e.Rows, e.Width())
	case len(e.Vectors) != e.Width()*len(e.Values):
		return "it needs the eigenvectors"
	}
	return ""
}

// abstain returns the verdict of a rule that cannot speak about this table.
func (v Verdict) abstain(why string) Verdict {
	v.Abstains, v.Note, v.Components, v.Steps = true, "abstains: "+why, 0, nil
	return v
}
