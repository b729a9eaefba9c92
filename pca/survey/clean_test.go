package survey

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
)

// Ordinary channels of many kinds raise no false alarm: nothing that a run file would have
// to mend, no code, no spike, no stuck stretch, no limit, no break. Each is drawn from a
// stream of its own.
func TestNothingFoundWhereNothingIs(t *testing.T) {
	kinds := []struct {
		name string
		draw func(r *rand.Rand, i int, last float64) float64
		may  []string
	}{
		{"normal", func(r *rand.Rand, _ int, _ float64) float64 { return 20 + r.NormFloat64() }, nil},
		{"coarse", func(r *rand.Rand, _ int, _ float64) float64 { return math.Round(20 + 3*r.NormFloat64()) }, []string{"categories"}},
		{"slow", func(r *rand.Rand, _ int, last float64) float64 { return .995*last + r.NormFloat64() }, []string{"drift"}},
		{"slow and coarse", func(r *rand.Rand, _ int, last float64) float64 { return .99*last + math.Round(4*r.NormFloat64())/4 }, []string{"drift"}},
		{"uniform", func(r *rand.Rand, _ int, _ float64) float64 { return 100 * r.Float64() }, nil},
		{"percent", func(r *rand.Rand, _ int, _ float64) float64 { return float64(r.IntN(101)) }, nil},
		{"rare counts", func(r *rand.Rand, _ int, _ float64) float64 { return math.Floor(r.ExpFloat64() * .8) }, []string{"categories", "skew"}},
		{"skewed", func(r *rand.Rand, _ int, _ float64) float64 { return math.Exp(1.2 * r.NormFloat64()) }, []string{"skew"}},
		{"waits", func(r *rand.Rand, _ int, _ float64) float64 { return math.Round(10*r.ExpFloat64()) / 10 }, []string{"skew"}},
		{"negative", func(r *rand.Rand, _ int, _ float64) float64 { return -300 + 80*r.NormFloat64() }, nil},
		{"held", func(r *rand.Rand, _ int, last float64) float64 {
			if r.Float64() < .85 && last != 0 {
				return last
			}
			return math.Round(400+90*r.NormFloat64()) / 4
		}, nil},
		{"wave", func(r *rand.Rand, i int, _ float64) float64 { return 9*math.Sin(float64(i)/30) + .1*r.NormFloat64() }, []string{"drift"}},
	}
	table := []string{"dependent-rows", "few-rows", "redundancy"}
	for seed := range uint64(6) {
		for _, n := range []int{40, 400, 5000} {
			var b strings.Builder
			last := make([]float64, len(kinds))
			streams := make([]*rand.Rand, len(kinds))
			for k, kind := range kinds {
				streams[k] = rand.New(rand.NewPCG(seed, uint64(k)))
				fmt.Fprintf(&b, "%s,", kind.name)
			}
			b.WriteString("end\n")
			for i := range n {
				for k, kind := range kinds {
					last[k] = kind.draw(streams[k], i, last[k])
					fmt.Fprintf(&b, "%.4f,", last[k])
				}
				fmt.Fprintf(&b, "%d\n", i*7919%n)
			}
			v := lookAt(t, 0, written(t, b.String()))
			for _, f := range v.Findings {
				may := table
				for _, kind := range kinds {
					if slices.Contains(f.Channels, kind.name) {
						may = append(slices.Clone(may), kind.may...)
					}
				}
				if f.Weight > Know && !slices.Contains(may, f.Kind) {
					t.Errorf("seed %d, %d rows: %s %v: %s", seed, n, f.Kind, f.Channels, f.Text)
				}
			}
		}
	}
}
