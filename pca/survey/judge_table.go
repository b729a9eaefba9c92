package survey

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"axisfold/pca/table"
)

// judgeReading says how the table is written where that is not the default.
func (v *Survey) judgeReading() {
	o := &v.Source.Options
	if o.DecimalComma && !v.Source.given.Decimal {
		v.add(Finding{Kind: "decimal", Weight: Spoils, Text: "numbers have a decimal comma", Setting: "read.decimal: comma", affected: math.MaxInt64})
	}
	if v.Source.Turned {
		v.add(Finding{Kind: "transposed", Weight: Spoils, Text: "each line holds a channel, not a row: the numbers along it are far more alike than those below one another", Setting: "read.orientation: channels-in-rows", affected: math.MaxInt64})
	}
	if o.NoHeader && !v.Source.given.Header {
		v.add(Finding{Kind: "header", Weight: Spoils, Text: "the first row holds numbers, not names: the columns are called column_1, column_2 and so on", Setting: "read.header: false", affected: math.MaxInt64})
	}
	if o.UnitsRow && !v.Source.given.UnitsRow {
		v.add(Finding{Kind: "units", Weight: Spoils, Text: "the row after the names holds units", Setting: "read.units_row: true", affected: math.MaxInt64})
	}
	seen := map[string]bool{}
	for _, w := range v.Words {
		if seen[w.Text] {
			continue
		}
		seen[w.Text] = true
		var channels []string
		for _, o := range v.Words {
			if o.Text == w.Text && !slices.Contains(channels, o.Channel) {
				channels = append(channels, o.Channel)
			}
		}
		text := fmt.Sprintf("%q stands among numbers", w.Text)
		if w.Place != "" {
			text += " (first in " + w.Place + ")"
		}
		v.add(Finding{Kind: "word", Channels: channels, Weight: Spoils, Text: text + " and is taken as missing", Setting: fmt.Sprintf("read.missing with %q", w.Text), affected: v.Rows})
	}
	for _, w := range v.Source.Mixed {
		v.add(Finding{Kind: "mixed", Channels: []string{w.Channel}, Weight: Spoils, affected: v.Rows,
			Text:    fmt.Sprintf("holds more kinds of text among its numbers, the last %q (%s), and is left out", w.Text, w.Place),
			Setting: "read.leave_out: [" + quote(w.Channel) + "]"})
	}
	for _, t := range v.Source.Texts {
		if t.Name == v.Source.Time.Column || t.Name == v.Source.Time.OfDay || len(t.Words) == 0 {
			continue
		}
		f := Finding{Kind: "text", Channels: []string{t.Name}, Weight: Know, Text: fmt.Sprintf("holds text (%s) and takes no part", quoted(t.Examples))}
		if Groups(t) {
			f.Text = fmt.Sprintf("holds text, %d different ones in the first %d rows (%s), and takes no part", len(t.Words), t.Filled, quoted(t.Examples))
			f.Setting = "read.groups: " + quote(t.Name)
		}
		v.add(f)
	}
}

// Groups tells whether a column of text looks like one of groups: few different texts, each
// often, in the rows looked at.
func Groups(t table.TextColumn) bool {
	return len(t.Words) > 1 && len(t.Words) <= 50 && t.Filled >= 5*len(t.Words) && t.Numbers == 0
}

func quoted(list []string) string {
	var out []string
	for _, s := range list {
		if r := []rune(s); len(r) > 24 {
			s = string(r[:24]) + "…"
		}
		out = append(out, fmt.Sprintf("%q", s))
	}
	return strings.Join(out, ", ")
}

func (v *Survey) judgeCodes() {
	for _, c := range v.Codes {
		var channels []string
		for j, n := range c.Counts {
			if n > 0 {
				channels = append(channels, v.Channels[j].Name)
			}
		}
		numbers := []Number{{"value", c.Value}, {"cells", float64(c.Total)}, {"channels", float64(len(channels))}}
		v.add(Finding{Kind: "missing-code", Channels: channels, Weight: Spoils, affected: c.Total, Numbers: numbers,
			Text:    fmt.Sprintf("%s stands apart from all other values %s, in %s: it seems to mean missing, and is taken so here", full(c.Value), times(c.Total), counted(int64(len(channels)), "channel")),
			Setting: "read.missing with " + full(c.Value)})
	}
}

// Thresholds of what is worth a word about rows.
const (
	manyCopies   = .01 // share of rows that equal an earlier one
	halfwayToOne = .5  // median autocorrelation
)

func (v *Survey) judgeRows() {
	if len(v.Proposal.LeaveOut) > 0 {
		var names []string
		for _, j := range v.Proposal.LeaveOut {
			c := &v.Channels[j]
			names = append(names, c.Name)
			if c.LeaveOut == "" {
				c.LeaveOut = fmt.Sprintf("lacks %s of %d values, and few rows are complete with it", percent(c.Missing, v.Rows), v.Rows)
			}
		}
		text := fmt.Sprintf("only %d of %s are complete; without %s there are %d", v.Complete, counted(v.Rows, "row"), counted(int64(len(names)), "channel"), v.Proposal.Expected)
		if 2*len(names) > v.Varying {
			text += "; the gaps are spread over the channels, so much is lost that way"
		}
		v.add(Finding{Kind: "few-complete", Channels: names, Weight: Spoils, affected: v.Rows - v.Complete,
			Text:    text,
			Numbers: []Number{{"complete", float64(v.Complete)}, {"complete_then", float64(v.Proposal.Expected)}}, Setting: "read.leave_out: [" + listed(quoteAll(names)) + "]"})
	} else if 2*v.Complete < v.Rows {
		v.add(Finding{Kind: "few-complete", Weight: Spoils, affected: v.Rows - v.Complete,
			Text:    fmt.Sprintf("only %d of %s are complete, and no few channels are to blame", v.Complete, counted(v.Rows, "row")),
			Numbers: []Number{{"complete", float64(v.Complete)}}})
	}
	if n := v.RowCopies; n > 0 && float64(n) >= manyCopies*float64(v.Rows) {
		about := ""
		if !v.CopiesExact {
			about = "about "
		}
		v.add(Finding{Kind: "row-copies", Weight: Worth, affected: n, Numbers: []Number{{"rows", float64(n)}},
			Text: fmt.Sprintf("%s%s the same as an earlier one in every channel: errors on held-out rows come out too small", about, plural(n, "row is", "rows are"))})
	}
	if v.Varying > 0 && v.Rows <= int64(v.Varying) {
		v.add(Finding{Kind: "few-rows", Weight: Worth, affected: v.Rows, Text: fmt.Sprintf("%s for %d channels: least squares has no answer, components do", counted(v.Rows, "row"), v.Varying)})
	}
	if v.Rank >= 0 && v.Rank < v.Varying && v.Rank < v.Compared-1 {
		v.add(Finding{Kind: "rank", Weight: Worth, affected: 1, Numbers: []Number{{"rank", float64(v.Rank)}, {"channels", float64(v.Varying)}},
			Text: fmt.Sprintf("of %d channels that vary, %d are exact combinations of others", v.Varying, v.Varying-v.Rank), Setting: "reduce: {}"})
	}
	if v.Varying >= 4 && v.Dominated > 0 && 4*v.Dominated <= v.Varying {
		v.add(Finding{Kind: "redundancy", Weight: Worth, affected: 1, Numbers: []Number{{"components", float64(v.Dominated)}, {"channels", float64(v.Varying)}, {"first_share", v.First}},
			Text: fmt.Sprintf("%s of %d carry 99 %% of the variance of the scaled channels, the first alone %s", plural(int64(v.Dominated), "component", "components"), v.Varying, percent(int64(v.First*1e6), 1e6)), Setting: "reduce: {}"})
	}
	if r := v.MedianAutocorrelation(); r > halfwayToOne && v.Rows >= 30 {
		v.add(Finding{Kind: "dependent-rows", Weight: Worth, affected: v.Rows, Numbers: []Number{{"autocorrelation", r}},
			Text:    fmt.Sprintf("rows follow one another: half of the channels have an autocorrelation above %.2f, so that %s say as much as %.0f independent ones", r, counted(v.Rows, "row"), math.Max(1, float64(v.Rows)*(1-r)/(1+r))),
			Setting: "retain: {rule: parallel}, which takes rows for what they are worth; folds of a regression with arrangement: blocks"})
	}
	for _, b := range v.Breaks {
		v.add(Finding{Kind: "break", Channels: b.Channels, Weight: Worth, affected: int64(len(b.Channels)), Numbers: []Number{{"row", float64(b.Row)}, {"channels", float64(len(b.Channels))}},
			Text: fmt.Sprintf("%s change their level at once near row %d: what lies on either side may not be one story", plural(int64(len(b.Channels)), "channel", "channels"), b.Row)})
	}
}

func plural(n int64, one, more string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, more)
}

// MedianAutocorrelation is that of the channels that have one, NaN without.
func (v *Survey) MedianAutocorrelation() float64 {
	var all []float64
	for _, c := range v.Channels {
		if !math.IsNaN(c.Autocorrelation) && c.LeaveOut == "" && c.Type != "two values" {
			all = append(all, c.Autocorrelation)
		}
	}
	slices.Sort(all)
	return quantile(all, .5)
}
