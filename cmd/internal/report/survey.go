package report

import (
	"cmp"
	"fmt"
	"io"
	"math"
	"slices"
	"strings"
	"unicode/utf8"

	"axisfold/pca/survey"
)

// Bounds of what a survey shows on a terminal; --json has everything.
const (
	surveyOfAKind  = 3  // findings of one kind told in full
	surveyChannels = 40 // lines of the table of channels
)

// WriteSurvey writes what a look at a table found, the worst first.
func WriteSurvey(v *survey.Survey, out io.Writer) error {
	var p page
	p.surveyDecision(v)
	p.surveyRead(v)
	for _, w := range []struct {
		weight survey.Weight
		title  string
	}{{survey.Spoils, "What would spoil a run"}, {survey.Worth, "Worth a look"}, {survey.Know, "Good to know"}} {
		p.surveyFindings(v, w.weight, w.title)
	}
	p.surveyChannelTable(v)
	_, err := io.WriteString(out, p.String())
	return err
}

func (p *page) surveyDecision(v *survey.Survey) {
	spoils, worth := 0, 0
	for _, f := range v.Findings {
		switch f.Weight {
		case survey.Spoils:
			spoils++
		case survey.Worth:
			worth++
		}
	}
	text := fmt.Sprintf("%s, %s: ", plural(int(v.Rows), "row"), plural(len(v.Channels), "channel"))
	switch {
	case spoils > 0:
		text += fmt.Sprintf("%s would spoil a run whose file does not say so", plural(spoils, "finding"))
	default:
		text += "nothing would spoil a run"
	}
	if worth > 0 {
		text += fmt.Sprintf(", %d to look at", worth)
	}
	p.paragraph("", "", text+".")
	var names []string
	for _, f := range v.Source.Options.Files {
		if strings.ContainsAny(f, " \t'\"") {
			f = "'" + f + "'"
		}
		names = append(names, f)
	}
	if len(names) > 3 {
		names = append(names[:3], "...")
	}
	p.paragraph("", "", "A run file that says it all: axisfold draft "+strings.Join(names, " "))
}

func (p *page) surveyRead(v *survey.Survey) {
	p.heading("What was read")
	text := fmt.Sprintf("%s, %s", plural(int(v.Rows), "row"), plural(len(v.Channels), "channel"))
	if n := len(v.Files); n > 1 {
		text += fmt.Sprintf(", %d files", n)
	}
	text += fmt.Sprintf("; %d rows are complete", v.Complete)
	p.paragraph("  ", "  ", text)
	if c := v.Clock; c != nil && c.Count > 0 {
		p.paragraph("  ", "  ", c.Sentence())
	}
	if v.Rank >= 0 {
		text := fmt.Sprintf("rank %d of %s that vary; %s carry 99 %% of the scaled variance", v.Rank, plural(v.Varying, "channel"), plural(v.Dominated, "component"))
		if int64(v.Compared) < v.Rows {
			text += fmt.Sprintf(" (in %d rows taken at random)", v.Compared)
		}
		p.paragraph("  ", "  ", text)
	}
	if int64(v.Sampled) < v.Rows {
		p.paragraph("  ", "  ", fmt.Sprintf("medians and skewness are those of %d rows taken at random, all else is of all rows", v.Sampled))
	}
	shown := v.Notes[:min(len(v.Notes), summaryRows)]
	for _, n := range shown {
		if n.Column == "" {
			p.paragraph("  ", "    ", n.Text)
		}
	}
}

func (p *page) surveyFindings(v *survey.Survey, weight survey.Weight, title string) {
	byKind := map[string][]*survey.Finding{}
	var kinds []string
	for i := range v.Findings {
		f := &v.Findings[i]
		if f.Weight != weight {
			continue
		}
		if byKind[f.Kind] == nil {
			kinds = append(kinds, f.Kind)
		}
		byKind[f.Kind] = append(byKind[f.Kind], f)
	}
	if len(kinds) == 0 {
		return
	}
	p.heading(title)
	for _, k := range kinds {
		all := byKind[k]
		// One more takes no more room than the line that counts it.
		told := all
		if len(all) > surveyOfAKind+1 {
			told = all[:surveyOfAKind]
		}
		for _, f := range told {
			p.paragraph("  ", "    ", findingText(f))
			if f.Setting != "" {
				p.paragraph("      -> ", "         ", f.Setting)
			}
		}
		if more := all[len(told):]; len(more) > 0 {
			var names []string
			for _, f := range more {
				if len(f.Channels) > 0 {
					names = append(names, middle(f.Channels[0], 24))
				}
			}
			p.paragraph("  ", "    ", fmt.Sprintf("%s of %d more: %s", strings.ReplaceAll(k, "-", " "), len(more), manyNames(names)))
		}
	}
}

// findingText is a finding in a sentence that begins with its channels.
func findingText(f *survey.Finding) string {
	names := f.Channels
	switch f.Kind {
	case "copy", "affine-copy":
		names = names[:1]
	case "near-copy":
		if len(names) == 2 {
			names = names[:1]
		}
	case "break", "few-complete":
		text := f.Text
		if len(names) > 0 {
			text += " (" + manyNames(names) + ")"
		}
		return text
	}
	if len(names) == 0 {
		return f.Text
	}
	if len(names) == 1 {
		return middle(names[0], 40) + " " + f.Text
	}
	return f.Text + " (" + manyNames(names) + ")"
}

func manyNames(names []string) string {
	const most = 8
	short := make([]string, 0, most)
	for _, n := range names {
		short = append(short, middle(n, 24))
	}
	if len(short) > most {
		return strings.Join(short[:most-1], ", ") + fmt.Sprintf(" and %d more", len(short)-most+1)
	}
	return strings.Join(short, ", ")
}

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
