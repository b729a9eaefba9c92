package configs

import (
	"math"
	"strconv"
)

// Range bounds a number. An infinite bound is none.
type Range struct {
	Low, High         float64
	OpenLow, OpenHigh bool // the bound itself is outside
}

func atLeast(low float64) *Range    { return &Range{Low: low, High: math.Inf(1)} }
func above(low float64) *Range      { return &Range{Low: low, High: math.Inf(1), OpenLow: true} }
func from(low, high float64) *Range { return &Range{Low: low, High: high} }
func upTo(high float64) *Range      { return &Range{High: high, OpenLow: true} }
func below(high float64) *Range     { return &Range{High: high, OpenLow: true, OpenHigh: true} }
func (r *Range) holds(v float64) bool {
	return (v > r.Low || v == r.Low && !r.OpenLow) && (v < r.High || v == r.High && !r.OpenHigh)
}

// String is the range in words that go on from "a number".
func (r *Range) String() string {
	low, high := short(r.Low), short(r.High)
	switch {
	case r.OpenLow && r.OpenHigh:
		return "above " + low + " and below " + high
	case math.IsInf(r.High, 1) && r.OpenLow:
		return "above " + low
	case math.IsInf(r.High, 1):
		return "of at least " + low
	case r.OpenLow:
		return "above " + low + " and at most " + high
	}
	return "from " + low + " to " + high
}

// short is a number as a person would write it: digits up to a million and beyond, not
// 1e+06.
func short(v float64) string {
	if v == math.Trunc(v) && math.Abs(v) < 1e15 {
		return strconv.FormatFloat(v, 'f', 0, 64)
	}
	return strconv.FormatFloat(v, 'g', -1, 64)
}
