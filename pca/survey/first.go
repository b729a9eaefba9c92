package survey

import (
	"context"
	"math"

	"axisfold/pca/table"
)

// first is what the first pass leaves.
type first struct {
	rows     int64
	count    []int64 // values by channel
	ends     []ends
	whole    []bool // every value is a whole number
	sample   *sample
	steps    []float64 // seconds between consecutive moments, every stride-th of them
	stride   int
	seen     int
	dayOver  bool // the first number of some date is above 12
	monOver  bool // the second number is
	ordered  bool // dates say their order themselves
	zone     bool
	unread   int64 // moments that cannot be read
	lastTime float64
}

// firstPass goes through the rows once.
func firstPass(ctx context.Context, s *Source, threads int) (*first, error) {
	p := len(s.Table.Columns())
	f := &first{count: make([]int64, p), ends: make([]ends, p), whole: make([]bool, p), sample: newSample(p), stride: 1, lastTime: math.NaN()}
	before := make([]float64, p)
	for j := range p {
		f.whole[j], before[j] = true, math.NaN()
	}
	share := newShares(p, threads)
	err := s.Table.Each(ctx, threads, func(_ int, b *table.Block) error {
		if s.Time.Column != "" {
			b.Result = s.stamps(b, dayFirst)
		}
		return nil
	}, func(b *table.Block) error {
		for i := range b.Rows {
			row := b.Data[i*p : i*p+p]
			f.sample.add(b.Row+int64(b.Offset[i]), row, before)
			before = append(before[:0], row...)
		}
		share.each(func(from, to int) {
			for j := from; j < to; j++ {
				f.channel(j, b)
			}
		})
		if stamps, ok := b.Result.([]stamp); ok {
			f.clock(stamps)
		}
		f.rows = b.Row + int64(b.Count)
		return nil
	})
	return f, err
}

// channel takes in the values of channel j of a block.
func (f *first) channel(j int, b *table.Block) {
	e := &f.ends[j]
	whole := f.whole[j]
	count := int64(0)
	for i := j; i < b.Rows*b.Width; i += b.Width {
		v := b.Data[i]
		if math.IsNaN(v) {
			continue
		}
		count++
		if whole && v != math.Trunc(v) {
			whole = false
		}
		if n, m := len(e.low), len(e.high); n == endsKept && m == endsKept && v > e.low[n-1].value && v < e.high[m-1].value {
			continue
		}
		e.add(v)
	}
	f.count[j] += count
	f.whole[j] = whole
}

// mostSteps bounds the steps of the clock that are kept.
const mostSteps = 8192

func (f *first) clock(stamps []stamp) {
	for i := range stamps {
		t := &stamps[i]
		if !t.date && !t.clock {
			f.unread++
			continue
		}
		f.dayOver = f.dayOver || t.first > 12
		f.monOver = f.monOver || t.second > 12
		f.ordered = f.ordered || t.ordered
		f.zone = f.zone || t.zone
		if f.seen%f.stride == 0 && !math.IsNaN(f.lastTime) {
			f.steps = append(f.steps, t.seconds-f.lastTime)
			if len(f.steps) == mostSteps {
				for k := range mostSteps / 2 {
					f.steps[k] = f.steps[2*k]
				}
				f.steps = f.steps[:mostSteps/2]
				f.stride *= 2
			}
		}
		f.lastTime = t.seconds
		f.seen++
	}
}

// stamps reads the moments of a block.
func (s *Source) stamps(b *table.Block, order dateOrder) []stamp {
	out := make([]stamp, b.Rows)
	for i := range b.Rows {
		text := string(b.Time(i))
		if s.Time.OfDay != "" {
			text += " " + string(b.Group(i))
		}
		t, ok := readStamp(text, order)
		if !ok {
			t, ok = readNumberStamp(text)
		}
		if ok {
			out[i] = t
		}
	}
	return out
}
