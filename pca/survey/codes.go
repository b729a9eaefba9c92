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

// farthestCodes is how many different codes may stand at one end of a channel.
const farthestCodes = 3

// suspects finds values of a channel that stand apart from the rest at either end.
func suspects(e *ends, count int64, sorted []float64) []suspicion {
	var out []suspicion
	look := func(list []valueCount, low bool) {
		// Several codes may stand side by side (-999 and -998): what counts is the gap after
		// the last of them.
		for k := range min(farthestCodes, len(list)-1) {
			if k > 0 && !coded(list[0].value) {
				return
			}
			inner := list[k+1].value
			gap := math.Abs(inner - list[k].value)
			rest, n := ordinaryValues(sorted, inner, low)
			if rest < 0 || gap <= .25*rest || gap == 0 {
				continue
			}
			for _, v := range list[:k+1] {
				looks, otherSign := coded(v.value), low && v.value < 0 && inner >= 0
				switch {
				case looks && gap > 3*rest && v.count >= 2,
					looks && otherSign && v.count >= 3,
					looks && gap > 20*rest && rest > 0,
					!looks && gap > 10*rest && rest > 0 && n > 3 && v.count >= max(5, count/1000):
					out = append(out, suspicion{v.value, true})
				case looks && v.count >= 2:
					out = append(out, suspicion{v.value, false})
				}
			}
			return
		}
	}
	look(e.low, true)
	look(e.high, false)
	return out
}

// ordinaryValues is the spread of the values from inner on, those that look like codes left
// out, and how many there are; -1 where too few are left to tell.
func ordinaryValues(sorted []float64, inner float64, low bool) (spread float64, n int) {
	var rest []float64
	for _, v := range sorted {
		if (low && v >= inner || !low && v <= inner) && !coded(v) {
			rest = append(rest, v)
		}
	}
	if len(rest) < 3 {
		return -1, len(rest)
	}
	return quantile(rest, .99) - quantile(rest, .01), len(rest)
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
