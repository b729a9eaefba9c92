package run

import (
	"math"

	"axisfold/pca/table"
)

// lag finds the autocorrelation at lag one of series given row by row, about a mean of
// zero. Rows that do not follow one another in the table make no pair, nor do rows of
// different groups.
type lag struct {
	last     int64 // row of the values in before
	group    string
	before   []float64
	products []float64 // Σ v_t·v_{t-1}
	squares  []float64 // Σ v_t²
	pairs    int64
	rows     int64
}

func newLag(series int) *lag {
	return &lag{last: -1, before: make([]float64, series), products: make([]float64, series), squares: make([]float64, series)}
}

// add takes the values of row i of the block, and tells whether it follows the row before.
func (l *lag) add(b *table.Block, i int, grouped bool, values []float64) bool {
	row := b.Row + int64(b.Offset[i])
	follows := l.rows > 0 && row == l.last+1
	if grouped {
		if group := b.Group(i); string(group) != l.group {
			follows = false
			l.group = string(group)
		}
	}
	for s, v := range values {
		if follows {
			l.products[s] += v * l.before[s]
		}
		l.squares[s] += v * v
		l.before[s] = v
	}
	if follows {
		l.pairs++
	}
	l.rows++
	l.last = row
	return follows
}

// correlation is r₁ of a series, NaN where pairs are too few or the series is zero.
func (l *lag) correlation(s int) float64 {
	if l.pairs < 10 || l.squares[s] == 0 {
		return math.NaN()
	}
	return l.products[s] / float64(l.pairs) / (l.squares[s] / float64(l.rows))
}

// notable tells whether r₁ stands out: beyond three standard errors of independent rows,
// 1/√pairs, and large enough to matter.
func (l *lag) notable(s int) bool {
	r := l.correlation(s)
	return !math.IsNaN(r) && r > .2 && r > 3/math.Sqrt(float64(l.pairs))
}

// effective is the number of independent rows that carry as much about a correlation
// between two such series: n·(1-r²)/(1+r²) (Bartlett 1946).
func (l *lag) effective(s int) float64 {
	r := math.Min(l.correlation(s), .9999)
	return float64(l.rows) * (1 - r*r) / (1 + r*r)
}
