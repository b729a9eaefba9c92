package report

import (
	"fmt"
	"math"
	"strings"
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
			p.line(fmt.Sprintf("  and %d more near-dependencies", len(r.Dependencies)-i))
			break
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
