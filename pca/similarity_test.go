package pca

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// symmetric makes a p×p matrix with ones on the diagonal from its upper triangle by rows.
func symmetric(p int, upper ...float64) []float64 {
	r := make([]float64, p*p)
	for i := range p {
		r[i*p+i] = 1
		for j := i + 1; j < p; j++ {
			r[i*p+j], r[j*p+i] = upper[0], upper[0]
			upper = upper[1:]
		}
	}
	return r
}

func TestSimilarOrder(t *testing.T) {
	for _, c := range []struct {
		name string
		p    int
		r    []float64
		want []int
	}{
		{"none", 0, nil, nil},
		{"one", 1, []float64{1}, []int{0}},
		{"two", 2, symmetric(2, -.3), []int{0, 1}},
		// Two pairs, 0 with 1 and 2 with 3; of the ends that may meet, 1 and 3 are the
		// most alike.
		{"two pairs", 4, symmetric(4, .9, .1, .3, .2, -.4, .8), []int{0, 1, 3, 2}},
		{"two pairs, the outer ends alike", 4, symmetric(4, .9, .1, .4, .2, -.3, .8), []int{1, 0, 3, 2}},
		{"two pairs, the first ends alike", 4, symmetric(4, .9, .4, .1, .2, -.3, .8), []int{1, 0, 2, 3}},
		// 0 is as close to 1 as to 2: the lower channel joins first.
		{"tie", 3, symmetric(3, .5, .5, 0), []int{1, 0, 2}},
		{"no correlations, as they stand", 5, symmetric(5, make([]float64, 10)...), []int{0, 1, 2, 3, 4}},
		{"all alike, as they stand", 4, symmetric(4, 1, 1, 1, 1, 1, 1), []int{0, 1, 2, 3}},
		// The worked example often printed with the method, five 5S RNA sequences
		// (distances from memory, divided by 100): a with b at 17, e joins at 22, c with d
		// at 28, all at 33. e stands beside b (21 < 23), c beside a (the least of 21, 31,
		// 39, 43).
		{"five sequences", 5, symmetric(5, .83, .79, .69, .77, .70, .66, .79, .72, .61, .57), []int{4, 1, 0, 2, 3}},
	} {
		if got := Cluster(c.r, c.p).Order; !slices.Equal(got, c.want) {
			t.Errorf("%s: %v, want %v", c.name, got, c.want)
		}
	}
}

// The joins of the same five sequences, and the clusters at heights between them.
func TestJoins(t *testing.T) {
	tree := Cluster(symmetric(5, .83, .79, .69, .77, .70, .66, .79, .72, .61, .57), 5)
	var heights []float64
	for _, j := range tree.Joins {
		heights = append(heights, math.Round(j.Distance*1e12)/1e12)
	}
	slices.Sort(heights)
	if !slices.Equal(heights, []float64{.17, .22, .28, .33}) {
		t.Errorf("joined at %v", heights)
	}
	for _, c := range []struct {
		at   float64
		want string
	}{{.1, "[]"}, {.2, "[[0 1]]"}, {.25, "[[0 1 4]]"}, {.3, "[[0 1 4] [2 3]]"}, {.4, "[[0 1 2 3 4]]"}} {
		if got := fmt.Sprint(tree.Cut(c.at)); got != c.want && !(c.want == "[]" && len(tree.Cut(c.at)) == 0) {
			t.Errorf("cut at %g: %s, want %s", c.at, got, c.want)
		}
	}
}

// Any cut has the clusters that merging the nearest pair again and again has, the slow way
// by definition.
func TestCutAgainstDefinition(t *testing.T) {
	for seed := range uint64(20) {
		p := 4 + int(seed)
		r := randomCorrelations(p, seed)
		for _, at := range []float64{.1, .3, .5, .7, .9} {
			got := fmt.Sprint(Cluster(r, p).Cut(at))
			if want := fmt.Sprint(cutByDefinition(r, p, at)); got != want {
				t.Errorf("%d channels cut at %g: %s, by definition %s", p, at, got, want)
			}
		}
	}
}

func cutByDefinition(r []float64, p int, at float64) [][]int {
	var sets [][]int
	for j := range p {
		sets = append(sets, []int{j})
	}
	for {
		best, a, b := math.Inf(1), 0, 0
		for i := range sets {
			for j := range i {
				sum := 0.0
				for _, k := range sets[i] {
					for _, l := range sets[j] {
						sum += 1 - math.Abs(r[k*p+l])
					}
				}
				if d := sum / float64(len(sets[i])*len(sets[j])); d < best {
					best, a, b = d, j, i
				}
			}
		}
		if best > at {
			break
		}
		sets[a] = append(sets[a], sets[b]...)
		sets = slices.Delete(sets, b, b+1)
	}
	var out [][]int
	for _, m := range sets {
		if len(m) > 1 {
			slices.Sort(m)
			out = append(out, m)
		}
	}
	slices.SortFunc(out, func(a, b []int) int { return a[0] - b[0] })
	return out
}

// randomCorrelations are those of p channels that follow a few common stories.
func randomCorrelations(p int, seed uint64) []float64 {
	const stories, n = 6, 40
	rng := rand.New(rand.NewPCG(seed, uint64(p)))
	weights := make([]float64, p)
	for j := range weights {
		weights[j] = 2 * rng.NormFloat64()
	}
	rows := make([]float64, 0, n*p)
	for range n {
		var common [stories]float64
		for s := range common {
			common[s] = rng.NormFloat64()
		}
		for j := range p {
			rows = append(rows, weights[j]*common[j%stories]+rng.NormFloat64())
		}
	}
	return NewBuilder(p, CrossProducts, 0).Summarize(rows, n).Correlations()
}

// slowOrder is the definition: again and again the two closest of all clusters become one,
// the distance of two being the mean over all pairs of their channels.
func slowOrder(r []float64, p int) []int {
	var clusters [][]int
	for j := range p {
		clusters = append(clusters, []int{j})
	}
	for len(clusters) > 1 {
		best, at := math.Inf(1), [2]int{}
		for y, b := range clusters {
			for x, a := range clusters[:y] {
				sum := 0.0
				for _, i := range a {
					for _, j := range b {
						sum += 1 - math.Abs(r[i*p+j])
					}
				}
				if d := sum / float64(len(a)*len(b)); d < best {
					best, at = d, [2]int{x, y}
				}
			}
		}
		a, b := clusters[at[0]], clusters[at[1]]
		if slices.Min(a) > slices.Min(b) {
			a, b = b, a
		}
		clusters[at[0]] = joinAlike(a, b, r, p)
		clusters = slices.Delete(clusters, at[1], at[1]+1)
	}
	return clusters[0]
}

// The chains of nearest neighbours find the clusters of the definition, whatever the signs.
func TestSimilarOrderAgainstDefinition(t *testing.T) {
	for seed := range uint64(20) {
		p := 3 + 2*int(seed)
		r := randomCorrelations(p, seed)
		want := slowOrder(r, p)
		if got := Cluster(r, p).Order; !slices.Equal(got, want) {
			t.Errorf("p=%d: %v, want %v", p, got, want)
		}
		for i := 1; i < p; i++ {
			r[i], r[i*p] = -r[i], -r[i*p]
		}
		if got := Cluster(r, p).Order; !slices.Equal(got, want) {
			t.Errorf("p=%d, channel 0 reversed: %v, want %v", p, got, want)
		}
	}
}

// Three pairs of channels, alike within and hardly alike between, shuffled: partners must
// stand side by side, and the pairs in the order of their own likeness.
func TestSimilarOrderOfPairs(t *testing.T) {
	pair := map[int]int{0: 3, 3: 0, 1: 5, 5: 1, 2: 4, 4: 2}
	r := make([]float64, 36)
	for i := range 6 {
		for j := range 6 {
			switch {
			case i == j:
				r[i*6+j] = 1
			case pair[i] == j:
				r[i*6+j] = -.9 // a negative partner is as alike as a positive one
			default:
				r[i*6+j] = .1
			}
		}
	}
	// The pairs (0,3) and (1,5) share a little more.
	for _, c := range [][2]int{{0, 1}, {0, 5}, {3, 1}, {3, 5}} {
		r[c[0]*6+c[1]], r[c[1]*6+c[0]] = .3, .3
	}
	order := Cluster(r, 6).Order
	for i := 0; i < 6; i += 2 {
		if pair[order[i]] != order[i+1] {
			t.Fatalf("partners apart: %v", order)
		}
	}
	if at := slices.Index(order, 2) / 2; at == 1 {
		t.Errorf("the pair that shares least stands between the others: %v", order)
	}
}

// Every channel stands once, whatever the matrix, and the same matrix gives the same order.
func TestSimilarOrderIsAnOrder(t *testing.T) {
	rng := rand.New(rand.NewPCG(51, 52))
	for _, p := range []int{0, 1, 2, 3, 17, 200} {
		r := make([]float64, p*p)
		for i := range p {
			for j := range i {
				v := 2*rng.Float64() - 1
				if rng.IntN(3) == 0 {
					v = .5 // ties
				}
				r[i*p+j], r[j*p+i] = v, v
			}
		}
		order := Cluster(r, p).Order
		sorted := slices.Sorted(slices.Values(order))
		if len(order) != p {
			t.Fatalf("p=%d: %d channels", p, len(order))
		}
		for j, v := range sorted {
			if v != j {
				t.Fatalf("p=%d: %v", p, sorted)
			}
		}
		if !slices.Equal(order, Cluster(r, p).Order) {
			t.Errorf("p=%d: another order the second time", p)
		}
	}
}

// Copies up to scale are found, near copies are not.
func TestTwins(t *testing.T) {
	x := []float64{1, -2, 1.1, 5, 2, -4, 2, 3, 3, -6, 2.9, 4, 4, -8, 4.2, 1}
	s := NewBuilder(4, CrossProducts, 0).Summarize(x, 4)
	if got := Twins(s.Correlations(), 4); len(got) != 1 || got[0] != [2]int{0, 1} {
		t.Errorf("%v", got)
	}
}

func TestSimilarOrderRefusesNaN(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("no panic")
		}
	}()
	Cluster(symmetric(3, .5, math.NaN(), .5), 3)
}

func BenchmarkSimilarOrder(b *testing.B) {
	for _, p := range []int{100, 500, 2000} {
		r := randomCorrelations(p, 1)
		b.Run(fmt.Sprintf("p=%d", p), func(b *testing.B) {
			b.SetBytes(int64(8 * len(r)))
			for b.Loop() {
				Cluster(r, p)
			}
		})
	}
}
