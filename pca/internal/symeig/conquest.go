package symeig

import (
	"math"
	"slices"
	"sync"

	"axisfold/pca/internal/kernel"
)

// conquest solves a tridiagonal matrix with diagonal d and off-diagonal e by dividing it.
// Eigenvectors are the rows of a p×p matrix, in no order; d becomes their eigenvalues.
type conquest struct {
	p    int
	d, e []float64
	rows []float64 // starts as zeros
	mix  []float64 // p×p: coefficients of the new vectors in the old ones
	held []float64 // p×p: copies of the old vectors
}

// leafSize is the size up to which the implicit QL iteration is faster than dividing.
const leafSize = 25

// solve does rows and columns lo..hi-1 of the matrix.
func (c *conquest) solve(lo, hi, threads int) bool {
	if hi-lo <= leafSize {
		return c.leaf(lo, hi)
	}
	// The matrix is two smaller ones, less |ρ| in the corners where they meet, plus
	// |ρ|·u·u' with u = (…0, 1, ±1, 0…).
	mid := (lo + hi) / 2
	rho := c.e[mid-1]
	c.d[mid-1] -= math.Abs(rho)
	c.d[mid] -= math.Abs(rho)
	var low, high bool
	if threads > 1 {
		var other sync.WaitGroup
		other.Go(func() { high = c.solve(mid, hi, threads/2) })
		low = c.solve(lo, mid, threads-threads/2)
		other.Wait()
	} else {
		low = c.solve(lo, mid, 1)
		high = c.solve(mid, hi, 1)
	}
	if !low || !high {
		return false
	}
	m := merge{conquest: c, lo: lo, mid: mid, hi: hi, threads: threads}
	m.join(rho)
	return true
}

// merge joins two solved halves, lo..mid-1 and mid..hi-1.
type merge struct {
	*conquest
	lo, mid, hi int
	threads     int
	z           []float64 // u in terms of the vectors of the halves
	from        []origin
	kept        []int // rows that change, by ascending d
	deflated    []int // rows that stay
}

// origin says in which columns a vector has numbers.
type origin int

const (
	top origin = iota
	both
	bottom
	origins
)

func (m *merge) row(i int) []float64 { return m.rows[i*m.p+m.lo : i*m.p+m.hi] }

func (m *merge) join(rho float64) {
	n := m.hi - m.lo
	m.z, m.from = make([]float64, n), make([]origin, n)
	sign := math.Copysign(1, rho)
	for i := range n {
		if m.lo+i < m.mid {
			m.z[i] = m.rows[(m.lo+i)*m.p+m.mid-1] / math.Sqrt2
		} else {
			m.z[i] = sign * m.rows[(m.lo+i)*m.p+m.mid] / math.Sqrt2
			m.from[i] = bottom
		}
	}
	rho = 2 * math.Abs(rho) // z has unit length
	m.deflate(rho)
	if len(m.kept) > 0 {
		m.combine(rho)
	}
}

// deflate finds vectors that are eigenvectors of the whole already, within rounding: where
// z is negligible, and where two eigenvalues are so close that a rotation makes z zero for
// one of them (Dongarra and Sorensen 1987, SIAM J. Sci. Stat. Comput. 8, s139-s154).
func (m *merge) deflate(rho float64) {
	d := m.d[m.lo:m.hi]
	order := make([]int, len(d))
	largest := 0.0
	for i := range order {
		order[i] = i
		largest = max(largest, math.Abs(d[i]), math.Abs(m.z[i]))
	}
	slices.SortStableFunc(order, func(i, j int) int { return -cmpDescending(d[i], d[j]) })
	slack := 8 * epsilon * largest
	last := -1 // the vector that waits to be kept
	for _, i := range order {
		if rho*math.Abs(m.z[i]) <= slack {
			m.deflated = append(m.deflated, i)
			continue
		}
		if last >= 0 && !m.rotate(last, i, slack) {
			m.kept = append(m.kept, last)
		}
		last = i
	}
	if last >= 0 {
		m.kept = append(m.kept, last)
	}
}

// rotate makes z zero at i, if that changes the matrix by no more than slack.
func (m *merge) rotate(i, j int, slack float64) bool {
	d := m.d[m.lo:m.hi]
	length := math.Hypot(m.z[i], m.z[j])
	c, s := m.z[j]/length, -m.z[i]/length
	if math.Abs((d[j]-d[i])*c*s) > slack {
		return false
	}
	m.z[i], m.z[j] = 0, length
	kernel.Rotate(m.row(m.lo+i), m.row(m.lo+j), c, s)
	if m.from[i] != m.from[j] {
		m.from[i], m.from[j] = both, both
	}
	di, dj := d[i], d[j]
	d[i], d[j] = di*c*c+dj*s*s, di*s*s+dj*c*c
	m.deflated = append(m.deflated, i)
	return true
}

// combine replaces the kept vectors by those of D + ρ·z·z'.
func (m *merge) combine(rho float64) {
	k, p := len(m.kept), m.p
	d, z := make([]float64, k), make([]float64, k)
	for i, o := range m.kept {
		d[i], z[i] = m.d[m.lo+o], m.z[o]
	}
	mix := m.mix[m.lo*p : m.lo*p+k*k]
	roots := make([]float64, k)
	m.each(k, func(j int) { roots[j] = secularRoot(j, d, z, rho, mix[j*k:j*k+k]) })
	m.refine(d, z, mix)
	columns, counts := m.grouped()
	m.each(k, func(j int) {
		row := mix[j*k : j*k+k]
		scaled := make([]float64, k)
		for g, i := range columns {
			scaled[g] = z[i] / row[i]
		}
		f := 1 / math.Sqrt(kernel.Dot(scaled, scaled))
		for g, v := range scaled {
			row[g] = v * f
		}
	})
	m.multiply(mix, columns, counts)
	copy(m.d[m.lo:], roots)
}

// each shares 0..n-1 in pieces that are worth a thread's while.
func (m *merge) each(n int, do func(i int)) {
	const piece = 16
	share(m.threads, (n+piece-1)/piece, func(b int) {
		for i := b * piece; i < min(n, (b+1)*piece); i++ {
			do(i)
		}
	})
}

// refine replaces z by the one whose eigenvalues the computed roots are exactly, which
// keeps the vectors orthogonal however close the roots (Gu and Eisenstat 1994, SIAM J.
// Matrix Anal. Appl. 15, 1266-1276): z_i² = Π_j (λ_j-d_i) / Π_{j≠i} (d_j-d_i).
func (m *merge) refine(d, z, mix []float64) {
	k := len(d)
	const piece = 64
	share(m.threads, (k+piece-1)/piece, func(b int) {
		from, to := b*piece, min(k, (b+1)*piece)
		var products [piece]float64
		for i := range products {
			products[i] = 1
		}
		for j := range k {
			row, pole := mix[j*k:j*k+k], d[j]
			for i := from; i < to; i++ {
				if i == j {
					products[i-from] *= row[i]
				} else {
					products[i-from] *= row[i] / (d[i] - pole)
				}
			}
		}
		for i := from; i < to; i++ {
			z[i] = math.Copysign(math.Sqrt(-products[i-from]), z[i])
		}
	})
}

// grouped returns the places in kept, by origin, and how many there are of each.
func (m *merge) grouped() (columns []int, counts [origins]int) {
	for o := range origins {
		for i, row := range m.kept {
			if m.from[row] == o {
				columns = append(columns, i)
				counts[o]++
			}
		}
	}
	return columns, counts
}

// multiply sets the first rows to mix times the kept vectors, without their zeros, and the
// others to the deflated vectors.
func (m *merge) multiply(mix []float64, columns []int, counts [origins]int) {
	k, p, n, half := len(columns), m.p, m.hi-m.lo, m.mid-m.lo
	held := m.held[m.lo*p : m.hi*p]
	upper := counts[top] + counts[both]
	tops, bottoms := held[:upper*half], held[upper*half:]
	for g, i := range columns {
		row := m.row(m.lo + m.kept[i])
		if g < upper {
			copy(tops[g*half:(g+1)*half], row)
		}
		if g >= counts[top] {
			copy(bottoms[(g-counts[top])*(n-half):(g-counts[top]+1)*(n-half)], row[half:])
		}
	}
	stay := held[upper*half+(k-counts[top])*(n-half):]
	values := make([]float64, len(m.deflated))
	for i, row := range m.deflated {
		copy(stay[i*n:(i+1)*n], m.row(m.lo+row))
		values[i] = m.d[m.lo+row]
	}
	const band = 96
	share(m.threads, (k+band-1)/band, func(b int) {
		from := b * band
		rows := min(band, k-from)
		for i := range rows {
			clear(m.row(m.lo + from + i))
		}
		dst, x := m.rows[(m.lo+from)*p+m.lo:], mix[from*k:]
		kernel.AddMultiply(dst, p, x, k, tops, half, rows, upper, half)
		kernel.AddMultiply(dst[half:], p, x[counts[top]:], k, bottoms, n-half, rows, k-counts[top], n-half)
	})
	for i, v := range values {
		copy(m.row(m.lo+k+i), stay[i*n:(i+1)*n])
		m.d[m.lo+k+i] = v
	}
}
