package plots

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

var scree = Picture{Name: "scree", ready: always,
	Caption: "Eigenvalue of every component, those kept dark, with the line the rule compares them with where it has one. Where the first ones dwarf the rest, a second frame looks closer at where the rule cut.",
	check:   checkRoots,
	words: func(m *Material, _ int) (title, subtitle string) {
		k, all := keptOf(m), components(len(m.Decomposition.Values))
		if k == 0 {
			return "None of " + all + " kept", ruled(m)
		}
		return fmt.Sprintf("%d of %s kept: %s of the variance", k, all, percent(m.Decomposition.CumulativeShare(k-1))), ruled(m)
	},
	height: func(m *Material, _ int) vg.Length {
		if closer(m, topRoot(m)) > 0 {
			return 11 * vg.Centimeter
		}
		return 7.5 * vg.Centimeter
	},
	draw: func(m *Material, _ int, c draw.Canvas) {
		n, top := shownRoots(m), topRoot(m)
		key := []entry{{"kept", swatch(glyph(kept, 3.2, draw.BoxGlyph{}))}, {"left out", swatch(glyph(pale, 3.2, draw.BoxGlyph{}))}}
		if len(m.Verdict.Reference) > 0 {
			key = append(key, entry{"what the rule asks for", stroke(line(against, strongLine))})
		}
		x := counted(1, n, c.Max.X-c.Min.X-30)
		whole := axis{title: "eigenvalue of the " + string(m.Decomposition.Matrix) + " matrix", high: top * 1.06, grid: true}
		limit := closer(m, top)
		if limit == 0 {
			bars(rootsFrame(c, n, whole, x, "component", 0, key), m, n, whole.high)
			return
		}
		near := axis{title: "closer: the same eigenvalues up to " + number(limit, 2), high: limit, grid: true}
		upper, lower := split(c, .45)
		room := max(whole.room(), near.room())
		bars(rootsFrame(upper, n, whole, []mark{}, "", room, key), m, n, whole.high)
		bars(rootsFrame(lower, n, near, x, "component", room, nil), m, n, limit)
	}}

// topRoot is the highest number in the picture of roots.
func topRoot(m *Material) float64 {
	top := m.Decomposition.Values[0]
	for _, v := range m.Verdict.Reference[:min(len(m.Verdict.Reference), shownRoots(m))] {
		top = math.Max(top, v)
	}
	return top
}

func checkRoots(m *Material, _ int) error {
	return allFinite("reference", m.Verdict.Reference)
}
