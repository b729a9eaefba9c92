package survey

import (
	"fmt"
	"math"
)

func (v *Survey) judgeLikeness() {
	for _, l := range v.Likeness {
		b := &v.Channels[l.b]
		leave := "read.leave_out: [" + quote(l.B) + "]"
		switch l.Kind {
		case "copy":
			b.LeaveOut = "the same as " + l.A + " in every row"
			v.add(Finding{Kind: "copy", Channels: []string{l.B, l.A}, Weight: Spoils, affected: v.Rows, Text: "is the same as " + l.A + " in every row", Setting: leave})
		case "affine":
			if b.LeaveOut == "" && v.Channels[l.a].LeaveOut == "" {
				b.LeaveOut = "a copy of " + l.A + " in another unit"
			}
			v.add(Finding{Kind: "affine-copy", Channels: []string{l.B, l.A}, Weight: Spoils, affected: v.Rows, Setting: leave,
				Text:    fmt.Sprintf("is %s + %s × %s in all %s compared: the same channel in another unit", short(l.Offset), short(l.Slope), l.A, counted(l.Rows, "row")),
				Numbers: []Number{{"correlation", l.Correlation}, {"offset", l.Offset}, {"slope", l.Slope}}})
		}
	}
	v.judgeFamilies()
}

// judgeFamilies gathers near copies: channels that are linked by a chain of them are one
// family.
func (v *Survey) judgeFamilies() {
	head := make([]int, len(v.Channels))
	for j := range head {
		head[j] = j
	}
	find := func(j int) int {
		for head[j] != j {
			j = head[j]
		}
		return j
	}
	weakest := map[int]*Likeness{} // by head
	for i := range v.Likeness {
		l := &v.Likeness[i]
		if l.Kind != "near" {
			continue
		}
		a, b := find(l.a), find(l.b)
		first := min(a, b)
		head[a], head[b] = first, first
		for _, old := range []*Likeness{weakest[a], weakest[b], l} {
			if w := weakest[first]; old != nil && (w == nil || math.Abs(old.Correlation) < math.Abs(w.Correlation)) {
				weakest[first] = old
			}
		}
	}
	families := map[int][]string{}
	for j, c := range v.Channels {
		families[find(j)] = append(families[find(j)], c.Name)
	}
	for j := range v.Channels {
		names := families[j]
		if len(names) < 2 || weakest[j] == nil {
			continue
		}
		l := weakest[j]
		f := Finding{Kind: "near-copy", Channels: names, Weight: Worth, affected: l.Rows * int64(len(names)), Setting: "reduce: {}",
			Text:    fmt.Sprintf("%d channels are a family of near copies: each is linked to the others by correlations beyond ±%.4f", len(names), math.Abs(l.Correlation)),
			Numbers: []Number{{"correlation", l.Correlation}, {"channels", float64(len(names))}}}
		if len(names) == 2 {
			f.Channels = []string{l.B, l.A}
			f.Text = fmt.Sprintf("nearly copies %s (correlation %+.5f in %s)", l.A, l.Correlation, counted(l.Rows, "row"))
			f.Numbers = []Number{{"correlation", l.Correlation}, {"offset", l.Offset}, {"slope", l.Slope}}
		}
		v.add(f)
	}
}
