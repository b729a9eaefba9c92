package pcr_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"axisfold/pca"
	"axisfold/pcr"
)

// The error of the whole procedure against the procedure done by hand on rows: in every fold
// the rule is applied to the other rows alone, with the other folds, and the model it chooses is
// brought to the rows held out.
func TestProcedureByBruteForce(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 1))
	const n, p, folds, size = 60, 5, 6, 10
	s := defaults("a", "b", "c", "d", "e", "y")
	width := p + 1
	data := collinear(rng, n, p)
	at := func(c int) []float64 { return data[c*size*width : (c+1)*size*width] }
	forward := []pca.Split{{Train: []int{0}, Held: []int{1}}, {Train: []int{0, 1}, Held: []int{2}}, {Train: []int{0, 1, 2}, Held: []int{3}}, {Train: []int{0, 1, 2, 3}, Held: []int{4}}, {Train: []int{0, 1, 2, 3, 4}, Held: []int{5}}}
	for _, splits := range [][]pca.Split{pca.HoldEachOut(folds), forward} {
		for _, choice := range []pcr.Choice{pcr.Minimum, pcr.OneStandardError, pcr.SmallestAICc, pcr.SmallestBIC, pcr.SmallestCp, pcr.TThreshold, pcr.ConditionLimit, pcr.RandomisationTest, pcr.Given} {
			for _, order := range []pcr.Order{pcr.ByVariance, pcr.ByCorrelation} {
				s.options.Choice, s.options.Order, s.options.Limit, s.options.Components = choice, order, 2, 2
				if choice == pcr.TThreshold {
					s.options.Order = pcr.ByCorrelation
				}
				if choice == pcr.ConditionLimit {
					s.options.Order = pcr.ByVariance
				}
				if s.options.Alpha = .05; choice == pcr.RandomisationTest && &splits[0] == &forward[0] {
					s.options.Alpha = .3 // early folds have few others
				}
				s.folds, s.options.Splits, s.options.Nested = folds, splits, true
				got := s.fit(t, data).Models[0].Procedure
				total, rows := 0.0, 0
				var chosen []int
				for _, split := range splits {
					if choice.ByFolds() && len(split.Inside(splits)) < 2 {
						continue
					}
					// The cells learnt from, numbered anew, and the folds among them.
					var train []float64
					for _, c := range split.Train {
						train = append(train, at(c)...)
					}
					alone := s
					alone.folds, alone.options.Nested, alone.options.Splits = len(split.Train), false, nil
					if &splits[0] == &forward[0] {
						alone.options.Splits = forward[:len(split.Train)-1]
					}
					if len(split.Train) < 3 {
						alone.folds = 0
					}
					k := alone.fit(t, train).Models[0].Components
					squares, count := brute(t, s, at, split, k)
					total, rows, chosen = total+squares, rows+count, append(chosen, k)
				}
				want := math.Sqrt(total / float64(rows))
				if math.Abs(got.CV/want-1) > 1e-9 || !slices.Equal(got.Chosen, chosen) {
					t.Errorf("%s by %s: %.12g choosing %d, by brute force %.12g choosing %d", choice, order, got.CV, got.Chosen, want, chosen)
				}
			}
		}
	}
}

// Where components are many and tell little, the smallest error on held-out rows is too good; the error of
// the whole procedure is that of new rows, which is had in closed form: for independent standard
// channels it is σ² + |b - β|² + b₀². Models for it learn from as many rows as a fold does.
func TestProcedureIsUnbiased(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 1))
	const p, folds, each, tables = 8, 5, 8, 800
	s := defaults("a", "b", "c", "d", "e", "f", "g", "h", "y")
	draw := func(n int) (data []float64) {
		for range n {
			y := 0.0
			for range p {
				x := rng.NormFloat64()
				y += .1 * x
				data = append(data, x)
			}
			data = append(data, y+rng.NormFloat64())
		}
		return data
	}
	s.options.Choice, s.options.Order = pcr.Minimum, pcr.ByCorrelation
	var least, nested, truth [2]float64 // sums and sums of squares
	add := func(to *[2]float64, v float64) { to[0] += v; to[1] += v * v }
	for range tables {
		s.folds, s.options.Nested = folds, true
		m := s.fit(t, draw(folds*each)).Models[0]
		add(&least, square(m.Path[m.Components].CV))
		add(&nested, square(m.Procedure.CV))
		s.folds, s.options.Nested = folds-1, false
		m = s.fit(t, draw((folds-1)*each)).Models[0]
		e := 1 + square(m.Intercept.Coefficient)
		for _, term := range m.Terms {
			e += square(term.Coefficient - .1)
		}
		add(&truth, e)
	}
	mean := func(v [2]float64) (m, slip float64) {
		m = v[0] / tables
		return m, math.Sqrt((v[1]/tables - m*m) / tables)
	}
	l, ls := mean(least)
	n, ns := mean(nested)
	w, ws := mean(truth)
	t.Logf("mean squared error: smallest %.4f (%.4f), whole procedure %.4f (%.4f), new rows %.4f (%.4f)", l, ls, n, ns, w, ws)
	if math.Abs(n-w) > 3*math.Hypot(ns, ws) {
		t.Errorf("the error of the procedure is %.4f, of new rows %.4f", n, w)
	}
	if l > w-4*math.Hypot(ls, ws) {
		t.Errorf("the smallest error is %.4f, of new rows %.4f: expected it too good", l, w)
	}
}

// Two folds learn from one each, by which no rule can decide: no number, and a reason.
func TestProcedureWithoutFolds(t *testing.T) {
	s := defaults("a", "b", "c", "d", "e", "y")
	s.folds, s.options.Nested, s.options.Choice = 2, true, pcr.Minimum
	m := s.fit(t, collinear(rand.New(rand.NewPCG(5, 1)), 40, 5)).Models[0]
	if !math.IsNaN(m.Procedure.CV) || m.Procedure.Note == "" || len(m.Warnings) == 0 {
		t.Errorf("%+v, warnings %v", m.Procedure, m.Warnings)
	}
}
