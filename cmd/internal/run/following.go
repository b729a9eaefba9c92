package run

import (
	"math"

	"axisfold/pca/table"
)

// following finds how much every channel resembles itself one row before, while the rows
// go by in blocks: the sum of squared differences between neighbours over twice the
// variance is 1-r₁ (von Neumann 1941), for which no mean need be known. Rows that do not
// stand next to one another in the table make no pair, nor do rows of different groups.
type following struct {
	grouped bool
	squares []float64 // Σ (x_t - x_{t-1})²
	pairs   int64

	last  []float64 // the row before the next block
	at    int64
	group string
}

func newFollowing(channels int, grouped bool) *following {
	return &following{grouped: grouped, squares: make([]float64, channels)}
}

// steps are the differences within one block.
type steps struct {
	squares []float64
	pairs   int64
}

// within looks at one block; it may be called from many goroutines.
func (f *following) within(b *table.Block) steps {
	p := len(f.squares)
	s := steps{squares: make([]float64, p)}
	for i := 1; i < b.Rows; i++ {
		if b.Offset[i] != b.Offset[i-1]+1 || f.grouped && string(b.Group(i)) != string(b.Group(i-1)) {
			continue
		}
		before, now := b.Data[(i-1)*b.Width:][:p], b.Data[i*b.Width:][:p]
		for j, v := range now {
			d := v - before[j]
			s.squares[j] += d * d
		}
		s.pairs++
	}
	return s
}

// add takes in the next block in row order, with the pair across its border.
func (f *following) add(b *table.Block, s steps) {
	if b.Rows == 0 {
		return
	}
	p := len(f.squares)
	if first := b.Row + int64(b.Offset[0]); f.last != nil && first == f.at+1 && (!f.grouped || string(b.Group(0)) == f.group) {
		for j, v := range b.Data[:p] {
			d := v - f.last[j]
			f.squares[j] += d * d
		}
		f.pairs++
	}
	for j, v := range s.squares {
		f.squares[j] += v
	}
	f.pairs += s.pairs
	end := b.Rows - 1
	f.last = append(f.last[:0], b.Data[end*b.Width:][:p]...)
	f.at = b.Row + int64(b.Offset[end])
	if f.grouped {
		f.group = string(b.Group(end))
	}
}

// fewPairs is how many neighbours it takes to say anything.
const fewPairs = 10

// correlation is r₁ of channel j, whose variance is given (divisor n-1); NaN where there
// are too few neighbours or no variance.
func (f *following) correlation(j int, variance float64) float64 {
	if f.pairs < fewPairs || !(variance > 0) {
		return math.NaN()
	}
	return 1 - f.squares[j]/float64(f.pairs)/(2*variance)
}
