package report

import (
	"encoding/json"
	"math"
	"strconv"
)

// appendNumber appends the shortest text that reads back to v; nothing where v is not a
// finite number.
func appendNumber(b []byte, v float64) []byte {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return b
	}
	return strconv.AppendFloat(b, v, 'g', -1, 64)
}

// Number is a float64 that JSON writes as null where it is not finite.
type Number float64

// MarshalJSON writes the shortest text that reads back, or null.
func (n Number) MarshalJSON() ([]byte, error) {
	b := appendNumber(nil, float64(n))
	if len(b) == 0 {
		return []byte("null"), nil
	}
	return b, nil
}

// UnmarshalJSON reads null as NaN.
func (n *Number) UnmarshalJSON(b []byte) error {
	if string(b) == "null" {
		*n = Number(math.NaN())
		return nil
	}
	var v float64
	err := json.Unmarshal(b, &v)
	*n = Number(v)
	return err
}

func numbers(v []float64) []Number {
	out := make([]Number, len(v))
	for i, x := range v {
		out[i] = Number(x)
	}
	return out
}
