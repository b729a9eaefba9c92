package report

import (
	"fmt"
	"io"
	"path/filepath"
	"slices"
	"strings"

	"gopkg.in/yaml.v3"

	"axisfold/pca"
	"axisfold/pca/survey"
)

// Draft is what a drafted run file says beside the findings of a survey.
type Draft struct {
	Files    []string // relative to where the run file will lie
	Given    []string // further settings of the read section, "key: value"
	Groups   string   // asked for; empty takes a column of text that looks like groups
	LeaveOut []string // asked for, patterns
	Response []string
	Watch    bool
}

// WriteDraft writes a commented run file that fits the table.
func WriteDraft(v *survey.Survey, d *Draft, out io.Writer) error {
	w := &draft{v: v, d: d, isResponse: map[string]bool{}}
	for _, r := range d.Response {
		w.isResponse[r] = true
	}
	w.head()
	w.read()
	w.standardize()
	w.stages()
	_, err := io.WriteString(out, w.String())
	return err
}

type draft struct {
	strings.Builder
	v          *survey.Survey
	d          *Draft
	isResponse map[string]bool
	left       map[string]bool
}

func (w *draft) line(format string, args ...any) {
	w.WriteString(strings.TrimRight(fmt.Sprintf(format, args...), " "))
	w.WriteByte('\n')
}

// comment wraps a text as comments, indented.
func (w *draft) comment(indent, text string) {
	var p page
	p.paragraph(indent+"# ", indent+"# ", text)
	w.WriteString(p.String())
}

// aside is a line with a comment behind it where it fits, above it otherwise.
func (w *draft) aside(line, text string) {
	if one := line + "  # " + text; len([]rune(one)) <= summaryWidth+2 {
		w.line("%s", one)
		return
	}
	w.comment(line[:len(line)-len(strings.TrimLeft(line, " "))], text)
	w.line("%s", line)
}

// scalar writes a text as a value or a key of YAML in block style.
func scalar(text string) string {
	out, err := yaml.Marshal(text)
	if err != nil {
		return fmt.Sprintf("%q", text)
	}
	return strings.TrimSpace(string(out))
}

// flowed writes a text as an entry of a list in brackets.
func flowed(text string) string {
	if s := scalar(text); s == text && !strings.ContainsAny(s, ",[]{}") {
		return s
	}
	return fmt.Sprintf("%q", text)
}

func flowList(texts []string) string {
	var out []string
	for _, t := range texts {
		out = append(out, flowed(t))
	}
	return "[" + strings.Join(out, ", ") + "]"
}

// asPattern is a name as a pattern that matches it alone.
func asPattern(name string) string {
	return strings.NewReplacer(`*`, `\*`, `?`, `\?`, `[`, `\[`, `\`, `\\`).Replace(name)
}

func (w *draft) head() {
	v := w.v
	first := filepath.Base(w.d.Files[0])
	w.comment("", fmt.Sprintf("Drafted from %s: %s, %s. Look it through, then axisfold check, then axisfold run.", first, plural(int(v.Rows), "row"), plural(len(v.Channels), "channel")))
	if n := w.complete(); n < 3 {
		w.comment("", fmt.Sprintf("Only %s would be complete, which is too few for components: name more channels in leave_out, or fill the gaps first.", plural(int(n), "row")))
	}
	if w.nothing() {
		w.comment("", "No channel varies, so there is nothing to decompose; leave_out says why of each.")
	}
	w.line("axisfold: 1")
	title := strings.TrimSuffix(first, filepath.Ext(first))
	w.line("title: %s", scalar(title))
	w.line("")
}

// nothing tells whether every channel is left out.
func (w *draft) nothing() bool {
	for _, c := range w.v.Channels {
		if c.LeaveOut == "" && (w.v.Clock == nil || w.v.Clock.Column != c.Name) {
			return false
		}
	}
	return true
}

// complete is how many rows would be.
func (w *draft) complete() int64 {
	if len(w.v.Proposal.LeaveOut) > 0 {
		return w.v.Proposal.Expected
	}
	return w.v.Complete
}

func (w *draft) read() {
	o := w.v.Source.Options
	w.line("read:")
	if len(w.d.Files) == 1 {
		w.line("  files: %s", flowList(w.d.Files))
	} else {
		w.line("  files:")
		for _, f := range w.d.Files {
			w.line("    - %s", scalar(f))
		}
	}
	for _, g := range w.d.Given {
		w.line("  %s", g)
	}
	if o.DecimalComma {
		w.line("  decimal: comma")
	}
	if o.NoHeader {
		w.aside("  header: false", "columns are then called column_1, column_2 and so on")
	}
	if o.UnitsRow {
		w.line("  units_row: true")
	}
	w.missing()
	w.roles()
	w.leaveOut()
}

func (w *draft) missing() {
	told := false
	for _, c := range w.v.Codes {
		channels := 0
		for _, n := range c.Counts {
			if n > 0 {
				channels++
			}
		}
		w.comment("  ", fmt.Sprintf("%s seems to mean missing: it stands apart from all other values %s in %s", short(c.Value), times(c.Total), plural(channels, "channel")))
		told = true
	}
	for _, x := range w.v.Words {
		told = true
		w.comment("  ", fmt.Sprintf("%q stands among the numbers of %s", x.Text, x.Channel))
	}
	list := w.v.Missing()
	var kept []string
	for i, m := range list {
		if !slices.Contains(list[:i], m) {
			kept = append(kept, m)
		}
	}
	texts := make([]string, len(kept))
	for i, m := range kept {
		texts[i] = missingCell(m)
	}
	if told || len(kept) != 5 {
		w.line("  missing: [%s]", strings.Join(texts, ", "))
	}
}

// missingCell writes a cell for read.missing: a number as a number, text so that it stays
// text.
func missingCell(m string) string {
	var number float64
	if yaml.Unmarshal([]byte(m), &number) == nil && !strings.ContainsAny(m, " nNiI") && m != "" {
		return m
	}
	return fmt.Sprintf("%q", m)
}

func times(n int64) string {
	if n == 1 {
		return "once"
	}
	return fmt.Sprintf("%d times", n)
}

func (w *draft) roles() {
	v := w.v
	if c := v.Clock; c != nil && c.Count > 0 {
		note := c.Sentence()
		if c.OfDay != "" {
			note += "; the time of day stands in " + c.OfDay
		}
		w.aside("  time: "+scalar(c.Column), note)
	} else if t := v.Source.Time.Column; t != "" {
		w.line("  time: %s", scalar(t))
	}
	groups := w.d.Groups
	if groups != "" {
		w.line("  groups: %s", scalar(groups))
	}
	for _, t := range v.Source.Texts {
		if t.Name == groups || t.Name == v.Source.Time.Column || t.Name == v.Source.Time.OfDay || !survey.Groups(t) {
			continue
		}
		note := fmt.Sprintf("text, %d different ones", len(t.Words))
		if groups == "" {
			groups = t.Name
			w.aside("  groups: "+scalar(t.Name), note)
			continue
		}
		w.aside("  # or groups: "+scalar(t.Name), note)
	}
}

func (w *draft) leaveOut() {
	type left struct{ pattern, why string }
	var list []left
	for _, p := range w.d.LeaveOut {
		list = append(list, left{p, "asked for"})
	}
	for _, m := range w.v.Source.Mixed {
		list = append(list, left{asPattern(m.Channel), "holds several kinds of text"})
	}
	w.left = map[string]bool{}
	leave := func(name, why string) {
		if !w.left[name] && !w.isResponse[name] {
			w.left[name] = true
			list = append(list, left{asPattern(name), why})
		}
	}
	for _, l := range w.v.Likeness {
		// A copy of the response among the predictors would explain it perfectly.
		if l.Kind != "near" && w.isResponse[l.A] {
			leave(l.B, "a copy of the response "+l.A)
		} else if l.Kind != "near" && w.isResponse[l.B] {
			leave(l.A, "a copy of the response "+l.B)
		}
	}
	for _, c := range w.v.Leave() {
		if w.v.Clock != nil && c.Name == w.v.Clock.Column {
			continue
		}
		leave(c.Name, c.LeaveOut)
	}
	if len(list) == 0 {
		return
	}
	w.line("  leave_out:")
	for _, l := range list {
		w.aside("    - "+scalar(l.pattern), l.why)
	}
	w.line("")
}

func (w *draft) standardize() {
	w.line("standardize:")
	w.aside("  constant: drop", "a channel may hold one value in the complete rows, though it does not in all")
	var lines [][2]string
	for _, c := range w.v.Channels {
		if c.Transform == pca.NoTransform || w.left[c.Name] || w.isResponse[c.Name] {
			continue
		}
		lines = append(lines, [2]string{fmt.Sprintf("    %s: {transform: %s}", scalar(asPattern(c.Name)), c.Transform),
			fmt.Sprintf("skewness %s, then %s", short3(c.Skewness), short3(c.Transformed))})
	}
	if len(lines) > 0 {
		w.line("  channels:")
		for _, l := range lines {
			w.aside(l[0], l[1])
		}
	}
	w.line("")
}

func (w *draft) stages() {
	dependent := w.v.MedianAutocorrelation() > .5 && w.v.Rows >= 30
	if dependent {
		w.aside("retain: {rule: parallel-shifts}", "rows follow one another")
	} else {
		w.line("retain: {rule: parallel}")
	}
	w.line("")
	for _, kind := range []string{"near-copy", "redundancy"} {
		if i := slices.IndexFunc(w.v.Findings, func(f survey.Finding) bool { return f.Kind == kind }); i >= 0 {
			w.comment("", "reduce: {rebuild: 0.95} finds which channels could go; here "+findingText(&w.v.Findings[i]))
			w.line("")
			break
		}
	}
	if len(w.d.Response) > 0 {
		folds := min(10, max(2, w.complete()/3))
		w.line("regress:")
		w.line("  response: %s", flowList(w.d.Response))
		w.aside(fmt.Sprintf("  retain: {rule: one-standard-error, folds: %d, arrangement: blocks}", folds), "held out in stretches of rows")
		w.line("")
	}
	if w.d.Watch {
		w.line("watch: {}")
		w.line("")
	}
	w.line("draw: {formats: [svg]}")
}
