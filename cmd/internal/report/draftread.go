package report

import (
	"fmt"
	"slices"
	"strings"

	"gopkg.in/yaml.v3"

	"axisfold/pca/survey"
)

// The read section of a drafted run file.

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
	if w.v.Source.Turned {
		w.aside("  orientation: channels-in-rows", "the numbers along a line are far more alike than those below one another")
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
	if len(list) > 0 {
		w.line("  leave_out:")
	}
	for _, l := range list {
		w.aside("    - "+scalar(l.pattern), l.why)
	}
	w.line("")
}
