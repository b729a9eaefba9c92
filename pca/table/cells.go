package table

import (
	"math"
	"strconv"
)

// cell is one value of a table whose values are typed. Texts are in memory beside it.
type cell struct {
	kind   cellKind
	number float64 // of numberCell and truthCell
	text   span    // of textCell, timeCell, faultCell
}

type cellKind uint8

const (
	emptyCell    cellKind = iota // holds nothing, or null
	unsolvedCell                 // a formula without a stored value
	numberCell                   // NaN is missing
	roundedCell                  // a number beyond 2^53 that is no double
	truthCell                    // 1 or 0
	textCell
	timeCell  // RFC 3339, without a zone where none is known
	faultCell // what a failed formula leaves
	bytesCell
)

// cells are rows of typed values, kept together.
type cells struct {
	width int
	all   []cell
	text  []byte
	lines []int // of each row, ascending
	over  bool  // texts are longer than their places can say
}

func (c *cells) reset(width int) {
	c.width, c.all, c.text, c.lines = width, c.all[:0], c.text[:0], c.lines[:0]
}

// addRow starts a row of empty cells.
func (c *cells) addRow(line int) {
	for range c.width {
		c.all = append(c.all, cell{})
	}
	c.lines = append(c.lines, line)
}

func (c *cells) rows() int { return len(c.lines) }

func (c *cells) row(i int) []cell { return c.all[i*c.width : (i+1)*c.width] }

// at is cell j of the row started last.
func (c *cells) at(j int) *cell { return &c.all[len(c.all)-c.width+j] }

func (c *cells) setNumber(j int, v float64) { c.at(j).kind, c.at(j).number = numberCell, v }

// setWhole sets a whole number and marks one that no double holds.
func (c *cells) setWhole(j int, v int64) {
	f := float64(v)
	c.setNumber(j, f)
	// The largest whole numbers round to 2^63, which int64 cannot hold.
	if f >= 1<<63 || int64(f) != v {
		c.at(j).kind = roundedCell
	}
}

func (c *cells) setTruth(j int, v bool) {
	c.setNumber(j, 0)
	if v {
		c.at(j).number = 1
	}
	c.at(j).kind = truthCell
}

func (c *cells) setText(j int, kind cellKind, text []byte) {
	if len(c.text)+len(text) > math.MaxInt32 {
		c.over = true
		return
	}
	from := int32(len(c.text))
	c.text = append(c.text, text...)
	*c.at(j) = cell{kind: kind, text: span{from: from, to: int32(len(c.text))}}
}

func (c *cells) textOf(x *cell) []byte { return c.text[x.text.from:x.text.to] }

// appendShown appends a cell as text, for columns that are carried through.
func (c *cells) appendShown(to []byte, x *cell) []byte {
	switch x.kind {
	case numberCell, roundedCell:
		return appendNumber(to, x.number)
	case truthCell:
		return strconv.AppendBool(to, x.number == 1)
	case textCell, timeCell, faultCell:
		return append(to, c.textOf(x)...)
	}
	return to
}

// appendNumber appends the shortest text that reads as the number; nothing when missing.
func appendNumber(to []byte, v float64) []byte {
	if math.IsNaN(v) {
		return to
	}
	format := byte('g')
	if a := math.Abs(v); a == 0 || a >= 1e-5 && a < 1e15 {
		format = 'f'
	}
	return strconv.AppendFloat(to, v, format, -1, 64)
}

// value reads a cell of a column of numbers: NaN for a missing one; ok is false when it
// holds something else. said is what the table's notes should tell.
func (c *cells) value(x *cell, d *dialect) (v float64, said remarkKind, ok bool) {
	switch x.kind {
	case emptyCell:
		return math.NaN(), "", true
	case faultCell:
		return math.NaN(), faultRemark, true
	case unsolvedCell:
		return math.NaN(), unsolvedRemark, true
	case numberCell, truthCell:
		v = d.coded(x.number)
	case roundedCell:
		v, said = d.coded(x.number), roundedRemark
	case textCell:
		text := trim(c.textOf(x))
		if v, ok = d.value(text); len(text) == 0 {
			return math.NaN(), "", true
		}
		if ok && !math.IsNaN(v) {
			said = textRemark
		}
		return v, said, ok
	default:
		return 0, "", false
	}
	return v, said, !math.IsInf(v, 0)
}

// remarkKind is what the notes tell of values in a column once the rows were gone through.
type remarkKind string

const (
	roundedRemark remarkKind = "whole numbers beyond 2^53 are rounded to the nearest double"
	faultRemark   remarkKind = "errors of formulas count as missing"
	// Programs that write sheets without calculating leave such formulas behind.
	unsolvedRemark remarkKind = "formulas without a stored value count as missing; a spreadsheet program stores them when it saves"
	textRemark     remarkKind = "numbers are stored as text"
)

// remarkKinds lists them as the notes do.
var remarkKinds = []remarkKind{roundedRemark, faultRemark, unsolvedRemark, textRemark}

// remark is one of them about one channel.
type remark struct {
	channel int
	kind    remarkKind
}

// addCell takes a typed cell into what is known of a column.
func (s *sampleColumn) addCell(c *cells, x *cell, d *dialect) {
	switch x.kind {
	case textCell:
		s.add(c.textOf(x), d)
	case timeCell:
		s.filled++
		s.times++
	case bytesCell:
		s.filled++
		s.bytes++
	default:
		v, _, ok := c.value(x, d)
		if ok && math.IsNaN(v) {
			s.missing++
			return
		}
		s.filled++
		s.numbers++ // an infinite one is an error of a column of numbers
		if x.kind == truthCell {
			s.truths++
		}
	}
}
