package rotation

import (
	"math"
	"math/rand/v2"

	"gonum.org/v1/gonum/mat"
)

const (
	mostRounds = 1000
	settled    = 1e-9 // largest angle of a round, in radians
)

// orthomax rotates b, p×k, pair by pair of columns to the largest criterion that each
// plane has (Kaiser 1958; γ = 1 varimax, 0 quartimax), round after round until no angle
// matters, and does the same to the columns of turned, k×k. It tells whether it settled.
func orthomax(b, turned []float64, p, k int, gamma float64) bool {
	for range mostRounds {
		largest := 0.0
		for x := range k {
			for y := x + 1; y < k; y++ {
				angle := planeAngle(b, p, k, x, y, gamma)
				if math.Abs(angle) > settled/16 {
					s, c := math.Sincos(angle)
					turnColumns(b, p, k, x, y, c, s)
					turnColumns(turned, k, k, x, y, c, s)
				}
				largest = math.Max(largest, math.Abs(angle))
			}
		}
		if largest <= settled {
			return true
		}
	}
	return false
}

// planeAngle is the angle by which columns x and y are turned for the largest criterion:
// with u = x²-y² and v = 2xy, φ = ¼·atan2(2Σuv - 2γΣuΣv/p, Σ(u²-v²) - γ((Σu)²-(Σv)²)/p).
func planeAngle(b []float64, p, k, x, y int, gamma float64) float64 {
	var su, sv, suv, squares float64
	for j := range p {
		vx, vy := b[j*k+x], b[j*k+y]
		u, v := vx*vx-vy*vy, 2*vx*vy
		su, sv = su+u, sv+v
		suv += u * v
		squares += u*u - v*v
	}
	n := float64(p)
	up, along := 2*suv-2*gamma*su*sv/n, squares-gamma*(su*su-sv*sv)/n
	if up == 0 && along == 0 {
		return 0 // every angle is as good
	}
	return math.Atan2(up, along) / 4
}

func turnColumns(m []float64, rows, k, x, y int, c, s float64) {
	for i := range rows {
		vx, vy := m[i*k+x], m[i*k+y]
		m[i*k+x], m[i*k+y] = c*vx+s*vy, c*vy-s*vx
	}
}

// criterion is Σ over components of Σb⁴ - γ(Σb²)²/p.
func criterion(b []float64, p, k int, gamma float64) float64 {
	sum := 0.0
	for a := range k {
		second, fourth := 0.0, 0.0
		for j := range p {
			v := b[j*k+a] * b[j*k+a]
			second += v
			fourth += v * v
		}
		sum += fourth - gamma*second*second/float64(p)
	}
	return sum
}

// randomRotation is an orthogonal matrix, k×k, drawn from all alike: the orthogonal factor
// of a matrix of normal numbers (Stewart 1980, SIAM J. Numer. Anal. 17:403).
func randomRotation(k int, seed, start uint64) []float64 {
	rng := rand.New(rand.NewPCG(seed, start))
	draws := make([]float64, k*k)
	for i := range draws {
		draws[i] = rng.NormFloat64()
	}
	var qr mat.QR
	qr.Factorize(mat.NewDense(k, k, draws))
	var q mat.Dense
	qr.QTo(&q)
	out := make([]float64, k*k)
	for i := range k {
		for a := range k {
			out[i*k+a] = q.At(i, a)
		}
	}
	return out
}
