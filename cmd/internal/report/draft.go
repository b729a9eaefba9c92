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
	if w.v.MedianAutocorrelation() > .5 && w.v.Rows >= 30 {
		w.aside("retain: {rule: parallel}", "rows follow one another; it takes them for what they are worth")
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
