package pcr_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"axisfold/pca"
	"axisfold/pcr"
)

// collinear makes n rows of p channels that follow three stories, and a response.
func collinear(rng *rand.Rand, n, p int) []float64 {
	var data []float64
	for range n {
		var f [3]float64
		for i := range f {
			f[i] = rng.NormFloat64()
		}
		for j := range p {
			data = append(data, f[j%3]*float64(1+j)+.5*f[(j+1)%3]+.3*rng.NormFloat64())
		}
		data = append(data, f[0]-f[1]+.2*f[2]+.5*rng.NormFloat64())
	}
	return data
}

// Held-out errors from summaries against those of models fitted to the rows that each split
// learns from and brought to every row it holds out: with gaps, forward, repeated.
func TestSplitsByBruteForce(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 1))
	const n, p = 60, 5
	s := defaults("a", "b", "c", "d", "e", "y")
	data := collinear(rng, n, p)
	width := p + 1
	// Cells of six rows; two deals: the rows as they are, and the same rows turned about.
	at := func(cell int) []float64 {
		lo := cell % 10 * 6 * width
		if cell < 10 {
			return data[lo : lo+6*width]
		}
		var out []float64
		for r := range 6 {
			row := (r*10 + cell - 10) * width
			out = append(out, data[row:row+width]...)
		}
		return out
	}
	cases := map[string][]pca.Split{
		"gap":      {{Held: []int{0, 1}, Train: []int{3, 4, 5, 6, 7, 8, 9}}, {Held: []int{4, 5, 6}, Train: []int{0, 1, 2, 8, 9}}, {Held: []int{9}, Train: []int{0, 1, 2, 3, 4}}},
		"forward":  {{Held: []int{4}, Train: []int{0, 1, 2, 3}}, {Held: []int{6, 7}, Train: []int{0, 1, 2, 3, 4}}, {Held: []int{9}, Train: []int{0, 1, 2, 3, 4, 5, 6, 7, 8}}},
		"repeated": nil,
	}
	for deal := range 2 {
		for _, split := range pca.HoldEachOut(10) {
			for i := range split.Train {
				split.Train[i] += 10 * deal
			}
			split.Held[0] += 10 * deal
			split.Deal = deal
			cases["repeated"] = append(cases["repeated"], split)
		}
	}
	builder := pca.NewBuilder(width, pca.CrossProducts, 0)
	x, y := s.positions()
	for name, splits := range cases {
		for _, order := range []pcr.Order{pcr.ByVariance, pcr.ByCorrelation} {
			s.options.Order, s.form, s.options.Components = order, pca.CrossProducts, 2
			o := s.fitOptions()
			o.Splits = splits
			var cells []*pca.Summary
			for c := range 20 {
				cells = append(cells, builder.Summarize(at(c), 6))
			}
			r, err := pcr.Fit(builder.Summarize(data, n), cells, x, y, o)
			if err != nil {
				t.Fatal(err)
			}
			for k, step := range r.Models[0].Path {
				total, rows := 0.0, 0
				variance := 0.0
				for deal := range r.Models[0].Deals {
					var each []float64
					for _, split := range splits {
						if split.Deal != deal {
							continue
						}
						squares, count := brute(t, s, at, split, k)
						total += squares
						rows += count
						each = append(each, squares/float64(count))
					}
					mean, spread := 0.0, 0.0
					for _, e := range each {
						mean += e / float64(len(each))
					}
					for _, e := range each {
						spread += (e - mean) * (e - mean)
					}
					variance += spread / float64(len(each)-1) / float64(len(each)) / float64(r.Models[0].Deals)
				}
				want := math.Sqrt(total / float64(rows))
				if math.Abs(step.CV/want-1) > 1e-9 {
					t.Errorf("%s by %s, k = %d: %.12g, by brute force %.12g", name, order, k, step.CV, want)
				}
				if slip := math.Sqrt(variance) / (2 * want); math.Abs(step.CVError/slip-1) > 1e-7 {
					t.Errorf("%s by %s, k = %d: standard error %.12g, by brute force %.12g", name, order, k, step.CVError, slip)
				}
			}
		}
	}
}

// brute fits to the rows of the training cells and predicts every held-out row.
func brute(t *testing.T, s setup, at func(int) []float64, split pca.Split, k int) (squares float64, rows int) {
	t.Helper()
	var train []float64
	for _, c := range split.Train {
		train = append(train, at(c)...)
	}
	s.form, s.options.Components, s.folds, s.options.Choice = pca.Factor, k, 0, pcr.Given
	r := s.fit(t, train)
	predictor := r.NewPredictor(0, .95, s.options.ThroughOrigin)
	p := len(s.names)
	for _, c := range split.Held {
		held := at(c)
		for i := 0; i < len(held); i += p + 1 {
			var predicted, half [1]float64
			predictor.Predict(predicted[:], half[:], held[i:i+p], 1)
			squares += square(held[i+p] - predicted[0])
			rows++
		}
	}
	return squares, rows
}

func square(v float64) float64 { return v * v }
