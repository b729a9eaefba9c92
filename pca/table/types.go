package table

import (
	"bytes"
	"math"
	"strconv"
	"strings"
)

// looseNumber reads what a person would call a number, infinite or not.
func looseNumber(cell []byte) (v float64, finite bool) {
	v, err := strconv.ParseFloat(string(cell), 64)
	if err != nil && !math.IsInf(v, 0) {
		return 0, false
	}
	if math.IsNaN(v) {
		return 0, false
	}
	return v, !math.IsInf(v, 0)
}

func looksDecimalComma(cell []byte) bool {
	if bytes.Count(cell, []byte{','}) != 1 {
		return false
	}
	_, ok := parseNumber(cell, ',')
	return ok
}

// sampleColumn collects what a column's first cells look like.
type sampleColumn struct {
	filled, numbers, missing int
	examples                 []string
}

func (s *sampleColumn) add(cell []byte, d *dialect) {
	v, ok := d.value(cell)
	switch {
	case ok && math.IsNaN(v):
		s.missing++
		return
	case ok:
		s.numbers++
	default:
		if v, _ := looseNumber(cell); math.IsInf(v, 0) {
			s.numbers++ // an infinite value is an error of a column of numbers, not text
			break
		}
		text := string(cell)
		if len(s.examples) < 3 && !contains(s.examples, text) {
			s.examples = append(s.examples, text)
		}
	}
	s.filled++
}

// isText: more than half of the cells that hold anything are not numbers.
func (s *sampleColumn) isText() bool { return 2*s.numbers < s.filled }

func (s *sampleColumn) note() string {
	quoted := make([]string, len(s.examples))
	for i, e := range s.examples {
		if len(e) > 24 {
			e = e[:24] + "…"
		}
		quoted[i] = strconv.Quote(e)
	}
	return "left out: text (" + strings.Join(quoted, ", ") + ")"
}

func contains(list []string, s string) bool {
	for _, e := range list {
		if e == s {
			return true
		}
	}
	return false
}
