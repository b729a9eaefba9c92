package symeig

import "math"

const epsilon = 0x1p-53

// secularRoot finds root j of 1 + ρ·Σ z_i²/(d_i - λ), ρ > 0, d ascending and distinct, no
// z_i zero: between d_j and d_{j+1}, the last up to ρ·Σ z_i² above the last d. It returns λ
// and sets delta[i] to d_i - λ, to high relative accuracy: everything is measured from the
// nearer of the two poles.
//
// Every step fits r + s/(d_j-λ) to the value and slope of the terms up to j, R +
// S/(d_{j+1}-λ) to those of the rest, and takes the root of the sum (Bunch, Nielsen and
// Sorensen 1978, Numerische Mathematik 31, 31-48); a bracket, halved when a step leaves it,
// makes it safe.
func secularRoot(j int, d, z []float64, rho float64, delta []float64) float64 {
	k := len(d)
	last := j == k-1
	s := secular{j: j, z: z, delta: delta, inverse: 1 / rho}
	width := 0.0 // of the interval
	if last {
		for _, v := range z {
			width += rho * v * v
		}
	} else {
		width = d[j+1] - d[j]
	}
	origin, low, high := j, 0.0, width
	s.measure(d, origin)
	tau := width / 2
	f := s.evaluate(tau)
	switch {
	case f >= 0:
		high = tau
	case last:
		low = tau
	default:
		origin, low, high = j+1, -tau, 0
		s.measure(d, origin)
		tau = -tau
	}
	if first := s.firstGuess(f, tau, last); first > low && first < high {
		tau = first
	} else {
		tau = low + (high-low)/2
	}
	for range 100 {
		f := s.evaluate(tau)
		// Rounding of the sum (the error grows with its length far more slowly than the
		// worst case), and of tau itself, make up the smallest value worth having.
		noise := (8+float64(k)/64)*(s.inverse-s.psi+s.phi) + math.Abs(tau)*(s.dpsi+s.dphi)
		if math.Abs(f) <= epsilon*noise {
			break
		}
		if f < 0 {
			low = tau
		} else {
			high = tau
		}
		next := tau + s.step(f, tau, last)
		if !(next > low && next < high) {
			next = low + (high-low)/2
		}
		change := math.Abs(next - tau)
		if next == low || next == high {
			break
		}
		tau = next
		if change <= epsilon*math.Abs(tau) {
			break
		}
	}
	for i := range delta {
		delta[i] -= tau
	}
	return d[origin] + tau
}

// secular holds the parts of the function f/ρ: the sum of the terms up to j, of the terms
// after j, and their derivatives.
type secular struct {
	j                    int
	z, delta             []float64 // delta: poles, measured from the origin
	inverse              float64   // 1/ρ
	psi, dpsi, phi, dphi float64
}

func (s *secular) measure(d []float64, origin int) {
	for i, v := range d {
		s.delta[i] = v - d[origin]
	}
}

func (s *secular) evaluate(tau float64) float64 {
	s.psi, s.dpsi = terms(s.z[:s.j+1], s.delta[:s.j+1], tau)
	s.phi, s.dphi = terms(s.z[s.j+1:], s.delta[s.j+1:], tau)
	return s.inverse + s.psi + s.phi
}

// terms adds up z²/(delta-tau) and z²/(delta-tau)², in two lanes so that additions overlap.
func terms(z, delta []float64, tau float64) (sum, slope float64) {
	delta = delta[:len(z)]
	var sum1, slope1 float64
	i := 0
	for ; i+1 < len(z); i += 2 {
		t, u := z[i]/(delta[i]-tau), z[i+1]/(delta[i+1]-tau)
		sum += float64(z[i] * t)
		slope += float64(t * t)
		sum1 += float64(z[i+1] * u)
		slope1 += float64(u * u)
	}
	if i < len(z) {
		t := z[i] / (delta[i] - tau)
		sum += float64(z[i] * t)
		slope += float64(t * t)
	}
	return sum + sum1, slope + slope1
}

// firstGuess keeps the two poles next to the root and takes the other terms as they are at
// tau, where f was evaluated.
func (s *secular) firstGuess(f, tau float64, last bool) float64 {
	j := s.j
	left, zl := s.delta[j], s.z[j]*s.z[j]
	if last {
		if c := f - zl/(left-tau); c > 0 {
			return left + zl/c
		}
		return math.NaN()
	}
	right, zr := s.delta[j+1], s.z[j+1]*s.z[j+1]
	c := f - zl/(left-tau) - zr/(right-tau)
	return quadratic(c, c*(left+right)+zl+zr, c*left*right+zl*right+zr*left)
}

// step returns how far the root of the fitted function is from tau.
func (s *secular) step(f, tau float64, last bool) float64 {
	left := s.delta[s.j] - tau
	newton := -f / (s.dpsi + s.dphi)
	if last {
		if c := f - left*s.dpsi; c > 0 {
			return left * f / c
		}
		return newton
	}
	right := s.delta[s.j+1] - tau
	c := f - left*s.dpsi - right*s.dphi
	eta := quadratic(c, (left+right)*f-left*right*(s.dpsi+s.dphi), left*right*f)
	if !(f*eta < 0) {
		return newton
	}
	return eta
}

// quadratic returns that root of c·x² - a·x + b which lies between the poles of the
// function it comes from, without cancellation.
func quadratic(c, a, b float64) float64 {
	root := math.Sqrt(math.Abs(a*a - 4*b*c))
	if a > 0 {
		return 2 * b / (a + root)
	}
	if c == 0 {
		return b / a
	}
	return (a - root) / (2 * c)
}
