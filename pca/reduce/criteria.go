package reduce

import (
	"math"
)

// criterion numbers the names in [Criteria]; excess is the searches' own.
type criterion int

const (
	worstR2 criterion = iota
	rm
	rv
	gcd
	mcCabeDet
	mcCabeTrace
	mcCabeFrobenius
	mcCabeCanonical
	excess // minus the sum of what dropped channels exceed their limits by, in limits
)

// meanWeight lets the mean R² decide between sets whose worst R² is the same.
const meanWeight = 1e-9

// quick tells whether the criterion after keeping one more channel costs only p operations.
func (c criterion) quick() bool {
	return c == worstR2 || c == rm || c == mcCabeTrace || c == mcCabeDet || c == excess
}

// score is the criterion of the kept set on a scale where larger is better and comparisons
// between sets of one size are those of the criterion's own value.
func (q *problem) score(c criterion, s *swept) float64 {
	p := q.p
	switch c {
	case worstR2:
		worst, mean := q.worstAndMean(s)
		return worst + meanWeight*mean
	case rm, mcCabeTrace:
		return 1 - q.traceLeft(s)/q.trace
	case rv:
		sum := q.square
		for i := range p {
			for j := 0; j < p && !s.kept[i]; j++ {
				if !s.kept[j] {
					m, left := q.m[i*p+j], s.a[i*p+j]
					sum += (m-left)*(m-left) - m*m
				}
			}
		}
		return sum / q.square
	case gcd:
		return q.spanned(s, q.Components) / float64(q.Components)
	case mcCabeDet:
		return s.logDet
	case mcCabeFrobenius:
		return -q.frobeniusLeft(s) / q.square
	case mcCabeCanonical:
		return q.canonical(s)
	}
	sum := 0.0
	for j, kept := range s.kept {
		if !kept {
			sum -= math.Max(0, s.left(j)/q.limit(j, s.count)-1)
		}
	}
	return sum
}

func (q *problem) worstAndMean(s *swept) (worst, mean float64) {
	worst = 1
	sum := 0.0
	for j, kept := range s.kept {
		if kept {
			continue
		}
		r2 := q.r2(s, j)
		worst = math.Min(worst, r2)
		sum += r2
	}
	if s.count == q.p {
		return 1, 1
	}
	return worst, sum / float64(q.p-s.count)
}

// r2 of a channel beside the kept set; 1 where what is left is rounding.
func (q *problem) r2(s *swept, j int) float64 {
	if s.kept[j] || s.dependent(j) {
		return 1
	}
	return math.Max(0, 1-s.left(j)/q.m[j*q.p+j])
}

func (q *problem) traceLeft(s *swept) float64 {
	sum := 0.0
	for j, kept := range s.kept {
		if !kept {
			sum += s.left(j)
		}
	}
	return sum
}

func (q *problem) frobeniusLeft(s *swept) float64 {
	sum := 0.0
	for i := range q.p {
		for j := 0; j < q.p && !s.kept[i]; j++ {
			if !s.kept[j] {
				sum += s.a[i*q.p+j] * s.a[i*q.p+j]
			}
		}
	}
	return sum
}

// spanned is Σ r_k² over the first components, r_k² = 1 - v_k'·M_D.K·v_k/λ_k the squared
// multiple correlation of component k with the kept channels.
func (q *problem) spanned(s *swept, components int) float64 {
	p := q.p
	sum := 0.0
	for k := range components {
		if !(q.values[k] > 64*float64(p)*0x1p-52*q.values[0]) {
			break // a component without variance has no correlations
		}
		left := 0.0
		for i := range p {
			if s.kept[i] {
				continue
			}
			inner := 0.0
			for j := range p {
				if !s.kept[j] {
					inner += s.a[i*p+j] * q.vectors[j*p+k]
				}
			}
			left += q.vectors[i*p+k] * inner
		}
		sum += 1 - left/q.values[k]
	}
	return sum
}

// canonical is Σ ρ² between kept and dropped channels: with B a basis of the dropped ones,
// tr(M_BB⁻¹(M_BB - M_B.K)).
func (q *problem) canonical(s *swept) float64 {
	p := q.p
	basis := newSwept(q.m, p, q.floor)
	for j, kept := range s.kept {
		if !kept && !basis.dependent(j) {
			basis.keep([]int{j})
		}
	}
	sum := 0.0
	for i := range p {
		for j := 0; j < p && basis.done[i]; j++ {
			if basis.done[j] {
				sum -= basis.a[i*p+j] * (q.m[i*p+j] - s.a[i*p+j])
			}
		}
	}
	return sum
}

// bonus is what the preferred channels among m kept ones add to the criterion.
func bonus(preferred, m int) float64 { return preferBonus * float64(preferred) / float64(max(m, 1)) }

func (q *problem) preferredIn(s *swept) int {
	sum := 0
	for u, k := range q.preferred {
		if k > 0 && q.has(s, u) {
			sum += k
		}
	}
	return sum
}

// rated is the score with the bonus: what the searches compare.
func (q *problem) rated(s *swept) float64 {
	return q.score(q.goal, s) + bonus(q.preferredIn(s), s.count)
}

// after is the score once unit u is kept as well; scratch is as large as s.
func (q *problem) after(c criterion, s *swept, u int, scratch *swept) float64 {
	if len(q.units[u]) > 1 || !c.quick() {
		scratch.copyFrom(s)
		scratch.keep(q.units[u])
		return q.score(c, scratch)
	}
	p, k := q.p, q.units[u][0]
	row := s.a[k*p : k*p+p]
	d, share := row[k], 0.0
	if !s.dependent(k) {
		share = 1 / d
	} else {
		d = s.floor[k]
	}
	if c == mcCabeDet {
		return s.logDet + math.Log(d)
	}
	sum, worst := 0.0, 1.0
	switch c {
	case worstR2:
		if s.count+1 == p {
			return 1 + meanWeight
		}
		for i, kept := range s.kept {
			if !kept && i != k {
				r2 := 1 - max(0, s.a[i*p+i]-row[i]*row[i]*share)/q.m[i*p+i]
				worst = min(worst, r2)
				sum += r2
			}
		}
		return worst + meanWeight*sum/float64(p-s.count-1)
	case excess:
		for i, kept := range s.kept {
			if left := s.a[i*p+i] - row[i]*row[i]*share; !kept && i != k && left > 0 {
				sum -= max(0, left/q.limit(i, s.count+1)-1)
			}
		}
		return sum
	}
	for i, kept := range s.kept {
		if !kept && i != k {
			sum += max(0, s.a[i*p+i]-row[i]*row[i]*share)
		}
	}
	return 1 - sum/q.trace
}

// all returns every criterion in its own units, under the names in [Criteria].
func (q *problem) all(s *swept) map[string]float64 {
	components := q.Components
	if components == 0 {
		components = s.count
	}
	worst, mean := q.worstAndMean(s)
	rest := newSwept(s.a, q.p, q.floor)
	det := 1.0
	for j, kept := range s.kept {
		if kept {
			continue
		}
		if rest.dependent(j) {
			det = 0
			break
		}
		det *= rest.left(j)
		rest.pivot(j, 1)
	}
	return map[string]float64{
		"worst-r2": worst, "mean-r2": mean,
		"rm":               math.Sqrt(math.Max(0, q.score(rm, s))),
		"rv":               math.Sqrt(math.Max(0, q.score(rv, s))),
		"gcd":              q.spanned(s, components) / math.Sqrt(float64(components)*float64(s.count)),
		"mccabe-det":       det,
		"mccabe-trace":     q.traceLeft(s),
		"mccabe-frobenius": q.frobeniusLeft(s),
		"mccabe-canonical": q.canonical(s),
	}
}
