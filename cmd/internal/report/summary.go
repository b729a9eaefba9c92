package report

import (
	"cmp"
	"fmt"
	"io"
	"math"
	"slices"
	"strings"
	"unicode/utf8"

	"axisfold/pca"
	"axisfold/pcr"
)

// summaryWidth is the widest line of summary.txt, for a terminal of 100 columns.
const summaryWidth = 98

// summaryRows bounds the lists in a summary; the tables hold them whole.
const summaryRows = 12

// WriteSummary writes summary.txt: decision first, detail after.
func WriteSummary(s *Study, out io.Writer) error {
	var p page
	if s.Title != "" {
		p.line(s.Title)
		p.line("")
	}
	p.decision(s)
	p.table(s)
	p.components(s)
	p.carriers(s)
	p.adequacy(s)
	p.howMany(s)
	if s.Uncertainty != nil {
		p.uncertainty(s)
	}
	if s.Reduction != nil {
		p.reduction(s)
	}
	if s.Regression != nil {
		p.collinearity(s)
		for i, m := range s.Regression.Result.Models {
			p.regression(s, m)
			p.inference(m, &s.Regression.Inference[i])
			p.remedies(m)
		}
	}
	p.warnings(s)
	_, err := io.WriteString(out, p.String())
	return err
}

type page struct{ strings.Builder }

func (p *page) line(text string) {
	p.WriteString(strings.TrimRight(text, " "))
	p.WriteByte('\n')
}

func (p *page) heading(text string) {
	p.line("")
	p.line(text)
}

// paragraph wraps text at the page width, later lines indented.
func (p *page) paragraph(first, rest, text string) {
	line := first
	empty := true
	for _, word := range strings.Fields(text) {
		if !empty && utf8.RuneCountInString(line)+1+utf8.RuneCountInString(word) > summaryWidth {
			p.line(line)
			line, empty = rest, true
		}
		if !empty {
			line += " "
		}
		line += word
		empty = false
	}
	p.line(line)
}

func (p *page) decision(s *Study) {
	d, k := s.Decomposition, s.Retained()
	switch {
	case k == 0:
		p.paragraph("", "", fmt.Sprintf("No component of %d channels stands out (%s).", d.Width(), ruleText(s.Verdict.Rule, s.Verdict.Setting)))
	default:
		p.paragraph("", "", fmt.Sprintf("%s of %d kept: together %s of the variance (%s).",
			plural(k, "component"), d.Components(), percent(d.CumulativeShare(k-1)), ruleText(s.Verdict.Rule, s.Verdict.Setting)))
	}
	if s.Reduction != nil {
		p.paragraph("", "", reductionDecision(s))
	}
	if s.Regression == nil {
		return
	}
	for i, m := range s.Regression.Result.Models {
		unit := s.Regression.Responses[i].Unit
		step := m.Path[m.Components]
		text := fmt.Sprintf("%s from %s: R2 %.4f on the fit", m.Response, plural(m.Components, "component"), m.R2)
		if !math.IsNaN(step.CV) {
			text += fmt.Sprintf(", %.4f on held-out rows, where a prediction is off by %s (root mean square)", step.CVR2, withUnit(short(step.CV), unit))
		}
		p.paragraph("", "", text+"."+procedureText(m.Procedure, unit))
	}
}

func (p *page) table(s *Study) {
	p.heading("What was read")
	t := s.Table
	text := fmt.Sprintf("%s, %d channels", plural(int(t.Rows), "row"), s.Decomposition.Width())
	if s.Regression != nil {
		text += " and " + plural(len(s.Regression.Responses), "response")
	}
	if t.Complete < t.Rows {
		text += fmt.Sprintf("; %d rows are complete and used, %d have gaps", t.Complete, t.Rows-t.Complete)
		if name, n := mostMissing(s); n > 0 {
			text += fmt.Sprintf(" (most in %s: %d)", name, n)
		}
	}
	p.paragraph("  ", "  ", text)
	shown := t.Notes
	if len(shown) > summaryRows {
		shown = shown[:summaryRows]
	}
	for _, n := range shown {
		if n.Column == "" {
			p.paragraph("  ", "    ", n.Text)
		} else {
			p.paragraph("  ", "    ", n.Column+": "+n.Text)
		}
	}
	if more := len(t.Notes) - len(shown); more > 0 {
		p.line(fmt.Sprintf("  and %d more notes in results.json", more))
	}
}

func mostMissing(s *Study) (string, int64) {
	name, most := "", int64(0)
	all := s.Channels
	if s.Regression != nil {
		all = append(slices.Clone(all), s.Regression.Responses...)
	}
	for _, c := range all {
		if c.Missing > most {
			name, most = c.Name, c.Missing
		}
	}
	return name, most
}

func (p *page) components(s *Study) {
	d, k := s.Decomposition, s.Retained()
	p.heading(fmt.Sprintf("Components of the %s matrix (%s: %s)", d.Matrix, d.Route, d.Reason))
	shown := min(max(k+1, 3), summaryRows, d.Components())
	p.line("  component  eigenvalue   share  together  strongest channels (loading)")
	for a := range shown {
		mark := " "
		if a < k {
			mark = "*"
		}
		head := fmt.Sprintf("  %s %-9s %9s  %6s  %7s  ", mark, ComponentName(a), short(d.Values[a]), percent(d.Share(a)), percent(d.CumulativeShare(a)))
		p.line(head + strongest(d, a, summaryWidth-utf8.RuneCountInString(head)))
	}
	if more := d.Components() - shown; more > 0 {
		p.line(fmt.Sprintf("  * kept; %d more in tables/eigenvalues.csv", more))
	} else {
		p.line("  * kept")
	}
}

// adequacy says whether the channels have stories in common at all.
func (p *page) adequacy(s *Study) {
	a := s.Adequacy
	if a == nil {
		return
	}
	p.heading("Whether channels share stories")
	if !a.Defined {
		p.paragraph("  ", "  ", "not measured: "+a.Reason)
		return
	}
	p.paragraph("  ", "  ", fmt.Sprintf("Kaiser-Meyer-Olkin measure %.2f: %s; log10 of the determinant %.1f, condition %s", a.KMO, pca.Grade(a.KMO), a.Log10Det, short3(s.Decomposition.Condition())))
	if low := leastAdequate(s); low != "" {
		p.paragraph("  ", "  ", "channels on their own (measure below 0.5): "+low)
	}
	if a.P > .01 {
		p.paragraph("  ", "  ", fmt.Sprintf("Bartlett's test does not tell the correlations from chance (%.4g on %d, P = %.2g)", a.Sphericity, a.Freedom, a.P))
	}
}

// leastAdequate lists channels whose own measure is below a half.
func leastAdequate(s *Study) string {
	var names []string
	more := 0
	for j, v := range s.Adequacy.Channel {
		if v >= .5 {
			continue
		}
		if len(names) < 8 {
			names = append(names, fmt.Sprintf("%s %.2f", middle(s.Channels[j].Name, 24), v))
		} else {
			more++
		}
	}
	text := strings.Join(names, ", ")
	if more > 0 {
		text += fmt.Sprintf(" and %d more", more)
	}
	return text
}

// strongest lists channels by falling size of their loading, as many as fit the width.
func strongest(d *pca.Decomposition, a, width int) string {
	order := pca.FirstComponents(d.Width())
	slices.SortStableFunc(order, func(i, j int) int {
		return cmp.Compare(math.Abs(d.Loading(j, a)), math.Abs(d.Loading(i, a)))
	})
	items := make([]string, len(order))
	for i, j := range order {
		items[i] = fmt.Sprintf("%s %s", middle(d.Channels[j], 24), signed(d.Loading(j, a)))
	}
	return fitting(items, width)
}

func (p *page) howMany(s *Study) {
	p.heading("How many components, by every rule")
	for i, v := range s.Overview {
		mark := " "
		if i == 0 {
			mark = ">"
		}
		count := fmt.Sprint(v.Components)
		if v.Abstains {
			count = "-"
		}
		first := fmt.Sprintf("  %s %4s  %-32s ", mark, count, ruleText(v.Rule, v.Setting))
		p.paragraph(first, strings.Repeat(" ", 43), v.Note)
	}
	p.line("  > decides, as the run file says")
}

func (p *page) regression(s *Study, m *pcr.Model) {
	r := s.Regression
	how := r.Rule
	if m.Folds > 0 {
		how += fmt.Sprintf(", %d folds: %s", m.Folds, r.Arrangement)
		if m.Deals > 1 {
			how += fmt.Sprintf(", %d times", m.Deals)
		}
		if r.Gap > 0 {
			how += fmt.Sprintf(", gap of %s", plural(r.Gap, "row"))
		}
	}
	p.heading(fmt.Sprintf("Regression of %s on components (%s)", m.Response, how))
	var enters []string
	for _, a := range m.Entering[:m.Components] {
		enters = append(enters, ComponentName(a))
	}
	if len(enters) > 0 {
		p.paragraph("  ", "  ", fmt.Sprintf("components %s; residual standard deviation %s on %d degrees of freedom",
			strings.Join(enters, " "), short(m.Residual), m.Free))
	}
	p.line(fmt.Sprintf("  %-24s %12s %11s %24s %9s %12s", "term", "coefficient", "std error", fmt.Sprintf("%g %% interval", 100*r.Confidence), "VIF", "by OLS"))
	p.term(m.Intercept)
	order := pca.FirstComponents(len(m.Terms))
	slices.SortStableFunc(order, func(i, j int) int {
		return cmp.Compare(math.Abs(m.Terms[j].Standardized), math.Abs(m.Terms[i].Standardized))
	})
	for i, j := range order {
		if i == summaryRows {
			p.line(fmt.Sprintf("  and %d more in tables/coefficients.csv", len(order)-i))
			break
		}
		p.term(m.Terms[j])
	}
	if i := slices.Index(r.Result.Models, m); r.Smearing != nil && r.Responses[i].Transform != pca.NoTransform {
		text := fmt.Sprintf("Fitted and judged as %s; predictions.csv also has the mean of %s itself (predicted_back, by smearing: Duan 1983) and its interval, turned back",
			m.Response, r.Responses[i].Source)
		if f := r.Smearing[i].Factor(); !math.IsNaN(f) {
			text += fmt.Sprintf("; the mean is %s times what the prediction turned back gives", short(f))
		}
		p.paragraph("  ", "  ", text+".")
	}
	p.paragraph("  ", "  ", "Terms by the size of their standardized coefficient. Standard errors take components and their number as given, "+
		"not chosen from these rows, and those left out as without effect.")
}

// remedies sets components beside what else is done about collinear predictors.
func (p *page) remedies(m *pcr.Model) {
	if len(m.Remedies) < 2 {
		return
	}
	p.heading("Beside it, on the same folds")
	p.line(fmt.Sprintf("  %-62s %14s %8s %7s", "remedy", "held-out error", "length", "slopes"))
	best := 0
	for i, r := range m.Remedies {
		if r.CV < m.Remedies[best].CV {
			best = i
		}
		name := r.Name
		if r.Setting != "" {
			name += ", " + r.Setting
		}
		p.line(fmt.Sprintf("  %-62s %14s %8s %7s", name, short(r.CV), short3(r.Length), short3(r.Parameters)))
	}
	p.paragraph("  ", "  ", "length: of the standardized coefficients; slopes: effective number.")
	first, least := m.Remedies[0], m.Remedies[best]
	if first.CV > least.CV+2*least.CVError {
		p.paragraph("  ", "  ", fmt.Sprintf("Components are not the best remedy here: %s predicts held-out rows better by more than two standard errors.", least.Name))
	}
}

func (p *page) term(t pcr.Term) {
	interval := ""
	if !math.IsNaN(t.Lower) {
		interval = fmt.Sprintf("%s to %s", short(t.Lower), short(t.Upper))
	}
	p.line(fmt.Sprintf("  %-24s %12s %11s %24s %9s %12s", middle(t.Name, 24), short(t.Coefficient), short(t.Error), interval, short3(t.VIF), short(t.Ordinary)))
}

func (p *page) warnings(s *Study) {
	if len(s.Warnings) == 0 {
		return
	}
	p.heading("Mind")
	for i, w := range s.Warnings {
		if i == summaryRows {
			p.line(fmt.Sprintf("  and %d more in results.json", len(s.Warnings)-i))
			break
		}
		p.paragraph("  - ", "    ", w.Text)
	}
}

func ruleText(rule, setting string) string {
	if setting == "" {
		return rule
	}
	return rule + " " + setting
}

func plural(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

func percent(share float64) string { return fmt.Sprintf("%.1f %%", 100*share) }

func signed(v float64) string { return fmt.Sprintf("%+.2f", v) }

func withUnit(text, unit string) string {
	if unit == "" {
		return text
	}
	return text + " " + unit
}

// short gives five significant digits, a dash where there is no number.
func short(v float64) string { return digits(v, 5) }

func short3(v float64) string { return digits(v, 3) }

func digits(v float64, n int) string {
	switch {
	case math.IsNaN(v):
		return "-"
	case math.IsInf(v, 0):
		return "infinite"
	}
	return fmt.Sprintf("%.*g", n, v)
}

// middle shortens a name in its middle, where names of channels differ least.
func middle(name string, width int) string {
	runes := []rune(name)
	if len(runes) <= width {
		return name
	}
	left := (width - 1) / 2
	right := width - 1 - left
	return string(runes[:left]) + "…" + string(runes[len(runes)-right:])
}
