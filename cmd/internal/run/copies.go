package run

import (
	"context"
	"encoding/binary"
	"hash/maphash"
	"math"
	"slices"
)

// manyCopies is the share of rows above which copies are worth a warning: with few coarse
// channels some rows agree by chance.
const manyCopies = 0.01

// copies warns of rows that are copies of earlier ones: what is held out has then been
// seen. A table too large to hold is not looked at.
func (w *work) copies(context.Context) error {
	held := w.reading.source.held
	if held == nil || w.plan == nil {
		return nil
	}
	if n := copiedRows(held.Matrix(), w.roles.width()); float64(n) >= manyCopies*float64(held.Len()) && n > 0 {
		w.warn("copied-rows", "%d of %d rows are exact copies of earlier ones: where a copy is held out and its original is not, errors on held-out rows are too small",
			n, held.Len())
	}
	return nil
}

// copiedRows counts rows of x, of width numbers each, that equal an earlier one.
func copiedRows(x []float64, width int) int {
	seed := maphash.MakeSeed()
	seen := make(map[uint64][]int) // rows by hash, each different from the others
	line := make([]byte, 8*width)
	copies := 0
	for i := 0; i < len(x); i += width {
		row := x[i : i+width]
		for j, v := range row {
			binary.LittleEndian.PutUint64(line[8*j:], math.Float64bits(v+0)) // +0: -0 is 0
		}
		h := maphash.Bytes(seed, line)
		if slices.ContainsFunc(seen[h], func(at int) bool { return slices.Equal(x[at:at+width], row) }) {
			copies++
			continue
		}
		seen[h] = append(seen[h], i)
	}
	return copies
}
