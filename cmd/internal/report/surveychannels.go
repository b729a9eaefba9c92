package report

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strings"
	"unicode/utf8"

	"axisfold/pca/survey"
)

func (p *page) surveyChannelTable(v *survey.Survey) {
	tags, score := surveyTags(v)
	order := make([]int, len(v.Channels))
	for j := range order {
		order[j] = j
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(score[b], score[a]) })
	p.heading("Channels, those with most to say first")
	name := 7
	for _, j := range order[:min(len(order), surveyChannels)] {
		c := &v.Channels[j]
		name = max(name, utf8.RuneCountInString(channelLabel(c)))
	}
	name = min(name, 26)
	p.line(fmt.Sprintf("  %-*s %9s %7s %10s %10s %10s %6s  %s", name, "channel", "values", "missing", "lowest", "median", "highest", "lag 1", "what"))
	for i, j := range order {
		if i == surveyChannels {
			p.line(fmt.Sprintf("  and %d more in --json", len(order)-i))
			break
		}
		c := &v.Channels[j]
		missing, lag := "-", "-"
		if c.Missing > 0 {
			missing = fmt.Sprintf("%.1f %%", 100*float64(c.Missing)/float64(v.Rows))
		}
		if !math.IsNaN(c.Autocorrelation) {
			lag = fmt.Sprintf("%+.2f", c.Autocorrelation)
		}
		head := fmt.Sprintf("  %s %9d %7s %10s %10s %10s %6s  ", padded(middle(channelLabel(c), name), name), c.Count, missing,
			dash(c.Min), dash(c.Median), dash(c.Max), lag)
		p.line(head + fitting(tags[j], summaryWidth-utf8.RuneCountInString(head)))
	}
	p.paragraph("  ", "  ", "lag 1: correlation of neighbouring rows; codes for missing values are left out of all numbers")
}

func channelLabel(c *survey.Channel) string { return withUnit(c.Name, c.Unit) }

func padded(text string, width int) string {
	return text + strings.Repeat(" ", max(0, width-utf8.RuneCountInString(text)))
}

func dash(v float64) string {
	if math.IsNaN(v) {
		return "-"
	}
	return short(v)
}

// fitting joins as many words as have room.
func fitting(words []string, width int) string {
	text := ""
	for _, w := range words {
		if text != "" {
			w = ", " + w
		}
		if utf8.RuneCountInString(text+w) > width {
			break
		}
		text += w
	}
	return text
}

// surveyTags gives every channel a word for each finding about it, and a number that grows
// with their weight.
func surveyTags(v *survey.Survey) (tags [][]string, score []int) {
	tags, score = make([][]string, len(v.Channels)), make([]int, len(v.Channels))
	at := map[string]int{}
	for j, c := range v.Channels {
		at[c.Name] = j
	}
	for i := range v.Findings {
		f := &v.Findings[i]
		names := f.Channels
		switch f.Kind {
		case "break", "few-complete":
			continue
		case "copy", "affine-copy":
			names = names[:1]
		case "near-copy":
			if len(names) == 2 {
				names = names[:1]
			}
		}
		for _, n := range names {
			j, ok := at[n]
			if !ok {
				continue
			}
			word := strings.ReplaceAll(f.Kind, "-", " ")
			switch f.Kind {
			case "gaps":
				word = "" // has a column
			case "copy":
				word = "is " + middle(f.Channels[1], 20)
			case "affine-copy":
				word = "is scaled " + middle(f.Channels[1], 20)
			case "near-copy":
				if len(f.Channels) == 2 {
					word = "nearly " + middle(f.Channels[1], 20)
				}
			}
			if word != "" && !slices.Contains(tags[j], word) {
				tags[j] = append(tags[j], word)
			}
			score[j] += []int{0, 1, 20, 400}[f.Weight]
		}
	}
	return tags, score
}
