package symeig

import (
	"math"
	"slices"
	"testing"
)

// Matrices whose eigenvalues are known.
func TestPublished(t *testing.T) {
	difference := make([]float64, 77)
	for k := range difference {
		difference[k] = 2 - 2*math.Cos(float64(77-k)*math.Pi/78)
	}
	for _, known := range []struct {
		name   string
		a      []float64
		values []float64 // descending; only as many as are known
	}{
		{
			// Rosser, Lanczos, Hestenes and Karush (1951), Separation of close eigenvalues
			// of a real symmetric matrix, J. Research of the National Bureau of Standards
			// 47, 291-297: a double value, one near it, a zero, a pair of opposite sign.
			"Rosser",
			[]float64{
				611, 196, -192, 407, -8, -52, -49, 29,
				196, 899, 113, -192, -71, -43, -8, -44,
				-192, 113, 899, 196, 61, 49, 8, 52,
				407, -192, 196, 611, 8, 44, 59, -23,
				-8, -71, 61, 8, 411, -599, 208, 208,
				-52, -43, 49, 44, -599, 411, 208, 208,
				-49, -8, 8, 59, 208, 208, 99, -911,
				29, -44, 52, -23, 208, 208, -911, 99,
			},
			[]float64{
				10 * math.Sqrt(10405), 1020, 510 + 100*math.Sqrt(26), 1000, 1000,
				510 - 100*math.Sqrt(26), 0, -10 * math.Sqrt(10405),
			},
		},
		{
			// Wilkinson (1965), The Algebraic Eigenvalue Problem, p. 309; from memory.
			"W21+", kinds["wilkinson"](nil, 21),
			[]float64{10.746194182903393, 10.746194182903322},
		},
		{
			// The second difference: 2 - 2·cos(kπ/(p+1)), in every textbook.
			"difference", kinds["difference"](nil, 77), difference,
		},
	} {
		p := int(math.Sqrt(float64(len(known.a))))
		got, vectors, err := Decompose(slices.Clone(known.a), p)
		if err != nil {
			t.Fatal(err)
		}
		check(t, known.name, known.a, p, got, vectors)
		alone := make([]float64, p)
		Values(slices.Clone(known.a), p, alone, new(Work))
		for i, want := range known.values {
			slack := float64(p) * 0x1p-52 * known.values[0]
			if math.Abs(got[i]-want) > slack || math.Abs(alone[i]-want) > slack {
				t.Errorf("%s: value %d is %.17g, alone %.17g, want %.17g", known.name, i, got[i], alone[i], want)
			}
		}
	}
}
