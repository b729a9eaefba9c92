package survey

import (
	"math"
	"slices"
)

// Run is a stretch of rows.
type Run struct {
	From   int64 // first row, from 1
	Length int64
	Value  float64 // that is held; NaN for a gap
}

// Spike is a value far from both its neighbours.
type Spike struct {
	Row   int64 // from 1
	Value float64
	Size  float64 // distance from the nearer neighbour, in usual steps
}

// mostListed bounds the runs and spikes that are kept of a channel.
const mostListed = 5

// trace follows one channel in row order.
type trace struct {
	middle, spread, step float64 // from the first pass: median, its deviation, usual step between rows
	spikeStep, spikeAway float64 // least distances of a spike; +Inf for none

	count, missing int64
	s1, s2         float64 // of the distances from middle
	st, stt, s1t   float64 // of row numbers, and with the distances
	pairs          int64   // of neighbours that are both there
	pa, pb, pab    float64
	up, down, same int64
	minStep        float64 // among neighbours
	maxStep        float64
	hash           uint64 // of all values in their order
	spikes         int64
	worst          []Spike
	gap, held      Run // the one that goes on
	longestGap     Run
	runs           []Run // the longest that hold a value
	last, last2    float64
	binSum         []float64
	binCount       []int32
}

func (c *trace) add(row int64, v float64, bin int) {
	c.hash = c.hash*0x2545f4914f6cdd1d + mix(math.Float64bits(v+0))
	if math.IsNaN(v) {
		c.missing++
		c.endRun()
		if c.gap.Length == 0 {
			c.gap = Run{From: row + 1, Value: math.NaN()}
		}
		c.gap.Length++
		if c.gap.Length > c.longestGap.Length {
			c.longestGap = c.gap
		}
		c.spike(row, c.last2, c.last, v)
		c.last2, c.last = c.last, v
		return
	}
	c.gap.Length = 0
	d := v - c.middle
	t := float64(row)
	c.count++
	c.s1 += d
	c.s2 += d * d
	c.st += t
	c.stt += t * t
	c.s1t += d * t
	c.binSum[bin] += v
	c.binCount[bin]++
	if last := c.last; !math.IsNaN(last) {
		b := last - c.middle
		c.pairs++
		c.pa += b
		c.pb += d
		c.pab += b * d
		step := v - last
		switch {
		case step > 0:
			c.up++
		case step < 0:
			c.down++
		default:
			c.same++
		}
		c.minStep, c.maxStep = math.Min(c.minStep, step), math.Max(c.maxStep, step)
		c.spike(row, c.last2, last, v)
	}
	if c.held.Length > 0 && c.held.Value == v {
		c.held.Length++
	} else {
		c.endRun()
		c.held = Run{row + 1, 1, v}
	}
	c.last2, c.last = c.last, v
}

// spike judges the value before the last; a missing neighbour says nothing against it.
func (c *trace) spike(row int64, before, v, after float64) {
	if !(math.Abs(v-c.middle) > c.spikeAway) || math.IsInf(c.spikeAway, 0) {
		return
	}
	up, down := v-before, v-after
	switch {
	case math.IsNaN(up) && math.IsNaN(down):
		return
	case math.IsNaN(up):
		up = down
	case math.IsNaN(down):
		down = up
	}
	if up*down < 0 {
		return
	}
	near := math.Min(math.Abs(up), math.Abs(down))
	if near <= c.spikeStep {
		return
	}
	c.spikes++
	c.worst = ranked(c.worst, Spike{row, v, near / c.step}, func(s Spike) float64 { return s.Size })
}

// endRun enters the run that holds a value among the longest.
func (c *trace) endRun() {
	r := c.held
	c.held = Run{}
	if r.Length < 2 {
		return
	}
	c.runs = ranked(c.runs, r, func(r Run) float64 { return float64(r.Length) })
}

// ranked enters x into a list of the mostListed largest, which falls; the earlier one
// stands first on ties.
func ranked[T any](list []T, x T, size func(T) float64) []T {
	at := len(list)
	for at > 0 && size(list[at-1]) < size(x) {
		at--
	}
	if at == mostListed {
		return list
	}
	list = slices.Insert(list, at, x)
	return list[:min(len(list), mostListed)]
}

// mean and deviation of the values, divisor n-1.
func (c *trace) moments() (mean, deviation float64) {
	n := float64(c.count)
	if n == 0 {
		return math.NaN(), math.NaN()
	}
	mean = c.middle + c.s1/n
	if n < 2 {
		return mean, math.NaN()
	}
	return mean, math.Sqrt(math.Max(0, c.s2-c.s1*c.s1/n) / (n - 1))
}

// autocorrelation between neighbouring rows, about the mean of all values.
func (c *trace) autocorrelation() float64 {
	n := float64(c.count)
	v := c.s2/n - c.s1/n*c.s1/n
	if c.pairs < 3 || !(v > 0) {
		return math.NaN()
	}
	m, k := c.s1/n, float64(c.pairs)
	return (c.pab - m*(c.pa+c.pb) + k*m*m) / k / v
}

// trend is the correlation of the values with the number of the row.
func (c *trace) trend() float64 {
	n := float64(c.count)
	a, b := c.s2-c.s1*c.s1/n, c.stt-c.st*c.st/n
	if n < 3 || !(a > 0) || !(b > 0) {
		return math.NaN()
	}
	return (c.s1t - c.s1*c.st/n) / math.Sqrt(a*b)
}
