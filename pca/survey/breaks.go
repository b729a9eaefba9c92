package survey

import (
	"cmp"
	"math"
	"slices"
)

// Break is a place where many channels change their level at once.
type Break struct {
	Row      int64 // the first of the new stretch, from 1, to within Within rows
	Within   int64
	Channels []string // that change, the strongest first
	sizes    []float64
}

const (
	leastBins   = 24  // that a search for breaks needs
	breakSize   = 4.0 // jump in standard deviations of the means within the stretches beside it
	mostBreaks  = 5
	breakVoters = .25 // share of channels that must change
)

// breaks finds places where at least a quarter of the channels, and two of them, jump: the
// means of the stretches before and after differ by four times their own spread, and most
// of the difference lies between two neighbours.
func (r *second) breaks(names []string, skip []bool) []Break {
	if r.bins < leastBins {
		return nil
	}
	w := max(4, min(16, r.bins/8))
	at := make([]Break, r.bins)
	usable := 0
	for j := range r.traces {
		if skip[j] {
			continue
		}
		usable++
		for _, b := range r.jumps(j, w) {
			at[b.bin].Channels = append(at[b.bin].Channels, names[j])
			at[b.bin].sizes = append(at[b.bin].sizes, b.size)
		}
	}
	need := max(2, int(math.Ceil(breakVoters*float64(usable))))
	var out []Break
	for b := 1; b < r.bins; b++ {
		// Channels need not agree to the last stretch of rows.
		merged := at[b]
		if b+1 < r.bins {
			merged.Channels = append(slices.Clone(merged.Channels), at[b+1].Channels...)
			merged.sizes = append(slices.Clone(merged.sizes), at[b+1].sizes...)
		}
		if len(merged.Channels) < need || len(at[b].Channels) == 0 {
			continue
		}
		merged.Row, merged.Within = int64(b)*r.perBin+1, r.perBin
		order := make([]int, len(merged.sizes))
		for i := range order {
			order[i] = i
		}
		slices.SortStableFunc(order, func(x, y int) int { return cmp.Compare(merged.sizes[y], merged.sizes[x]) })
		sorted := make([]string, len(order))
		for i, k := range order {
			sorted[i] = merged.Channels[k]
		}
		merged.Channels = sorted
		out = append(out, merged)
		b++ // the next was counted with this one
	}
	slices.SortStableFunc(out, func(a, b Break) int { return len(b.Channels) - len(a.Channels) })
	out = out[:min(len(out), mostBreaks)]
	slices.SortFunc(out, func(a, b Break) int { return int(a.Row - b.Row) })
	return out
}

type jump struct {
	bin  int
	size float64
}

// jumps of channel j between windows of w bins; of jumps within a window the largest.
func (r *second) jumps(j, w int) []jump {
	c := &r.traces[j]
	means := make([]float64, r.bins)
	for b := range means {
		means[b] = c.binSum[b] / float64(c.binCount[b]) // NaN without values
	}
	var out []jump
	for b := w; b+w <= r.bins; b++ {
		m1, v1, ok1 := window(means[b-w : b])
		m2, v2, ok2 := window(means[b : b+w])
		if !ok1 || !ok2 {
			continue
		}
		spread := math.Sqrt((v1 + v2) / 2)
		// Means of few values of a constant stretch have no spread of their own.
		spread = math.Max(spread, 1e-3*c.spread)
		size := math.Abs(m2-m1) / spread
		abrupt := math.Abs(means[b]-means[b-1]) > .5*math.Abs(m2-m1)
		if !(size > breakSize) || !abrupt {
			continue
		}
		if n := len(out); n > 0 && b-out[n-1].bin < w {
			if size > out[n-1].size {
				out[n-1] = jump{b, size}
			}
			continue
		}
		out = append(out, jump{b, size})
	}
	return out
}

func window(x []float64) (mean, variance float64, ok bool) {
	mean = average(x)
	for _, v := range x {
		variance += (v - mean) * (v - mean)
	}
	variance /= float64(len(x) - 1)
	return mean, variance, !math.IsNaN(variance)
}
