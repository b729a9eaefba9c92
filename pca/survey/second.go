package survey

import (
	"context"
	"math"

	"axisfold/pca/table"
)

// mostBins bounds the stretches of rows of which the picture and the search for breaks know
// the means.
const mostBins = 480

// second is what the second pass leaves.
type second struct {
	traces   []trace
	bins     int
	perBin   int64
	clock    *clock
	codes    []Code
	complete int64 // rows without a gap
	proposed int64 // rows without a gap once the channels of the proposal are left out
	copies   copies
}

// secondPass goes through the rows again, codes missing.
func secondPass(ctx context.Context, s *Source, f *first, codes []float64, out []bool, ticking *clock, threads int) (*second, error) {
	p := len(f.count)
	r := &second{traces: make([]trace, p), clock: ticking, copies: newCopies()}
	r.bins = int(min(mostBins, max(1, f.rows)))
	if p > 4096 {
		r.bins = min(r.bins, max(32, (2<<20)/p))
	}
	r.perBin = (f.rows + int64(r.bins) - 1) / int64(r.bins)
	r.bins = int((f.rows + r.perBin - 1) / r.perBin)
	for _, c := range codes {
		r.codes = append(r.codes, Code{Value: c, Counts: make([]int64, p)})
	}
	share := newShares(p, threads)
	share.each(func(from, to int) {
		for j := from; j < to; j++ {
			r.traces[j] = f.newTrace(j, r.bins)
		}
	})
	type result struct {
		hashes []uint64
		stamps []stamp
		codes  []int32 // codes×p
	}
	err := s.Table.Each(ctx, threads, func(_ int, b *table.Block) error {
		out := &result{hashes: make([]uint64, b.Rows), codes: make([]int32, len(codes)*p)}
		if s.Time.Column != "" {
			out.stamps = s.stamps(b, ticking.order)
		}
		b.Result = out
		r.prepare(b, codes, out.codes, out.hashes)
		return nil
	}, func(b *table.Block) error {
		res := b.Result.(*result)
		for k := range codes {
			for j, n := range res.codes[k*p : k*p+p] {
				r.codes[k].Counts[j] += int64(n)
				r.codes[k].Total += int64(n)
			}
		}
		for i := range b.Rows {
			r.copies.add(res.hashes[i])
			full, kept := true, true
			for j, v := range b.Data[i*p : i*p+p] {
				if math.IsNaN(v) {
					full = false
					kept = kept && out[j]
				}
			}
			if full {
				r.complete++
			}
			if kept {
				r.proposed++
			}
		}
		share.each(func(from, to int) {
			for j := from; j < to; j++ {
				c := &r.traces[j]
				for i := range b.Rows {
					row := b.Row + int64(b.Offset[i])
					c.add(row, b.Data[i*p+j], int(row/r.perBin))
				}
			}
		})
		if ticking != nil {
			for i := range b.Rows {
				row := b.Row + int64(b.Offset[i])
				if ticking.column >= 0 {
					v := b.Data[i*p+ticking.column]
					ticking.add(row, v/ticking.scale, !math.IsNaN(v))
					continue
				}
				t := res.stamps[i]
				ticking.add(row, t.seconds, t.date || t.clock)
			}
		}
		return nil
	})
	for j := range r.traces {
		r.traces[j].endRun()
	}
	return r, err
}

// prepare makes codes missing, counts them, and hashes the rows.
func (r *second) prepare(b *table.Block, codes []float64, counts []int32, hashes []uint64) {
	p := b.Width
	for i := range b.Rows {
		row := b.Data[i*p : i*p+p]
		h := uint64(0)
		for j, v := range row {
			for k, c := range codes {
				if v == c {
					counts[k*p+j]++
					row[j], v = math.NaN(), math.NaN()
				}
			}
			h = h*0x2545f4914f6cdd1d + mix(math.Float64bits(v+0))
		}
		hashes[i] = mix(h)
	}
}

// Least distances of a spike: from both neighbours in usual steps, and from the median in
// robust standard deviations. Normal values reach neither in a million rows.
const (
	spikeSteps  = 12
	spikeSpread = 6
	robust      = 1.4826 // median deviation to standard deviation of a normal distribution
)

func (f *first) newTrace(j, bins int) trace {
	c := trace{last: math.NaN(), last2: math.NaN(), minStep: math.Inf(1), maxStep: math.Inf(-1),
		binSum: make([]float64, bins), binCount: make([]int32, bins)}
	values, steps := f.sample.column(j), f.sample.steps(j)
	c.middle = quantile(values, .5)
	c.spread = robust * deviation(values)
	if math.IsNaN(c.middle) {
		c.middle = 0
	}
	c.step = robust * quantile(steps, .5)
	if !(c.step > 0) {
		// Mostly repeated: the usual step is that of the rows where anything happens.
		c.step = robust * quantile(above(steps, 0), .5)
	}
	c.spikeStep, c.spikeAway = spikeSteps*c.step, spikeSpread*c.spread
	if !(c.spikeStep > 0) || !(c.spikeAway > 0) {
		c.spikeAway = math.Inf(1)
	}
	return c
}

// above returns the part of ascending values above v.
func above(sorted []float64, v float64) []float64 { return sorted[placeOf(sorted, v, true):] }

// copies counts rows that equal an earlier one, among the rows with a small hash: all rows
// while they are few.
type copies struct {
	shift uint
	seen  map[uint64]uint32
}

const mostHashes = 1 << 17

func newCopies() copies { return copies{seen: map[uint64]uint32{}} }

func (c *copies) add(h uint64) {
	if c.shift > 0 && h>>(64-c.shift) != 0 {
		return
	}
	c.seen[h]++
	for len(c.seen) > mostHashes {
		c.shift++
		for h := range c.seen {
			if h>>(64-c.shift) != 0 {
				delete(c.seen, h)
			}
		}
	}
}

// count is the number of rows that equal an earlier one, an estimate unless exact.
func (c *copies) count() (n int64, exact bool) {
	for _, k := range c.seen {
		n += int64(k - 1)
	}
	return n << c.shift, c.shift == 0
}
