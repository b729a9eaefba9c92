package survey

import (
	"math"
	"slices"
)

// sampleCells bounds the numbers in a sample of rows.
const sampleCells = 2 << 20

// sample keeps rows whose number has a small hash: all rows while they are few, then an
// ever smaller share. A hash does not beat with anything periodic in the table, and makes
// the choice depend on the rows alone.
type sample struct {
	width, most int
	shift       uint // rows with that many leading zero bits of their hash are kept
	rows        []int64
	data        []float64 // rows×width
	before      []float64 // the rows before them, NaN before the first row of the table
}

func newSample(width int) *sample {
	return &sample{width: width, most: min(max(sampleCells/max(width, 1), 64), 32768)}
}

// mix is the finalizer of SplitMix64 (Steele, Lea & Flood 2014).
func mix(x uint64) uint64 {
	x += 0x9e3779b97f4a7c15
	x = (x ^ x>>30) * 0xbf58476d1ce4e5b9
	x = (x ^ x>>27) * 0x94d049bb133111eb
	return x ^ x>>31
}

func (s *sample) chosen(row int64) bool {
	return s.shift == 0 || mix(uint64(row))>>(64-s.shift) == 0
}

// add offers a row and the row before it (nil for the first).
func (s *sample) add(row int64, values, before []float64) {
	for s.chosen(row) {
		if len(s.rows) == s.most {
			s.thin()
			continue
		}
		s.rows = append(s.rows, row)
		s.data = append(s.data, values...)
		s.before = append(s.before, before...)
		return
	}
}

// thin halves the share of rows that are kept.
func (s *sample) thin() {
	s.shift++
	kept := 0
	for i, row := range s.rows {
		if s.chosen(row) {
			s.rows[kept] = row
			copy(s.data[kept*s.width:(kept+1)*s.width], s.data[i*s.width:])
			copy(s.before[kept*s.width:(kept+1)*s.width], s.before[i*s.width:])
			kept++
		}
	}
	s.rows, s.data, s.before = s.rows[:kept], s.data[:kept*s.width], s.before[:kept*s.width]
}

// mask makes the codes of every channel missing.
func (s *sample) mask(codes []float64) {
	for _, values := range [][]float64{s.data, s.before} {
		for i, v := range values {
			if holds(codes, v) {
				values[i] = math.NaN()
			}
		}
	}
}

// column returns the values of channel j that are there, ascending.
func (s *sample) column(j int) []float64 {
	return s.ascending(func(i int) float64 { return s.data[i*s.width+j] })
}

// steps returns the sizes of the differences between neighbours in channel j, ascending.
func (s *sample) steps(j int) []float64 {
	return s.ascending(func(i int) float64 { return math.Abs(s.data[i*s.width+j] - s.before[i*s.width+j]) })
}

func (s *sample) ascending(value func(i int) float64) []float64 {
	out := make([]float64, 0, len(s.rows))
	for i := range s.rows {
		if v := value(i); !math.IsNaN(v) {
			out = append(out, v)
		}
	}
	slices.Sort(out)
	return out
}

// quantile of ascending values, linear between them; NaN of none.
func quantile(sorted []float64, q float64) float64 {
	n := len(sorted)
	if n == 0 {
		return math.NaN()
	}
	at := q * float64(n-1)
	i := min(int(at), n-1)
	if i+1 >= n {
		return sorted[n-1]
	}
	return sorted[i] + (at-float64(i))*(sorted[i+1]-sorted[i])
}

// deviation is the median distance from the median.
func deviation(sorted []float64) float64 {
	middle := quantile(sorted, .5)
	away := make([]float64, len(sorted))
	for i, v := range sorted {
		away[i] = math.Abs(v - middle)
	}
	slices.Sort(away)
	return quantile(away, .5)
}
