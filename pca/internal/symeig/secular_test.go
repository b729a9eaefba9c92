package symeig

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// The roots lie between the poles, and the function changes its sign within a few units in
// the last place of the distance to the nearer pole. Evaluated with 200 bits.
func TestSecularRoot(t *testing.T) {
	rng := rand.New(rand.NewPCG(41, 42))
	for _, k := range []int{1, 2, 3, 10, 60} {
		for _, gap := range []float64{1, 1e-6, 1e-13} {
			for _, least := range []float64{1, 1e-8} {
				d, z := make([]float64, k), make([]float64, k)
				for i := range d {
					if i > 0 {
						d[i] = d[i-1] + math.Pow(gap, rng.Float64())*(0.5+rng.Float64())
					}
					z[i] = math.Pow(least, rng.Float64()) * (0.5 + rng.Float64())
				}
				rho := math.Exp(4 * rng.NormFloat64())
				delta := make([]float64, k)
				for j := range k {
					root := secularRoot(j, d, z, rho, delta)
					nearest := j
					if j+1 < k && math.Abs(delta[j+1]) < math.Abs(delta[j]) {
						nearest = j + 1
					}
					if !(delta[j] < 0) || j+1 < k && !(delta[j+1] > 0) || math.Abs(root-(d[nearest]-delta[nearest])) > 0 {
						t.Fatalf("k=%d gap=%g: root %d is %g, with distances %g", k, gap, j, root, delta)
					}
					slack := float64(64+k) * 0x1p-52
					below := secularSign(d, z, rho, d[nearest], -delta[nearest], 1-slack*math.Copysign(1, -delta[nearest]))
					above := secularSign(d, z, rho, d[nearest], -delta[nearest], 1+slack*math.Copysign(1, -delta[nearest]))
					if below > 0 || above < 0 {
						t.Errorf("k=%d gap=%g least=%g: root %d is off", k, gap, least, j)
					}
				}
			}
		}
	}
}

// secularSign is the sign of the function at pole + tau·factor.
func secularSign(d, z []float64, rho, pole, tau, factor float64) int {
	number := func(v float64) *big.Float { return new(big.Float).SetPrec(200).SetFloat64(v) }
	at := number(tau)
	at.Mul(at, number(factor)).Add(at, number(pole))
	sum := number(1)
	for i, v := range d {
		term := number(z[i])
		term.Mul(term, number(z[i])).Mul(term, number(rho))
		sum.Add(sum, term.Quo(term, number(v).Sub(number(v), at)))
	}
	return sum.Sign()
}
