package table

import (
	"bytes"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"
)

// infinite tells whether a cell is a number too large for double precision, or the word.
func infinite(cell []byte, point byte) bool {
	word := strings.ToLower(strings.TrimLeft(string(cell), "+-"))
	if word == "inf" || word == "infinity" {
		return true
	}
	v, _ := readNumber(cell, point)
	return math.IsInf(v, 0)
}

// shorten cuts a text to show to n bytes, between characters.
func shorten(text string, n int) string {
	if len(text) <= n {
		return text
	}
	for n > 0 && !utf8.RuneStart(text[n]) {
		n--
	}
	return text[:n] + "…"
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
	times, bytes, truths     int // among the filled, of typed tables
	examples                 []string
	declared                 string         // what a typed table says the values are, when no numbers
	words                    map[string]int // how often each text occurs, of the first few different ones
}

func (s *sampleColumn) add(cell []byte, d *dialect) {
	cell = trim(cell)
	v, ok := d.value(cell)
	switch {
	case len(cell) == 0: // says nothing about the kind, missing code or not
		s.missing++
		return
	case ok && math.IsNaN(v):
		s.missing++
		return
	case ok:
		s.numbers++
	default:
		if infinite(cell, d.point) {
			s.numbers++ // an infinite value is an error of a column of numbers, not text
			break
		}
		text := string(cell)
		s.word(text)
		if len(s.examples) < 3 && !contains(s.examples, text) {
			s.examples = append(s.examples, text)
		}
	}
	s.filled++
}

// isText: more than half of the cells that hold anything are not numbers.
func (s *sampleColumn) isText() bool { return s.declared != "" || 2*s.numbers < s.filled }

func (s *sampleColumn) note() string {
	switch {
	case s.declared == "times" || s.declared == "" && 2*s.times > s.filled:
		return "left out: times; read.time carries a column through"
	case s.declared != "" && len(s.examples) == 0:
		return "left out: " + s.declared
	case 2*s.bytes > s.filled:
		return "left out: bytes"
	}
	quoted := make([]string, len(s.examples))
	for i, e := range s.examples {
		quoted[i] = strconv.Quote(shorten(e, 24))
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
