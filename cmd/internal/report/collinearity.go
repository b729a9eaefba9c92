package report

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strings"

	"axisfold/pca"
)

func hasCollinearity(s *Study) bool { return hasRegression(s) && s.Regression.Collinearity != nil }

func fillCollinearity(s *Study, w *csvWriter) {
	c := s.Regression.Collinearity
	w.text("condition_index").text("intercept")
	for _, ch := range s.Channels {
		w.text(ch.Name)
	}
	w.end()
	width := len(c.Indices)
	for k, index := range c.Indices {
		w.number(index)
		for j := range width {
			w.number(c.Proportions[k*width+j])
		}
		w.end()
	}
}

func hasDependencies(s *Study) bool { return hasRegression(s) && len(s.Regression.Dependencies) > 0 }

// fillDependencies writes each near-dependency as an equation in original units, one line
// per term: channel = intercept + Σ coefficient·term, within spread.
func fillDependencies(s *Study, w *csvWriter) {
	w.header("dependency", "condition_index", "channel", "spread", "term", "coefficient")
	for i, d := range s.Regression.Dependencies {
		line := func(term string, coefficient float64) {
			w.whole(int64(i + 1)).number(d.Index).text(s.Channels[d.Of].Name).number(d.Spread).text(term).number(coefficient).end()
		}
		line("intercept", d.Intercept)
		for k, j := range d.From {
			line(s.Channels[j].Name, d.Slopes[k])
		}
	}
}

// collinearity says what least squares would stand on.
func (p *page) collinearity(s *Study) {
	r := s.Regression
	p.heading("What least squares would stand on")
	worst, at := 0.0, 0
	for j, t := range r.Result.Models[0].Terms {
		if t.VIF > worst {
			worst, at = t.VIF, j
		}
	}
	text := fmt.Sprintf("largest variance inflation factor %s (%s)", short3(worst), r.Result.Models[0].Terms[at].Name)
	if c := r.Collinearity; c != nil {
		last := c.Indices[len(c.Indices)-1]
		text += fmt.Sprintf("; largest condition index, with the constant and not centred, %s", short3(last))
	}
	p.paragraph("  ", "  ", text)
	for i, d := range r.Dependencies {
		if i == 4 {
			p.line(fmt.Sprintf("  and %d more in tables/dependencies.csv", len(r.Dependencies)-i))
			break
		}
		if len(d.From) > equationTerms {
			p.paragraph("  ", "      ", longDependency(s, d))
			continue
		}
		b := strings.Builder{}
		fmt.Fprintf(&b, "%s = %s", s.Channels[d.Of].Name, short(d.Intercept))
		for k, j := range d.From {
			sign := "+"
			if d.Slopes[k] < 0 {
				sign = "-"
			}
			fmt.Fprintf(&b, " %s %s %s", sign, short3(math.Abs(d.Slopes[k])), s.Channels[j].Name)
		}
		fmt.Fprintf(&b, " within %s", withUnit(short3(d.Spread), s.Channels[d.Of].Unit))
		p.paragraph("  ", "      ", b.String())
	}
	if worst > 10 {
		p.paragraph("  ", "  ", "Standardizing changes none of this, except for terms built from a variable, such as its square.")
	}
}

// equationTerms is up to how many channels an equation is written out; longer ones are
// no help to a reader, and stand in dependencies.csv.
const equationTerms = 6

// longDependency names the channels that weigh most.
func longDependency(s *Study, d pca.Dependency) string {
	order := make([]int, len(d.From))
	for k := range order {
		order[k] = k
	}
	weight := func(k int) float64 { return math.Abs(d.Slopes[k]) * s.Decomposition.Scaling.Scale[d.From[k]] }
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(weight(b), weight(a)) })
	var names []string
	for _, k := range order[:4] {
		names = append(names, s.Channels[d.From[k]].Name)
	}
	return fmt.Sprintf("%s from %d others, mostly %s, within %s", s.Channels[d.Of].Name, len(d.From), strings.Join(names, ", "),
		withUnit(short3(d.Spread), s.Channels[d.Of].Unit))
}
