package retain

import (
	"math"
	"testing"
)

// The evidence as it is printed, every pair of roots for every number of components
// (Minka 2000, eq. 80): what logEvidences shares between numbers must not change it.
func TestLogEvidences(t *testing.T) {
	n := 100.0
	l := []float64{9, 4, 4, 1.5, .9, .8, .7, .7, .3}
	p := len(l)
	got := logEvidences(l, p-1, n)
	for k := 1; k < p; k++ {
		noise := 0.0
		for _, x := range l[k:] {
			noise += x / float64(p-k)
		}
		m := float64(p*k - k*(k+1)/2)
		want := -float64(k)*math.Ln2 - n*float64(p-k)/2*math.Log(noise) + (m+float64(k))/2*math.Log(2*math.Pi) - float64(k)/2*math.Log(n)
		for i := 1; i <= k; i++ {
			half := float64(p-i+1) / 2
			lg, _ := math.Lgamma(half)
			want += lg - half*math.Log(math.Pi) - n/2*math.Log(l[i-1])
			for j := i + 1; j <= p; j++ {
				hat := noise
				if j <= k {
					hat = l[j-1]
				}
				tiny := 0x1p-52 * l[i-1]
				want -= (math.Log(math.Max(1/hat-1/l[i-1], tiny/(l[i-1]*l[i-1]))) + math.Log(math.Max(l[i-1]-l[j-1], tiny)) + math.Log(n)) / 2
			}
		}
		if math.Abs(got[k-1]-want) > 1e-12*math.Abs(want) {
			t.Errorf("%d components: %.15g, printed form %.15g", k, got[k-1], want)
		}
	}
}
