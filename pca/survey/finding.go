package survey

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
)

// Weight says how much a finding matters.
type Weight int

const (
	Know   Weight = iota + 1 // good to know
	Worth                    // look at it: a result may rest on it
	Spoils                   // it spoils results unless the run file says something
)

func (w Weight) String() string { return [...]string{"", "know", "look", "spoils"}[w] }

// Finding is something to know about a table.
type Finding struct {
	Kind     string
	Channels []string // empty: the table
	Weight   Weight
	Text     string // a plain sentence, lower case, no full stop
	Numbers  []Number
	Setting  string // what to write in the run file; empty where nothing helps
	affected int64
}

// Number is a number of a finding with its name.
type Number struct {
	Name  string
	Value float64
}

func (v *Survey) add(f Finding) { v.Findings = append(v.Findings, f) }

// judge turns what was found into findings.
func (v *Survey) judge() {
	v.judgeReading()
	v.judgeCodes()
	for j := range v.Channels {
		v.judgeChannel(&v.Channels[j])
	}
	v.judgeLikeness()
	v.judgeRows()
	v.judgeClock()
	slices.SortStableFunc(v.Findings, func(a, b Finding) int {
		return cmp.Or(cmp.Compare(b.Weight, a.Weight), cmp.Compare(b.affected, a.affected))
	})
}

// Leave lists the channels to leave out and why, in the order of the table.
func (v *Survey) Leave() []*Channel {
	var out []*Channel
	for j := range v.Channels {
		if v.Channels[j].LeaveOut != "" {
			out = append(out, &v.Channels[j])
		}
	}
	return out
}

// short writes a number for a sentence.
func short(x float64) string { return strconv.FormatFloat(x, 'g', 5, 64) }

// full writes a number as a table would.
func full(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }

func percent(n, of int64) string {
	if of == 0 {
		return "0 %"
	}
	p := 100 * float64(n) / float64(of)
	switch {
	case p > 0 && p < .1:
		return "under 0.1 %"
	case p < 10:
		return strconv.FormatFloat(math.Round(p*10)/10, 'f', -1, 64) + " %"
	}
	return strconv.FormatFloat(math.Round(p), 'f', 0, 64) + " %"
}

// listed joins names, the first few of many.
func listed(names []string) string {
	if len(names) > 6 {
		return strings.Join(names[:5], ", ") + fmt.Sprintf(" and %d more", len(names)-5)
	}
	return strings.Join(names, ", ")
}

func counted(n int64, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return strconv.FormatInt(n, 10) + " " + what + "s"
}

// Missing lists the cells that mean missing: those asked for, the texts and the codes found.
func (v *Survey) Missing() []string {
	out := slices.Clone(v.Source.Options.Missing)
	for _, c := range v.Codes {
		out = append(out, full(c.Value))
	}
	return out
}

// quote writes a name as it may stand in a list of a run file.
func quote(name string) string {
	plain := name != "" && !strings.ContainsAny(name, ",:[]{}#&*!|>'\"%@`\\?") && strings.TrimSpace(name) == name
	if _, err := strconv.ParseFloat(name, 64); plain && err != nil {
		return name
	}
	return strconv.Quote(name)
}

func quoteAll(names []string) []string {
	var out []string
	for _, n := range names {
		out = append(out, quote(n))
	}
	return out
}
