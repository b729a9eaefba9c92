package pcr

import (
	"fmt"
	"math"
	"math/rand/v2"

	"axisfold/pca"
)

const (
	exactFolds = 12   // up to so many folds all signs are gone through
	signDraws  = 9999 // beyond, drawn
)

// chooseByChance takes the fewest components whose held-out error exceeds the smallest by no
// more than chance explains: the randomisation test of van der Voet (1994) on paired squared
// errors, here those of whole folds, which may hold rows that depend on each other. If two numbers
// of components predict equally well, the difference of each fold is as likely to
// be the other way; chance is the share of signs with a sum of differences as large as the one seen.
// With several deals of rows the folds of the first are taken.
func (m *Model) chooseByChance(least int, o Options) error {
	folds := m.Folds
	if math.Exp2(-float64(folds)) > o.Alpha {
		return &pca.DataError{Problem: fmt.Sprintf("the signs of %d folds cannot tell a difference with probability of error %g", folds, o.Alpha),
			Hint: "use more folds"}
	}
	m.Components = least
	for k := range least {
		differences := make([]float64, folds)
		for f := range differences {
			differences[f] = m.held[k][f] - m.held[least][f]
		}
		m.Path[k].Chance = chance(differences, rand.New(rand.NewPCG(o.Seed, uint64(k))))
		if m.Path[k].Chance > o.Alpha && k < m.Components {
			m.Components = k
		}
	}
	return nil
}

// chance is the share of signs under which the differences sum to what they do, or more.
func chance(differences []float64, rng *rand.Rand) float64 {
	seen, size := 0.0, 0.0
	for _, d := range differences {
		seen += d
		size += math.Abs(d)
	}
	seen -= 1e-12 * size // sums that are equal but for rounding
	reaches := func(sign func(f int) bool) bool {
		sum := 0.0
		for f, d := range differences {
			if sign(f) {
				sum -= d
			} else {
				sum += d
			}
		}
		return sum >= seen
	}
	count := 0
	if len(differences) <= exactFolds {
		for bits := range 1 << len(differences) {
			if reaches(func(f int) bool { return bits>>f&1 == 1 }) {
				count++
			}
		}
		return float64(count) / float64(int(1)<<len(differences))
	}
	for range signDraws {
		var bits uint64
		if reaches(func(f int) bool {
			if f%64 == 0 {
				bits = rng.Uint64()
			}
			return bits>>(f%64)&1 == 1
		}) {
			count++
		}
	}
	return float64(count+1) / (signDraws + 1) // the signs seen are one of them
}

// chooseByCondition takes the components, by falling variance, whose condition index
// √(λ₁/λ_a) stays below the limit.
func (m *Model) chooseByCondition(limit float64) {
	for m.Components < len(m.Path)-1 && math.Sqrt(m.roots[0]/m.roots[m.Components]) < limit {
		m.Components++
	}
}
