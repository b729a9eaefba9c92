package reduce

import (
	"math"

	"axisfold/pca/internal/kernel"
)

// swept is the matrix M swept on a kept set K (Beaton 1964; Goodnight 1979, Am.
// Statistician 33:149): on the swept channels it holds -M_KK⁻¹, between them and the
// others the regression coefficients, and on the others what K leaves, M_D.K. Keeping or
// dropping a channel costs p².
//
// A kept channel whose pivot is below tolerance depends on the others: it waits unswept
// until one of those leaves.
type swept struct {
	a      []float64 // p×p
	kept   []bool
	done   []bool    // swept; a subset of kept
	floor  []float64 // smallest pivot that is divided by, per channel
	count  int       // kept
	logDet float64   // log det M_KK; a waiting channel counts as log of its floor
	row    []float64
}

func newSwept(m []float64, p int, floor []float64) *swept {
	s := &swept{a: make([]float64, p*p), kept: make([]bool, p), done: make([]bool, p), floor: floor, row: make([]float64, p)}
	copy(s.a, m)
	return s
}

func (s *swept) clone() *swept {
	t := newSwept(s.a, len(s.kept), s.floor)
	t.copyFrom(s)
	return t
}

func (s *swept) copyFrom(o *swept) {
	copy(s.a, o.a)
	copy(s.kept, o.kept)
	copy(s.done, o.done)
	s.count, s.logDet = o.count, o.logDet
}

// left is the variance of channel j that the kept set leaves.
func (s *swept) left(j int) float64 { return math.Max(s.a[j*len(s.kept)+j], 0) }

// dependent tells whether channel j has nothing of its own beside the kept set.
func (s *swept) dependent(j int) bool { return !(s.a[j*len(s.kept)+j] > s.floor[j]) }

func (s *swept) keep(channels []int) {
	for _, j := range channels {
		s.kept[j] = true
		s.count++
		if s.dependent(j) {
			s.logDet += math.Log(s.floor[j])
			continue
		}
		s.sweepIn(j)
	}
}

func (s *swept) sweepIn(j int) {
	s.logDet += math.Log(s.a[j*len(s.kept)+j])
	s.pivot(j, 1)
	s.done[j] = true
}

func (s *swept) drop(channels []int) {
	p := len(s.kept)
	freed := false
	for _, j := range channels {
		s.kept[j] = false
		s.count--
		if !s.done[j] {
			s.logDet -= math.Log(s.floor[j])
			continue
		}
		s.pivot(j, -1)
		s.done[j] = false
		s.logDet -= math.Log(math.Max(s.a[j*p+j], s.floor[j]))
		freed = true
	}
	for z := 0; freed && z < p; z++ {
		if s.kept[z] && !s.done[z] && !s.dependent(z) {
			s.logDet -= math.Log(s.floor[z])
			s.sweepIn(z)
		}
	}
}

// pivot sweeps channel k in (sign 1) or out (sign -1).
func (s *swept) pivot(k int, sign float64) {
	p := len(s.kept)
	copy(s.row, s.a[k*p:k*p+p])
	d := s.row[k]
	s.row[k] = 0
	for i := range p {
		if i == k || s.row[i] == 0 {
			continue
		}
		kernel.Axpy(-s.row[i]/d, s.row, s.a[i*p:i*p+p])
	}
	for i := range p {
		v := sign * s.row[i] / d
		s.a[i*p+k], s.a[k*p+i] = v, v
	}
	s.a[k*p+k] = -1 / d
}

// alone is a lower bound on what the other kept channels leave of kept channel j: exact
// where no waiting channel holds a share of j, 0 where one may stand in for it. Results near
// rounding count as 0 too, so that a bound built on them stays a bound.
func (s *swept) alone(j int, m []float64) float64 {
	p := len(s.kept)
	if !s.done[j] {
		return 0
	}
	v := -1 / s.a[j*p+j]
	if !(v > 1e-10*m[j*p+j]) {
		return 0
	}
	for z := range p {
		if s.kept[z] && !s.done[z] {
			share := s.a[z*p+j]
			if share*share*v > s.floor[z]/4 {
				return 0
			}
		}
	}
	return v
}
