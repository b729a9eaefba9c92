package stability

import (
	"fmt"

	"axisfold/pca"
)

// blocks holds the moments of the blocks in flat memory, out of their summaries once.
type blocks struct {
	n, p   int
	counts []float64
	means  []float64 // n×p
	cross  []float64 // n × p(p+1)/2, upper triangles row by row, about the block's mean
	low    []float64 // n×p
	high   []float64 // n×p
	ranked [][]*pca.Summary
	// ranked[j] are the blocks of channel j alone, only where its scaling needs medians.
}

// Limits of memory: neighbours are merged until the triangles fit into maxNumbers, but
// never below minBlocks blocks, where intervals would suffer.
const (
	maxNumbers = 1 << 25
	minBlocks  = 50
)

func extract(parts []*pca.Summary, o pca.Options, res *Result) (*blocks, error) {
	p := len(o.Names)
	var used []*pca.Summary
	for i, s := range parts {
		if s.Width() != p || s.Form() != parts[0].Form() {
			return nil, fmt.Errorf("stability: block %d has %d channels in form %d, expected %d in form %d",
				i, s.Width(), s.Form(), p, parts[0].Form())
		}
		if s.Count() == 0 {
			continue
		}
		if err := s.Finite(o.Names); err != nil {
			return nil, err
		}
		used = append(used, s)
	}
	triangle := p * (p + 1) / 2
	if limit := max(minBlocks, maxNumbers/triangle); len(used) > limit {
		res.warn("merged-blocks", "%d blocks of %d channels were merged with their neighbours into %d to fit into memory: intervals are a little coarser", len(used), p, limit)
		used = mergeNeighbours(used, limit)
	}
	if len(used) < 2 {
		return nil, &pca.DataError{Problem: fmt.Sprintf("%d blocks with rows; at least 2 are needed for resampling", len(used)),
			Hint: "cut the rows into shorter blocks"}
	}
	res.Blocks = len(used)
	b := &blocks{n: len(used), p: p, ranked: make([][]*pca.Summary, p),
		counts: make([]float64, len(used)), means: make([]float64, len(used)*p),
		cross: make([]float64, len(used)*triangle),
		low:   make([]float64, len(used)*p), high: make([]float64, len(used)*p)}
	methods := o.EffectiveMethods()
	for i, s := range used {
		b.counts[i] = float64(s.Count())
		at := i * triangle
		for j := range p {
			b.means[i*p+j] = s.Mean(j)
			b.low[i*p+j], b.high[i*p+j] = s.Min(j), s.Max(j)
			for l := j; l < p; l++ {
				b.cross[at] = s.CrossProduct(j, l)
				at++
			}
			if methods[j] == pca.MedianMAD {
				b.ranked[j] = append(b.ranked[j], s.Pick([]int{j}))
			}
		}
	}
	return b, nil
}

// mergeNeighbours makes groups summaries of nearly equal numbers of neighbouring parts.
func mergeNeighbours(parts []*pca.Summary, groups int) []*pca.Summary {
	out := make([]*pca.Summary, groups)
	for g := range out {
		out[g] = pca.MergeAll(parts[g*len(parts)/groups : (g+1)*len(parts)/groups]...)
	}
	return out
}
