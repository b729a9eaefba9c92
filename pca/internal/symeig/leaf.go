package symeig

import (
	"math"

	"axisfold/pca/internal/kernel"
)

// negligible is far below rounding beside the norm, which is near 1; its square is normal.
const negligible = 0x1p-450

// leaf solves rows and columns lo..hi-1 by the implicit QL iteration (Dubrulle, Martin and
// Wilkinson 1968, Numerische Mathematik 12, 377-383), turning rows of vectors, and says
// whether it converged.
func (c *conquest) leaf(lo, hi int) bool {
	n := hi - lo
	d, e := c.d[lo:hi], c.e[lo:hi]
	row := func(i int) []float64 { return c.rows[(lo+i)*c.p+lo : (lo+i)*c.p+hi] }
	for i := range n {
		row(i)[i] = 1
	}
	left := 30 * n // iterations, of which one or two are used for a value
	for l := 0; l < n; {
		m := l
		for m < n-1 && math.Abs(e[m]) > math.Max(epsilon*(math.Abs(d[m])+math.Abs(d[m+1])), negligible) {
			m++
		}
		if m < n-1 {
			e[m] = 0
		}
		switch {
		case m == l:
			l++
		case left == 0:
			return false
		default:
			left--
			turnLeft(d[l:m+1], e[l:m], func(i int, cos, sin float64) { kernel.Rotate(row(l+i+1), row(l+i), cos, sin) })
		}
	}
	return true
}

// turnLeft is one QL iteration on a matrix that does not fall apart.
func turnLeft(d, e []float64, rotate func(i int, cos, sin float64)) {
	last := len(d) - 1
	g := (d[1] - d[0]) / (2 * e[0])
	g = d[last] - d[0] + e[0]/(g+math.Copysign(math.Hypot(g, 1), g))
	sin, cos, p := 1.0, 1.0, 0.0
	for i := last - 1; i >= 0; i-- {
		f, b := sin*e[i], cos*e[i]
		r := math.Sqrt(f*f + g*g)
		if r < 0x1p-400 {
			r = math.Hypot(f, g) // the squares lost digits
		}
		if i+1 < last {
			e[i+1] = r
		}
		if r == 0 { // the matrix has fallen apart here
			d[i+1] -= p
			return
		}
		sin, cos = f/r, g/r
		g = d[i+1] - p
		r = (d[i]-g)*sin + 2*cos*b
		p = sin * r
		d[i+1] = g + p
		g = cos*r - b
		rotate(i, cos, sin)
	}
	d[0] -= p
	e[0] = g
}
