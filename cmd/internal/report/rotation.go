package report

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strings"

	"axisfold/pca"
	"axisfold/pca/rotation"
)

func hasRotation(s *Study) bool { return s.Rotation != nil }

// RotatedName is R1 for rotated component 0.
func RotatedName(a int) string { return fmt.Sprintf("R%d", a+1) }

func rotatedNames(k int) []string {
	names := make([]string, k)
	for a := range names {
		names[a] = RotatedName(a)
	}
	return names
}

// fillRotatedLoadings writes the loadings, and for promax the covariances of channels with
// components beside them.
func fillRotatedLoadings(s *Study, w *csvWriter) {
	r := s.Rotation
	k := r.Components()
	names := append([]string{"channel"}, rotatedNames(k)...)
	oblique := r.Method == rotation.Promax
	if oblique {
		for a := range k {
			names = append(names, RotatedName(a)+"_structure")
		}
	}
	w.header(names...)
	for j, name := range s.Decomposition.Channels {
		w.text(name)
		for a := range k {
			w.number(r.Loading(j, a))
		}
		if oblique {
			for a := range k {
				w.number(r.Structure[j*k+a])
			}
		}
		w.end()
	}
}

// fillRotation writes a line per rotated component: what it carries, its weights on the
// scores of the kept components, each over its deviation, and its correlations with the
// others.
func fillRotation(s *Study, w *csvWriter) {
	r := s.Rotation
	k := r.Components()
	names := []string{"component", "variance", "share"}
	for a := range k {
		names = append(names, "weight_"+ComponentName(a))
	}
	for a := range k {
		names = append(names, "correlation_"+RotatedName(a))
	}
	w.header(names...)
	for a := range k {
		w.text(RotatedName(a)).number(r.Variances[a]).number(r.Variances[a] / s.Decomposition.Total)
		for b := range k {
			w.number(r.Weights[b*k+a])
		}
		for b := range k {
			w.number(r.Correlations[a*k+b])
		}
		w.end()
	}
}

// carrying is the correlation from which a channel is said to carry a component: half of
// the component's deviation, a quarter of the variance.
const carrying = 0.5

// carriers words which channels carry each kept component, as they are or rotated.
func (p *page) carriers(s *Study) {
	k := s.Retained()
	if k == 0 {
		return
	}
	d := s.Decomposition
	correlation := func(j, a int) float64 { return d.Loading(j, a) / s.spread(j) }
	share, name := d.Share, ComponentName
	p.heading(fmt.Sprintf("What carries them (channels that correlate by %g or more, strongest first)", carrying))
	if r := s.Rotation; r != nil {
		way := string(r.Method)
		if r.Starts > 1 {
			way += fmt.Sprintf(", reached from %d of %d starts", r.Reached, r.Starts)
		}
		p.paragraph("  ", "  ", fmt.Sprintf("rotated (%s); together they carry what %s to %s carry", way, ComponentName(0), ComponentName(k-1)))
		correlation = func(j, a int) float64 { return r.Structure[j*k+a] / s.spread(j) }
		share, name = func(a int) float64 { return r.Variances[a] / d.Total }, RotatedName
	}
	for a := range min(k, summaryRows) {
		text := p.carried(s, func(j int) float64 { return correlation(j, a) })
		p.paragraph(fmt.Sprintf("  %-4s", name(a)), "      ", fmt.Sprintf("%s: %s", percent(share(a)), text))
	}
	if k > summaryRows {
		p.line(fmt.Sprintf("  and %d more in tables/loadings.csv", k-summaryRows))
	}
	if r := s.Rotation; r != nil && r.Method == rotation.Promax {
		x, y, most := 0, 0, 0.0
		for a := range k {
			for b := range a {
				if v := r.Correlations[a*k+b]; math.Abs(v) > math.Abs(most) {
					x, y, most = b, a, v
				}
			}
		}
		if most != 0 {
			p.paragraph("  ", "  ", fmt.Sprintf("%s and %s correlate most, by %+.2f", name(x), name(y), most))
		}
	}
}

// spread is the deviation of channel j on the scale of the decomposition, so that loadings
// over it are correlations under either matrix.
func (s *Study) spread(j int) float64 {
	if s.Decomposition.Matrix == pca.Correlation {
		return 1
	}
	return s.Channels[j].Deviation / s.Decomposition.Scaling.Scale[j]
}

// carried says which channels rise and fall with a component.
func (p *page) carried(s *Study, correlation func(j int) float64) string {
	order := pca.FirstComponents(len(s.Channels))
	slices.SortStableFunc(order, func(i, j int) int { return cmp.Compare(math.Abs(correlation(j)), math.Abs(correlation(i))) })
	var rises, falls []string
	for _, j := range order {
		switch r := correlation(j); {
		case r >= carrying:
			rises = append(rises, s.Channels[j].Name)
		case r <= -carrying:
			falls = append(falls, s.Channels[j].Name)
		}
	}
	if len(rises)+len(falls) == 0 {
		j := order[0]
		return fmt.Sprintf("no channel in particular, most %s (%+.2f)", s.Channels[j].Name, correlation(j))
	}
	var parts []string
	for _, side := range []struct {
		verb  string
		names []string
	}{{"rises with", rises}, {"falls with", falls}} {
		if n := len(side.names); n > 6 {
			parts = append(parts, fmt.Sprintf("%s %s and %d more", side.verb, strings.Join(side.names[:5], ", "), n-5))
		} else if n > 0 {
			parts = append(parts, side.verb+" "+strings.Join(side.names, ", "))
		}
	}
	return strings.Join(parts, "; ")
}

type rotationFacts struct {
	Method       rotation.Method `json:"method"`
	Starts       int             `json:"starts"`
	Reached      int             `json:"starts_that_reached_it"`
	Criterion    Number          `json:"criterion"`
	Before       Number          `json:"criterion_before"`
	Variances    []Number        `json:"variances"`
	Loadings     [][]Number      `json:"loadings"`     // by channel
	Weights      [][]Number      `json:"weights"`      // by kept component, on scores over their deviations
	Correlations [][]Number      `json:"correlations"` // between rotated components
}

func rotationOf(r *rotation.Result) *rotationFacts {
	k := r.Components()
	return &rotationFacts{Method: r.Method, Starts: r.Starts, Reached: r.Reached, Criterion: Number(r.Criterion), Before: Number(r.Before),
		Variances: numbers(r.Variances), Loadings: rowsOf(r.Loadings, k), Weights: rowsOf(r.Weights, k), Correlations: rowsOf(r.Correlations, k)}
}

// rowsOf cuts a row-major matrix into its rows.
func rowsOf(m []float64, k int) [][]Number {
	var out [][]Number
	for i := 0; i < len(m); i += k {
		out = append(out, numbers(m[i:i+k]))
	}
	return out
}
