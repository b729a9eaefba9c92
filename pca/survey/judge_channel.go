package survey

import (
	"fmt"
	"math"
	"strings"

	"axisfold/pca"
)

// judgeChannel says what is wrong with one channel by itself.
func (v *Survey) judgeChannel(c *Channel) {
	add := func(f Finding) {
		f.Channels = []string{c.Name}
		v.add(f)
	}
	if v.Clock != nil && v.Clock.Column == c.Name {
		return // judged as a clock
	}
	leave := "read.leave_out: [" + quote(c.Name) + "]"
	switch c.Type {
	case "empty":
		c.LeaveOut = "holds no value"
		add(Finding{Kind: "empty", Weight: Spoils, Text: "holds no value in any row", Setting: leave, affected: v.Rows})
		return
	case "constant":
		c.LeaveOut = "holds one value, " + full(c.Min)
		add(Finding{Kind: "constant", Weight: Spoils, Text: fmt.Sprintf("holds one value, %s, in all its %s", full(c.Min), counted(c.Count, "row")),
			Numbers: []Number{{"value", c.Min}}, Setting: leave, affected: v.Rows})
		return
	case "beyond":
		c.LeaveOut = "its squares lie beyond double precision"
		add(Finding{Kind: "beyond", Weight: Spoils, Text: fmt.Sprintf("goes from %s to %s, and squares of that lie beyond double precision: give it in another unit", full(c.Min), full(c.Max)),
			Setting: leave, affected: v.Rows})
		return
	case "equal steps":
		c.LeaveOut = "rises in equal steps, as a number of the row or a clock does"
		add(Finding{Kind: "equal-steps", Weight: Spoils, Text: "rises in equal steps from row to row: a number of the row or a clock, no measurement",
			Setting: leave + ", or read.time: " + quote(c.Name), affected: v.Rows})
		return
	case "counter":
		c.LeaveOut = "counts up"
		add(Finding{Kind: "counter", Weight: Spoils, Text: fmt.Sprintf("counts up from %s to %s and falls back %s: a counter, of which only the differences vary", full(c.Min), full(c.Max), times(c.down)),
			Numbers: []Number{{"rises", float64(c.up)}, {"falls", float64(c.down)}}, Setting: leave, affected: v.Rows})
		return
	}
	v.judgeGaps(c, add)
	v.judgeValues(c, add)
	v.judgeSeries(c, add)
}

func times(n int64) string {
	switch n {
	case 0:
		return "never"
	case 1:
		return "once"
	}
	return fmt.Sprintf("%d times", n)
}

func (v *Survey) judgeGaps(c *Channel, add func(Finding)) {
	if c.Missing == 0 {
		return
	}
	weight := Know
	switch share := float64(c.Missing) / float64(v.Rows); {
	case share >= .5:
		weight = Spoils
	case share >= .05:
		weight = Worth
	}
	text := fmt.Sprintf("lacks %s of %d (%s)", counted(c.Missing, "value"), v.Rows, percent(c.Missing, v.Rows))
	if c.LongestGap.Length > 1 {
		text += fmt.Sprintf("; the longest gap is %d rows from row %d", c.LongestGap.Length, c.LongestGap.From)
	}
	setting := ""
	if weight == Spoils {
		setting = "read.leave_out: [" + quote(c.Name) + "]"
	}
	add(Finding{Kind: "gaps", Weight: weight, Text: text, Setting: setting, affected: c.Missing,
		Numbers: []Number{{"missing", float64(c.Missing)}, {"longest_gap", float64(c.LongestGap.Length)}, {"longest_gap_from", float64(c.LongestGap.From)}}})
}

// manySame is the share of rows with one value from which a channel is nearly constant.
const manySame = .98

func (v *Survey) judgeValues(c *Channel, add func(Finding)) {
	switch {
	case c.CommonShare >= manySame && c.Count >= 50:
		add(Finding{Kind: "nearly-constant", Weight: Worth, affected: c.Count,
			Text:    fmt.Sprintf("is %s in %s of the rows: scaled to unit variance, the few others weigh as much as a whole channel", full(c.Common), percent(int64(math.Round(c.CommonShare*1e6)), 1e6)),
			Numbers: []Number{{"value", c.Common}, {"share", c.CommonShare}}, Setting: "read.leave_out: [" + quote(c.Name) + "]"})
		return
	case c.Type == "two values":
		add(Finding{Kind: "two-values", Weight: Know, Text: fmt.Sprintf("is either %s or %s: a switch or a state", full(c.Min), full(c.Max)),
			Numbers: []Number{{"low", c.Min}, {"high", c.Max}, {"at_high", float64(c.AtMax)}}, Setting: "read.groups: " + quote(c.Name) + ", if the states are to be told apart"})
		return
	case c.Type == "categories":
		add(Finding{Kind: "categories", Weight: Worth, affected: c.Count,
			Text:    fmt.Sprintf("holds only %d different whole numbers from %s to %s: if they are codes, their distances mean nothing", c.Different, full(c.Min), full(c.Max)),
			Numbers: []Number{{"different", float64(c.Different)}}, Setting: "read.leave_out: [" + quote(c.Name) + "] or read.groups: " + quote(c.Name) + ", if they are codes"})
		return
	}
	v.judgeLimits(c, add)
	if c.Transform != pca.NoTransform {
		add(Finding{Kind: "skew", Weight: Worth, affected: int64(10 * math.Abs(c.Skewness)),
			Text:    fmt.Sprintf("is skewed (%.2g), a few rows far from the rest carry its variance; its %s is not (%.2g)", c.Skewness, spoken(c.Transform), c.Transformed),
			Numbers: []Number{{"skewness", c.Skewness}, {"transformed", c.Transformed}}, Setting: fmt.Sprintf("standardize.channels: {%s: {transform: %s}}", quote(c.Name), c.Transform)})
	} else if math.Abs(c.Skewness) >= 3 && c.Spikes == 0 {
		add(Finding{Kind: "skew", Weight: Know, Text: fmt.Sprintf("is skewed (%.2g), and neither logarithm nor root helps", c.Skewness),
			Numbers: []Number{{"skewness", c.Skewness}}, Setting: fmt.Sprintf("standardize.channels: {%s: {scaling: median-mad}}", quote(c.Name))})
	}
}

// judgeLimits finds many values at an end whose neighbours are rare, as a sensor or a
// converter at its limit leaves them.
func (v *Survey) judgeLimits(c *Channel, add func(Finding)) {
	if c.Different > 0 {
		return
	}
	for _, end := range []struct {
		what           string
		value          float64
		at, next, need int64
	}{
		{"highest", c.Max, c.AtMax, c.nextMax, 10},
		{"lowest", c.Min, c.AtMin, c.nextMin, 10},
	} {
		if end.at < max(end.need, c.Count/200) || end.at < 8*end.next {
			continue
		}
		add(Finding{Kind: "limit", Weight: Worth, affected: end.at,
			Text:    fmt.Sprintf("stays at its %s value, %s, in %s (%s), and hardly comes near it otherwise: a limit, beyond which the true value is not known", end.what, full(end.value), counted(end.at, "row"), percent(end.at, c.Count)),
			Numbers: []Number{{"limit", end.value}, {"rows", float64(end.at)}},
			Setting: "read.missing with " + full(end.value) + ", if no channel has it as a true value"})
	}
}

// judgeSeries looks at the channel as it follows the rows.
func (v *Survey) judgeSeries(c *Channel, add func(Finding)) {
	if c.Type != "number" && c.Type != "whole" {
		return
	}
	if runs, limit := stuck(c); len(runs) > 0 {
		rows := int64(0)
		for _, r := range runs {
			rows += r.Length
		}
		longest := runs[0]
		text := fmt.Sprintf("stands still at %s for %d rows from row %d", full(longest.Value), longest.Length, longest.From)
		if len(runs) > 1 {
			text += fmt.Sprintf("; %s of %d rows or more in all", counted(int64(len(runs)), "such stretch"), runs[len(runs)-1].Length)
			text = strings.Replace(text, "stretchs", "stretches", 1)
		}
		text += fmt.Sprintf(" (from its usual repeats, %d rows would be long)", limit)
		add(Finding{Kind: "stuck", Weight: Worth, Text: text, affected: rows,
			Numbers: []Number{{"rows", float64(longest.Length)}, {"from", float64(longest.From)}, {"value", longest.Value}, {"long", float64(limit)}},
			Setting: "mend those rows in the table, or read.leave_out: [" + quote(c.Name) + "]"})
	}
	if c.Spikes > 0 && c.Spikes <= max(3, c.Count/50) {
		w := c.WorstSpikes[0]
		add(Finding{Kind: "spikes", Weight: Worth, affected: c.Spikes,
			Text:    fmt.Sprintf("has %s away from the rows beside it, the largest %s in row %d (%.0f usual steps; the median is %s)", counted(c.Spikes, "spike"), full(w.Value), w.Row, w.Size, short(c.Median)),
			Numbers: []Number{{"spikes", float64(c.Spikes)}, {"largest", w.Value}, {"row", float64(w.Row)}, {"usual_steps", w.Size}},
			Setting: fmt.Sprintf("standardize.channels: {%s: {scaling: median-mad}} keeps the scale from following them; components still do", quote(c.Name))})
	}
	if math.Abs(c.Trend) > .9 && c.Count >= 30 {
		add(Finding{Kind: "drift", Weight: Worth, affected: c.Count,
			Text:    fmt.Sprintf("drifts with the rows (correlation %+.2f with the number of the row)", c.Trend),
			Numbers: []Number{{"trend", c.Trend}}, Setting: "read.leave_out: [" + quote(c.Name) + "], unless the drift is what you study"})
	}
}

// stuck picks the runs of one value that are longer than the channel's own repeats explain:
// with a share q of repeats among neighbours the longest run in n rows is about
// ln(n(1-q))/ln(1/q) (Erdős & Rényi 1970); four times that and at least ten is long.
func stuck(c *Channel) (runs []Run, limit int64) {
	if len(c.Held) == 0 {
		return nil, 0
	}
	// The longest runs themselves must not make runs look usual, as long as most rows stay.
	same, pairs := c.same, c.pairs
	for _, r := range c.Held {
		if 5*(pairs-r.Length) < 4*c.pairs {
			break
		}
		same -= r.Length - 1
		pairs -= r.Length - 1
	}
	q := math.Max(float64(same), 1) / math.Max(float64(pairs), 2)
	usual := 1.0
	if q < 1 {
		usual = math.Max(1, math.Log(math.Max(float64(c.pairs)*(1-q), 2))/math.Log(1/q))
	}
	limit = max(10, int64(4*usual)+5)
	for _, r := range c.Held {
		if r.Length >= limit {
			runs = append(runs, r)
		}
	}
	return runs, limit
}

// spoken is a transform in a sentence.
func spoken(t pca.Transform) string {
	if t == pca.SquareRoot {
		return "square root"
	}
	return "logarithm"
}
