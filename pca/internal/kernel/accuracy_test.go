package kernel

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

const unit = 0x1p-53 // unit roundoff

// exact returns Σ a[i]·b[i] and Σ |a[i]·b[i]|, the first without error before its one
// rounding: 2200 bits hold every sum of products of the inputs used here.
func exact(a, b []float64) (sum, size float64) {
	total := new(big.Float).SetPrec(2200)
	for i, v := range a {
		x := new(big.Float).SetPrec(2200).SetFloat64(v)
		total.Add(total, x.Mul(x, big.NewFloat(b[i])))
		size += math.Abs(v * b[i])
	}
	sum, _ = total.Float64()
	return sum, size
}

func column(x []float64, p, j int) []float64 {
	var out []float64
	for i := j; i < len(x); i += p {
		out = append(out, x[i])
	}
	return out
}

// Sums against exact arithmetic: m fused multiply-adds in a row err by at most m·u times
// the sum of magnitudes to first order (Higham 2002, section 3.1). Data on scales from
// 1e-20 to 1e20, and data that cancel.
func TestAccuracy(t *testing.T) {
	rng := rand.New(rand.NewPCG(31, 32))
	n, p := 1000, 6
	ordinary := numbers(rng, n*p, 1)
	wild := numbers(rng, n*p, 1)
	for i := range wild {
		wild[i] *= math.Pow(10, 40*rng.Float64()-20)
	}
	cancelling := numbers(rng, n*p, 1)
	for i := n * p / 2; i < n*p; i++ {
		cancelling[i] = cancelling[i-n*p/2]
		if i%p%2 == 0 {
			cancelling[i] *= -1
		}
	}
	onEachPath(t, func(t *testing.T) {
		for kind, x := range map[string][]float64{"ordinary": ordinary, "wild": wild, "cancelling": cancelling} {
			c := make([]float64, p*p)
			AddCrossProducts(c, x, n, p)
			for i := range p {
				for j := i; j < p; j++ {
					a, b := column(x, p, i), column(x, p, j)
					want, size := exact(a, b)
					bound := float64(panelRows+n/panelRows+1) * unit * size
					if e := math.Abs(c[i*p+j] - want); !(e <= bound) {
						t.Errorf("%s: cross-product %d,%d off by %g, bound %g", kind, i, j, e, bound)
					}
					bound = float64(n/dotLanes+7) * unit * size
					if e := math.Abs(Dot(a, b) - want); !(e <= bound) {
						t.Errorf("%s: dot %d,%d off by %g, bound %g", kind, i, j, e, bound)
					}
				}
			}
			left, right := x[:10*p], x[10*p:14*p]
			for k := range 4 { // one product of every length from p to 4p
				length, width := (k+1)*p, 4-k
				product := make([]float64, 5*width)
				v := right[:length*width/p*p/width*width]
				rows := len(v) / width
				Multiply(product[:width], left, v, 1, rows, width)
				for j := range width {
					want, size := exact(left[:rows], column(v, width, j))
					if e := math.Abs(product[j] - want); !(e <= float64(rows)*unit*size) {
						t.Errorf("%s: product %d,%d off by %g", kind, rows, j, e)
					}
				}
			}
		}
	})
}

// The exact mean of numbers that sit high above their spread comes out of sums and centring
// done twice: what is left after centring is at most the rounding of the mean.
func TestCenteringTwice(t *testing.T) {
	rng := rand.New(rand.NewPCG(33, 34))
	n, p := 500, 37
	x := numbers(rng, n*p, 1)
	for i := range x {
		x[i] += 1e8
	}
	onEachPath(t, func(t *testing.T) {
		z, mean := make([]float64, n*p), make([]float64, p)
		ColumnSums(mean, x, n, p)
		for j := range mean {
			mean[j] /= float64(n)
		}
		CenterColumns(z, x, mean, n, p)
		rest := make([]float64, p)
		ColumnSums(rest, z, n, p)
		ones := make([]float64, n)
		for i := range ones {
			ones[i] = 1
		}
		for j := range p {
			want, size := exact(column(x, p, j), ones)
			if e := math.Abs(mean[j] + rest[j]/float64(n) - want/float64(n)); e > 4*unit*size/float64(n) {
				t.Errorf("column %d: mean off by %g", j, e)
			}
		}
	})
}
