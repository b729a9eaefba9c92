package pca

import "math"

// Transform is applied to every value of a channel before anything else.
type Transform string

// The transforms. They need no fitting, so folds cannot leak through them.
const (
	NoTransform Transform = "none"
	Log         Transform = "log"         // natural logarithm, x > 0
	Log10       Transform = "log10"       // decimal logarithm, x > 0
	SquareRoot  Transform = "square-root" // x >= 0
)

// Transforms lists all transforms, the default first.
var Transforms = []Transform{NoTransform, Log, Log10, SquareRoot}

// Apply returns the transformed value; ok is false where the transform has none.
func (t Transform) Apply(v float64) (result float64, ok bool) {
	switch t {
	case Log:
		return math.Log(v), v > 0
	case Log10:
		return math.Log10(v), v > 0
	case SquareRoot:
		return math.Sqrt(v), v >= 0
	}
	return v, true
}

// Invert returns the value whose transform is v. A square root below 0, which no value
// has, is taken as 0.
func (t Transform) Invert(v float64) float64 {
	switch t {
	case Log:
		return math.Exp(v)
	case Log10:
		return math.Pow(10, v)
	case SquareRoot:
		return math.Max(v, 0) * math.Max(v, 0)
	}
	return v
}

// Label is the name of a channel after the transform: log(flow) for flow.
func (t Transform) Label(channel string) string {
	if t == NoTransform || t == "" {
		return channel
	}
	return string(t) + "(" + channel + ")"
}
