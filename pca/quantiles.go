package pca

import (
	"math"
	"slices"
)

// quantiles keeps enough of a channel's values to answer for its median and its median
// absolute deviation, and merges. Up to capacity values it keeps all of them. Beyond
// that it keeps levels: an item of level i stands for 2^i values; a full level is sorted
// and every other item moves up, odd and even places in turn so that the errors cancel
// (the compactors of Manku, Rajagopalan & Lindsay 1998, without randomness, so the same
// rows give the same bits). The error in rank is at most levels·n/capacity.
type quantiles struct {
	capacity int
	levels   [][]float64
	odd      []bool
}

func newQuantiles(capacity int) *quantiles {
	return &quantiles{capacity: max(capacity, 2), levels: make([][]float64, 1), odd: make([]bool, 1)}
}

func (q *quantiles) add(v float64) {
	q.levels[0] = append(q.levels[0], v)
	if len(q.levels[0]) > q.capacity {
		q.compact(0)
	}
}

func (q *quantiles) merge(o *quantiles) {
	for i, level := range o.levels {
		for len(q.levels) <= i {
			q.levels = append(q.levels, nil)
			q.odd = append(q.odd, false)
		}
		q.levels[i] = append(q.levels[i], level...)
	}
	for i := 0; i < len(q.levels); i++ {
		if len(q.levels[i]) > q.capacity {
			q.compact(i)
		}
	}
}

// compact moves half of level i up; an item left over by an odd count stays.
func (q *quantiles) compact(i int) {
	if len(q.levels) == i+1 {
		q.levels = append(q.levels, nil)
		q.odd = append(q.odd, false)
	}
	level := q.levels[i]
	slices.Sort(level)
	even := len(level) &^ 1
	start := 0
	if q.odd[i] {
		start = 1
	}
	q.odd[i] = !q.odd[i]
	for k := start; k < even; k += 2 {
		q.levels[i+1] = append(q.levels[i+1], level[k])
	}
	q.levels[i] = append(level[:0], level[even:]...)
	if len(q.levels[i+1]) > q.capacity {
		q.compact(i + 1)
	}
}

// rankError is the largest error in rank as a share of the values; 0 while all are kept.
func (q *quantiles) rankError() float64 {
	return float64(len(q.levels)-1) / float64(q.capacity)
}

// median returns the weighted median of f(value): the mean of the two middle values
// when the count is even.
func (q *quantiles) median(f func(float64) float64) float64 {
	type item struct {
		value  float64
		weight int
	}
	var items []item
	total := 0
	for i, level := range q.levels {
		for _, v := range level {
			items = append(items, item{f(v), 1 << i})
			total += 1 << i
		}
	}
	if total == 0 {
		return math.NaN()
	}
	slices.SortFunc(items, func(a, b item) int {
		switch {
		case a.value < b.value:
			return -1
		case a.value > b.value:
			return 1
		}
		return 0
	})
	at := func(rank int) float64 {
		for _, it := range items {
			if rank < it.weight {
				return it.value
			}
			rank -= it.weight
		}
		return items[len(items)-1].value
	}
	lower, upper := at((total-1)/2), at(total/2)
	return lower + (upper-lower)/2
}

// Median returns the median of channel j, NaN unless the Builder kept ranks.
func (s *Summary) Median(j int) float64 {
	if s.values == nil {
		return math.NaN()
	}
	return s.values[j].median(func(v float64) float64 { return v })
}

// MedianDeviation returns the median of |x - median| of channel j, NaN unless the
// Builder kept ranks.
func (s *Summary) MedianDeviation(j int) float64 {
	if s.values == nil {
		return math.NaN()
	}
	center := s.Median(j)
	return s.values[j].median(func(v float64) float64 { return math.Abs(v - center) })
}

// RankError is the largest error in rank of the medians, as a share of the rows; 0 when exact.
func (s *Summary) RankError() float64 {
	worst := 0.0
	for _, q := range s.values {
		worst = math.Max(worst, q.rankError())
	}
	return worst
}
