package plots

import (
	"cmp"
	"math"
	"slices"

	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
)

// What pictures with one row per channel share.

// mostRows is how many channels they show; of more, those with the largest numbers.
const mostRows = 120

// longestName is what the column of names takes at most.
const longestName = 4.4 * vg.Centimeter

// rowHeight is closer for many rows, never below what the names need.
func rowHeight(p int) vg.Length {
	return vg.Length(math.Max(8.8, math.Min(14, 900/float64(p))))
}

func fileOrder(p int) []int {
	out := make([]int, p)
	for j := range out {
		out[j] = j
	}
	return out
}

// channelOrder is the order in which channels are listed.
func channelOrder(m *Material) []int {
	if len(m.SimilarOrder) > 0 {
		return m.SimilarOrder
	}
	return fileOrder(len(m.Decomposition.Channels))
}

// largest keeps the most entries of order whose size is largest, in their order.
func largest(order []int, most int, size func(int) float64) []int {
	if len(order) <= most {
		return order
	}
	bySize := slices.Clone(order)
	slices.SortStableFunc(bySize, func(a, b int) int { return cmp.Compare(size(b), size(a)) })
	chosen := map[int]bool{}
	for _, j := range bySize[:most] {
		chosen[j] = true
	}
	var out []int
	for _, j := range order {
		if chosen[j] {
			out = append(out, j)
		}
	}
	return out
}

// nameMarks labels the rows of an axis from 0 with names, shortened to the column.
func nameMarks(names []string) []mark {
	style := textStyle(smallSize, ink, text.XRight, text.YCenter)
	out := make([]mark, len(names))
	for i, n := range names {
		out[i] = mark{at: float64(i), label: shorten(named(n), longestName, style)}
	}
	return out
}

// fifths draws a quiet line below every fifth row, to lead the eye across.
func fifths(f *frame, rows int, right vg.Length) {
	for i := 5; i < rows; i += 5 {
		y := f.y(float64(i) - .5)
		f.c.StrokeLine2(line(grid, hairline), f.left, y, right, y)
	}
}
