package stability

import (
	"fmt"
	"testing"

	"axisfold/pca"
)

func BenchmarkBootstrap(b *testing.B) {
	for _, c := range []struct{ p, blocks, replicates int }{{50, 200, 100}, {50, 500, 1000}, {200, 200, 100}} {
		b.Run(fmt.Sprintf("p=%d/blocks=%d/replicates=%d", c.p, c.blocks, c.replicates), func(b *testing.B) {
			deviations := make([]float64, c.p)
			for j := range deviations {
				deviations[j] = 1 + 10/float64(1+j)
			}
			blocks := split(table(c.blocks*20, deviations, 1), c.p, 20, pca.CrossProducts, 0)
			o := Options{Decompose: options(c.p, pca.UnitNormal, pca.Correlation), Retained: 5, Replicates: c.replicates}
			w := whole(blocks, o.Decompose)
			b.ResetTimer()
			for b.Loop() {
				if _, err := Bootstrap(blocks, w, o); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
