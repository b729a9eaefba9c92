package survey

import (
	"math"
	"slices"
)

// Code is a number that seems to stand for a missing value.
type Code struct {
	Value float64
	// Counts are by channel, exact over all rows.
	Counts []int64
	Total  int64
}

// coded looks like a number that people choose for a missing value: nines, a round negative
// number, the end of an integer type, or far beyond anything measured (common practice).
func coded(v float64) bool {
	a := math.Abs(v)
	switch a {
	case 32767, 32768, 65535, 2147483647, 2147483648, 4294967295, 8388607, 16777215:
		return true
	}
	if a >= 1e20 {
		return true
	}
	if a != math.Trunc(a) {
		// 99.9, -999.25: nines before the point and at most two places after.
		w := math.Trunc(a)
		return w >= 99 && nines(w) && math.Abs(a*100-math.Round(a*100)) < 1e-6
	}
	return a >= 99 && nines(a) || v < 0 && a >= 100 && math.Mod(a, 100) == 0 || v < 0 && nines(a) && a >= 9
}

// nines tells whether a whole number has only nines.
func nines(a float64) bool {
	for a >= 10 {
		if math.Mod(a, 10) != 9 {
			return false
		}
		a = math.Trunc(a / 10)
	}
	return a == 9
}

// suspicion is how far a repeated extreme stands apart.
type suspicion struct {
	value float64
	sure  bool
}

// suspects finds values of a channel that stand apart from the rest at either end.
func suspects(e *ends, count int64, sorted []float64) []suspicion {
	var out []suspicion
	look := func(list []valueCount, low bool) {
		for k := range min(2, len(list)-1) {
			v := list[k]
			rest := sorted[:placeOf(sorted, v.value, false)]
			if low {
				rest = sorted[placeOf(sorted, v.value, true):]
			}
			if len(rest) < 3 && count > 20 && v.count < count/2 {
				return
			}
			gap := math.Abs(list[k+1].value - v.value)
			spread := quantile(rest, .99) - quantile(rest, .01)
			if len(rest) == 0 {
				spread = 0
			}
			// The next value may be a code as well (-999 and -998): then the gap is small.
			apart := gap > .25*spread && gap > 0
			far := gap > 3*spread
			otherSign := v.value < 0 && list[k+1].value >= 0 && low
			switch {
			case coded(v.value) && apart && far && v.count >= 2,
				coded(v.value) && apart && otherSign && v.count >= 3,
				coded(v.value) && gap > 20*spread && spread > 0,
				far && gap > 10*spread && spread > 0 && v.count >= max(5, count/1000):
				out = append(out, suspicion{v.value, true})
			case coded(v.value) && apart && v.count >= 2:
				out = append(out, suspicion{v.value, false})
			default:
				return // what lies further in does not stand apart either
			}
		}
	}
	// A channel of few values has codes of its own: 0 and 100, say.
	look(e.low, true)
	look(e.high, false)
	return out
}

// placeOf is the place of the first value above v (after), or of the first that is not below.
func placeOf(sorted []float64, v float64, after bool) int {
	i, found := slices.BinarySearch(sorted, v)
	if found && after {
		for i < len(sorted) && sorted[i] == v {
			i++
		}
	}
	return i
}

// codes decides which values stand for missing ones in the whole table, where read.missing
// counts: suspected surely in one channel or less surely in several, and in no channel among
// its ordinary values.
func (f *first) codes() []float64 {
	sure, votes := map[float64]bool{}, map[float64]int{}
	for j := range f.ends {
		if values, all := f.ends[j].values(f.count[j]); all && len(values) <= 2 {
			continue
		}
		for _, s := range suspects(&f.ends[j], f.count[j], f.sample.column(j)) {
			votes[s.value]++
			sure[s.value] = sure[s.value] || s.sure
		}
	}
	var out []float64
	for v, n := range votes {
		if (sure[v] || n >= 2) && !f.ordinary(v) {
			out = append(out, v)
		}
	}
	slices.Sort(out)
	return out
}

// ordinary tells whether some channel has v between its other values, where it is likely
// to mean itself.
func (f *first) ordinary(v float64) bool {
	for j := range f.ends {
		e := &f.ends[j]
		if len(e.low) < 3 || v < e.low[0].value || v > e.high[0].value {
			continue
		}
		below, above := 0, 0
		for _, x := range e.low[:min(3, len(e.low))] {
			if x.value < v {
				below++
			}
		}
		for _, x := range e.high[:min(3, len(e.high))] {
			if x.value > v {
				above++
			}
		}
		// Two codes may stand at one end; three values beyond are no codes.
		if below >= 3 && above >= 3 {
			sorted := f.sample.column(j)
			i := placeOf(sorted, v, false)
			if i < len(sorted) && sorted[i] == v || i > len(sorted)/100 && i < len(sorted)-len(sorted)/100 {
				return true
			}
		}
	}
	return false
}
