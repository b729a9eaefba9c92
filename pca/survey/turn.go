package survey

import (
	"context"
	"math"
	"slices"

	"axisfold/pca/table"
)

// read goes through the rows once, learning from texts among numbers on the way.
func (s *Source) read(ctx context.Context, threads int) (*first, error) {
	f, err := firstPass(ctx, s, threads)
	for err != nil {
		if !s.learn(ctx, err) {
			return nil, err
		}
		f, err = firstPass(ctx, s, threads)
	}
	return f, nil
}

const (
	// leastTurned lines and cells in each are needed to tell a table that is stored transposed.
	leastTurned = 5
	// alike is how much less the numbers along a line must differ than those down a column.
	alike = .1
)

// transposed tells a table stored with channels in rows: it has more than twice as many
// columns as rows, and the numbers along a line are far more alike than those down a column,
// as the values of one channel are.
func (f *first) transposed() bool {
	s := f.sample
	n := len(s.rows)
	if f.rows != int64(n) || n < leastTurned || s.width < 2*n {
		return false
	}
	var along, down []float64
	line := make([]float64, 0, s.width)
	for i := range n {
		line = append(line[:0], s.data[i*s.width:(i+1)*s.width]...)
		line = slices.DeleteFunc(line, math.IsNaN)
		slices.Sort(line)
		along = append(along, deviation(line))
	}
	for j := range s.width {
		down = append(down, deviation(s.column(j)))
	}
	slices.Sort(along)
	slices.Sort(down)
	return quantile(along, .5) < alike*quantile(down, .5)
}

// turn opens the table as one stored transposed; lines that begin with a text of their own
// are named by it. It tells whether that worked.
func (s *Source) turn(ctx context.Context) bool {
	if s.given.Orientation || s.Options.ChannelsInRows || s.given.Time {
		return false
	}
	o := s.Options
	o.ChannelsInRows, o.Time, o.Groups = true, "", ""
	if !s.given.Header {
		o.NoHeader = true
		for _, t := range s.Texts {
			if t.Position == 1 && len(t.Words) == t.Filled {
				o.NoHeader = false
			}
		}
	}
	t, err := table.Open(ctx, o)
	if err != nil {
		return false
	}
	s.Options, s.Table, s.Texts, s.Time, s.Turned = o, t, t.Texts(), TimeColumns{}, true
	return true
}
