package survey

import (
	"math"
	"slices"
)

// Clock is what the time column tells.
type Clock struct {
	Column, OfDay string  // OfDay: the time of day stands in a column of its own
	Numbers       bool    // the column holds numbers of seconds, Scale of them a second
	Scale         float64 `json:",omitempty"`
	First, Last   float64 // seconds since 1970-01-01 UTC, or since a start of their own
	Dated         bool    // First and Last are since 1970
	Interval      float64 // the usual step, seconds
	Count         int64   // moments read
	Unread        int64   // moments that cannot be read
	Repeated      int64   // rows at the moment of the row before
	Backwards     int64   // rows before the row before
	BackwardsAt   int64   // the first such row, from 1
	Uneven        int64   // steps other than the usual one, up to a tenth of it
	Gaps          int64   // steps of more than one and a half intervals
	LargestGap    float64 // seconds
	LargestGapAt  int64   // row after it, from 1
	// Order is "day first" or "month first" for dates that do not say; Ambiguous when no date
	// decides it.
	Order     string `json:",omitempty"`
	Ambiguous bool
}

// clock follows the moments in row order.
type clock struct {
	Clock
	order  dateOrder
	column int // of numbers; -1: of text
	scale  float64
	last   float64
}

func (f *first) newClock(t TimeColumns) *clock {
	c := &clock{Clock: Clock{Column: t.Column, OfDay: t.OfDay, Dated: true}, column: -1, scale: 1, last: math.NaN()}
	if f.monOver && !f.dayOver {
		c.order = monthFirst
	}
	if !f.ordered {
		c.Order = [...]string{"day first", "month first"}[c.order]
		c.Ambiguous = !f.dayOver && !f.monOver
	}
	c.interval(f.steps)
	return c
}

// interval takes the usual step from some of them.
func (c *clock) interval(steps []float64) {
	steps = slices.Clone(steps)
	slices.Sort(steps)
	c.Interval = quantile(above(steps, 0), .5)
}

func (c *clock) add(row int64, t float64, ok bool) {
	if !ok {
		c.Unread++
		return
	}
	c.Count++
	if c.Count == 1 {
		c.First = t
	}
	c.Last = t
	if step := t - c.last; !math.IsNaN(step) {
		switch {
		case step == 0:
			c.Repeated++
		case step < 0:
			c.Backwards++
			if c.BackwardsAt == 0 {
				c.BackwardsAt = row + 1
			}
		case step > 1.5*c.Interval:
			c.Gaps++
			if step > c.LargestGap {
				c.LargestGap, c.LargestGapAt = step, row+1
			}
		}
		if step > 0 && math.Abs(step-c.Interval) > .1*c.Interval {
			c.Uneven++
		}
	}
	c.last = t
}

// numberClock finds a column of numbers that counts seconds since 1970 in row order.
func (f *first) numberClock(names []string) *clock {
	for j, name := range names {
		e := &f.ends[j]
		if f.count[j] < 3 || len(e.low) < 3 {
			continue
		}
		low, _ := unixScale(e.low[0].value)
		scale, epoch := unixScale(e.high[0].value)
		if _, ok := unixScale(e.low[0].value); !ok || !epoch || low != scale {
			continue
		}
		s := f.sample
		var steps []float64
		up := 0
		for i := range s.rows {
			if step := s.data[i*s.width+j] - s.before[i*s.width+j]; !math.IsNaN(step) {
				steps = append(steps, step/scale)
				if step >= 0 {
					up++
				}
			}
		}
		if len(steps) == 0 || float64(up) < .9*float64(len(steps)) {
			continue
		}
		c := &clock{Clock: Clock{Column: name, Numbers: true, Scale: scale, Dated: true}, column: j, scale: scale, last: math.NaN()}
		c.interval(steps)
		return c
	}
	return nil
}
