package pca

import (
	"fmt"
	"math"
)

// Method is a way to centre and scale a channel: z = (x - center)/scale.
type Method string

// The methods. Sources: Montgomery, Peck & Vining (unit normal and unit length);
// van den Berg et al. 2006, BMC Genomics 7:142 (Pareto, range).
const (
	UnitNormal Method = "unit-normal" // mean; standard deviation s, divisor n-1: Z'Z = (n-1)R
	UnitLength Method = "unit-length" // mean; √Σ(x-m)²: Z'Z = R
	CenterOnly Method = "center"      // mean; 1
	Pareto     Method = "pareto"      // mean; √s
	Range      Method = "range"       // mean; maximum - minimum
	MedianMAD  Method = "median-mad"  // median; 1.482602 × median absolute deviation
	NoScaling  Method = "none"        // 0; 1
)

// Methods lists all scaling methods, the default first.
var Methods = []Method{UnitNormal, UnitLength, CenterOnly, Pareto, Range, MedianMAD, NoScaling}

// madToDeviation is 1/Φ⁻¹(3/4): the median absolute deviation of a normal sample times
// this estimates its standard deviation.
const madToDeviation = 1.4826022185056018

// NeedsRanks tells whether one of the methods asks for medians, which a Builder keeps
// only on request.
func NeedsRanks(methods []Method) bool {
	for _, m := range methods {
		if m == MedianMAD {
			return true
		}
	}
	return false
}

// Scaling is the centre and scale of every channel, in the channel's own unit.
type Scaling struct {
	Methods []Method
	Center  []float64
	Scale   []float64
}

// FitScaling takes centres and scales from the rows behind s, one method per channel.
// names are for errors: a constant channel cannot be scaled by its spread, and a channel
// that holds one value in more than half of its rows has no median absolute deviation.
func FitScaling(s *Summary, methods []Method, names []string) (*Scaling, error) {
	sc := &Scaling{Methods: methods, Center: make([]float64, s.p), Scale: make([]float64, s.p)}
	for j, m := range methods {
		if s.Constant(j) {
			return nil, &DataError{Channel: names[j],
				Problem: fmt.Sprintf("holds one value, %.6g, in all %d rows", s.low[j], s.count),
				Hint:    "leave it out with read.leave_out, or set standardize.constant: drop"}
		}
		sc.Center[j], sc.Scale[j] = s.mean[j], 1
		switch m {
		case UnitNormal:
			sc.Scale[j] = s.Deviation(j)
		case UnitLength:
			sc.Scale[j] = math.Sqrt(s.CenteredSquares(j))
		case CenterOnly:
		case Pareto:
			sc.Scale[j] = math.Sqrt(s.Deviation(j))
		case Range:
			sc.Scale[j] = s.high[j] - s.low[j]
		case MedianMAD:
			sc.Center[j] = s.Median(j)
			sc.Scale[j] = madToDeviation * s.MedianDeviation(j)
			if !(sc.Scale[j] > 0) {
				return nil, &DataError{Channel: names[j],
					Problem: "holds one value in more than half of the rows, so its median absolute deviation is 0",
					Hint:    "give it another scaling under standardize.channels"}
			}
		case NoScaling:
			sc.Center[j] = 0
		default:
			panic("pca: unknown scaling method " + string(m))
		}
		if !(sc.Scale[j] > 0) || math.IsInf(sc.Scale[j], 0) {
			return nil, &DataError{Channel: names[j],
				Problem: fmt.Sprintf("has a scale of %g", sc.Scale[j]), Hint: "leave it out with read.leave_out"}
		}
	}
	return sc, nil
}
