package symeig

import (
	"math"
	"slices"
)

// rootFree overwrites d with the eigenvalues, in no order, of the tridiagonal matrix with
// diagonal d and off-diagonal e, whose norm is near 1, and says whether it converged. e
// holds squares afterwards.
//
// It is the root-free QL iteration of Pal, Walker and Kahan with the shift of Wilkinson
// (Parlett 1980, The Symmetric Eigenvalue Problem, sections 8-14 and 8-15). An iteration is
// one long chain of dependent operations; see sweep for how it is shortened.
func rootFree(d, e []float64) bool {
	p := len(d)
	for i, v := range e[:max(p-1, 0)] {
		e[i] = v * v // below the range of numbers: zero, which is far below rounding
	}
	left := 30 * p // iterations, of which one or two are used for a value
	for lo := 0; lo < p; {
		hi := splitAfter(d, e, lo, p-1)
		block, squares := d[lo:hi+1], e[lo:hi]
		// The iteration works best from large numbers to small ones; the eigenvalues do not
		// mind the order.
		if math.Abs(block[len(block)-1]) < math.Abs(block[0]) {
			slices.Reverse(block)
			slices.Reverse(squares)
		}
		for l := 0; l < len(block); {
			m := splitAfter(block, squares, l, len(block)-1)
			switch {
			case m == l:
				l++
			case m == l+1:
				block[l], block[m] = pair(block[l], math.Sqrt(squares[l]), block[m])
				squares[l] = 0
				l += 2
			case left == 0:
				return false
			default:
				left--
				sweep(block[l:m+1], squares[l:m])
			}
		}
		lo = hi + 1
	}
	return true
}

// splitAfter returns the first place from l on after which the matrix falls apart, at most
// hi, and makes it do so.
func splitAfter(d, e []float64, l, hi int) int {
	for m := l; m < hi; m++ {
		if e[m] <= epsilon*epsilon*math.Abs(d[m]*d[m+1]) {
			e[m] = 0
			return m
		}
	}
	return hi
}

// pair returns the eigenvalues of the matrix (a b; b c), the one of larger magnitude first.
func pair(a, b, c float64) (float64, float64) {
	sum, root := a+c, math.Hypot(a-c, 2*b)
	if sum == 0 {
		return root / 2, -root / 2
	}
	first := (sum + math.Copysign(root, sum)) / 2
	large, small := a, c
	if math.Abs(c) > math.Abs(a) {
		large, small = c, a
	}
	return first, large/first*small - b/first*b
}

// sweep is one QL iteration on a matrix that does not fall apart; e holds squares.
//
// With c, s the squared cosine and sine, the recurrence is
//
//	r = π + e_i, c = π/r, s = e_i/r, γ' = c·(d_i-σ) - s·γ, π' = γ'²/c.
//
// Two divisions follow one another there. With g = π·(d_i-σ) - e_i·γ the same numbers are
// γ' = g/r and π' = g²/(r·π), whose divisions overlap; where that could leave the range of
// numbers the recurrence itself is used.
func sweep(d, e []float64) {
	last := len(d) - 1
	root := math.Sqrt(e[0])
	shift := (d[1] - d[0]) / (2 * root)
	shift = d[0] - root/(shift+math.Copysign(math.Hypot(shift, 1), shift))
	gamma := d[last] - shift
	pi := gamma * gamma
	s, oldC := 0.0, 1.0
	for i := last - 1; i >= 0; i-- {
		square, alpha := e[i], d[i]
		r := pi + square
		if i < last-1 {
			e[i+1] = s * r
		}
		old := gamma
		if pi > 0x1p-200 {
			g := pi*(alpha-shift) - square*old
			inverse := 1 / r
			oldC = pi * inverse
			s = square * inverse
			gamma = g * inverse
			pi = g * g / (r * pi)
		} else {
			c := pi / r
			s = square / r
			gamma = c*(alpha-shift) - s*old
			if c != 0 {
				pi = gamma * gamma / c
			} else {
				pi = oldC * square
			}
			oldC = c
		}
		d[i+1] = old + (alpha - gamma)
	}
	e[0] = s * pi
	d[0] = shift + gamma
}
