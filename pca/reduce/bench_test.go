package reduce

import (
	"fmt"
	"math/rand/v2"
	"testing"
)

func BenchmarkChoose(b *testing.B) {
	rng := rand.New(rand.NewPCG(5, 1))
	small, large := summary(rows(rng, 600, 30, 0.5), 30), summary(rows(rng, 2400, 600, 0.5), 600)
	for _, name := range []string{"worst-r2", "rm", "mccabe-det", "mccabe-frobenius"} {
		b.Run(fmt.Sprintf("method=exact/criterion=%s/size=10/p=30", name), func(b *testing.B) {
			for b.Loop() {
				r := mustChoose(b, small, nil, Options{Size: 10, Criterion: name, Threads: 2})
				b.ReportMetric(float64(r.Nodes), "nodes")
				if !r.Optimal {
					b.ReportMetric(1, "unproved")
				}
			}
		})
	}
	for _, rebuild := range []float64{0.8, 0.95} {
		b.Run(fmt.Sprintf("method=exact/rebuild=%g/p=30", rebuild), func(b *testing.B) {
			for b.Loop() {
				r := mustChoose(b, small, nil, Options{Rebuild: rebuild, Threads: 2})
				b.ReportMetric(float64(r.Nodes), "nodes")
				b.ReportMetric(float64(len(r.Kept)), "kept")
				if !r.Optimal {
					b.ReportMetric(1, "unproved")
				}
			}
		})
		b.Run(fmt.Sprintf("method=greedy/rebuild=%g/p=600", rebuild), func(b *testing.B) {
			for b.Loop() {
				r := mustChoose(b, large, nil, Options{Rebuild: rebuild, Threads: 2})
				b.ReportMetric(float64(len(r.Kept)), "kept")
			}
		})
	}
}
