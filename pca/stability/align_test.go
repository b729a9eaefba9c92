package stability

import (
	"math"
	"math/rand/v2"
	"testing"

	"axisfold/pca"
)

// planes returns a whole whose vectors are the axes of p channels.
func planes(p int) *pca.Decomposition {
	o := options(p, pca.CenterOnly, pca.Covariance)
	d := &pca.Decomposition{Channels: o.Names, Values: make([]float64, p), Vectors: make([]float64, p*p), Rank: p}
	for j := range p {
		d.Values[j] = float64(p - j)
		d.Vectors[j*p+j] = 1
	}
	return d
}

func rotation(p, i, j int, angle float64) []float64 {
	v := make([]float64, p*p)
	for a := range p {
		v[a*p+a] = 1
	}
	sin, cos := math.Sincos(angle)
	v[i*p+i], v[i*p+j], v[j*p+i], v[j*p+j] = cos, -sin, sin, cos
	return v
}

// Björck & Golub 1973 (Math. Comp. 27:579): the sine form keeps the digits of small
// angles, where arccos of the cosine gives 0; turning inside the plane is no angle.
func TestSubspaceAngle(t *testing.T) {
	for _, k := range []int{1, 2} {
		for _, angle := range []float64{0, 1e-12, 1e-9, 1e-4, 0.7, 0.8, 1.5, 1.5707963, math.Pi / 2} {
			a := newAligner(planes(4), k)
			got := a.to([]float64{4, 3, 2, 1}, rotation(4, 0, 3, angle)).angle
			if math.Abs(got-angle) > 4e-16+1e-15*angle {
				t.Errorf("k=%d: angle %.17g, expected %.17g", k, got, angle)
			}
		}
	}
	inside := newAligner(planes(4), 2).to([]float64{4, 3, 2, 1}, rotation(4, 0, 1, 0.9))
	if inside.angle > 1e-15 {
		t.Errorf("turned inside the plane: angle %g", inside.angle)
	}
}

// Order, sign and turning inside the retained plane are undone: loadings are the axes
// again, by the root of the variance along them.
func TestProcrustes(t *testing.T) {
	const p, k = 4, 2
	values := []float64{4, 4, 2, 1}
	for _, angle := range []float64{0, 0.3, math.Pi / 2, 2.5, -1} {
		for _, sign := range []float64{1, -1} {
			v := rotation(p, 0, 1, angle)
			for j := range p {
				v[j*p] *= sign
			}
			got := newAligner(planes(p), k).to(values, v)
			for j := range p {
				for l := range k {
					want := 0.0
					if j == l {
						want = 2
					}
					if math.Abs(got.loadings[j*k+l]-want) > 1e-14 {
						t.Errorf("angle %g: loading %d,%d %g, expected %g", angle, j, l, got.loadings[j*k+l], want)
					}
				}
			}
		}
	}
	quarter := newAligner(planes(p), k).to([]float64{9, 4, 2, 1}, rotation(p, 0, 1, math.Pi/2))
	if l := quarter.loadings; math.Abs(l[0]-2) > 1e-14 || math.Abs(l[1*k+1]-3) > 1e-14 {
		t.Errorf("axes changed places: loadings %v, expected 2 and 3 on the diagonal", l)
	}
	swapped := newAligner(planes(p), k).to(values, rotation(p, 0, 1, 1.5))
	if swapped.partner[0] != 1 || swapped.partner[1] != 0 || math.Abs(swapped.congruence[0]-math.Sin(1.5)) > 1e-15 {
		t.Errorf("partners %v, congruence %v", swapped.partner, swapped.congruence)
	}
}

// All permutations of five as oracle.
func TestAssign(t *testing.T) {
	const n = 5
	rng := rand.New(rand.NewPCG(1, 2))
	for range 200 {
		gain := make([]float64, n*n)
		for i := range gain {
			gain[i] = rng.Float64()
		}
		best := 0.0
		var try func(row int, used [n]bool, sum float64)
		try = func(row int, used [n]bool, sum float64) {
			if row == n {
				best = max(best, sum)
				return
			}
			for j := range n {
				if !used[j] {
					used[j] = true
					try(row+1, used, sum+gain[row*n+j])
					used[j] = false
				}
			}
		}
		try(0, [n]bool{}, 0)
		sum, seen := 0.0, [n]bool{}
		for i, j := range assign(gain, n) {
			sum += gain[i*n+j]
			if seen[j] {
				t.Fatalf("column %d twice", j)
			}
			seen[j] = true
		}
		if math.Abs(sum-best) > 1e-14 {
			t.Errorf("sum %g, best %g", sum, best)
		}
	}
}
