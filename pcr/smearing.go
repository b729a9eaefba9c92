package pcr

import (
	"math"

	"axisfold/pca"
)

// Smearing brings predictions of a transformed response back to the unit of the response.
// Turning a prediction back on its own gives something like a median: the mean is larger
// where the transform is concave. The smearing estimate (Duan 1983, J. Am. Stat. Assoc.
// 78:605) is the mean of prediction plus residual turned back, over the residuals e of the
// fit; it takes no distribution, but equal spread. For the transforms there are it needs
// sums alone: ȳ = exp(ŷ)·mean(exp(e)), and ŷ² + 2ŷ·mean(e) + mean(e²) for square roots.
type Smearing struct {
	Transform pca.Transform
	count     float64
	sum       float64 // Σe
	squares   float64 // Σe²
	turned    float64 // Σ of e turned back, for logarithms
}

// Add takes in a residual, on the scale of the fit.
func (s *Smearing) Add(e float64) {
	s.count++
	s.sum += e
	s.squares += e * e
	s.turned += s.Transform.Invert(e)
}

// Merge takes in the residuals of o.
func (s *Smearing) Merge(o Smearing) {
	s.count += o.count
	s.sum += o.sum
	s.squares += o.squares
	s.turned += o.turned
}

// Mean returns the mean response, in its unit, of rows with the given prediction on the
// scale of the fit.
func (s *Smearing) Mean(predicted float64) float64 {
	switch s.Transform {
	case pca.Log, pca.Log10:
		return s.Transform.Invert(predicted) * s.Factor()
	case pca.SquareRoot:
		return predicted*predicted + 2*predicted*s.MeanResidual() + s.MeanSquare()
	}
	return predicted
}

// Factor is by how much the mean of a logarithm's response exceeds its prediction turned
// back; NaN for other transforms.
func (s *Smearing) Factor() float64 {
	if s.Transform != pca.Log && s.Transform != pca.Log10 {
		return math.NaN()
	}
	return s.turned / s.count
}

// MeanResidual is the mean of the residuals, 0 but for rounding with an intercept.
func (s *Smearing) MeanResidual() float64 { return s.sum / s.count }

// MeanSquare is the mean of the squared residuals, divisor n.
func (s *Smearing) MeanSquare() float64 { return s.squares / s.count }
