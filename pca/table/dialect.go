package table

import (
	"bytes"
	"math"
	"strings"
)

// dialect is how text becomes cells, and cells numbers.
type dialect struct {
	separator byte
	point     byte
	thousands []string // marks between groups of three digits; nil: none
	short     bool     // rows may end early
	comment   []byte   // nil: no comments
	missing   map[string]bool
	codes     []float64 // missing codes that read as numbers
}

func newDialect(o *Options, separator byte) *dialect {
	d := &dialect{separator: separator, point: '.', thousands: thousandsMarks[o.Thousands], short: o.ShortRows, missing: map[string]bool{}}
	if o.DecimalComma {
		d.point = ','
	}
	if o.Comment != "" {
		d.comment = []byte(o.Comment)
	}
	for _, m := range o.Missing {
		m = strings.TrimSpace(m)
		d.missing[m] = true
		// A code is written in the run file with a point whatever the table does.
		if v, ok := parseNumber([]byte(m), '.'); ok {
			d.codes = append(d.codes, v)
		} else if v, ok := parseNumber([]byte(m), d.point); ok {
			d.codes = append(d.codes, v)
		}
	}
	return d
}

func (d *dialect) startsComment(b []byte) bool {
	return d.comment != nil && bytes.HasPrefix(b, d.comment)
}

// value reads a trimmed cell: NaN for a missing one; ok is false when it is neither.
func (d *dialect) value(cell []byte) (v float64, ok bool) {
	cell = trim(cell)
	if d.missing[string(cell)] {
		return math.NaN(), true
	}
	v, ok = parseNumber(cell, d.point)
	if !ok && d.thousands != nil {
		var scratch [64]byte
		if plain, grouped := d.ungrouped(scratch[:0], cell); grouped {
			v, ok = parseNumber(plain, d.point)
		}
	}
	if ok {
		v = d.coded(v)
	}
	return v, ok
}

// coded returns NaN where v is a missing code.
func (d *dialect) coded(v float64) float64 {
	for _, c := range d.codes {
		if v == c {
			return math.NaN()
		}
	}
	return v
}

// quoteFault is what can be wrong with a quoted cell.
type quoteFault int

const (
	wellQuoted quoteFault = iota
	textAfterQuote
	openQuote
)

// trim takes blanks off both ends.
func trim(b []byte) []byte {
	for len(b) > 0 && (b[0] == ' ' || b[0] == '\t') {
		b = b[1:]
	}
	for len(b) > 0 && (b[len(b)-1] == ' ' || b[len(b)-1] == '\t' || b[len(b)-1] == '\r') {
		b = b[:len(b)-1]
	}
	return b
}

// cell finds the cell that starts at b[i] and returns its trimmed text, unescaped into
// extra where it was quoted, and the position of the separator or line end after it.
func (d *dialect) cell(b []byte, i int, extra *[]byte) (text []byte, end int, quoted bool, fault quoteFault) {
	j := i
	for b[j] == ' ' || b[j] == '\t' && d.separator != '\t' {
		j++
	}
	if b[j] != '"' {
		end = i
		for b[end] != d.separator && b[end] != '\n' {
			end++
		}
		return trim(b[i:end]), end, false, wellQuoted
	}
	from := len(*extra)
	for j++; j < len(b); j++ {
		if b[j] != '"' {
			*extra = append(*extra, b[j])
			continue
		}
		if j+1 < len(b) && b[j+1] == '"' {
			*extra = append(*extra, '"')
			j++
			continue
		}
		break
	}
	if j >= len(b) { // an open quote runs to the end of the text
		return (*extra)[from:], len(b) - 1, true, openQuote
	}
	end = j + 1
	for b[end] != d.separator && b[end] != '\n' {
		if b[end] != ' ' && b[end] != '\t' && b[end] != '\r' {
			fault = textAfterQuote
		}
		end++
	}
	return (*extra)[from:], end, true, fault
}

// emptyRow tells whether no cell of the row that starts at b[i] holds anything, and where
// the row ends.
func (d *dialect) emptyRow(b []byte, i int) (end int, empty bool) {
	var scratch []byte
	for {
		text, end, _, _ := d.cell(b, i, &scratch)
		if len(trim(text)) > 0 {
			return end, false
		}
		if b[end] == '\n' {
			return end, true
		}
		i = end + 1
	}
}
