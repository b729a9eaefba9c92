package report

import (
	"fmt"
	"io"
	"strings"

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
