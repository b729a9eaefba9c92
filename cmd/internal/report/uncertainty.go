package report

import (
	"fmt"
	"math"
	"strings"

	"axisfold/pca/stability"
)

func hasUncertainty(s *Study) bool { return s.Uncertainty != nil }

func fillIntervals(s *Study, w *csvWriter) {
	w.header("component", "eigenvalue", "lower", "upper", "share", "share_lower", "share_upper", "asymptotic_lower", "asymptotic_upper", "congruence")
	r := s.Uncertainty.Result
	for a := range s.Decomposition.Values {
		e, h, t := r.Eigenvalues[a], r.Shares[a], r.Asymptotic[a]
		w.text(ComponentName(a)).number(e.Estimate).number(e.Lower).number(e.Upper)
		w.number(h.Estimate).number(h.Lower).number(h.Upper).number(t.Lower).number(t.Upper)
		if a < len(r.Congruence) {
			w.number(r.Congruence[a])
		} else {
			w.number(math.NaN())
		}
		w.end()
	}
}

func fillLoadingIntervals(s *Study, w *csvWriter) {
	w.header("channel", "component", "loading", "lower", "upper")
	k := s.Retained()
	for j, name := range s.Decomposition.Channels {
		for a := range k {
			l := s.Uncertainty.Result.Loadings[j*k+a]
			w.text(name).text(ComponentName(a)).number(l.Estimate).number(l.Lower).number(l.Upper)
			w.end()
		}
	}
}

// uncertainty says how sure the components are.
func (p *page) uncertainty(s *Study) {
	u := s.Uncertainty
	r := u.Result
	p.heading(fmt.Sprintf("How sure (%d times %d stretches of rows drawn anew; %g %%)", r.Replicates, r.Blocks, 100*u.Confidence))
	for a := range min(s.Retained()+1, len(r.Eigenvalues), summaryRows) {
		e, h := r.Eigenvalues[a], r.Shares[a]
		text := fmt.Sprintf("  %-4s eigenvalue %s (%s to %s), share %s (%s to %s)", ComponentName(a), short3(e.Estimate), short3(e.Lower), short3(e.Upper),
			percent(h.Estimate), percent(h.Lower), percent(h.Upper))
		if a < len(r.Congruence) {
			text += fmt.Sprintf("; itself again to %.3f", r.Congruence[a])
		}
		p.line(text)
	}
	p.paragraph("  ", "  ", fmt.Sprintf("the kept components span a space that turns by %.2g degrees (median), %.2g at most in %g %% of draws; "+
		"%q is the mean likeness of a component to its partner in a draw, 1 for the same", r.SubspaceAngle.Estimate, r.SubspaceAngle.Upper, 100*u.Confidence, "itself again"))
	for _, group := range r.Tied {
		var names []string
		for _, a := range group {
			names = append(names, ComponentName(a))
		}
		if group[0] < s.Retained() {
			p.paragraph("  ", "  ", strings.Join(names, ", ")+" cannot be told apart: only the space they span is determined")
		}
	}
}

type uncertaintyFacts struct {
	Confidence    Number          `json:"confidence"`
	Replicates    int             `json:"replicates"`
	Blocks        int             `json:"blocks"`
	Eigenvalues   []intervalFacts `json:"eigenvalues"`
	Congruence    []Number        `json:"congruence"`
	SubspaceAngle intervalFacts   `json:"subspace_angle_degrees"`
	Tied          [][]int         `json:"tied"` // components from 1
}

type intervalFacts struct {
	Estimate Number `json:"estimate"`
	Lower    Number `json:"lower"`
	Upper    Number `json:"upper"`
}

func uncertaintyOf(u *Uncertainty) *uncertaintyFacts {
	interval := func(i stability.Interval) intervalFacts {
		return intervalFacts{Number(i.Estimate), Number(i.Lower), Number(i.Upper)}
	}
	r := u.Result
	f := &uncertaintyFacts{Confidence: Number(u.Confidence), Replicates: r.Replicates, Blocks: r.Blocks,
		Congruence: numbers(r.Congruence), SubspaceAngle: interval(r.SubspaceAngle), Tied: [][]int{}}
	for _, e := range r.Eigenvalues {
		f.Eigenvalues = append(f.Eigenvalues, interval(e))
	}
	for _, group := range r.Tied {
		var from1 []int
		for _, a := range group {
			from1 = append(from1, a+1)
		}
		f.Tied = append(f.Tied, from1)
	}
	return f
}
