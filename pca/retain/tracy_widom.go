package retain

import (
	"fmt"
	"math"
	"sync"

	"gonum.org/v1/gonum/integrate/quad"
	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/mathext"
)

// Johnstone 2001 (Ann. Stat. 29:295): the largest root of noise, centred and scaled,
// follows the Tracy-Widom law of order 1. Roots are tested one after another, with the
// noise estimated anew from the roots not yet kept (after Kritchman & Nadler 2008,
// Chemom. Intell. Lab. Syst. 94:19).
var tracyWidom = Rule{
	Name:     "tracy-widom",
	Summary:  "roots above the largest root of noise (Johnstone 2001), tested one after another",
	variants: []Settings{with(func(s *Settings) { s.Alpha = 0.05 })},
	apply: func(e *Evidence, s Settings) Verdict {
		v := Verdict{Setting: fmt.Sprintf("alpha %g", s.Alpha)}
		n, p := float64(e.Rows-1), float64(e.Width())
		if n < 5 || p < 5 {
			return v.abstain(fmt.Sprintf("the limit law needs five channels and six rows; the table has %d and %d", e.Width(), e.Rows))
		}
		quantile := TracyWidomQuantile(1 - s.Alpha)
		going := true
		for a, l := range e.Values {
			// If this root is noise, it is the largest of the p-a that are; the noise is then
			// estimated with it among them. Leaving it out, as the published procedure does,
			// finds a component too many in a quarter of tables of 8 to 20 channels.
			left := p - float64(a)
			// Fewer than five roots cannot tell noise from signal: they count as noise.
			step := Step{Value: l, Threshold: l}
			if going && left >= 5 && a < e.Rank {
				mu, sigma := tracyWidomScale(n, left)
				step.Threshold = noiseAfter(e, a) * (mu + quantile*sigma) / n
			}
			going = going && l > step.Threshold
			step.Kept = going
			v.Steps = append(v.Steps, step)
			v.Reference = append(v.Reference, step.Threshold)
		}
		v.Components = leading(v.Steps)
		if unequalNoise(&v, e) {
			return v.abstain("the noise differs between channels: no number leaves roots like those of equal noise")
		}
		if v.Components < len(v.Steps) {
			next := v.Steps[v.Components]
			v.Note = fmt.Sprintf("root %d is %.4g; noise reaches %.4g", v.Components+1, next.Value, next.Threshold)
		} else {
			v.Note = "every root is above noise"
		}
		return v
	},
}

// noiseAfter estimates the variance of the noise when the first k roots are signal: the
// mean of the others is too small, because signal draws variance away from them. Kritchman
// & Nadler add what the first k roots owe to noise, l_j - ρ_j with ρ_j the larger root of
// ρ² - ρ·(l_j + σ² - σ²(p-k)/n) + l_j·σ² = 0, and repeat until σ² settles.
func noiseAfter(e *Evidence, k int) float64 {
	rest := e.Total
	for _, l := range e.Values[:k] {
		rest -= l
	}
	left, n := float64(e.Width()-k), float64(e.Rows-1)
	start := rest / left
	noise := start
	for range 100 {
		sum := rest
		for _, l := range e.Values[:k] {
			b := l + noise - noise*left/n
			square := b*b - 4*l*noise
			if square < 0 {
				return start // no signal of this strength exists beside such noise
			}
			sum += l - (b+math.Sqrt(square))/2
		}
		next := sum / left
		if math.Abs(next-noise) < 1e-12*noise {
			return next
		}
		noise = next
	}
	return noise
}

// tracyWidomScale returns centre and scale of the largest root of Y'Y, Y n×p of
// independent N(0,1).
func tracyWidomScale(n, p float64) (mu, sigma float64) {
	a, b := math.Sqrt(n-1), math.Sqrt(p)
	return (a + b) * (a + b), (a + b) * math.Cbrt(1/a+1/b)
}

// TracyWidom is the distribution function F₁(s) = det(I - K) on L²(s,∞) with
// K(x,y) = ½·Ai((x+y)/2) (Ferrari & Spohn 2005), by Gauss-Legendre quadrature (Bornemann
// 2010) with 80 nodes on [s, s+16], beyond which the kernel is below 1e-15.
func TracyWidom(s float64) float64 {
	const nodes = 80
	x, w := make([]float64, nodes), make([]float64, nodes)
	quad.Legendre{}.FixedLocations(x, w, s, s+16)
	k := mat.NewDense(nodes, nodes, nil)
	for i := range nodes {
		for j := range nodes {
			v := -math.Sqrt(w[i]*w[j]) / 2 * real(mathext.AiryAi(complex((x[i]+x[j])/2, 0)))
			if i == j {
				v++
			}
			k.Set(i, j, v)
		}
	}
	return mat.Det(k)
}

var tracyWidomQuantiles sync.Map // by probability; each costs dozens of determinants

// TracyWidomQuantile is the inverse of TracyWidom, for probabilities from 1e-6 to 1-1e-6.
func TracyWidomQuantile(probability float64) float64 {
	if q, ok := tracyWidomQuantiles.Load(probability); ok {
		return q.(float64)
	}
	probability = math.Max(1e-6, math.Min(1-1e-6, probability))
	low, high := -8.0, 10.0
	for high-low > 1e-9 {
		middle := (low + high) / 2
		if TracyWidom(middle) < probability {
			low = middle
		} else {
			high = middle
		}
	}
	q := (low + high) / 2
	tracyWidomQuantiles.Store(probability, q)
	return q
}
