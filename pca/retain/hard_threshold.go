package retain

import (
	"fmt"
	"math"

	"axisfold/pca"
)

// Gavish & Donoho 2014 (IEEE Trans. Inf. Theory 60:5040): the best threshold for singular
// values of a low-rank matrix in white noise, λ(β)·√n·σ with the noise known, ω(β) times
// the median singular value without; β is the ratio of the smaller to the larger side.
var hardThreshold = Rule{
	Name:     "hard-threshold",
	Summary:  "singular values above the best threshold for white noise (Gavish & Donoho 2014); wrong when channels differ in noise",
	variants: []Settings{with(func(s *Settings) { s.Noise = 0 })},
	apply: func(e *Evidence, s Settings) Verdict {
		v := Verdict{Setting: "noise unknown"}
		if s.Noise > 0 {
			v.Setting = fmt.Sprintf("noise %g", s.Noise)
		}
		n, p := float64(e.Rows-1), float64(e.Width()) // centring costs one row
		if e.Width() < 2 || e.Rows < 3 {
			return v.abstain("the table is too small")
		}
		beta, side := math.Min(n, p)/math.Max(n, p), math.Max(n, p)
		limit := hardThresholdLambda(beta) * math.Sqrt(side) * s.Noise
		if s.Noise == 0 {
			m := len(e.Values)
			median := (math.Sqrt(e.Values[(m-1)/2]) + math.Sqrt(e.Values[m/2])) / 2 * math.Sqrt(n)
			if median <= 1e-10*math.Sqrt(n*e.Values[0]) {
				return v.abstain("the median singular value is zero: there is no noise to measure")
			}
			limit = HardThresholdOmega(beta) * median
		}
		for _, l := range e.Values {
			v.Steps = append(v.Steps, Step{Value: math.Sqrt(n * l), Threshold: limit, Kept: math.Sqrt(n*l) > limit})
			v.Reference = append(v.Reference, limit*limit/n)
		}
		v.Components = leading(v.Steps)
		v.Note = fmt.Sprintf("%d singular values are above %.4g", v.Components, limit)
		if e.Matrix == pca.Correlation {
			v.Note += "; takes the noise as equal in all channels"
		}
		return v
	},
}

func hardThresholdLambda(beta float64) float64 {
	return math.Sqrt(2*(beta+1) + 8*beta/((beta+1)+math.Sqrt(beta*beta+14*beta+1)))
}

// HardThresholdOmega is ω(β) = λ(β)/√μ, μ the median of the Marčenko-Pastur law.
func HardThresholdOmega(beta float64) float64 {
	return hardThresholdLambda(beta) / math.Sqrt(marchenkoPasturMedian(beta))
}

// marchenkoPasturMedian solves for the median by bisection on the distribution function,
// integrated after the substitution x = middle - half·cos θ, which takes the square-root
// ends out of the density.
func marchenkoPasturMedian(beta float64) float64 {
	low, high := (1-math.Sqrt(beta))*(1-math.Sqrt(beta)), (1+math.Sqrt(beta))*(1+math.Sqrt(beta))
	middle, half := (low+high)/2, (high-low)/2
	below := func(x float64) float64 {
		end := math.Acos(math.Max(-1, math.Min(1, (middle-x)/half)))
		const steps = 2000 // midpoint rule on a smooth periodic integrand
		sum := 0.0
		for i := range steps {
			s, c := math.Sincos((float64(i) + .5) * end / steps)
			sum += half * s * half * s / (2 * math.Pi * beta * (middle - half*c))
		}
		return sum * end / steps
	}
	a, b := low, high
	for b-a > 1e-13*high {
		x := (a + b) / 2
		if below(x) < .5 {
			a = x
		} else {
			b = x
		}
	}
	return (a + b) / 2
}
